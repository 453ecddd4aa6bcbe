//! The weather of the invented years by the hour, and its file.

use std::f64::consts::TAU;
use std::fmt::Write;

use chrono::{Datelike, NaiveDate};
use rand_pcg::Pcg32;

use super::super::season::{bell, fading, yearly};
use super::{FORECAST_DAYS, Hour, Years};

/// Noise of the day: departures from the season, standard deviation 1, that fade over some days.
pub(crate) struct Weather {
    random: Pcg32,
    latitude: f64,
    pub(super) air: f64,
    damp: f64,
    wind: f64,
    cloud: f64,
    pub(super) rain: f64,
}

impl Weather {
    pub(super) fn new(latitude: f64) -> Self {
        let random = Pcg32::new(213, 1);
        Self { random, latitude, air: 0.0, damp: 0.0, wind: 0.0, cloud: 0.0, rain: 0.0 }
    }

    /// The next day's hours.
    pub(super) fn day(&mut self, date: NaiveDate) -> [Hour; 24] {
        let mut draw = |kept, old| fading(&mut self.random, kept, old);
        self.air = draw(0.75, self.air);
        self.damp = draw(0.6, self.damp);
        self.wind = draw(0.4, self.wind);
        self.cloud = draw(0.5, self.cloud);
        self.rain = draw(0.8, self.rain);
        let cloud = (0.42 + 0.25 * self.cloud).clamp(0.0, 1.0);
        let mean_c = 12.8 + 11.2 * yearly(date, 203.0) + 2.2 * self.air + heat_wave_c(date);
        let dew_c = mean_c - 5.5 + 1.5 * self.damp;
        let wind_m_s = (2.9 + 0.6 * yearly(date, 80.0) + 0.8 * self.wind).max(0.6);
        std::array::from_fn(|hour| {
            // the middle of the hour stands for it
            let clock = hour as f64 + 0.5;
            let round = |peak: f64| (TAU * (clock - peak) / 24.0).cos();
            let air_c = mean_c + 6.0 * (1.0 - 0.5 * cloud) * round(15.5);
            Hour {
                air_c,
                dew_point_c: dew_c.min(air_c - 0.3),
                wind_m_s: wind_m_s * (0.75 + 0.6 * round(14.5).max(0.0)),
                cloud,
                sun_w_m2: clear_sky_w_m2(date, clock, self.latitude) * (1.0 - 0.65 * cloud * cloud),
            }
        })
    }
}

/// Two hot spells of 2026, one in June and one in the days after the newest cast, C over the season.
fn heat_wave_c(date: NaiveDate) -> f64 {
    // days of the year from 0
    if date.year() == 2026 { 4.5 * bell(date, 172.0, 2.5) + 5.5 * bell(date, 213.0, 2.0) } else { 0.0 }
}

/// Sun on level ground under a clear sky, W/m2, by the local solar clock.
///
/// # References
/// Haurwitz 1945, 1098 sin h exp(-0.057/sin h), with the declination of Cooper 1969 (both from memory).
fn clear_sky_w_m2(date: NaiveDate, clock: f64, latitude: f64) -> f64 {
    let declination = 23.45_f64.to_radians() * (TAU * f64::from(284 + date.ordinal()) / 365.0).sin();
    let (turned, north) = (TAU * (clock - 12.0) / 24.0, latitude.to_radians());
    let height = north.sin() * declination.sin() + north.cos() * declination.cos() * turned.cos();
    if height > 0.0 { 1098.0 * height * (-0.057 / height).exp() } else { 0.0 }
}

/// `weather.csv`: the last year from May on; the days after the newest cast's are called forecast.
pub(super) fn file(years: &Years) -> String {
    let last = years.days[years.days.len() - 1].date;
    let newest = last - chrono::Days::new(FORECAST_DAYS);
    let first = NaiveDate::from_ymd_opt(last.year(), 5, 1).unwrap();
    let mut text = String::from("# Sorrel Dam on the Tamble River: invented weather of an invented place.\n");
    text.push_str("# wind height: 10 m\n");
    writeln!(text, "# forecast from: {newest}T10:00").unwrap();
    text.push_str("time,air_C,dew_point_C,wind_m_s,cloud_percent,radiation_w_m2\n");
    for day in years.days.iter().filter(|day| day.date >= first) {
        for (clock, hour) in day.hours.iter().enumerate() {
            let Hour { air_c, dew_point_c, wind_m_s, cloud, sun_w_m2 } = hour;
            let percent = 100.0 * cloud;
            write!(text, "{}T{clock:02}:00,{air_c:.1},{dew_point_c:.1},", day.date).unwrap();
            writeln!(text, "{wind_m_s:.1},{percent:.0},{sun_w_m2:.0}").unwrap();
        }
    }
    text
}
