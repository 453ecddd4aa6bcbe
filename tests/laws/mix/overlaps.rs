//! Levels that draw from each other's zones.

use approx::assert_relative_eq;
use gatemix::mix::{Drawn, Mix, as_one, draw_levels, overlapping, release_joined};
use gatemix::withdrawal::zone;
use proptest::prelude::*;

use super::sites::{Case, Kinds, basin, cases, gate, port};
use crate::columns::{config, worked};

/// Groups anew, by colouring: levels of one colour see each other, directly or through others.
fn colours(drawn: &[Drawn]) -> Vec<Vec<usize>> {
    let sees = |a: &Drawn, b: &Drawn| {
        let centre = b.level.sink.centre_m;
        a.zone.is_some_and(|z| z.lower.limit_m <= centre && centre <= z.upper.limit_m)
    };
    let mut colour: Vec<usize> = (0..drawn.len()).collect();
    for a in 0..drawn.len() {
        for b in 0..a {
            if sees(&drawn[a], &drawn[b]) && sees(&drawn[b], &drawn[a]) {
                let (from, to) = (colour[a], colour[b]);
                colour.iter_mut().filter(|c| **c == from).for_each(|c| *c = to);
            }
        }
    }
    let of = |c: usize| (0..drawn.len()).filter(|&i| colour[i] == c).collect::<Vec<_>>();
    (0..drawn.len()).map(of).filter(|g| g.len() > 1).collect()
}

fn said(mix: &Mix, kind: &str) -> usize {
    mix.warnings.iter().filter(|w| w.kind == kind).count()
}

proptest! {
    #![proptest_config(config(150))]

    #[test]
    fn law_groups_are_the_levels_that_see_each_other(case in cases(Kinds { leaks: true, crests: true })) {
        let Some(ready) = case.ready() else { return Ok(()) };
        let mix = ready.judged();
        let mut found = overlapping(&mix.levels);
        found.sort();
        let mut told = colours(&mix.levels);
        told.sort();
        prop_assert_eq!(&found, &told);
        prop_assert_eq!(said(&mix, "zones-overlap"), usize::from(!found.is_empty()));
    }

    /// Joined or apart, the same water leaves, and it is water of the pool.
    #[test]
    fn law_joined_levels_release_the_same_flow(case in cases(Kinds { leaks: false, crests: true })) {
        let Some(ready) = case.ready() else { return Ok(()) };
        let mix = ready.judged();
        let groups = overlapping(&mix.levels);
        let joined = release_joined(&ready.profile.column, &mix.levels, &groups, 1.0).unwrap();
        assert_relative_eq!(joined.flow_m3s, mix.release.flow_m3s, max_relative = 1e-12);
        let water = || case.water.samples.iter().map(|s| s.temperature_c);
        let (coldest, warmest) = (water().fold(99.0, f64::min), water().fold(-99.0, f64::max));
        prop_assert!((coldest - 1e-9..=warmest + 1e-9).contains(&joined.temperature_c), "{:?}", joined);
        if groups.is_empty() {
            prop_assert_eq!(joined, mix.release);
        }
    }
}

/// Ports at these elevations in the worked water, with these flows.
fn ports(of: &[(f64, f64)]) -> Case {
    let water = worked();
    let mut raw = basin(&water);
    raw.outlets = of.iter().enumerate().map(|(i, (z, _))| port(&format!("P{i}"), *z, 2.0, 3.0)).collect();
    Case { raw, water, gates: of.iter().enumerate().map(|(i, (_, q))| gate(i, *q)).collect() }
}

/// The worked port at 45 m draws 30 m3/s from 34.3 to 53.8 m, so it and one at 40 m see each other.
#[test]
fn scenario_near_levels_are_warned_of_and_joined_far_ones_are_not() {
    let near = ports(&[(45.0, 30.0), (40.0, 10.0)]).ready().unwrap();
    let mix = near.judged();
    assert_eq!(said(&mix, "zones-overlap"), 1);
    let column = &near.profile.column;
    let joined = release_joined(column, &mix.levels, &[vec![0, 1]], 1.0).unwrap();
    let sink = as_one(&mix.levels.iter().map(|d| &d.level).collect::<Vec<_>>()).unwrap();
    // (45 x 30 + 40 x 10) / 40
    assert_relative_eq!(sink.centre_m, 43.75, max_relative = 1e-12);
    let one = zone(column, &sink, 1.0).unwrap().draw(column).unwrap();
    assert_relative_eq!(joined.temperature_c, one.temperature_c, max_relative = 1e-12);
    assert!((joined.temperature_c - mix.release.temperature_c).abs() > 0.01, "the two readings differ");

    let far = ports(&[(50.0, 2.0), (10.0, 2.0)]).ready().unwrap().judged();
    assert_eq!(said(&far, "zones-overlap"), 0);
    assert!(overlapping(&far.levels).is_empty());
}

/// Two strong levels reach each other past a weak one between them that reaches neither.
#[test]
fn scenario_a_thin_zone_between_does_not_hide_an_overlap() {
    let case = ports(&[(38.0, 60.0), (43.0, 0.05), (48.0, 60.0)]);
    let mix = case.ready().unwrap().judged();
    let groups: Vec<Vec<f64>> = overlapping(&mix.levels)
        .iter()
        .map(|g| g.iter().map(|&i| mix.levels[i].level.sink.centre_m).collect())
        .collect();
    assert_eq!(groups, [[38.0, 48.0]]);
    assert_eq!(said(&mix, "zones-overlap"), 1);
}

/// One sink given twice is one sink: levels are never counted twice in a joined release.
#[test]
fn scenario_a_group_and_a_level_alone_blend_by_flow() {
    let case = ports(&[(45.0, 30.0), (40.0, 10.0), (5.0, 0.5)]).ready().unwrap();
    let mix = case.judged();
    let groups = overlapping(&mix.levels);
    assert_eq!(groups, [[1, 2]]);
    let column = &case.profile.column;
    let levels: Vec<_> = mix.levels.iter().map(|d| d.level.clone()).collect();
    let alone = draw_levels(column, &levels[..1], 1.0)[0].draw.unwrap();
    let sink = as_one(&[&levels[1], &levels[2]]).unwrap();
    let pair = zone(column, &sink, 1.0).unwrap().draw(column).unwrap();
    let joined = release_joined(column, &mix.levels, &groups, 1.0).unwrap();
    let by_hand = (0.5 * alone.temperature_c + 40.0 * pair.temperature_c) / 40.5;
    assert_relative_eq!(joined.temperature_c, by_hand, max_relative = 1e-12);
}
