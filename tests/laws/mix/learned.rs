//! What was learned, applied: nothing where it says nothing, exactly what it says else, and the release without it.

use approx::assert_abs_diff_eq;
use gatemix::mix::{Mix, learned_mg_l, members};
use gatemix::site::{Raw, RawAeration, RawLearned, Site};
use proptest::prelude::*;

use super::sites::{Case, Kinds, cases};
use crate::columns::config;

fn learned(change: impl FnOnce(&mut RawLearned)) -> RawLearned {
    let mut out = RawLearned {
        window: Some(["2025-05-01".into(), "2025-07-10".into()]),
        n: Some(41),
        ..RawLearned::default()
    };
    change(&mut out);
    out
}

fn judged(case: &Case, learned: RawLearned) -> Option<Mix> {
    let mut case = case.clone();
    case.raw.learned = learned;
    Some(case.ready()?.judged())
}

fn any() -> Kinds {
    Kinds { leaks: true, crests: true }
}

proptest! {
    #![proptest_config(config(40))]

    #[test]
    fn law_a_factor_of_one_and_no_bias_change_no_bit(case in cases(any())) {
        let Some(mix) = judged(&case, RawLearned::default()) else { return Ok(()) };
        let range = (case.raw.band.zone_low, case.raw.band.zone_high);
        let nothing = learned(|l| {
            (l.bias_c, l.zone_factor, l.zone_range) = (Some(0.0), Some(1.0), Some(range));
        });
        let same = judged(&case, nothing).unwrap();
        prop_assert_eq!(mix.plain.as_ref(), None);
        let plain = same.plain.clone().unwrap();
        prop_assert_eq!((&plain.release, &plain.spread), (&mix.release, &mix.spread));
        prop_assert_eq!(Mix { plain: None, ..same }, mix);
    }

    #[test]
    fn law_a_bias_shifts_the_release_and_its_band_and_nothing_in_the_pool(
        case in cases(any()), bias_c in -2.0..2.0_f64,
    ) {
        let Some(mix) = judged(&case, RawLearned::default()) else { return Ok(()) };
        let shifted = judged(&case, learned(|l| l.bias_c = Some(bias_c))).unwrap();
        assert_abs_diff_eq!(shifted.release.temperature_c, mix.release.temperature_c + bias_c, epsilon = 1e-9);
        prop_assert_eq!(&shifted.levels, &mix.levels, "the water drawn is the same");
        prop_assert_eq!(shifted.release.oxygen_below_mg_l, mix.release.oxygen_below_mg_l);
        prop_assert_eq!(shifted.release.solids_mg_l(), mix.release.solids_mg_l());
        for (a, b) in shifted.spread.cases.iter().zip(&mix.spread.cases) {
            assert_abs_diff_eq!(a.0, b.0 + bias_c, epsilon = 1e-9);
            prop_assert_eq!(a.1, b.1);
        }
        let plain = shifted.plain.unwrap();
        prop_assert_eq!((plain.release, plain.spread), (mix.release, mix.spread));
    }

    #[test]
    fn law_a_bias_by_level_counts_by_the_flow_of_the_level(case in cases(any()), bias_c in -2.0..2.0_f64) {
        let Some(mix) = judged(&case, RawLearned::default()) else { return Ok(()) };
        let level = mix.levels.iter().find(|l| l.draw.is_some()).unwrap();
        let name = case.raw.outlets[level.level.outlets[0]].name.clone().unwrap();
        let shifted = judged(&case, learned(|l| l.by_level_c = vec![(name, bias_c)])).unwrap();
        let share = level.level.sink.flow_m3s / mix.release.flow_m3s;
        assert_abs_diff_eq!(
            shifted.release.temperature_c, mix.release.temperature_c + share * bias_c, epsilon = 1e-9
        );
    }

    #[test]
    fn law_an_oxygen_gain_ends_at_saturation_and_a_loss_at_none(
        case in cases(any()), gain in -9.0..9.0_f64, of_conduits in 0.1..3.0_f64,
    ) {
        let mut case = case;
        for outlet in case.raw.outlets.iter_mut().filter(|o| o.well.is_none()) {
            outlet.aeration = Some(RawAeration { gain_mg_l: Some(of_conduits), ..RawAeration::default() });
        }
        let Some(mix) = judged(&case, RawLearned::default()) else { return Ok(()) };
        let gained = judged(&case, learned(|l| l.oxygen_gain_mg_l = Some(gain))).unwrap();
        let both = mix.release.oxygen_below_mg_l.zip(gained.release.oxygen_below_mg_l);
        let Some((before, after)) = both else { return Ok(()) };
        prop_assert!(after >= 0.0);
        prop_assert!((after - before) * gain >= -1e-9, "{} to {} by {}", before, after, gain);
        prop_assert!((after - before).abs() <= gain.abs() + 1e-9);
    }
}

#[test]
fn law_a_gain_is_capped_as_that_of_a_conduit_and_a_loss_leaves_no_less_than_none() {
    let told = [(7.0, 1.0, 9.0, 8.0), (7.0, 5.0, 9.0, 9.0), (10.0, 1.0, 9.0, 10.0), (7.0, -2.0, 9.0, 5.0)];
    for (oxygen, gain, saturation, below) in told.into_iter().chain([(1.0, -3.0, 9.0, 0.0)]) {
        assert_abs_diff_eq!(learned_mg_l(oxygen, gain, saturation), below, epsilon = 1e-12);
    }
}

/// A site with one outlet and something learned.
fn site(learned: RawLearned) -> Site {
    let mut raw: Raw = super::sites::basin(&crate::columns::worked());
    raw.outlets = vec![super::sites::port("A", 20.0, 2.0, 2.0)];
    raw.band.members = 400;
    raw.learned = learned;
    Site::check(&raw).0.unwrap()
}

#[test]
fn law_members_draw_the_factor_from_its_interval_and_the_scatter_left() {
    let site = site(learned(|l| {
        (l.zone_factor, l.zone_range) = (Some(0.85), Some((0.8, 0.95)));
        (l.release_c, l.release_mg_l) = (Some(0.15), Some(0.25));
    }));
    let usual = members(&site.band);
    let drawn = members(&site.spreading());
    let factors = || drawn.iter().map(|m| m.zone_factor);
    assert!(factors().all(|f| (0.8..=0.95).contains(&f)));
    assert_eq!(factors().filter(|f| *f <= 0.85).count(), drawn.len() / 2);
    assert!(factors().any(|f| f < 0.81) && factors().any(|f| f > 0.94));
    for (a, b) in drawn.iter().zip(&usual) {
        assert_abs_diff_eq!(a.release_c, b.release_c * 0.15 / 0.4, epsilon = 1e-12);
        assert_abs_diff_eq!(a.release_mg_l, b.release_mg_l * 0.25 / 0.5, epsilon = 1e-12);
        assert_eq!((a.cast_c, a.heave, a.flow, a.leak), (b.cast_c, b.heave, b.flow, b.leak));
    }
}
