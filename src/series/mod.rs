//! Dated values with gaps: what a sensor told, its days, and which of them count.
//!
//! Methods: `docs/methods.md`, section 7.

mod days;

use chrono::{DateTime, FixedOffset};

pub use days::{Coverage, Day, Days};

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
    /// Moments whose values are provisional, or `true` for all of them.
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
    /// Whether any of it is provisional.
    pub provisional: bool,
}

impl Record {
    /// Its days, by the site's standard time.
    pub fn daily(&self, offset: FixedOffset, coverage: Coverage) -> Daily {
        Daily {
            temperature_c: self.temperature_c.days(offset, coverage),
            oxygen_mg_l: self.oxygen_mg_l.days(offset, coverage),
            oxygen_share: self.oxygen_share.days(offset, coverage),
            provisional: self.provisional,
        }
    }
}
