use proptest::prelude::*;

use super::*;
use crate::files::folder::Folder;

fn site() -> Site {
    Folder::demonstration("ashlar").unwrap().site
}

/// One turn of a board.
#[derive(Debug, Clone)]
enum Turn {
    Opening(usize, f64),
    Flow(usize, f64),
    Total(usize, f64),
    Release(f64),
}

fn turns() -> impl Strategy<Value = Vec<Turn>> {
    let turn = prop_oneof![
        (0..12_usize, prop_oneof![Just(0.0), Just(0.5), Just(1.0)]).prop_map(|(i, v)| Turn::Opening(i, v)),
        (0..12_usize, 0.0..40.0).prop_map(|(i, v)| Turn::Flow(i, v)),
        (0..2_usize, 0.0..60.0).prop_map(|(i, v)| Turn::Total(i, v)),
        (1.0..80.0).prop_map(Turn::Release),
    ];
    proptest::collection::vec(turn, 0..30)
}

fn turned(site: &Site, given: &mut Given, turn: &Turn) {
    match *turn {
        Turn::Opening(i, v) => set_opening(site, given, i, v),
        Turn::Flow(i, v) => set_flow(site, given, i, v, None),
        Turn::Total(i, v) => set_total(site, given, i, v),
        Turn::Release(v) => _ = set_release(site, given, v, 0.0),
    }
}

fn sum(given: &Given) -> f64 {
    given.flows.iter().map(|g| g.flow_m3s).chain(given.totals.iter().map(|t| t.1)).sum()
}

proptest! {
    #![proptest_config(crate::units::law_config())]

    #[test]
    fn law_each_gate_and_each_well_is_set_in_one_way(turns in turns()) {
        let site = site();
        let mut given = Given::now(&site);
        for turn in &turns {
            turned(&site, &mut given, turn);
            let asked = asked(&site, &given);
            for (i, outlet) in site.outlets.iter().enumerate() {
                let ways = asked.flows.iter().filter(|g| g.outlet == i).count()
                    + asked.open.iter().filter(|g| g.0 == i).count();
                prop_assert!(ways < 2, "{} is set {ways} times", outlet.name);
            }
            for well in 0..site.wells.len() {
                let on = |o: usize| site.outlets[o].well == Some(well);
                let by_flow = asked.flows.iter().any(|g| on(g.outlet));
                let by_opening = asked.open.iter().any(|g| on(g.0) && g.1 > 0.0);
                let totals = asked.totals.iter().filter(|t| t.0 == well).count();
                prop_assert!(!(by_flow && by_opening), "flows and openings: {asked:?}");
                prop_assert_eq!(totals, usize::from(by_opening), "{:?}", asked);
            }
        }
    }

    #[test]
    fn law_a_release_typed_is_the_sum_of_what_is_set(turns in turns(), release in 1.0..90.0) {
        let site = site();
        let mut given = Given::now(&site);
        for turn in &turns {
            turned(&site, &mut given, turn);
        }
        let before = sum(&asked(&site, &given));
        prop_assert_eq!(set_release(&site, &mut given, release, 0.0), before > 0.0);
        let after = sum(&asked(&site, &given));
        if before > 0.0 {
            prop_assert!((after - release).abs() < 1e-9 * release, "{after} for {release}");
        } else {
            prop_assert!(after.abs() < 1e-12, "nothing was set, {after} is");
        }
    }

    #[test]
    fn law_the_other_way_of_setting_a_well_keeps_its_total(total in 1.0..60.0, first in 2.0..20.0) {
        let site = site();
        let well = site.well("North").unwrap();
        let (n3, n4) = (site.outlet("N3").unwrap(), site.outlet("N4").unwrap());
        let mut given = Given::default();
        set_opening(&site, &mut given, n3, 1.0);
        set_opening(&site, &mut given, n4, 0.5);
        set_total(&site, &mut given, well, total);
        let of = |given: &Given| total_m3s(&site, given, well).unwrap();
        prop_assert!((of(&given) - total).abs() < 1e-12);
        // by flows: the gate turned has its flow, the other its part by openings, since no split is told
        set_flow(&site, &mut given, n3, first, None);
        prop_assert!((of(&given) - (first + total / 3.0)).abs() < 1e-9);
        // and back by openings: the sum stays, the openings are those of before
        let sum = of(&given);
        set_opening(&site, &mut given, n4, 1.0);
        prop_assert!((of(&given) - sum).abs() < 1e-9);
        prop_assert_eq!(&given.flows, &Vec::new());
        prop_assert!(given.open.contains(&(n3, 1.0)) && given.open.contains(&(n4, 1.0)), "{:?}", given);
    }

    #[test]
    fn law_a_step_lands_on_a_multiple_beyond(value in -500.0..500.0, large in any::<bool>(), up in any::<bool>()) {
        let nudge = match (large, up) {
            (true, true) => Nudge::MuchMore,
            (true, false) => Nudge::MuchLess,
            (false, true) => Nudge::More,
            (false, false) => Nudge::Less,
        };
        let step = if large { 100.0 } else { 10.0 };
        let next = nudge.from(value, step);
        prop_assert!(((next / step) - (next / step).round()).abs() < 1e-9);
        prop_assert!((next - value) * nudge.sign() > 0.0 && (next - value).abs() <= step * (1.0 + 1e-6));
    }
}

#[test]
fn scenario_the_total_of_a_well_waits_for_its_gates() {
    let site = site();
    let (north, n3, n4) =
        (site.well("North").unwrap(), site.outlet("N3").unwrap(), site.outlet("N4").unwrap());
    let mut given = Given::default();
    set_opening(&site, &mut given, n3, 1.0);
    set_total(&site, &mut given, north, 17.0);
    set_opening(&site, &mut given, n3, 0.0);
    assert_eq!(asked(&site, &given), Given::default(), "nothing is open");
    assert_eq!(total_m3s(&site, &given, north), Some(17.0));
    set_opening(&site, &mut given, n4, 0.5);
    assert_eq!(asked(&site, &given).totals, [(north, 17.0)]);
}

#[test]
fn scenario_an_outlet_with_positions_keeps_its_flow_when_it_is_opened_further() {
    let mut site = site();
    let sluice = site.outlet("Sluice").unwrap();
    site.outlets[sluice].positions = site.outlets[site.outlet("N3").unwrap()].positions.clone();
    let mut given = Given::default();
    set_flow(&site, &mut given, sluice, 5.0, None);
    set_opening(&site, &mut given, sluice, 0.5);
    assert_eq!(given.flows, [ByFlow { outlet: sluice, flow_m3s: 5.0, opening: Some(0.5) }]);
    set_opening(&site, &mut given, sluice, 0.0);
    assert_eq!(given, Given::default());
}
