//! What the station right below the dam recorded in the spring, with all that happens to sensors.

use std::f64::consts::TAU;

use chrono::{NaiveDateTime, NaiveTime, TimeDelta};
use rand_distr::{Distribution, StandardNormal};
use rand_pcg::Pcg32;

use super::super::column::Water;
use super::super::record::{Reading, Unit, text};
use super::super::season::fading;
use super::meetings::{EVENT, time};

/// The thermometer reads so much too warm, C: what the record has to teach.
pub(crate) const TOO_WARM_C: f64 = 0.45;
/// Oxygen that the water takes up on the apron, mg/L.
const TAKEN_UP_MG_L: f64 = 0.2;
/// The sun on the pool below the dam, C: half of what a day swings.
const SUN_C: f64 = 0.12;
/// What comes and goes within days, as a standard deviation, and the share of it kept from one hour to the next.
const STRAY: (f64, f64, f64) = (0.10, 0.10, 0.97);
/// Sensor noise as a standard deviation: C, mg/L.
const NOISE: (f64, f64) = (0.04, 0.07);
/// The battery is empty.
const GAP: (&str, &str) = ("2026-06-05T14:00", "2026-06-07T09:00");
/// The oxygen cell is overgrown until it is taken out for cleaning.
const FOULED: (&str, &str) = ("2026-04-27T00:00", "2026-05-01T10:00");
/// Hour of the newest cast's day up to which is recorded.
const LAST_H: i64 = 8;

/// The water that left the dam, by the hour.
pub(super) struct Gauge {
    random: Pcg32,
    stray: [f64; 2],
    readings: Vec<Reading>,
}

impl Gauge {
    pub(super) fn new() -> Self {
        // a stream of its own: the pool and the casts are as they were
        Self { random: Pcg32::new(352, 4), stray: [0.0; 2], readings: Vec::new() }
    }

    /// Reads the water of some hours from a moment on.
    pub(super) fn read(&mut self, from: NaiveDateTime, hours: i64, water: Water) {
        for hour in 0..hours {
            let at = from + TimeDelta::hours(hour);
            self.stray = self.stray.map(|stray| fading(&mut self.random, STRAY.2, stray));
            let of_day = (at - at.date().and_time(NaiveTime::MIN)).num_hours() as f64;
            let sun_c = SUN_C * (TAU * (of_day - 15.0) / 24.0).cos();
            let mut noise = |deviation: f64| -> f64 {
                let draw: f64 = StandardNormal.sample(&mut self.random);
                deviation * draw
            };
            self.readings.push(Reading {
                time: at,
                temperature_c: water.temperature_c
                    + TOO_WARM_C
                    + sun_c
                    + STRAY.0 * self.stray[0]
                    + noise(NOISE.0),
                oxygen_mg_l: Some(
                    water.oxygen_mg_l + TAKEN_UP_MG_L + STRAY.1 * self.stray[1] + noise(NOISE.1),
                ),
            });
        }
    }

    /// `tailwater.csv` up to the morning of a day.
    pub(super) fn file(mut self, of: &str, newest: NaiveDateTime) -> (String, String) {
        let morning = newest.date().and_time(NaiveTime::MIN) + TimeDelta::hours(LAST_H);
        self.readings.retain(|reading| reading.time <= morning);
        let stuck = self.readings.iter().rfind(|reading| reading.time < time(EVENT.3)).unwrap();
        let stuck = (stuck.temperature_c, stuck.oxygen_mg_l);
        let renewed = time(&format!("{}T14:00", EVENT.4));
        for reading in &mut self.readings {
            if (time(EVENT.3)..renewed).contains(&reading.time) {
                (reading.temperature_c, reading.oxygen_mg_l) = stuck;
            }
            if (time(FOULED.0)..time(FOULED.1)).contains(&reading.time) {
                reading.oxygen_mg_l = None;
            }
        }
        self.readings.retain(|reading| !(time(GAP.0)..time(GAP.1)).contains(&reading.time));
        let text = text(&format!("{of}, the tailwater"), Unit::Celsius, &self.readings);
        ("tailwater.csv".to_owned(), text)
    }
}
