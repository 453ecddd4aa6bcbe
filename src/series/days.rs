//! The days of a series that hold enough readings to speak for a day.
//!
//! Methods: `docs/methods.md`, section 7.

use std::collections::BTreeMap;

use chrono::{FixedOffset, NaiveDate, Timelike};

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

/// A valid day.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Day {
    /// Time mean: the mean of the hours that hold readings.
    pub mean: f64,
    /// Greatest reading.
    pub max: f64,
    /// Least reading.
    pub min: f64,
    /// Greatest change between readings an hour apart; `None` where none are.
    pub hourly_change: Option<f64>,
}

/// Valid days by date; a day without enough readings is absent.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct Days {
    /// By date.
    pub days: BTreeMap<NaiveDate, Day>,
}

impl Series {
    /// The days with enough readings, by the site's standard time.
    pub fn days(&self, offset: FixedOffset, coverage: Coverage) -> Days {
        let mut hours: BTreeMap<NaiveDate, BTreeMap<u32, Vec<f64>>> = BTreeMap::new();
        for (time, value) in self.readings() {
            let local = time.with_timezone(&offset);
            hours.entry(local.date_naive()).or_default().entry(local.hour()).or_default().push(*value);
        }
        let day = |hours: &BTreeMap<u32, Vec<f64>>| {
            let of_hour = |v: &Vec<f64>| v.iter().sum::<f64>() / v.len() as f64;
            let all = || hours.values().flatten().copied();
            Day {
                mean: hours.values().map(of_hour).sum::<f64>() / hours.len() as f64,
                max: all().fold(f64::NEG_INFINITY, f64::max),
                min: all().fold(f64::INFINITY, f64::min),
                hourly_change: None,
            }
        };
        let valid = hours.iter().filter(|(_, h)| h.len() >= coverage.hours);
        Days { days: valid.map(|(date, h)| (*date, day(h))).collect() }
    }
}
