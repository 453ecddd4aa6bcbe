//! The air that goes with what drove the pool, and its file.

use std::fmt::Write;

use chrono::{Datelike, NaiveDate};
use rand_pcg::Pcg32;

use super::super::column::Forcing;
use super::super::heat::{Hour, equilibrium_c};
use super::super::season::{fading, yearly};

/// How far the dew point lies below the air, C, and how far that strays.
const DRY_C: (f64, f64) = (7.5, 1.5);

/// The days of a station by the dam.
pub(super) struct Weather {
    random: Pcg32,
    damp: f64,
    days: Vec<(NaiveDate, Hour)>,
}

impl Weather {
    pub(super) fn new() -> Self {
        // a stream of its own: the pool and the casts are as they were
        Self { random: Pcg32::new(352, 3), damp: 0.0, days: Vec::new() }
    }

    /// Keeps a day: its sun and wind, and the air at which they leave the water at the equilibrium that drove the pool.
    pub(super) fn keep(&mut self, day: NaiveDate, forcing: &Forcing) {
        self.damp = fading(&mut self.random, 0.6, self.damp);
        let dry_c = (DRY_C.0 + DRY_C.1 * self.damp).max(0.5);
        let under = |air_c: f64| Hour {
            air_c,
            dew_point_c: air_c - dry_c,
            wind_m_s: forcing.wind_m_s,
            cloud: 0.58 - 0.16 * yearly(day, 205.0),
            sun_w_m2: forcing.sun_w_m2,
        };
        let (mut low_c, mut high_c) = (-30.0, 45.0);
        for _ in 0..50 {
            let middle_c = f64::midpoint(low_c, high_c);
            if equilibrium_c(&[under(middle_c); 24]) < forcing.equilibrium_c {
                low_c = middle_c;
            } else {
                high_c = middle_c;
            }
        }
        self.days.push((day, under(low_c)));
    }

    /// `weather.csv`, a row a day of the last year, up to the eve of the newest cast: its day is not over.
    pub(super) fn file(&self, of: &str) -> (String, String) {
        let mut text = format!("# {of}: invented weather of an invented place.\n# wind height: 10 m\n");
        text.push_str("date,air_C,dew_point_C,wind_m_s,cloud_percent,radiation_w_m2\n");
        let year = self.days.last().map(|(day, _)| day.year());
        let past = self.days.iter().rev().skip(1).rev().filter(|(day, _)| Some(day.year()) == year);
        for (day, Hour { air_c, dew_point_c, wind_m_s, cloud, sun_w_m2 }) in past {
            let percent = 100.0 * cloud;
            writeln!(text, "{day},{air_c:.1},{dew_point_c:.1},{wind_m_s:.1},{percent:.0},{sun_w_m2:.0}")
                .unwrap();
        }
        ("weather.csv".to_owned(), text)
    }
}
