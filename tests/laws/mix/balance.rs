//! Splitting a level's flow changes nothing; heat, solids, oxygen and water balance.

use approx::assert_relative_eq;
use gatemix::mix::{Drawn, Gate, Mix};
use gatemix::profile::Column;
use gatemix::withdrawal::Draw;
use proptest::prelude::*;

use super::sites::{Case, Kinds, basin, cases, gate, port};
use crate::columns::{Pool, any_water, config, flow};

const PLAIN: Kinds = Kinds { leaks: false, crests: true };

/// Two outlets of one level, `apart` times half the height apart, and a third elsewhere.
fn two_and_one(water: &Pool, share: f64, apart: f64) -> Case {
    let height_m = 0.06 * (water.surface_m - water.bed_m);
    let mut raw = basin(water);
    raw.outlets = vec![
        port("one", water.at(share), height_m, 3.0),
        port("other", water.at(share) + 0.5 * apart * height_m, height_m, 2.0),
        port("elsewhere", water.at(share) + 2.0 * height_m, height_m, 2.0),
    ];
    Case { raw, water: water.clone(), gates: Vec::new() }
}

/// The mix of those two with these openings and flows; `None` where the cast is refused.
fn given(case: &Case, gates: &[Gate]) -> Option<Mix> {
    let gates = gates.iter().copied().chain([gate(2, 7.0)]).collect();
    Some(Case { gates, ..case.clone() }.ready()?.judged())
}

fn same(a: &Mix, b: &Mix) {
    let figures = |m: &Mix| {
        let mut out = vec![m.release.flow_m3s, m.release.temperature_c, m.release.suspended_mg_l];
        out.extend(m.release.oxygen_mg_l);
        out.extend(m.levels.iter().flat_map(|d| [d.level.sink.centre_m, d.level.sink.flow_m3s]));
        out.extend(m.spread.cases.iter().flat_map(|c| [Some(c.0), c.1]).flatten());
        out
    };
    let (a, b) = (figures(a), figures(b));
    assert_eq!(a.len(), b.len());
    for (a, b) in a.iter().zip(&b) {
        assert_relative_eq!(a, b, max_relative = 1e-12, epsilon = 1e-12);
    }
}

