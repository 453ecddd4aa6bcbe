//! Weather over the river and the pool: humidity, sun, wind, and the heat they bring to water.
//!
//! Methods: `docs/methods.md`, sections 1 and 6.

mod budget;

use std::collections::BTreeMap;

use chrono::{DateTime, FixedOffset, NaiveDate, Timelike};

pub use budget::{Budget, budget, equilibrium_c, exchange_w_m2_c};

/// The air over the water, of a moment or as the mean of a day.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Air {
    /// Air temperature, C.
    pub temperature_c: f64,
    /// Dew point, C.
    pub dew_point_c: f64,
    /// Wind at 7 m, m/s.
    pub wind_m_s: f64,
    /// Cloud, 0 to 1.
    pub cloud: f64,
    /// Sun and sky on level ground, before any shade or reflection, W/m2.
    pub solar_w_m2: f64,
}

/// Weather as a series: by the hour or by the day. What is missing is absent.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct Weather {
    /// By the hour it begins with, in the site's offset; empty for daily weather.
    pub hours: BTreeMap<DateTime<FixedOffset>, Air>,
    /// Means of days; of hourly weather those of the days with all 24 hours.
    pub days: BTreeMap<NaiveDate, Air>,
}

impl Weather {
    /// Whether it goes by the hour.
    pub fn is_hourly(&self) -> bool {
        !self.hours.is_empty()
    }

    /// The air at a moment: of its hour, else the mean of its day.
    pub fn at(&self, time: DateTime<FixedOffset>) -> Option<Air> {
        let hour = time.with_minute(0)?.with_second(0)?.with_nanosecond(0)?;
        self.hours.get(&hour).or_else(|| self.days.get(&time.date_naive())).copied()
    }
}
