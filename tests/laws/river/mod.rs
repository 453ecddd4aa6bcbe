//! Laws of the way down the river, and of the way back.

mod back;
mod down;
mod hours;
mod links;

use std::collections::BTreeMap;

use chrono::{DateTime, FixedOffset, NaiveDate, TimeDelta};
use gatemix::files::site::site;
use gatemix::river::{Conditions, Part};
use gatemix::site::Site;
use gatemix::weather::{Air, Weather};

pub(crate) const DAY: &str = "2026-07-15";

/// An invented dam at sea level with a river.
pub(crate) fn dam(river: &str) -> Site {
    let text = format!(
        "
name: Invented
utc_offset: \"+00:00\"
units: {{}}
pool: {{ bed: 0, full: 10, table: [[0, 0], [10, 1000]] }}
outlets: [ {{ name: A, centre: 3, height: 1, width: 1 }} ]
river: {river}
"
    );
    let read = site(&text, "site.yaml");
    read.site.unwrap_or_else(|| panic!("{:#?}", read.problems))
}

/// Two reaches, a stream, seepage, two points, under what `air` says: keys of the river.
pub(crate) fn long(air: &str) -> Site {
    dam(&format!(
        "{{ {air}, reaches: [
           {{ name: Upper, length_km: 20, width: 40, depth: 1.5, travel_hours: [[10, 14], [20, 9], [60, 5]], shade: 10,
              inflows: [ {{ name: Tansy Creek, at_km: 12, flow: 3, temperature: 14, oxygen: 9 }} ] }},
           {{ name: Lower, length_km: 14, width: 45, depth: 1.2, travel_hours: [[10, 10], [80, 4]],
              seepage: {{ flow: 1.5, temperature: 11, oxygen: 6 }} }} ],
         points: [ {{ name: Mill Bridge, at_km: 18 }}, {{ name: Ferry, at_km: 34 }} ],
         decay: {{ demand: 3, per_day: 0.2 }} }}"
    ))
}

pub(crate) const GIVEN: &str = "equilibrium: 22, exchange_w_m2_c: 30";
pub(crate) const WEATHER: &str = "weather: weather.csv";

pub(crate) fn day() -> NaiveDate {
    DAY.parse().unwrap()
}

pub(crate) fn part(hours: f64, flow_m3s: f64, temperature_c: f64, oxygen_mg_l: f64) -> Part {
    Part { hours, flow_m3s, temperature_c, oxygen_mg_l: Some(oxygen_mg_l) }
}

/// The air of a summer hour whose sun, warmth and wind swing by `swing` of a clear day's.
fn air(hour: f64, swing: f64) -> Air {
    let wave = ((hour - 9.0) / 24.0 * std::f64::consts::TAU).sin() * swing;
    Air {
        temperature_c: 20.0 + 8.0 * wave,
        dew_point_c: 11.0,
        wind_m_s: 2.0 * (1.0 + 0.5 * wave),
        cloud: 0.2,
        solar_w_m2: 280.0 * (1.0 + 1.0 * wave),
    }
}

/// Ten alike days by the hour.
pub(crate) fn hourly(swing: f64) -> Conditions {
    let midnight: DateTime<FixedOffset> = format!("{DAY}T00:00:00+00:00").parse().unwrap();
    let hours: BTreeMap<_, _> =
        (0..240).map(|h| (midnight + TimeDelta::hours(h), air(0.5 + (h % 24) as f64, swing))).collect();
    Conditions { weather: Weather::of_hours(hours), ..Conditions::default() }
}

/// The same days by their means.
pub(crate) fn daily(swing: f64) -> Conditions {
    let mut conditions = hourly(swing);
    conditions.weather.hours.clear();
    conditions
}
