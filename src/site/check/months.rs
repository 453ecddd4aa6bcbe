//! Weather of the months, as the site file gives it, into the air over the river.

use chrono::{Datelike, NaiveDate};

use crate::problem::Problem;
use crate::site::{Raw, RawMonthly, Yearly};
use crate::weather::{Air, Damp, Reading, STATION_HEIGHT_M, Sky, Stand};

use super::outlets::{not_negative, positive};

/// The air of each month, January first, as that of its middle day.
pub(super) fn air(m: &RawMonthly, raw: &Raw, problems: &mut Vec<Problem>) -> Option<[Air; 12]> {
    let at = |key: &str| format!("river.monthly.{key}");
    let before = problems.len();
    let damp = match (&m.humidity, &m.dew_point_c) {
        (Some(_), None) | (None, Some(_)) => true,
        (both, _) => {
            let words = if both.is_some() {
                "both humidity and dew_point are given"
            } else {
                "neither humidity nor dew_point is given"
            };
            problems.push(Problem::refused("damp", words, "give one of both").at("river.monthly"));
            false
        }
    };
    let shares = [(&m.humidity, "humidity"), (&m.cloud, "cloud")];
    for (yearly, key) in shares {
        if figures(yearly.as_ref()).any(|v| !(0.0..=1.0).contains(&v)) {
            let words = format!("{key} lies outside 0 to 100 %");
            problems.push(Problem::refused("share", words, "correct the figure").at(at(key)));
        }
    }
    let amounts =
        [(&m.wind_m_s, "wind"), (&m.radiation_w_m2, "radiation_w_m2"), (&m.sunshine_h, "sunshine_h")];
    for (yearly, key) in amounts {
        let least = figures(yearly.as_ref()).reduce(f64::min);
        not_negative(least, at(key), key, problems);
    }
    positive(m.wind_height_m, at("wind_height"), "wind_height", problems);
    if !damp || problems.len() > before {
        return None;
    }
    let mut out = Vec::with_capacity(12);
    for month in 1..=12 {
        let of = |yearly: &Option<Yearly>| yearly.as_ref().map(|y| y.in_month(month));
        let damp = of(&m.humidity).map(Damp::Humidity).or(of(&m.dew_point_c).map(Damp::DewPoint))?;
        let reading = Reading {
            temperature_c: of(&m.air_c)?,
            damp,
            wind_m_s: of(&m.wind_m_s)?,
            wind_height_m: m.wind_height_m.unwrap_or(STATION_HEIGHT_M),
            sky: Sky {
                cloud: of(&m.cloud),
                sunshine_h: of(&m.sunshine_h),
                solar_w_m2: of(&m.radiation_w_m2),
            },
        };
        let stand = Stand {
            latitude_deg: raw.latitude_deg,
            altitude_m: raw.altitude_m,
            day: NaiveDate::from_ymd_opt(2025, month, 15)?.ordinal(),
            hours: None,
        };
        match reading.air(&stand) {
            Ok((air, _)) => out.push(air),
            Err(problem) => {
                problems.push(problem.at("river.monthly"));
                return None;
            }
        }
    }
    out.try_into().ok()
}

fn figures(yearly: Option<&Yearly>) -> impl Iterator<Item = f64> {
    (1..=12).filter_map(move |month| yearly.map(|y| y.in_month(month)))
}
