//! What is refused, how a release stands, and oxygen that nobody measured.

use std::f64::consts::PI;

use approx::assert_abs_diff_eq;
use gatemix::intake::{capacity_m3s, crest_flow_m3s};
use gatemix::mix::{Gate, Mix, Setting, refusals};
use gatemix::profile::{OxygenSample, Sample};
use gatemix::site::{Raw, RawOutlet, RawTarget, RawWell, Site};
use gatemix::water::{SEDIMENT_DENSITY_KG_M3, density_kg_m3};
use proptest::prelude::*;

use super::sites::{Case, Kinds, basin, cases, checked, gate, port};
use crate::columns::{config, worked};

proptest! {
    #![proptest_config(config(150))]

    #[test]
    fn law_exactly_one_rule_governs_where_any_can_be_judged(case in cases(Kinds { leaks: true, crests: true })) {
        let Some(ready) = case.ready() else { return Ok(()) };
        let mix = ready.judged();
        prop_assert_eq!(mix.targets.len(), ready.site.targets.len(), "every span holds the day");
        // of a steady day without a record: the rule's own range and floor, buffer counted in
        let judged = |t: &gatemix::mix::TargetStanding| {
            let rule = &ready.site.targets[t.target];
            let low = t.value_c.zip(rule.low_kept_c()).map(|(v, low)| v - low);
            let high = t.value_c.zip(rule.high_kept_c()).map(|(v, high)| high - v);
            let air = t.oxygen_mg_l.zip(rule.oxygen_min_mg_l).map(|(o, least)| o - least);
            [low, high, air].into_iter().flatten().reduce(f64::min)
        };
        let governing: Vec<_> = mix.targets.iter().filter(|t| t.governs).collect();
        let any = mix.targets.iter().any(|t| judged(t).is_some());
        prop_assert_eq!(governing.len(), usize::from(any));
        if let [one] = governing[..] {
            let least = mix.targets.iter().filter_map(judged).fold(f64::INFINITY, f64::min);
            prop_assert_eq!(judged(one), Some(least));
        }
    }

    #[test]
    fn law_both_is_no_more_often_than_either(case in cases(Kinds { leaks: true, crests: true })) {
        let Some(ready) = case.ready() else { return Ok(()) };
        for t in &ready.judged().targets {
            let rule = &ready.site.targets[t.target];
            let ranged = rule.low_c.is_some() || rule.high_c.is_some();
            prop_assert_eq!(t.share_inside.is_some(), ranged);
            let aired = rule.oxygen_min_mg_l.is_some();
            prop_assert_eq!(t.oxygen_share_inside.is_some(), aired && t.oxygen_mg_l.is_some());
            prop_assert_eq!(t.share_inside_both.is_none(), aired && t.oxygen_mg_l.is_none());
            let Some(both) = t.share_inside_both else { continue };
            for one in [t.share_inside, t.oxygen_share_inside].into_iter().flatten() {
                prop_assert!((0.0..=1.0).contains(&one) && both <= one, "{:?}", t);
            }
            if let (Some(a), Some(b)) = (t.share_inside, t.oxygen_share_inside) {
                prop_assert!(both >= a + b - 1.0 - 1e-12, "{:?}", t);
            }
        }
    }

    /// Oxygen is carried along: what was measured of it decides nothing else. Where water is inverted the node at
    /// which oxygen passes 1 mg/L takes part in the levelling, so the law is that of stable water.
    #[test]
    fn law_oxygen_changes_no_temperature_of_stable_water(case in cases(Kinds { leaks: true, crests: true })) {
        let mut case = case;
        case.raw.band.cast_c = 0.0;
        let density = |s: &Sample| {
            density_kg_m3(s.temperature_c, s.salt_g_per_kg, s.suspended_mg_l, SEDIMENT_DENSITY_KG_M3)
        };
        prop_assume!(case.water.samples.windows(2).all(|w| {
            density(&w[1]) <= density(&w[0]) && w[0].temperature_c.min(w[1].temperature_c) > 4.0
        }));
        let mut without = case.clone();
        without.water.oxygen.clear();
        let (Some(a), Some(b)) = (case.ready(), without.ready()) else { return Ok(()) };
        let (a, b) = (a.judged(), b.judged());
        same_water(&a, &b);
        prop_assert_eq!(b.release.oxygen_mg_l, None);
        prop_assert_eq!(b.spread.band_oxygen_mg_l(), None);
    }
}

/// The same water to the hundredth asked of the integral: an oxygen sample cuts one of its slices in two.
fn same_water(a: &Mix, b: &Mix) {
    assert_abs_diff_eq!(a.release.temperature_c, b.release.temperature_c, epsilon = 0.01);
    let (a, b) = (a.spread.band_c().unwrap(), b.spread.band_c().unwrap());
    assert_abs_diff_eq!(a.0, b.0, epsilon = 0.01);
    assert_abs_diff_eq!(a.1, b.1, epsilon = 0.01);
}

/// Two gates of the worked water, far apart, oxygen measured from `from_m` up.
fn two(from_m: f64) -> Case {
    let mut water = worked();
    water.oxygen.retain(|o: &OxygenSample| o.elevation_m >= from_m);
    let mut raw = basin(&water);
    raw.outlets = vec![port("deep", 8.0, 2.0, 3.0), port("shallow", 50.0, 2.0, 3.0)];
    raw.targets = vec![RawTarget {
        name: Some("air".into()),
        high_c: Some(30.0),
        oxygen_min_mg_l: Some(5.0),
        ..RawTarget::default()
    }];
    Case { raw, water, gates: vec![gate(0, 5.0), gate(1, 5.0)] }
}

