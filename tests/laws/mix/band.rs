//! The perturbed cases: seeded, the same for every mix, and no wider than what is put in.

use approx::{assert_abs_diff_eq, assert_relative_eq};
use gatemix::mix::{Perturbed, Spread, members, overlapping};
use gatemix::site::BandInputs;
use proptest::prelude::*;

use super::sites::{Case, Kinds, basin, cases, gate, port};
use crate::columns::{Pool, config, flow, worked};

/// No doubt at all.
fn none() -> BandInputs {
    BandInputs {
        cast_c: 0.0,
        cast_mg_l: 0.0,
        heave_m: 0.0,
        heave_m_per_day: 0.0,
        flow_share: 0.0,
        zone_low: 1.0,
        zone_high: 1.0,
        release_c: 0.0,
        release_mg_l: 0.0,
        ..BandInputs::default()
    }
}

fn seeded(seed: u64) -> BandInputs {
    BandInputs { seed, members: 40, ..BandInputs::default() }
}

proptest! {
    #![proptest_config(config(60))]

    #[test]
    fn law_a_seed_gives_the_same_members_and_another_seed_others(seed in any::<u64>(), by in 1..u64::MAX) {
        prop_assert_eq!(members(&seeded(seed)), members(&seeded(seed)));
        prop_assert_ne!(members(&seeded(seed)), members(&seeded(seed.wrapping_add(by))));
    }

    /// A longer list begins with the shorter one, so more members refine the band and do not replace it.
    #[test]
    fn law_more_members_begin_with_the_same_ones(seed in any::<u64>(), fewer in 10..40_usize) {
        let some = members(&BandInputs { members: fewer, ..seeded(seed) });
        prop_assert_eq!(&members(&seeded(seed))[..fewer], &some[..]);
    }

    #[test]
    fn law_members_lie_in_their_ranges_half_thin_half_thick(
        seed in any::<u64>(), low in 0.3..=1.0_f64, high in 1.0..=1.8_f64
    ) {
        let drawn = members(&BandInputs { zone_low: low, zone_high: high, ..seeded(seed) });
        prop_assert_eq!(drawn.len(), 40);
        for m in &drawn {
            prop_assert!((low..=high).contains(&m.zone_factor), "{:?}", m);
            prop_assert!((0.0..=1.0).contains(&m.leak) && (0.0..=1.0).contains(&m.joined), "{:?}", m);
            prop_assert!(m.flow >= 0.0);
        }
        let thin = drawn.iter().step_by(2).filter(|m| m.zone_factor <= 1.0).count();
        let thick = drawn.iter().skip(1).step_by(2).filter(|m| m.zone_factor >= 1.0).count();
        prop_assert_eq!((thin, thick), (20, 20));
    }

    /// A spread only scales its own draws.
    #[test]
    fn law_a_spread_scales_its_own_draws(seed in any::<u64>(), by in 0.0..4.0_f64) {
        let once = members(&seeded(seed));
        let inputs = BandInputs { cast_c: by * seeded(seed).cast_c, ..seeded(seed) };
        for (a, b) in once.iter().zip(&members(&inputs)) {
            assert_relative_eq!(by * a.cast_c, b.cast_c, max_relative = 1e-12, epsilon = 1e-15);
            prop_assert_eq!((a.heave, a.flow, a.release_c, a.leak), (b.heave, b.flow, b.release_c, b.leak));
        }
    }

    /// Where nothing is doubted and no two relations differ, every case is the release.
    #[test]
    fn law_without_doubt_the_band_has_no_width(case in cases(Kinds { leaks: false, crests: false })) {
        let mut case = case;
        case.raw.band = BandInputs { members: 12, ..none() };
        let Some(ready) = case.ready() else { return Ok(()) };
        let mix = ready.judged();
        prop_assume!(overlapping(&mix.levels).is_empty());
        prop_assert_eq!(mix.spread.cases.len(), 12);
        for (temperature_c, oxygen) in &mix.spread.cases {
            assert_abs_diff_eq!(*temperature_c, mix.release.temperature_c, epsilon = 1e-9);
            prop_assert_eq!(oxygen.is_some(), mix.release.oxygen_mg_l.is_some());
            if let Some(oxygen) = oxygen {
                assert_abs_diff_eq!(*oxygen, mix.release.oxygen_mg_l.unwrap(), epsilon = 1e-9);
            }
        }
        let (low, high) = mix.spread.band_c().unwrap();
        assert_abs_diff_eq!(low, high, epsilon = 1e-9);
    }

    /// In water of one temperature neither heave nor zone nor flow matters: what is left is the cast's offset and
    /// what the method misses, the same draws for every mix.
    #[test]
    fn law_in_uniform_water_a_case_is_its_own_offsets(
        temperature_c in 4.0..25.0_f64, share in 0.1..0.8_f64, a in flow(), b in flow()
    ) {
        let water = Pool::from_rows(&[[0.0, temperature_c, 20.0], [50.0, temperature_c, 20.0]]);
        let mut raw = basin(&water);
        raw.outlets = vec![port("one", water.at(share), 3.0, 3.0), port("two", water.at(0.1 + share), 3.0, 3.0)];
        let drawn = members(&raw.band);
        let mix = Case { raw, water, gates: vec![gate(0, a), gate(1, b)] }.ready().unwrap().judged();
        prop_assert_eq!(mix.spread.cases.len(), drawn.len());
        for (case, m) in mix.spread.cases.iter().zip(&drawn) {
            assert_abs_diff_eq!(case.0, temperature_c + m.cast_c + m.release_c, epsilon = 1e-9);
            assert_abs_diff_eq!(case.1.unwrap(), 20.0 + m.cast_mg_l + m.release_mg_l, epsilon = 1e-9);
        }
    }

    #[test]
    fn law_the_band_lies_among_its_cases(case in cases(Kinds { leaks: true, crests: true })) {
        let Some(ready) = case.ready() else { return Ok(()) };
        let spread = ready.judged().spread;
        let (low, high) = spread.band_c().unwrap();
        prop_assert!(low <= high);
        // 12 cases: the tenth part below lies between the second and third, the ninth between the tenth and eleventh
        let below = spread.cases.iter().filter(|c| c.0 < low).count();
        let above = spread.cases.iter().filter(|c| c.0 > high).count();
        prop_assert!(below <= 2 && above <= 2, "{} below, {} above", below, above);
        let count = spread.cases.iter().filter(|c| (low..=high).contains(&c.0)).count();
        let inside = count as f64 / spread.cases.len() as f64;
        assert_relative_eq!(inside, (12 - below - above) as f64 / 12.0, max_relative = 1e-12);
    }
}

