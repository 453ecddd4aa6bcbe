//! Dated values with gaps: what a sensor told, its days, and which of them count.
//!
//! Methods: `docs/methods.md`, section 7.

mod days;
mod history;

use chrono::{DateTime, FixedOffset, NaiveDate, TimeDelta};

pub use days::{Coverage, Day, Days};
pub use history::{Count, Window, exceeds};

/// Longest time between two readings that a value is taken from in between, hours (choice).
pub const LONGEST_GAP_H: i64 = 3;

/// Values of one quantity at moments in time, in order, no moment twice.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct Series {
    readings: Vec<(DateTime<FixedOffset>, f64)>,
}

impl Series {
    /// From readings in any order; of two at one moment the first is kept.
    pub fn new(mut readings: Vec<(DateTime<FixedOffset>, f64)>) -> Self {
        readings.sort_by_key(|r| r.0);
        readings.dedup_by_key(|r| r.0);
        Self { readings }
    }

    /// The readings, oldest first.
    pub fn readings(&self) -> &[(DateTime<FixedOffset>, f64)] {
        &self.readings
    }

    /// Whether there is no reading at all.
    pub fn is_empty(&self) -> bool {
        self.readings.is_empty()
    }

    /// The value at a moment, linear between readings no further apart than [`LONGEST_GAP_H`].
    pub fn at(&self, time: DateTime<FixedOffset>) -> Option<f64> {
        self.at_within(time, TimeDelta::hours(LONGEST_GAP_H))
    }

    /// The value at a moment, linear between readings no further apart than a longest gap; on a reading it is that
    /// reading, outside the record there is none.
    pub fn at_within(&self, time: DateTime<FixedOffset>, longest: TimeDelta) -> Option<f64> {
        let after = self.readings.partition_point(|r| r.0 < time);
        let (next_time, next) = *self.readings.get(after)?;
        if next_time == time {
            return Some(next);
        }
        let (last_time, last) = *self.readings.get(after.checked_sub(1)?)?;
        let gap = next_time - last_time;
        if gap > longest {
            return None;
        }
        let seconds = |of: TimeDelta| of.num_milliseconds() as f64 / 1e3;
        Some(last + (next - last) * seconds(time - last_time) / seconds(gap))
    }

    /// First and last moment.
    pub fn ends(&self) -> Option<(DateTime<FixedOffset>, DateTime<FixedOffset>)> {
        Some((self.readings.first()?.0, self.readings.last()?.0))
    }
}

/// What a station in the river recorded.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct Record {
    /// Water temperature, C.
    pub temperature_c: Series,
    /// Dissolved oxygen, mg/L.
    pub oxygen_mg_l: Series,
    /// Oxygen over saturation, where temperature is known too.
    pub oxygen_share: Series,
    /// Flow, m3/s.
    pub flow_m3s: Series,
    /// Whether any of it is provisional.
    pub provisional: bool,
}

/// The valid days of a station.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct Daily {
    /// Of the temperature, C.
    pub temperature_c: Days,
    /// Of the oxygen, mg/L.
    pub oxygen_mg_l: Days,
    /// Of the oxygen over saturation.
    pub oxygen_share: Days,
    /// First and last date with a reading of any of these.
    pub recorded: Option<(NaiveDate, NaiveDate)>,
    /// Whether any of it is provisional.
    pub provisional: bool,
}

impl Record {
    /// Its days, by the site's standard time.
    pub fn daily(&self, offset: FixedOffset, coverage: Coverage) -> Daily {
        let ends = [&self.temperature_c, &self.oxygen_mg_l, &self.oxygen_share];
        let ends = || ends.into_iter().filter_map(Series::ends);
        let date = |time: DateTime<FixedOffset>| time.with_timezone(&offset).date_naive();
        let (first, last) = (ends().map(|e| e.0).min(), ends().map(|e| e.1).max());
        Daily {
            temperature_c: self.temperature_c.days(offset, coverage),
            oxygen_mg_l: self.oxygen_mg_l.days(offset, coverage),
            oxygen_share: self.oxygen_share.days(offset, coverage),
            recorded: first.map(date).zip(last.map(date)),
            provisional: self.provisional,
        }
    }
}
