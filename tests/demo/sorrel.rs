//! Sorrel Dam on the Tamble River, both invented: weather by the hour, inflow and operation from the autumn of 2024 on,
//! the casts taken from the dam meanwhile, and what stations below it recorded in the last season.
//!
//! The pool is the column of the other sites, given a shallow turbid pool's nature; the weather is harmonics with noise
//! from a fixed seed, and the river below is stepped down by a heat budget and an oxygen balance of its own, so that a
//! comparison of the program with these records is not one of the program with itself. Every number is a choice for a
//! warm river at 38 degrees north and 210 m.
#![expect(
    clippy::cast_possible_truncation,
    clippy::cast_sign_loss,
    clippy::cast_possible_wrap,
    reason = "hours and days of two years are counted in small numbers from zero"
)]

pub(crate) mod believable;
mod operation;
mod river;
mod stations;
mod weather;

use chrono::NaiveDate;
use rand_pcg::Pcg32;
use serde_yaml::Value;

use super::basin::Basin;
use super::column::{Column, Nature, Water};
use super::heat::{self, Hour};
use super::sonde::{Cast, sound, times};
use operation::{Inflow, operate, rule_curve_m};
use river::{Point, Reach};
use weather::Weather;

/// The column runs from here, mixed as pools are in November.
const FIRST_DAY: (i32, u32, u32) = (2024, 11, 10);
const STEPS_A_DAY: u32 = 6;
/// Days of forecast after the day of the newest cast.
const FORECAST_DAYS: u64 = 10;
/// A shallow turbid pool over rich mud.
const NATURE: Nature = Nature { zone_m: 2.2, light_loss_1_m: 0.7, demand: 1.5 };
/// Times of all casts, local standard time, the newest last.
const TAKEN: [&str; 14] = [
    "2025-04-22T10:10",
    "2025-05-20T09:55",
    "2025-06-17T10:20",
    "2025-07-08T09:40",
    "2025-07-29T09:35",
    "2025-08-19T10:05",
    "2025-09-16T10:15",
    "2025-10-21T10:40",
    "2026-01-27T11:20",
    "2026-04-21T10:00",
    "2026-05-19T09:50",
    "2026-06-16T09:45",
    "2026-07-07T09:30",
    "2026-07-28T09:40",
];

/// What the makers need to know of the site; read from its own file, so that the two cannot part.
pub(crate) struct Site {
    basin: Basin,
    full_m: f64,
    latitude: f64,
    /// Centres of the well's ports, m, the highest first.
    ports_m: Vec<f64>,
    reaches: Vec<Reach>,
    points: Vec<Point>,
}

impl Site {
    /// From the text of `site.yaml`, lengths in metres, areas in km2.
    pub(crate) fn read(text: &str) -> Self {
        let site: Value = serde_yaml::from_str(text).unwrap();
        let number = |value: &Value| value.as_f64().unwrap();
        let rows = site["pool"]["table"].as_sequence().unwrap();
        let outlets = site["outlets"].as_sequence().unwrap().iter();
        let ports = outlets.filter(|outlet| outlet["well"].as_str() == Some("Tower"));
        Self {
            basin: Basin::new(rows.iter().map(|row| (number(&row[0]), 1e6 * number(&row[1])))),
            full_m: number(&site["pool"]["full"]),
            latitude: number(&site["place"]["latitude"]),
            ports_m: ports.map(|port| number(&port["centre"])).collect(),
            reaches: river::reaches(&site["river"]),
            points: river::points(&site["river"]),
        }
    }
}

/// One day of the dam.
pub(crate) struct Day {
    pub(crate) date: NaiveDate,
    pub(crate) hours: [Hour; 24],
    /// What left the dam, and how much, m3/s.
    pub(crate) released: Water,
    pub(crate) flow_m3s: f64,
    /// What each port gave, m3/s, the highest first.
    pub(crate) ports_m3s: Vec<f64>,
    pub(crate) brook: Inflow,
}

/// All that happened: casts, oldest first, and every day.
pub(crate) struct Years {
    pub(crate) casts: Vec<Cast>,
    pub(crate) days: Vec<Day>,
}

pub(crate) fn years(site: &Site) -> Years {
    let times = times(&TAKEN);
    let last = times[times.len() - 1].date() + chrono::Days::new(FORECAST_DAYS);
    let (y, m, d) = FIRST_DAY;
    let mut date = NaiveDate::from_ymd_opt(y, m, d).unwrap();
    // two streams, so that one more cast leaves the weather as it is
    let (mut weather, mut sensor) = (Weather::new(site.latitude), Pcg32::new(212, 2));
    let autumn = Water { temperature_c: 13.0, oxygen_mg_l: 9.5, conductance_us_cm: 310.0 };
    let mut column = Column::mixed(&site.basin, 0.0, rule_curve_m(date), autumn).with(NATURE);
    let (mut casts, mut days) = (Vec::new(), Vec::new());
    while date <= last {
        let hours = weather.day(date);
        let (forcing, day) = operate(site, &column, date, &hours, &weather);
        days.push(day);
        for _ in 0..STEPS_A_DAY {
            column.step(&forcing, 86400.0 / f64::from(STEPS_A_DAY));
        }
        for &taken in times.iter().filter(|taken| taken.date() == date) {
            casts.push(sound(&site.basin, &column, taken, &mut sensor));
        }
        date = date.succ_opt().unwrap();
    }
    Years { casts, days }
}

/// Every file beside `site.yaml`: its path in the folder and its text.
pub(crate) fn files(site: &Site, years: &Years) -> Vec<(String, String)> {
    let mut files: Vec<_> =
        years.casts.iter().map(|cast| cast.file("Sorrel Dam on the Tamble River")).collect();
    files.push(("weather.csv".into(), weather::file(years)));
    files.extend(stations::files(site, years));
    files
}
