//! The table of a level against the level solved at each flow.

use std::f64::consts::PI;

use gatemix::profile::Column;
use gatemix::rank::Curve;
use gatemix::withdrawal::{CrestForm, Opening, Sink, zone};
use proptest::prelude::*;

use super::dice::Dice;
use crate::columns::{any_water, share, stable};

const CASES: u64 = 200;
/// Flows tried of each level, evenly by the logarithm.
const FLOWS: usize = 40;
/// Least flow tried, as a share of the greatest.
const LEAST: f64 = 1e-4;
/// A table may err by this much, C and mg/L.
const APART: f64 = 0.005;
/// The same for the share of cold water.
const APART_SHARE: f64 = 0.01;

/// How far a table lies from what it was made from.
#[derive(Debug, Default)]
struct Apart {
    temperature_c: f64,
    oxygen_mg_l: f64,
    cold_share: f64,
    flows: usize,
    /// Flows at which only one of the two knows the oxygen.
    oxygen_of_one: usize,
}

struct Level {
    column: Column,
    centre_m: f64,
    opening: Opening,
    most_m3s: f64,
    cold_c: f64,
}

fn level(seed: u64) -> Level {
    let dice = &mut Dice::new(seed);
    let mut water = dice.draw(prop_oneof![1 => stable(), 1 => any_water()]);
    if dice.once_in(5) {
        let from = water.at(dice.between(0.0..0.9));
        water.oxygen.retain(|o| o.elevation_m > from);
    }
    let samples = &water.samples;
    let cold_c = 0.5 * (samples[0].temperature_c + samples[samples.len() - 1].temperature_c);
    let crest = dice.once_in(4);
    let opening = if crest {
        Opening::Crest { length_m: dice.between(2.0..60.0), form: CrestForm::default() }
    } else {
        Opening::Port { angle_rad: dice.one_of(&[0.5 * PI, PI, 2.0 * PI]) }
    };
    let centre_m =
        if crest { water.surface_m - dice.between(0.1..6.0) } else { water.at(dice.draw(share())) };
    Level {
        column: water.column(),
        centre_m,
        opening,
        most_m3s: 10.0_f64.powf(dice.between(0.0..3.0)),
        cold_c,
    }
}

fn compare(level: &Level, flow_m3s: f64, curve: &Curve, apart: &mut Apart) {
    let Level { column, centre_m, opening, cold_c, .. } = level;
    let zone = zone(column, &Sink { centre_m: *centre_m, flow_m3s, opening: *opening }, 1.0).unwrap();
    let (draw, read) = (zone.draw(column).unwrap(), curve.at(flow_m3s));
    let keep = |most: &mut f64, off: f64| *most = most.max(off.abs());
    keep(&mut apart.temperature_c, draw.temperature_c - read.temperature_c);
    keep(&mut apart.cold_share, zone.colder_share(column, *cold_c) - read.cold_share);
    apart.flows += 1;
    match (draw.oxygen_mg_l, read.oxygen_mg_l) {
        (Some(a), Some(b)) => keep(&mut apart.oxygen_mg_l, a - b),
        (None, None) => {}
        _ => apart.oxygen_of_one += 1,
    }
}

/// Flows over the whole range, and just beside those at which the zone meets bed or surface.
fn flows(level: &Level, dice: &mut Dice) -> Vec<f64> {
    let Level { column, centre_m, opening, most_m3s, .. } = level;
    let mut out: Vec<f64> =
        (0..FLOWS).map(|_| most_m3s * 10.0_f64.powf(dice.between(LEAST.log10()..0.0))).collect();
    let widest =
        zone(column, &Sink { centre_m: *centre_m, flow_m3s: *most_m3s, opening: *opening }, 1.0).unwrap();
    for side in [widest.lower, widest.upper] {
        let meets = side.boundary_flow_m3s.unwrap_or(0.0);
        out.extend([0.99, 0.9999, 1.0 - 1e-9, 1.0, 1.0 + 1e-9, 1.0001, 1.01].map(|share| share * meets));
    }
    out.retain(|flow| (LEAST * most_m3s..=*most_m3s).contains(flow));
    out
}

#[test]
fn law_a_table_reads_what_the_level_gives() {
    let mut failed = Vec::new();
    let mut all = Apart::default();
    for seed in 0..CASES {
        let level = level(seed);
        let Level { column, centre_m, opening, most_m3s, cold_c } = &level;
        let curve = Curve::new((column, 1.0), *centre_m, *opening, *most_m3s, Some(*cold_c)).unwrap();
        let mut apart = Apart::default();
        for flow in flows(&level, &mut Dice::new(seed)) {
            compare(&level, flow, &curve, &mut apart);
        }
        if apart.temperature_c > APART || apart.oxygen_mg_l > APART || apart.cold_share > APART_SHARE {
            failed.push(format!("level {seed}: {apart:?} {} knots {opening:?}", curve.knots()));
        }
        all.flows += apart.flows;
        all.oxygen_of_one += apart.oxygen_of_one;
        all.temperature_c = all.temperature_c.max(apart.temperature_c);
        all.oxygen_mg_l = all.oxygen_mg_l.max(apart.oxygen_mg_l);
        all.cold_share = all.cold_share.max(apart.cold_share);
    }
    assert!(failed.is_empty(), "{all:?}\n{}", failed.join("\n"));
    assert!(all.flows > 8_000, "{all:?}");
    assert!(all.oxygen_of_one * 500 < all.flows, "{all:?}");
}