/// Two ports in the worked water with its middle row made `by` warmer than the row above it.
fn inverted(by: f64) -> Case {
    let mut water = worked();
    water.samples[4].temperature_c = water.samples[5].temperature_c + by;
    let mut raw = basin(&water);
    raw.outlets = vec![port("low", 15.0, 2.0, 3.0), port("high", 48.0, 2.0, 3.0)];
    Case { raw, water, gates: vec![gate(0, 10.0), gate(1, 25.0)] }
}

/// Every case lies twice as far from the release, the method's own misses included.
#[test]
fn scenario_a_large_inversion_doubles_the_band() {
    assert!(!inverted(-1.0).ready().unwrap().profile.large_inversion);
    let mut ready = inverted(3.0).ready().unwrap();
    assert!(ready.profile.large_inversion);
    let doubled = ready.judged();
    ready.profile.large_inversion = false;
    let plain = ready.judged();
    assert_eq!(doubled.release, plain.release);
    let centre = &plain.release;
    for (a, b) in plain.spread.cases.iter().zip(&doubled.spread.cases) {
        assert_relative_eq!(2.0 * (a.0 - centre.temperature_c), b.0 - centre.temperature_c, epsilon = 1e-9);
        let [a, b] = [a, b].map(|c| c.1.unwrap() - centre.oxygen_mg_l.unwrap());
        assert_relative_eq!(2.0 * a, b, epsilon = 1e-9);
    }
    let width = |s: &Spread| s.band_c().map(|(low, high)| high - low).unwrap();
    assert_relative_eq!(width(&doubled.spread), 2.0 * width(&plain.spread), max_relative = 1e-9);
}

/// Heave grows with the days between cast and decision, whichever comes first, up to its cap.
#[test]
fn scenario_an_older_cast_has_a_wider_band_and_so_has_a_later_one() {
    let ready = inverted(-1.0).ready().unwrap();
    let at = |days: f64| {
        let perturbed = Perturbed::new(&ready.site, &ready.profile, Some(days));
        let groups = gatemix::mix::groups(&ready.site);
        perturbed.spread(&ready.site, &groups, &ready.setting, &ready.judged().release)
    };
    assert_eq!(at(5.0), at(-5.0));
    assert_ne!(at(5.0), at(6.0));
    // 1.0 m + 0.1 m a day reaches the 3 m at 20 days
    assert_eq!(at(20.0), at(40.0));
}
