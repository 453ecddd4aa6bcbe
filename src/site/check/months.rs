//! Weather of the months, as the site file gives it, into the air over the water.

use chrono::{Datelike, NaiveDate};

use crate::problem::Problem;
use crate::site::{Raw, RawMonthly, Yearly};
use crate::units::say;
use crate::weather::believed::{AIR_C, DEW_ABOVE_C, SOLAR_W_M2, SUNSHINE_H, WIND_M_S};
use crate::weather::{Air, CLOUD_UNKNOWN, Damp, Reading, STATION_HEIGHT_M, Sky, Stand};

use super::outlets::{not_negative, positive};

/// The air of each month, January first, as that of its middle day; `path` is where the file gives it.
pub(super) fn air(m: &RawMonthly, raw: &Raw, path: &str, problems: &mut Vec<Problem>) -> Option<[Air; 12]> {
    let at = |key: &str| format!("{path}.{key}");
    let before = problems.len();
    let damp = match (&m.humidity, &m.dew_point_c) {
        (Some(_), None) | (None, Some(_)) => true,
        (both, _) => {
            let words = if both.is_some() {
                "both humidity and dew_point are given"
            } else {
                "neither humidity nor dew_point is given"
            };
            problems.push(Problem::refused("damp", words, "give one of both").at(path));
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
    for (yearly, key) in [(&m.air_c, "air"), (&m.dew_point_c, "dew_point")] {
        if figures(yearly.as_ref()).any(|c| !AIR_C.contains(&c)) {
            let (least, most) = (say::c(*AIR_C.start(), 0), say::c(*AIR_C.end(), 0));
            let words = format!("{key} lies outside {least} to {most}");
            problems.push(Problem::refused("weather-range", words, "check its unit").at(at(key)));
        }
    }
    let amounts = [
        (&m.wind_m_s, "wind", WIND_M_S, say::m_s(*WIND_M_S.end(), 0).to_string()),
        (&m.radiation_w_m2, "radiation_w_m2", SOLAR_W_M2, format!("{:.0} W/m2", SOLAR_W_M2.end())),
        (&m.sunshine_h, "sunshine_h", SUNSHINE_H, format!("{:.0} h", SUNSHINE_H.end())),
    ];
    for (yearly, key, range, most) in amounts {
        let least = figures(yearly.as_ref()).reduce(f64::min);
        not_negative(least, at(key), key, problems);
        if figures(yearly.as_ref()).any(|v| v > *range.end()) {
            let words = format!("{key} lies above {most}");
            problems.push(Problem::refused("weather-range", words, "check its unit").at(at(key)));
        }
    }
    positive(m.wind_height_m, at("wind_height"), "wind_height", problems);
    if !damp || problems.len() > before {
        return None;
    }
    let (mut assumed, mut above) = (false, false);
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
            Ok((air, guessed)) => {
                assumed |= guessed;
                above |= air.dew_point_c > air.temperature_c + DEW_ABOVE_C;
                out.push(air);
            }
            Err(problem) => {
                problems.push(problem.at(path));
                return None;
            }
        }
    }
    if assumed {
        let words = format!("no cloud is given, nor what tells it: {CLOUD_UNKNOWN} is assumed");
        let cure = "give cloud, or `place: { latitude: 44.1 }`";
        problems.push(Problem::flag("cloud-assumed", words, cure).at(path));
    }
    if above {
        let words = format!("a dew point lies over {} above its air", say::dc(DEW_ABOVE_C, 0));
        problems.push(Problem::flag("dew-above-air", words, "check both").at(at("dew_point")));
    }
    out.try_into().ok()
}

fn figures(yearly: Option<&Yearly>) -> impl Iterator<Item = f64> {
    (1..=12).filter_map(move |month| yearly.map(|y| y.in_month(month)))
}
