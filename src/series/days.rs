//! The days of a series that hold enough readings to speak for a day.
//!
//! Methods: `docs/methods.md`, section 7.

use std::collections::BTreeMap;

use chrono::{FixedOffset, NaiveDate, NaiveDateTime, TimeDelta, Timelike};

use super::Series;

/// How much must be there for a day, and for a mean over days, to count.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Coverage {
    /// Hours of a day that hold a reading.
    pub hours: usize,
    /// Days of a week that are valid.
    pub days: usize,
}

impl Default for Coverage {
    /// 22 of 24 hours and 6 of 7 days (choice).
    fn default() -> Self {
        Self { hours: 22, days: 6 }
    }
}

impl Coverage {
    /// Days that must be valid among so many: the same share as of a week, rounded up, one at least.
    pub fn of_days(self, days: u32) -> u32 {
        let week = u32::try_from(self.days).unwrap_or(7).min(7);
        days.saturating_mul(week).div_ceil(7).max(1)
    }
}

/// A valid day.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Day {
    /// Time mean: the mean of the means of its hours, so that many readings in one hour weigh no more than one.
    pub mean: f64,
    /// Greatest reading.
    pub max: f64,
    /// Least reading.
    pub min: f64,
    /// Greatest change, up or down, from the mean of one hour to that of the next; the first hour is held against the
    /// last of the day before. `None` where no two hours lie next to each other.
    pub hourly_change: Option<f64>,
}

/// Valid days by date; a day without enough readings is absent.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct Days {
    /// By date.
    pub days: BTreeMap<NaiveDate, Day>,
}

/// What one hour holds.
#[derive(Debug, Clone, Copy)]
struct Hour {
    begins: NaiveDateTime,
    sum: f64,
    count: u32,
    max: f64,
    min: f64,
}

impl Hour {
    fn mean(&self) -> f64 {
        self.sum / f64::from(self.count)
    }
}

impl Series {
    /// The days with enough readings, by the site's standard time.
    ///
    /// # Units
    /// Those of the series.
    ///
    /// # References
    /// Means over time as a gauge sees them: common practice, no source; what counts as a day is a choice.
    pub fn days(&self, offset: FixedOffset, coverage: Coverage) -> Days {
        let hours = self.hours(offset);
        let mut days = BTreeMap::new();
        let mut before: Option<Hour> = None;
        for day in hours.chunk_by(|a, b| a.begins.date() == b.begins.date()) {
            let previous = before;
            before = day.last().copied();
            let Some(date) = day.first().map(|h| h.begins.date()) else { continue };
            if day.len() < coverage.hours.max(1) {
                continue;
            }
            let hourly_change = previous
                .iter()
                .chain(day)
                .zip(day.iter().skip(usize::from(previous.is_none())))
                .filter(|(a, b)| b.begins - a.begins == TimeDelta::hours(1))
                .map(|(a, b)| (b.mean() - a.mean()).abs())
                .reduce(f64::max);
            let count = day.len() as f64;
            days.insert(
                date,
                Day {
                    mean: day.iter().map(Hour::mean).sum::<f64>() / count,
                    max: day.iter().map(|h| h.max).fold(f64::NEG_INFINITY, f64::max),
                    min: day.iter().map(|h| h.min).fold(f64::INFINITY, f64::min),
                    hourly_change,
                },
            );
        }
        Days { days }
    }

    /// The hours that hold a reading, in order.
    fn hours(&self, offset: FixedOffset) -> Vec<Hour> {
        let mut hours: Vec<Hour> = Vec::new();
        for (time, value) in self.readings() {
            let local = time.with_timezone(&offset).naive_local();
            let into = TimeDelta::minutes(local.minute().into())
                + TimeDelta::seconds(local.second().into())
                + TimeDelta::nanoseconds(local.nanosecond().into());
            let Some(begins) = local.checked_sub_signed(into) else { continue };
            match hours.last_mut().filter(|h| h.begins == begins) {
                Some(hour) => {
                    hour.sum += value;
                    hour.count += 1;
                    hour.max = hour.max.max(*value);
                    hour.min = hour.min.min(*value);
                }
                None => hours.push(Hour { begins, sum: *value, count: 1, max: *value, min: *value }),
            }
        }
        hours
    }
}
