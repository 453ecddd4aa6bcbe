//! The mixed pool as a test of sensors: where all its water is of one temperature every outlet gives that, whatever
//! the zones, the gates and the leaks; what the gauge then reads beside it is a sensor's doing.
//!
//! Methods: `docs/methods.md`, section 9.

use crate::record::pairs::Pair;
use crate::site::Site;
use crate::units::say;

/// A cast whose coldest and warmest water differ by no more is of one temperature, C (choice).
const MIXED_C: f64 = 0.3;
/// Fewest days with one cast, so that a bad day of the gauge decides nothing (choice).
const LEAST_MIXED_DAYS: usize = 4;

/// Which sensor the mixed pool speaks against.
#[derive(Debug, Clone, PartialEq)]
pub enum Sensor {
    /// The thermistor of these casts: others agree with the gauge, or differ otherwise.
    Casts(Vec<String>),
    /// The gauge, or one thermistor that took every cast: all differ alike.
    Common,
    /// There is one cast only.
    Either,
}

/// A difference between gauge and pool that no water explains.
#[derive(Debug, Clone, PartialEq)]
pub struct Suspect {
    /// Which sensor.
    pub sensor: Sensor,
    /// Days with a mixed pool.
    pub n: usize,
    /// Each cast of a mixed pool, with the mean of gauge less pool, C.
    pub casts: Vec<(String, f64)>,
}

impl Suspect {
    /// What it says.
    pub fn words(&self) -> String {
        let errors: Vec<String> = self
            .casts
            .iter()
            .map(|(cast, error)| format!("{} at {cast}", say::dc(*error, 2).signed()))
            .collect();
        let which = match &self.sensor {
            Sensor::Casts(casts) => format!("look at the thermistor that took {}", casts.join(", ")),
            Sensor::Common => {
                "it is alike at all of them: look at the gauge, or at the thermistor if one took them all"
                    .into()
            }
            Sensor::Either => {
                "one cast does not tell whether its thermistor or the gauge: compare them in one bucket"
                    .into()
            }
        };
        format!(
            "on {} days the pool was of one temperature within {}, where no gate, zone or leak makes a difference, yet the gauge read beside it ({}); {which}",
            self.n,
            say::dc(MIXED_C, 1),
            errors.join(", ")
        )
    }
}

/// The sensor that the mixed pool speaks against, if it does: on the mean over the days of a cast, gauge and pool
/// differ by more than the pool in itself and the usual offset of a cast.
pub(super) fn suspect(site: &Site, pairs: &[&Pair]) -> Option<Suspect> {
    let mixed = pairs.iter().filter(|pair| pair.cast_c.1 - pair.cast_c.0 <= MIXED_C);
    let errors: Vec<(&str, f64)> =
        mixed.filter_map(|pair| Some((pair.cast.as_str(), pair.measured_c? - pair.computed_c))).collect();
    let (mut n, mut casts): (usize, Vec<(String, f64)>) = (0, Vec::new());
    for days in errors.chunk_by(|a, b| a.0 == b.0).filter(|days| days.len() >= LEAST_MIXED_DAYS) {
        n += days.len();
        let mean = days.iter().map(|day| day.1).sum::<f64>() / days.len() as f64;
        casts.extend(days.first().map(|day| (day.0.to_owned(), mean)));
    }
    let most = MIXED_C + site.band.cast_c;
    let off: Vec<&(String, f64)> = casts.iter().filter(|cast| cast.1.abs() > most).collect();
    if off.is_empty() {
        return None;
    }
    let range = |pick: fn(f64, f64) -> f64, from: f64| off.iter().map(|cast| cast.1).fold(from, pick);
    let alike = range(f64::max, f64::NEG_INFINITY) - range(f64::min, f64::INFINITY) <= most;
    let sensor = if casts.len() == 1 {
        Sensor::Either
    } else if off.len() == casts.len() && alike {
        Sensor::Common
    } else {
        Sensor::Casts(off.iter().map(|cast| cast.0.clone()).collect())
    };
    Some(Suspect { sensor, n, casts })
}
