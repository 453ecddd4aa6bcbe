//! Weather over the river and the pool: humidity, sun, wind, and the heat they bring to water.
//!
//! Methods: `docs/methods.md`, section 6.

pub mod believed;
mod budget;
pub mod humidity;
mod reading;
pub mod sun;
mod wind;

use std::collections::BTreeMap;

use chrono::{DateTime, FixedOffset, NaiveDate, TimeDelta, Timelike};

use crate::series::LONGEST_GAP_H;

pub use budget::{
    Budget, REFLECTED, budget, equilibrium_c, exchange_w_m2_c, vapour_slope_mmhg_c, wind_function,
};
pub use reading::{CLOUD_UNKNOWN, Damp, LEAST_HUMIDITY, Reading, Sky, Stand};
pub use wind::{STATION_HEIGHT_M, WIND_HEIGHT_M, wind_at_7_m};

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

impl Air {
    /// The mean of several airs of equal length; `None` of none. Vapour pressure is averaged, not dew point: half as
    /// much vapour is not half the dew point.
    pub fn mean(airs: &[Self]) -> Option<Self> {
        if airs.is_empty() {
            return None;
        }
        let mean = |of: &dyn Fn(&Self) -> f64| airs.iter().map(of).sum::<f64>() / airs.len() as f64;
        Some(Self {
            temperature_c: mean(&|air| air.temperature_c),
            dew_point_c: humidity::dew_point_c(mean(&|air| humidity::saturation_kpa(air.dew_point_c))),
            wind_m_s: mean(&|air| air.wind_m_s),
            cloud: mean(&|air| air.cloud),
            solar_w_m2: mean(&|air| air.solar_w_m2),
        })
    }

    /// The air on the straight way from this one to another, at a share of it, 0 to 1: vapour pressure, not dew point.
    fn towards(&self, other: &Self, share: f64) -> Self {
        let between = |of: &dyn Fn(&Self) -> f64| (1.0 - share) * of(self) + share * of(other);
        Self {
            temperature_c: between(&|air| air.temperature_c),
            dew_point_c: humidity::dew_point_c(between(&|air| humidity::saturation_kpa(air.dew_point_c))),
            wind_m_s: between(&|air| air.wind_m_s),
            cloud: between(&|air| air.cloud),
            solar_w_m2: between(&|air| air.solar_w_m2),
        }
    }
}

/// Weather as a series: by the hour or by the day. What is missing is absent.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct Weather {
    /// By the hour it begins with, in the site's offset; empty for daily weather.
    pub hours: BTreeMap<DateTime<FixedOffset>, Air>,
    /// Means of days; of hourly weather those of the days with all 24 hours.
    pub days: BTreeMap<NaiveDate, Air>,
    /// From when on it is a forecast.
    pub forecast_from: Option<DateTime<FixedOffset>>,
}

/// Hours of a day.
const HOURS: usize = 24;

impl Weather {
    /// Weather by the hour, with the means of its whole days. The hours are those of the site's offset. Between two no
    /// more than [`LONGEST_GAP_H`] apart those that are missing are put in, so that a forecast that goes by three hours
    /// goes by the hour; longer gaps stay.
    pub fn of_hours(mut hours: BTreeMap<DateTime<FixedOffset>, Air>) -> Self {
        let between = between(&hours);
        hours.extend(between);
        let mut by_day: BTreeMap<NaiveDate, Vec<Air>> = BTreeMap::new();
        for (time, air) in &hours {
            by_day.entry(time.date_naive()).or_default().push(*air);
        }
        let whole = by_day.into_iter().filter(|(_, airs)| airs.len() >= HOURS);
        let days = whole.filter_map(|(date, airs)| Some((date, Air::mean(&airs)?))).collect();
        Self { hours, days, forecast_from: None }
    }

    /// Whether it goes by the hour.
    pub fn is_hourly(&self) -> bool {
        !self.hours.is_empty()
    }

    /// The air at a moment: of its hour, else the mean of its day.
    pub fn at(&self, time: DateTime<FixedOffset>) -> Option<Air> {
        let hour = time.with_minute(0)?.with_second(0)?.with_nanosecond(0)?;
        self.hours.get(&hour).or_else(|| self.days.get(&time.date_naive())).copied()
    }

    /// The last day of which anything is told.
    pub fn last_day(&self) -> Option<NaiveDate> {
        let hour = self.hours.keys().next_back().map(DateTime::date_naive);
        hour.max(self.days.keys().next_back().copied())
    }

    /// The mean air of a day.
    pub fn day(&self, date: NaiveDate) -> Option<Air> {
        self.days.get(&date).copied()
    }
}

/// The hours that are missing in short gaps.
fn between(hours: &BTreeMap<DateTime<FixedOffset>, Air>) -> Vec<(DateTime<FixedOffset>, Air)> {
    let mut out = Vec::new();
    for ((from, before), (to, after)) in hours.iter().zip(hours.iter().skip(1)) {
        let gap_h = (*to - *from).num_hours();
        if gap_h <= LONGEST_GAP_H {
            let put = |h: i64| (*from + TimeDelta::hours(h), before.towards(after, h as f64 / gap_h as f64));
            out.extend((1..gap_h).map(put));
        }
    }
    out
}
