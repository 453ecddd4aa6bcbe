//! Leaks of shut gates: part of what a well carries, beside what leaves directly.

use approx::assert_relative_eq;
use gatemix::intake::leak_m3s;
use gatemix::mix::Mix;
use gatemix::site::Leakage;
use proptest::prelude::*;

use super::sites::{Case, Kinds, basin, cases, gate, port};
use crate::columns::{config, worked};

const LEAKY: Kinds = Kinds { leaks: true, crests: true };

proptest! {
    #![proptest_config(config(100))]

    /// Whatever a well's shut gates leak, its total stays; each direct leak adds its own.
    #[test]
    fn law_a_well_keeps_its_total_and_a_direct_leak_adds_its_own(case in cases(LEAKY)) {
        let Some(ready) = case.ready() else { return Ok(()) };
        let pool_m = ready.profile.pool_m;
        let shut = case.shut();
        let direct = ready.site.outlets.iter().enumerate().filter(|(i, o)| o.well.is_none() && shut.contains(i));
        let leaks: f64 = direct.map(|(_, o)| leak_m3s(o, pool_m - o.centre_m, 0.5)).sum();
        assert_relative_eq!(ready.judged().release.flow_m3s, ready.set_m3s() + leaks, max_relative = 1e-12);
    }

    /// A leak is a port: the shares of a well's ports do not depend on how much the well carries.
    #[test]
    fn law_the_leaks_of_a_well_grow_with_its_flow(case in cases(LEAKY), by in 0.1..10.0_f64) {
        let mut case = case;
        for outlet in &mut case.raw.outlets {
            outlet.well = Some("West".into());
        }
        let mut more = case.clone();
        for gate in &mut more.gates {
            gate.flow_m3s *= by;
        }
        let (Some(a), Some(b)) = (case.ready(), more.ready()) else { return Ok(()) };
        let flows = |m: &Mix| m.levels.iter().map(|d| d.level.sink.flow_m3s).collect::<Vec<_>>();
        let (less, more) = (flows(&a.judged()), flows(&b.judged()));
        prop_assert_eq!(less.len(), more.len());
        for (less, more) in less.iter().zip(&more) {
            assert_relative_eq!(less * by, *more, max_relative = 1e-12);
        }
    }

    #[test]
    fn law_no_leak_and_a_leak_of_nothing_are_the_same(case in cases(LEAKY)) {
        let leak_of = |leakage: Option<Leakage>| {
            let mut case = case.clone();
            case.raw.outlets.iter_mut().for_each(|o| o.leakage = leakage);
            case.ready().map(|r| r.judged())
        };
        let nothing = Leakage { flow_m3s: 0.0, head_m: 1.0, range_m3s: None };
        prop_assert_eq!(leak_of(None), leak_of(Some(nothing)));
    }

    #[test]
    fn law_a_range_of_one_figure_is_that_figure(case in cases(LEAKY)) {
        let ranged = |range: bool| {
            let mut case = case.clone();
            for leak in case.raw.outlets.iter_mut().filter_map(|o| o.leakage.as_mut()) {
                leak.range_m3s = range.then_some((leak.flow_m3s, leak.flow_m3s));
            }
            case.ready().map(|r| r.judged())
        };
        prop_assert_eq!(ranged(true), ranged(false));
    }

    #[test]
    fn law_a_leak_grows_with_head_and_along_its_range(
        case in cases(LEAKY), head in 0.01..80.0_f64, more in 1.0..3.0_f64, place in 0.0..1.0_f64
    ) {
        let Some(ready) = case.ready() else { return Ok(()) };
        for o in ready.site.outlets.iter().filter(|o| o.leakage.is_some()) {
            let leak = leak_m3s(o, head, place);
            prop_assert!(leak > 0.0);
            prop_assert!(leak <= leak_m3s(o, head * more, place));
            prop_assert!(leak <= leak_m3s(o, head, place + (1.0 - place) * 0.5));
            prop_assert_eq!(leak_m3s(o, -head, place), 0.0);
        }
    }
}

/// A site of the worked water with two gated spillway bays side by side.
fn bays(leak_m3s: Option<f64>) -> Case {
    let water = worked();
    let mut raw = basin(&water);
    for name in ["bay 1", "bay 2"] {
        let mut bay = port(name, 52.0, 0.0, 12.0);
        (bay.kind, bay.gated, bay.height_m) = (Some("crest".into()), Some(true), None);
        raw.outlets.push(bay);
    }
    raw.outlets[1].leakage = leak_m3s.map(|flow_m3s| Leakage { flow_m3s, head_m: 8.0, range_m3s: None });
    Case { raw, water, gates: vec![gate(0, 60.0)] }
}

/// A leaking bay beside an open one adds its trickle, not its length: were the crest taken as twice as long, the
/// lower limit would jump.
#[test]
fn scenario_a_leaking_bay_does_not_lengthen_the_open_one() {
    let lower = |leak: Option<f64>| {
        let mix = bays(leak).ready().unwrap().judged();
        assert_eq!(mix.levels.len(), 1);
        mix.levels[0].zone.unwrap().lower.limit_m
    };
    let (tight, leaky) = (lower(None), lower(Some(1e-6)));
    assert!((tight - leaky).abs() < 1e-4, "{tight} against {leaky}");
}

/// A dry gate leaks nothing.
#[test]
fn scenario_a_gate_above_the_water_leaks_nothing() {
    let water = worked();
    let mut raw = basin(&water);
    raw.outlets = vec![port("low", 20.0, 2.0, 2.0), port("high", 61.0, 1.0, 2.0)];
    raw.outlets[1].leakage = Some(Leakage { flow_m3s: 3.0, head_m: 1.0, range_m3s: None });
    let mix = Case { raw, water, gates: vec![gate(0, 10.0)] }.ready().unwrap().judged();
    assert_eq!((mix.release.flow_m3s, mix.levels.len()), (10.0, 1));
}
