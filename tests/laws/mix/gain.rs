//! Oxygen below the dam: what conduits add, how they blend, and what the band makes of it.

use approx::assert_relative_eq;
use gatemix::mix::Mix;
use gatemix::site::{RawAeration, RawWell};
use gatemix::target::Standing;
use proptest::prelude::*;

use super::sites::{Case, Kinds, basin, cases, gate, port};
use crate::columns::{Pool, any_water, config};

fn efficiency(share: f64) -> RawAeration {
    RawAeration { efficiency: Some(share), ..RawAeration::default() }
}

/// Two gates of a well and an outlet of its own, at three levels, each with some flow.
fn well_and_one(water: &Pool, flows: [f64; 3]) -> Case {
    let mut raw = basin(water);
    raw.wells =
        vec![RawWell { name: Some("Shaft".into()), conduit_m: Some(water.bed_m), ..RawWell::default() }];
    let height_m = 0.04 * (water.surface_m - water.bed_m);
    raw.outlets =
        [0.2, 0.5, 0.8].map(|share| port(&format!("at {share}"), water.at(share), height_m, 2.0)).into();
    raw.outlets[..2].iter_mut().for_each(|o| o.well = Some("Shaft".into()));
    let gates = (0..3).map(|i| gate(i, flows[i])).collect();
    Case { raw, water: water.clone(), gates }
}

fn judged(case: &Case, change: impl FnOnce(&mut Case)) -> Option<Mix> {
    let mut case = case.clone();
    change(&mut case);
    Some(case.ready()?.judged())
}

fn below(mix: &Mix) -> Option<f64> {
    mix.release.oxygen_below_mg_l
}

proptest! {
    #![proptest_config(config(60))]

    #[test]
    fn law_without_a_gain_the_river_gets_what_leaves_the_pool(
        case in cases(Kinds { leaks: true, crests: true })
    ) {
        let Some(ready) = case.ready() else { return Ok(()) };
        let mix = ready.judged();
        prop_assert_eq!(below(&mix), mix.release.oxygen_mg_l);
        prop_assert!(mix.warnings.iter().all(|w| w.kind != "oxygen-gain"));
    }

    #[test]
    fn law_a_conduit_blends_its_water_before_it_gains(
        water in any_water(), a in 1.0..60.0_f64, b in 1.0..60.0_f64, c in 1.0..60.0_f64, share in 0.0..=1.0_f64,
    ) {
        let case = well_and_one(&water, [a, b, c]);
        let Some(mix) = judged(&case, |c| c.raw.wells[0].aeration = Some(efficiency(share))) else { return Ok(()) };
        let Some(below) = below(&mix) else {
            prop_assert!(mix.release.oxygen_mg_l.is_none());
            return Ok(());
        };
        let site = case.ready().unwrap().site;
        let level = |outlet: usize| {
            let drawn = mix.levels.iter().find(|d| d.level.outlets == [outlet]).unwrap();
            drawn.draw.unwrap()
        };
        let [one, two, own] = [0, 1, 2].map(level);
        let in_well = |x: f64, y: f64| (a * x + b * y) / (a + b);
        let temperature_c = in_well(one.temperature_c, two.temperature_c);
        let oxygen = in_well(one.oxygen_mg_l.unwrap(), two.oxygen_mg_l.unwrap());
        let saturation =
            site.saturation_below_mg_l(temperature_c, in_well(one.salt_g_per_kg, two.salt_g_per_kg));
        let gained = oxygen + share * (saturation - oxygen);
        let expected = ((a + b) * gained + c * own.oxygen_mg_l.unwrap()) / (a + b + c);
        assert_relative_eq!(below, expected, max_relative = 1e-9);
        prop_assert!(mix.warnings.iter().any(|w| w.kind == "oxygen-gain"));
    }

    #[test]
    fn law_full_efficiency_brings_all_to_saturation_and_none_changes_nothing(
        water in any_water(), a in 1.0..60.0_f64,
    ) {
        let case = well_and_one(&water, [a, 0.0, 0.0]);
        let with = |share: f64| judged(&case, |c| c.raw.wells[0].aeration = Some(efficiency(share)));
        let (Some(none), Some(all)) = (with(0.0), with(1.0)) else { return Ok(()) };
        let (Some(_), Some(full)) = (none.release.oxygen_mg_l, below(&all)) else { return Ok(()) };
        assert_relative_eq!(below(&none).unwrap(), none.release.oxygen_mg_l.unwrap(), max_relative = 1e-12);
        let site = case.ready().unwrap().site;
        let r = &all.release;
        let saturation = site.saturation_below_mg_l(r.temperature_c, r.salt_g_per_kg);
        assert_relative_eq!(full, saturation, max_relative = 1e-9);
        // and the water itself is as it was
        assert_relative_eq!(all.release.temperature_c, none.release.temperature_c);
    }
}

#[test]
fn scenario_a_gain_meets_the_floor_and_its_range_widens_the_band() {
    let water = Pool {
        bed_m: 0.0,
        surface_m: 60.0,
        samples: [(0.0, 6.0), (30.0, 8.0), (45.0, 15.0), (60.0, 24.0)].map(|(z, t)| sample(z, t)).into(),
        oxygen: [(0.0, 5.0), (60.0, 5.0)]
            .map(|(elevation_m, oxygen_mg_l)| gatemix::profile::OxygenSample { elevation_m, oxygen_mg_l })
            .into(),
    };
    let mut case = well_and_one(&water, [10.0, 10.0, 0.0]);
    case.raw.targets = vec![gatemix::site::RawTarget {
        name: Some("floor".into()),
        oxygen_min_mg_l: Some(6.0),
        ..Default::default()
    }];
    case.raw.band.members = 200;
    let gain = |range| {
        let aeration = RawAeration { gain_mg_l: Some(1.5), range, ..RawAeration::default() };
        judged(&case, |c| c.raw.wells[0].aeration = Some(aeration)).unwrap()
    };
    let dry = judged(&case, |_| {}).unwrap();
    let (fixed, ranged) = (gain(None), gain(Some((0.5, 2.5))));
    assert_relative_eq!(dry.release.oxygen_mg_l.unwrap(), 5.0, max_relative = 1e-9);
    for mix in [&fixed, &ranged] {
        assert_relative_eq!(mix.release.oxygen_mg_l.unwrap(), 5.0, max_relative = 1e-9);
        assert_relative_eq!(below(mix).unwrap(), 6.5, max_relative = 1e-9);
        assert_eq!((dry.targets[0].oxygen.0, mix.targets[0].oxygen.0), (Standing::Below, Standing::Inside));
        // air let in: the gas it brings is not predicted
        assert!(
            mix.warnings.iter().any(|w| w.kind == "dissolved-gas" && w.words.starts_with("Shaft lets air"))
        );
    }
    let width = |mix: &Mix| mix.spread.band_oxygen_mg_l().map(|(low, high)| high - low).unwrap();
    assert_relative_eq!(width(&fixed), width(&dry), max_relative = 0.05);
    assert!(width(&ranged) > width(&fixed) + 0.3, "{} {}", width(&ranged), width(&fixed));
}

fn sample(elevation_m: f64, temperature_c: f64) -> gatemix::profile::Sample {
    gatemix::profile::Sample { elevation_m, temperature_c, salt_g_per_kg: 0.0, suspended_mg_l: 0.0 }
}
