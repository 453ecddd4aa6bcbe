//! What a station recorded held against a rule, day by day, by month and by season.
//!
//! A record is held against the rule itself: the buffer is for planning and does not count here.
//!
//! Methods: `docs/methods.md`, section 7.

use chrono::NaiveDate;

use crate::series::{Coverage, Daily, Day, Days, exceeds};

use super::tally::{Held, Mark, held};
use super::{OxygenStatistic, Standing, Statistic, Target};

/// A record held against a rule.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct Observed {
    /// Its range of temperature, where it has one.
    pub temperature: Option<Held>,
    /// Its oxygen floor in mg/L, where it has one.
    pub oxygen: Option<Held>,
    /// Its oxygen floor as a share of saturation, where it has one.
    pub oxygen_share: Option<Held>,
    /// Whether any of the record is provisional.
    pub provisional: bool,
}

/// Holds a record against a rule on every day on which `valid` says that it is; `reference` are the days of what the
/// rule compares with, where it does.
pub fn observed(
    rule: &Target,
    station: &Daily,
    reference: Option<&Days>,
    coverage: Coverage,
    valid: impl Fn(NaiveDate) -> bool,
) -> Observed {
    let Some((first, last)) = station.recorded else { return Observed::default() };
    let dates: Vec<NaiveDate> = first
        .iter_days()
        .take_while(|d| *d <= last)
        .filter(|d| rule.span.contains(*d) && valid(*d))
        .collect();
    let hold = |mark: &dyn Fn(NaiveDate) -> Mark| {
        held(&rule.span, dates.iter().map(|date| (*date, mark(*date))).collect())
    };
    let differences = match (&rule.reference, reference) {
        (None, _) => None,
        (Some(_), Some(reference)) => Some(station.temperature_c.minus(reference)),
        (Some(_), None) => Some(Days::default()),
    };
    let water = differences.as_ref().unwrap_or(&station.temperature_c);
    let ranged = rule.low_c.is_some() || rule.high_c.is_some();
    let floor = |days: &Days, least: Option<f64>| {
        let least = least?;
        let statistic = rule.oxygen_statistic();
        Some(hold(&|date| below(statistic.observed(days, date, coverage), least)))
    };
    Observed {
        temperature: ranged.then(|| hold(&|date| rule.observed_on(water, date, coverage))),
        oxygen: floor(&station.oxygen_mg_l, rule.oxygen_min_mg_l),
        oxygen_share: floor(&station.oxygen_share, rule.oxygen_min_share),
        provisional: station.provisional,
    }
}

impl Target {
    /// How a day of a record stands against the range.
    ///
    /// # Units
    /// Days of a temperature, or of its difference from a reference, C.
    ///
    /// # References
    /// The statistics are those of [`Statistic`]; a rule that allows some days is outside on the days beyond those
    /// allowed whose own maximum lies above; it counts from where its span or the record began (choice).
    pub fn observed_on(&self, days: &Days, date: NaiveDate, coverage: Coverage) -> Mark {
        let day = days.on(date);
        // what came before the record is not known, and not held against it
        let began = days.days.keys().next().copied().unwrap_or(date);
        let begin = self.span.began(date).unwrap_or(date).max(began);
        match self.statistic {
            Statistic::Instantaneous => day.map_or(Mark::UNKNOWN, |day| {
                let (least, greatest) = (self.against(Some(day.min)), self.against(Some(day.max)));
                if least.by > greatest.by { least } else { greatest }
            }),
            Statistic::DailyMean => self.against(day.map(|d| d.mean)),
            Statistic::DailyMax => self.against(day.map(|d| d.max)),
            Statistic::DailyMin => self.against(day.map(|d| d.min)),
            Statistic::HourlyChange => self.against(day.and_then(|d| d.hourly_change)),
            Statistic::DailyChange => self.against(days.daily_change(date)),
            Statistic::SevenDayMeanOfMaxima => self.against(days.mean_over(date, 7, coverage, |d| d.max)),
            Statistic::MeanOfDays(n) => self.against(days.mean_over(date, n, coverage, |d| d.mean)),
            Statistic::DegreeDays { base_c, since } => {
                let since = since.last_on(date).unwrap_or(date);
                self.against(days.degree_days(since, date, base_c, coverage))
            }
            Statistic::DaysInARow(n) => {
                let Some(high) = self.high_c else { return Mark::UNKNOWN };
                above(days.least_max(date, n, high), high)
            }
            Statistic::DaysAbove(allowed) => {
                let Some(high) = self.high_c else { return Mark::UNKNOWN };
                let count = days.count_above(begin, date, high);
                let known = count.above > allowed || count.above + count.unknown() <= allowed;
                let spent = known.then_some(f64::from(count.above));
                beyond(day, high, above(spent, allowed.into()))
            }
            Statistic::ShareOfDays(allowed) => {
                let Some(high) = self.high_c else { return Mark::UNKNOWN };
                let share = days.count_above(begin, date, high).share(coverage);
                beyond(day, high, above(share, allowed))
            }
        }
    }

    /// A value against the range, without the buffer.
    fn against(&self, value: Option<f64>) -> Mark {
        let Some(known) = value else { return Mark::UNKNOWN };
        match (self.low_c, self.high_c) {
            (Some(low), _) if known < low => below(value, low),
            (_, Some(high)) => above(value, high),
            _ => Mark { value, standing: Standing::Inside, by: Some(0.0) },
        }
    }
}

impl OxygenStatistic {
    /// The statistic of a day of a record.
    ///
    /// # Units
    /// Those of the days: mg/L, or a share of saturation.
    ///
    /// # References
    /// As the variants say: common practice, no source.
    pub fn observed(self, days: &Days, date: NaiveDate, coverage: Coverage) -> Option<f64> {
        match self {
            Self::DailyMin => Some(days.on(date)?.min),
            Self::DailyMean => Some(days.on(date)?.mean),
            Self::SevenDayMeanOfMinima => days.mean_over(date, 7, coverage, |d| d.min),
        }
    }
}

/// A value that is not to lie above a bound.
fn above(value: Option<f64>, high: f64) -> Mark {
    let by = value.map(|v| if exceeds(v, high) { v - high } else { 0.0 });
    Mark { value, standing: stands(by, Standing::Above), by }
}

/// A value that is not to lie below a bound.
fn below(value: Option<f64>, low: f64) -> Mark {
    let by = value.map(|v| if exceeds(low, v) { low - v } else { 0.0 });
    Mark { value, standing: stands(by, Standing::Below), by }
}

fn stands(by: Option<f64>, side: Standing) -> Standing {
    match by {
        None => Standing::Unknown,
        Some(by) if by > 0.0 => side,
        Some(_) => Standing::Inside,
    }
}

/// Of a rule that allows some days above: a day is outside when the allowance is spent and it lies above itself.
fn beyond(day: Option<&Day>, high: f64, spent: Mark) -> Mark {
    match day {
        None => Mark::UNKNOWN,
        Some(day) if exceeds(day.max, high) => spent,
        Some(_) => Mark { value: spent.value, standing: Standing::Inside, by: Some(0.0) },
    }
}
