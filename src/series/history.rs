//! Figures over several days of a record, across its gaps.
//!
//! A day that is not valid is never made up: a figure either has days enough or is `None`.
//!
//! Methods: `docs/methods.md`, section 7.

use chrono::NaiveDate;

use super::{Coverage, Day, Days};

/// Means of readings that all lie on a bound come within this of it by rounding; then the bound is met (choice).
const ROUNDING: f64 = 1e-9;

/// Whether a figure lies above a bound by more than rounding.
pub fn exceeds(value: f64, bound: f64) -> bool {
    value - bound > ROUNDING
}

/// What is added up over a window, and how many of its days were there.
#[derive(Debug, Clone, Copy, Default, PartialEq)]
pub struct Window {
    /// Sum over the valid days.
    pub sum: f64,
    /// Valid days.
    pub valid: u32,
    /// All days.
    pub days: u32,
}

impl Window {
    /// Mean of the valid days, where there are days enough.
    pub fn mean(&self, coverage: Coverage) -> Option<f64> {
        (self.valid >= coverage.of_days(self.days) && self.valid > 0)
            .then(|| self.sum / f64::from(self.valid))
    }
}

/// How many valid days of a window lie above something.
#[derive(Debug, Clone, Copy, Default, PartialEq, Eq)]
pub struct Count {
    /// Valid days above.
    pub above: u32,
    /// Valid days.
    pub valid: u32,
    /// All days.
    pub days: u32,
}

impl Count {
    /// Days that are not valid, so may lie above or not.
    pub fn unknown(&self) -> u32 {
        self.days - self.valid
    }

    /// Share of the valid days that lies above, 0 to 1, where there are days enough.
    pub fn share(&self, coverage: Coverage) -> Option<f64> {
        (self.valid >= coverage.of_days(self.days) && self.valid > 0)
            .then(|| f64::from(self.above) / f64::from(self.valid))
    }
}

impl Days {
    /// A valid day.
    pub fn on(&self, date: NaiveDate) -> Option<&Day> {
        self.days.get(&date)
    }

    /// Sum of a figure of the days, `from` and `to` included.
    pub fn between(&self, from: NaiveDate, to: NaiveDate, figure: impl Fn(&Day) -> f64) -> Window {
        if from > to {
            return Window::default();
        }
        let valid = || self.days.range(from..=to).map(|(_, day)| day);
        Window { sum: valid().map(figure).sum(), valid: count(valid().count()), days: days(from, to) }
    }

    /// The same over so many days, `last` among them.
    pub fn window(&self, last: NaiveDate, n: u32, figure: impl Fn(&Day) -> f64) -> Option<Window> {
        (n > 0).then(|| Some(self.between(first_of(last, n)?, last, figure)))?
    }

    /// Mean of a figure over so many days, `last` among them; `None` where too few of them are valid.
    ///
    /// # Units
    /// Those of the series.
    ///
    /// # References
    /// Means over days: common practice, no source; how many must be valid is a choice ([`Coverage`]).
    pub fn mean_over(
        &self,
        last: NaiveDate,
        n: u32,
        coverage: Coverage,
        figure: impl Fn(&Day) -> f64,
    ) -> Option<f64> {
        self.window(last, n, figure)?.mean(coverage)
    }

    /// Days in a row, `last` the last of them, whose maximum lies above `high`. A day that is not valid ends the row.
    pub fn run_above(&self, last: NaiveDate, high: f64) -> u32 {
        let before = std::iter::successors(Some(last), NaiveDate::pred_opt);
        count(before.take_while(|date| self.on(*date).is_some_and(|day| exceeds(day.max, high))).count())
    }

    /// Least daily maximum of so many days, `last` among them: above `high` just when all of them are. With days
    /// missing it is known only where one that is there does not lie above.
    pub fn least_max(&self, last: NaiveDate, n: u32, high: f64) -> Option<f64> {
        let from = first_of(last, n.max(1))?;
        let least = self.days.range(from..=last).map(|(_, day)| day.max).reduce(f64::min)?;
        let whole = self.days.range(from..=last).count() as u64 == u64::from(n.max(1));
        (whole || !exceeds(least, high)).then_some(least)
    }

    /// Valid days with a maximum above `high`, `from` and `to` included.
    pub fn count_above(&self, from: NaiveDate, to: NaiveDate, high: f64) -> Count {
        let of = self.between(from, to, |day| f64::from(u8::from(exceeds(day.max, high))));
        let above = if from > to {
            0
        } else {
            self.days.range(from..=to).filter(|(_, day)| exceeds(day.max, high)).count()
        };
        Count { above: count(above), valid: of.valid, days: of.days }
    }

    /// Degrees of the daily means above a base, summed, `from` and `to` included; days that are not valid count as
    /// the mean of the others, where those are enough.
    ///
    /// # Units
    /// C; C days.
    ///
    /// # References
    /// Degree-days above a base: common practice, no source; the filling of gaps is a choice.
    pub fn degree_days(
        &self,
        from: NaiveDate,
        to: NaiveDate,
        base_c: f64,
        coverage: Coverage,
    ) -> Option<f64> {
        let of = self.between(from, to, |day| (day.mean - base_c).max(0.0));
        Some(of.mean(coverage)? * f64::from(of.days))
    }

    /// Change of the mean from the day before, up or down.
    pub fn daily_change(&self, date: NaiveDate) -> Option<f64> {
        Some((self.on(date)?.mean - self.on(date.pred_opt()?)?.mean).abs())
    }

    /// The differences from another series, on the days valid in both: means from means, maxima from maxima, minima
    /// from minima.
    #[must_use]
    pub fn minus(&self, other: &Self) -> Self {
        let differ = |(date, day): (&NaiveDate, &Day)| {
            let from = other.on(*date)?;
            let day = Day {
                mean: day.mean - from.mean,
                max: day.max - from.max,
                min: day.min - from.min,
                hourly_change: None,
            };
            Some((*date, day))
        };
        Self { days: self.days.iter().filter_map(differ).collect() }
    }
}

/// The first of so many days of which `last` is the last.
fn first_of(last: NaiveDate, n: u32) -> Option<NaiveDate> {
    last.checked_sub_days(chrono::Days::new(u64::from(n.saturating_sub(1))))
}

/// Days from one date to another, both included.
fn days(from: NaiveDate, to: NaiveDate) -> u32 {
    u32::try_from((to - from).num_days() + 1).unwrap_or(0)
}

fn count(number: usize) -> u32 {
    u32::try_from(number).unwrap_or(u32::MAX)
}