proptest! {
    #![proptest_config(config(60))]

    /// The parts are exact in binary, so that they sum to the same whole.
    #[test]
    fn law_splitting_a_levels_flow_over_its_open_outlets_changes_nothing(
        water in any_water(), share in 0.05..0.8_f64, apart in 0.0..0.999_f64,
        whole in 1..400_u16, part in 0..=64_u16
    ) {
        let case = two_and_one(&water, share, apart);
        let whole = f64::from(whole);
        let split = |a: f64| given(&case, &[gate(0, a), gate(1, whole - a)]);
        let some = split(f64::from(part) / 64.0 * whole);
        let [all, none, half] = [whole, 0.0, 0.5 * whole].map(split);
        let (Some(some), Some(all), Some(none), Some(half)) = (some, all, none, half) else { return Ok(()) };
        prop_assert_eq!(some.levels.len(), 2);
        for other in [&all, &none, &half] {
            same(&some, other);
        }
    }

    #[test]
    fn law_outlets_of_one_centre_line_stand_in_for_each_other(
        water in any_water(), share in 0.05..0.8_f64, whole in 1..400_u16, part in 1..64_u16
    ) {
        let case = two_and_one(&water, share, 0.0);
        let whole = f64::from(whole);
        let a = f64::from(part) / 64.0 * whole;
        let both = given(&case, &[gate(0, a), gate(1, whole - a)]);
        let [one, other] = [0, 1].map(|outlet| given(&case, &[gate(outlet, whole)]));
        let (Some(both), Some(one), Some(other)) = (both, one, other) else { return Ok(()) };
        same(&both, &one);
        same(&both, &other);
    }

    #[test]
    fn law_water_heat_solids_and_oxygen_balance(case in cases(PLAIN)) {
        let Some(ready) = case.ready() else { return Ok(()) };
        let mix = ready.judged();
        let flowing: Vec<(f64, Draw)> =
            mix.levels.iter().filter_map(|d| Some((d.level.sink.flow_m3s, d.draw?))).collect();
        let sum = |read: &dyn Fn(&Draw) -> f64| flowing.iter().map(|(q, d)| q * read(d)).sum::<f64>();
        let r = &mix.release;
        assert_relative_eq!(sum(&|_| 1.0), r.flow_m3s, max_relative = 1e-12);
        assert_relative_eq!(ready.set_m3s(), r.flow_m3s, max_relative = 1e-12);
        for (parts, whole) in [
            (sum(&|d| d.temperature_c), r.temperature_c),
            (sum(&|d| d.salt_g_per_kg), r.salt_g_per_kg),
            (sum(&|d| d.suspended_mg_l), r.suspended_mg_l),
        ] {
            assert_relative_eq!(parts, whole * r.flow_m3s, max_relative = 1e-12, epsilon = 1e-12);
        }
        prop_assert_eq!(r.oxygen_mg_l.is_some(), flowing.iter().all(|(_, d)| d.oxygen_mg_l.is_some()));
        if let Some(oxygen) = r.oxygen_mg_l {
            let parts = sum(&|d| d.oxygen_mg_l.unwrap());
            assert_relative_eq!(parts, oxygen * r.flow_m3s, max_relative = 1e-12, epsilon = 1e-12);
        }
    }

    #[test]
    fn law_a_release_lies_between_its_levels_and_a_level_between_its_water(case in cases(PLAIN)) {
        let Some(ready) = case.ready() else { return Ok(()) };
        let mix = ready.judged();
        let drawn: Vec<f64> = mix.levels.iter().filter_map(|d| Some(d.draw?.temperature_c)).collect();
        prop_assert!(between(mix.release.temperature_c, &drawn), "{:?} of {:?}", mix.release, drawn);
        for d in mix.levels.iter().filter(|d| d.draw.is_some()) {
            let water = readings_c(&ready.profile.column, &case.water, d);
            prop_assert!(between(d.draw.unwrap().temperature_c, &water), "{:?}", d);
        }
    }

    /// The same flow through one level as through two of them that are drawn alike: pure arithmetic of the blend.
    #[test]
    fn law_equal_levels_blend_to_themselves(share in 0.1..0.8_f64, a in flow(), b in flow()) {
        let water = Pool::from_rows(&[[0.0, 9.0, 8.0], [50.0, 9.0, 8.0]]);
        let case = two_and_one(&water, share, 0.0);
        let mix = Case { gates: vec![gate(0, a), gate(2, b)], ..case }.ready().unwrap().judged();
        assert_relative_eq!(mix.release.temperature_c, 9.0, max_relative = 1e-12);
        assert_relative_eq!(mix.release.oxygen_mg_l.unwrap(), 8.0, max_relative = 1e-12);
        assert_relative_eq!(mix.release.flow_m3s, a + b, max_relative = 1e-12);
    }
}

/// Readings at the limits of a zone and at every sample between: temperature is straight between them.
fn readings_c(column: &Column, water: &Pool, drawn: &Drawn) -> Vec<f64> {
    let zone = drawn.zone.unwrap();
    let (low, high) = (zone.lower.limit_m, zone.upper.limit_m);
    let nodes = water.samples.iter().map(|s| s.elevation_m).filter(|z| (low..=high).contains(z));
    nodes.chain([low, high]).map(|z| column.reading(z).temperature_c).collect()
}

fn between(value: f64, ends: &[f64]) -> bool {
    let least = ends.iter().copied().fold(f64::INFINITY, f64::min);
    let most = ends.iter().copied().fold(f64::NEG_INFINITY, f64::max);
    (least - 1e-9..=most + 1e-9).contains(&value)
}
