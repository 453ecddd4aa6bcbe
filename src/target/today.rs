//! What a rule asks of today's water at its point, the days already observed counted in.
//!
//! A rule over several days leaves today's water a range: a seven-day mean with six maxima observed asks of the seventh
//! only its seventh. Without a record every day is taken to be like today.
//!
//! Methods: `docs/methods.md`, section 7.

mod air;
mod counts;
mod means;

use chrono::NaiveDate;

use crate::series::{Coverage, Daily, Day};

use super::{Statistic, Target};

pub use air::Air;
pub use counts::Count;

/// Which of today's temperatures a rule is held against.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Figure {
    /// The mean of the day.
    Mean,
    /// The greatest of the day.
    Max,
    /// The least of the day.
    Min,
    /// Every reading: the greatest and the least.
    Both,
    /// The greatest change from one hour to the next.
    HourlyChange,
}

/// What a standing rests on.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Basis {
    /// Every day like today, and today steady.
    Steady,
    /// Today by its hours or blocks, every day like it.
    Blocks,
    /// Days already observed are counted in.
    Observed,
}

impl Basis {
    /// The words used in every output.
    pub fn words(self) -> &'static str {
        match self {
            Self::Steady => "steady",
            Self::Blocks => "blocks",
            Self::Observed => "with observed days",
        }
    }
}

/// What is known beside today's water.
#[derive(Clone, Copy)]
pub struct Known<'a> {
    /// The valid days of the rule's point.
    pub days: Option<&'a Daily>,
    /// The reference of the rule on a day, where it has one.
    pub reference: &'a dyn Fn(NaiveDate) -> Option<Day>,
    /// How much of a record must be there.
    pub coverage: Coverage,
}

impl Known<'_> {
    /// Nothing beside today's water.
    pub const NOTHING: Self =
        Self { days: None, reference: &|_| None, coverage: Coverage { hours: 22, days: 6 } };

    /// Days that must be there among so many: the same share as of a week, rounded up.
    fn enough(&self, days: u32) -> u32 {
        days.saturating_mul(u32::try_from(self.coverage.days).unwrap_or(7).min(7)).div_ceil(7).max(1)
    }
}

/// What a rule asks of today's water at its point.
#[derive(Debug, Clone, PartialEq)]
pub struct Today {
    /// The figure of today it is held against.
    pub figure: Figure,
    /// Today's figure counts no lower than this, C.
    pub base_c: Option<f64>,
    /// The rule's value is this, and ...
    pub add: f64,
    /// ... so many times today's figure.
    pub times: f64,
    /// The range of today's figure, C, buffer counted in; none where today is free.
    pub low_c: Option<f64>,
    /// Its upper end.
    pub high_c: Option<f64>,
    /// The preferred figure of today, C.
    pub preferred_c: Option<f64>,
    /// The rule counts days above its range.
    pub count: Option<Count>,
    /// Days already observed are counted in.
    pub observed: bool,
    /// What is to be said of it.
    pub words: Option<String>,
}

impl Today {
    /// A rule held against one figure of today and nothing else.
    fn of(rule: &Target, figure: Figure) -> Self {
        Self {
            figure,
            base_c: None,
            add: 0.0,
            times: 1.0,
            low_c: rule.low_kept_c(),
            high_c: rule.high_kept_c(),
            preferred_c: rule.preferred_c,
            count: None,
            observed: false,
            words: None,
        }
    }

    /// The same with a value that follows from today's figure otherwise.
    fn with(mut self, rule: &Target, add: f64, times: f64) -> Self {
        (self.add, self.times) = (add, times);
        let figure = |bound: f64| (bound - add) / times;
        self.low_c = rule.low_kept_c().map(figure);
        self.high_c = rule.high_kept_c().map(figure);
        self
    }

    /// Lower end of today's figure, C, where any figure could lie below it.
    pub fn low_asked_c(&self) -> Option<f64> {
        self.low_c.filter(|low| self.base_c.is_none_or(|base| *low > base))
    }

    /// What the rule's range is of, from today's figure: C, a difference, or C days.
    pub fn value(&self, figure_c: f64) -> f64 {
        self.add + self.times * self.base_c.map_or(figure_c, |base| figure_c.max(base))
    }

    /// How far today's figure lies outside what is left to it, C: below as less than zero, above as more.
    pub fn outside_c(&self, figure_c: f64) -> f64 {
        let figure_c = self.base_c.map_or(figure_c, |base| figure_c.max(base));
        match (self.low_c, self.high_c) {
            (Some(low), _) if figure_c < low => figure_c - low,
            (_, Some(high)) if figure_c > high => figure_c - high,
            _ => 0.0,
        }
    }

    /// Room to the nearest end of it, C, negative outside; `None` where today is free.
    pub fn room_c(&self, figure_c: f64) -> Option<f64> {
        let figure_c = self.base_c.map_or(figure_c, |base| figure_c.max(base));
        let ends = [self.low_c.map(|low| figure_c - low), self.high_c.map(|high| high - figure_c)];
        ends.into_iter().flatten().reduce(f64::min)
    }
}

/// What a rule asks of the water of a day at its point.
///
/// # Units
/// C, of differences and sums C and C days.
///
/// # References
/// Statistics over days: common practice, no source. Days missing from a record: choice.
///
/// # Errors
/// Why it cannot be said, in words.
pub fn today(rule: &Target, date: NaiveDate, known: Known) -> Result<Today, String> {
    let plain = |figure| means::of_today(rule, date, figure, known);
    match rule.statistic {
        Statistic::Instantaneous => plain(Figure::Both),
        Statistic::DailyMean => plain(Figure::Mean),
        Statistic::DailyMax => plain(Figure::Max),
        Statistic::DailyMin => plain(Figure::Min),
        Statistic::HourlyChange => Ok(Today::of(rule, Figure::HourlyChange)),
        Statistic::SevenDayMeanOfMaxima => means::of_days(rule, date, 7, Figure::Max, known),
        Statistic::MeanOfDays(days) => means::of_days(rule, date, days, Figure::Mean, known),
        Statistic::DailyChange => means::change(rule, date, known),
        Statistic::DegreeDays { base_c, since } => means::degree_days(rule, date, base_c, since, known),
        Statistic::DaysInARow(days) => Ok(counts::in_a_row(rule, date, days, known)),
        Statistic::ShareOfDays(share) => Ok(counts::of_days(rule, date, counts::Most::Share(share), known)),
        Statistic::DaysAbove(days) => Ok(counts::of_days(rule, date, counts::Most::Days(days), known)),
    }
}

/// The figure of a day.
fn of_day(figure: Figure, day: &Day) -> f64 {
    match figure {
        Figure::Max => day.max,
        Figure::Min => day.min,
        _ => day.mean,
    }
}

/// The day so many days before.
fn before(date: NaiveDate, days: u32) -> Option<NaiveDate> {
    date.checked_sub_days(chrono::Days::new(u64::from(days)))
}
