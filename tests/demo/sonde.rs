//! The sonde lowered from a dam: what it reads every metre, with its noise.

use chrono::NaiveDateTime;
use rand_distr::{Distribution, StandardNormal};
use rand_pcg::Pcg32;

use super::basin::Basin;
use super::column::{Column, Water};

/// Sensor noise as a standard deviation: C, mg/L, uS/cm.
const NOISE: (f64, f64, f64) = (0.03, 0.06, 0.8);

/// One cast: when, the pool (m) and its rows of depth (m) and what the sonde read there.
pub(crate) struct Cast {
    pub(crate) taken: NaiveDateTime,
    pub(crate) pool_m: f64,
    pub(crate) rows: Vec<(f64, Water)>,
}

/// Times of casts as they are written in the makers.
pub(crate) fn times(texts: &[&str]) -> Vec<NaiveDateTime> {
    texts.iter().map(|text| NaiveDateTime::parse_from_str(text, "%Y-%m-%dT%H:%M").unwrap()).collect()
}

/// Lowers the sonde: every metre, from just below the surface to just above the bed.
pub(crate) fn sound(basin: &Basin, column: &Column, taken: NaiveDateTime, random: &mut Pcg32) -> Cast {
    let pool_m = (100.0 * column.pool_m()).round() / 100.0;
    let deepest_m = ((pool_m - basin.bed_m() - 0.5) * 10.0).floor() / 10.0;
    let whole = (1..).map(f64::from).take_while(|&depth| depth < deepest_m - 0.3);
    let mut noisy = |value: f64, deviation: f64| {
        let draw: f64 = StandardNormal.sample(random);
        value + deviation * draw
    };
    let rows = std::iter::once(0.2).chain(whole).chain([deepest_m]).map(|depth_m| {
        let water = column.at(pool_m - depth_m);
        let read = Water {
            temperature_c: noisy(water.temperature_c, NOISE.0),
            oxygen_mg_l: noisy(water.oxygen_mg_l, NOISE.1).max(0.0),
            conductance_us_cm: noisy(water.conductance_us_cm, NOISE.2),
        };
        (depth_m, read)
    });
    Cast { taken, pool_m, rows: rows.collect() }
}

impl Cast {
    /// Its file below the folder, and the text; `of` names the place.
    pub(crate) fn file(&self, of: &str) -> (String, String) {
        use std::fmt::Write;
        let mut text = format!("# {of}: invented data of an invented place.\n");
        writeln!(text, "# taken: {}", self.taken.format("%Y-%m-%dT%H:%M")).unwrap();
        writeln!(text, "# pool: {:.2} m", self.pool_m).unwrap();
        text.push_str("depth_m,temperature_C,oxygen_mg_l,specific_conductance_us_cm\n");
        for (depth_m, water) in &self.rows {
            let (t, oxygen, conductance) = (water.temperature_c, water.oxygen_mg_l, water.conductance_us_cm);
            writeln!(text, "{depth_m:.1},{t:.2},{oxygen:.2},{conductance:.0}").unwrap();
        }
        (format!("profiles/{}.csv", self.taken.date()), text)
    }
}