fn said<'a>(mix: &'a Mix, kind: &str) -> Vec<&'a str> {
    mix.warnings.iter().filter(|w| w.kind == kind).map(|w| w.words.as_str()).collect()
}

#[test]
fn scenario_one_level_without_oxygen_leaves_the_release_without() {
    let whole = two(0.0).ready().unwrap().judged();
    assert!(whole.release.oxygen_mg_l.is_some() && said(&whole, "oxygen-missing").is_empty());
    let half = two(40.0).ready().unwrap().judged();
    assert_eq!(half.release.oxygen_mg_l, None);
    same_water(&half, &whole);
    let words = said(&half, "oxygen-missing");
    assert!(words.len() == 1 && words[0].contains("deep") && !words[0].contains("shallow"), "{words:?}");
    let standing = &half.targets[0];
    assert_eq!((standing.oxygen.0.word(), standing.oxygen.1), ("unknown", None));
    assert_eq!((standing.temperature.0.word(), standing.temperature.1), ("inside", Some(0.0)));
    assert_eq!((standing.oxygen_share_inside, standing.share_inside_both), (None, None));

    let alone = Case { gates: vec![gate(1, 5.0)], ..two(40.0) }.ready().unwrap().judged();
    assert!(alone.release.oxygen_mg_l.is_some() && said(&alone, "oxygen-missing").is_empty());
}

/// A site with one outlet of each kind of capacity.
fn capacities() -> Raw {
    let mut raw = basin(&worked());
    let crest = |name: &str, gated: bool| RawOutlet {
        kind: Some("crest".into()),
        gated: Some(gated),
        height_m: None,
        ..port(name, 58.0, 0.0, 20.0)
    };
    let (gated, open) = (crest("gated", true), crest("open", false));
    raw.wells = vec![RawWell {
        name: Some("shaft".into()),
        conduit_m: Some(2.0),
        max_head_loss_m: Some(1.5),
        ..RawWell::default()
    }];
    raw.outlets = vec![
        port("computed", 20.0, 2.0, 3.0),
        RawOutlet { flow_max_m3s: Some(25.0), ..port("given", 30.0, 2.0, 3.0) },
        RawOutlet { well: Some("shaft".into()), loss: Some(1.5), ..port("ported", 40.0, 2.0, 3.0) },
        gated,
        open,
    ];
    raw
}

fn refused(site: &Site, gate: Gate, pool_m: f64) -> Vec<(&'static str, String)> {
    let problems = refusals(site, &Setting::of(vec![gate]), pool_m);
    problems.into_iter().map(|p| (p.kind, p.words)).collect()
}

#[test]
fn scenario_the_capacity_itself_passes_and_more_is_refused() {
    let site = checked(&capacities());
    for (i, outlet) in site.outlets.iter().enumerate().take(4) {
        let most = capacity_m3s(&site, outlet, 1.0, 60.0).unwrap();
        assert!(refused(&site, gate(i, most), 60.0).is_empty(), "{}", outlet.name);
        let over = refused(&site, gate(i, 1.001 * most), 60.0);
        assert!(over.len() == 1 && over[0].0 == "capacity", "{over:?}");
        assert!(over[0].1.contains(&format!("`{}`", outlet.name)), "{over:?}");
    }
}

#[test]
fn scenario_a_gate_at_or_above_the_water_is_dry() {
    let site = checked(&capacities());
    for (i, outlet) in site.outlets.iter().enumerate() {
        for pool_m in [outlet.centre_m - 1.0, outlet.centre_m] {
            let dry = refused(&site, gate(i, 0.001), pool_m);
            assert!(dry.len() == 1 && dry[0].0 == "dry", "{dry:?}");
            assert!(dry[0].1.contains(&format!("`{}`", outlet.name)), "{dry:?}");
        }
        assert!(!refused(&site, gate(i, 0.001), outlet.centre_m + 0.5).iter().any(|p| p.0 == "dry"));
    }
    // half open from its sill, its centre-line is half a metre lower: wet at that pool
    let half = Gate { opening: 0.5, ..gate(0, 0.001) };
    assert!(refused(&site, half, 19.6).is_empty() && !refused(&site, gate(0, 0.001), 19.6).is_empty());
}

#[test]
fn scenario_a_crest_without_gates_passes_what_it_passes() {
    let site = checked(&capacities());
    let free = crest_flow_m3s(&site.outlets[4], 1.0, 60.0).unwrap();
    for share in [0.96, 1.0] {
        assert!(refused(&site, gate(4, share * free), 60.0).is_empty(), "{share}");
    }
    for share in [0.0, 0.94, 1.06] {
        let kinds: Vec<_> = refused(&site, gate(4, share * free), 60.0).iter().map(|p| p.0).collect();
        assert_eq!(kinds, ["crest-flow"], "{share}");
    }
    // a gated crest holds back what it likes
    assert!(refused(&site, gate(3, 0.3 * free), 60.0).is_empty());
}

/// The angle of a level is that of its outlets, so outlets of other angles are other levels.
#[test]
fn scenario_outlets_of_different_angles_are_different_levels() {
    let mut raw = basin(&worked());
    raw.outlets = vec![port("face", 30.0, 2.0, 3.0), port("tower", 30.0, 2.0, 3.0)];
    raw.outlets[1].angle_deg = Some(360.0);
    let case = Case { raw, water: worked(), gates: vec![gate(0, 9.0), gate(1, 9.0)] };
    let mix = case.ready().unwrap().judged();
    let angles: Vec<_> = mix.levels.iter().map(|d| d.level.sink.opening).collect();
    let port = |angle_rad: f64| gatemix::withdrawal::Opening::Port { angle_rad };
    assert_eq!(angles, [port(PI), port(2.0 * PI)]);
}
