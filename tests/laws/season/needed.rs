//! How much cold water is needed on a date: the pools that are tried, and what is found among them.

use std::collections::BTreeSet;
use std::ops::ControlFlow;

use chrono::{Days, NaiveDate, NaiveTime};
use gatemix::season::{Choosing, Layers, Needed, Setup, Skies, needed, run, tallies};
use gatemix::site::{Pool, Strategy};
use proptest::prelude::*;

use super::{layers, still};
use crate::thrift::tiny::{Of, Tiny, begins};

/// Two gates over cold water that does not last, and a rule that asks for some of it every day.
const OF: Of = Of {
    gates: 2,
    on_a_well: false,
    days: 12,
    every: 3,
    thermocline_m: 9.0,
    warm_c: 21.0,
    cold_c: 7.0,
    release_m3s: 1.5,
    early_high_c: 13.0,
    late_high_c: 13.0,
    equilibrium_c: 22.0,
};

fn go_on(_: f64) -> ControlFlow<()> {
    ControlFlow::Continue(())
}

/// Temperature by the water below, at even shares of the pool, C.
fn curve_c(layers: &Layers) -> Vec<f64> {
    let all = layers.volume_m3();
    let at = |i: u32| {
        let mut below = 0.0;
        let wanted = all * (f64::from(i) + 0.5) / 200.0;
        let holds = layers.layers.iter().find(|layer| {
            below += layer.volume_m3;
            below > wanted
        });
        holds.unwrap().temperature_c
    };
    (0..200).map(at).collect()
}

fn cold_m3(layers: &Layers, pool: &Pool, threshold_c: f64) -> f64 {
    layers.colder_m3(pool, threshold_c, pool.bed_m, layers.pool_m(pool))
}

proptest! {
    #![proptest_config(ProptestConfig { cases: 64, ..ProptestConfig::default() })]

    #[test]
    fn law_more_cold_water_is_the_same_pool_with_its_boundary_moved(
        surface_m in 12.0..28.0_f64,
        lower_c in 3.0..9.0_f64,
        warmer_c in 2.0..18.0_f64,
        threshold in 0.05..0.95_f64,
        shares in prop::array::uniform2(0.0..1.0_f64),
    ) {
        let site = still(&[(0.0, 1e4), (10.0, 8e4), (30.0, 3e5)]);
        let of = |z: f64| (lower_c + warmer_c * (z / surface_m).powi(2), 8.0 - 0.1 * z);
        let pool = layers(&site, surface_m, 14, &of);
        let threshold_c = lower_c + threshold * warmer_c;
        let all_m3 = pool.volume_m3();
        let own_m3 = cold_m3(&pool, &site.pool, threshold_c);
        prop_assume!(own_m3 > 0.0 && own_m3 < all_m3);
        let made = |share: f64| pool.with_cold(&site, threshold_c, share * all_m3).unwrap();
        let [less, more] = [shares[0].min(shares[1]), shares[0].max(shares[1])];
        for share in [less, more] {
            let other = made(share);
            prop_assert!((other.volume_m3() / all_m3 - 1.0).abs() < 1e-12);
            prop_assert!((other.pool_m(&site.pool) - surface_m).abs() < 1e-9);
            let cold = cold_m3(&other, &site.pool, threshold_c);
            prop_assert!((cold - share * all_m3).abs() < 1e-9 * all_m3, "{cold} of {}", share * all_m3);
            // no water that was not there, and each with the oxygen it had
            for layer in &other.layers {
                let of = pool.layers.iter().find(|own| own.temperature_c == layer.temperature_c);
                prop_assert_eq!(of.map(|own| own.oxygen_mg_l), Some(layer.oxygen_mg_l));
            }
        }
        let [less, more] = [made(less), made(more)];
        for (less_c, more_c) in curve_c(&less).into_iter().zip(curve_c(&more)) {
            prop_assert!(more_c <= less_c, "{more_c} above {less_c}");
        }
        let same = pool.with_cold(&site, threshold_c, own_m3).unwrap();
        for (own_c, same_c) in curve_c(&pool).into_iter().zip(curve_c(&same)) {
            prop_assert_eq!(own_c, same_c);
        }
    }
}

#[test]
fn law_a_pool_of_one_kind_of_water_cannot_have_more_or_less_of_it() {
    let site = still(&[(0.0, 1e4), (30.0, 3e5)]);
    let pool = layers(&site, 20.0, 10, &|z| (5.0 + 0.5 * z, 8.0));
    assert!(pool.with_cold(&site, 20.0, 1e5).is_none() && pool.with_cold(&site, 4.0, 1e5).is_none());
    assert!(pool.with_cold(&site, 9.0, 1e5).is_some());
}

/// The days outside that come after a date of the same season begun anew with so much cold water at its end.
fn begun_anew(tiny: &Tiny, skies: &Skies, date: NaiveDate, cold_m3: f64) -> usize {
    let site = &skies.site;
    let before = tiny.by(skies, Strategy::Best);
    let evening = &before.days.iter().find(|day| day.date == date).unwrap().layers;
    let pool = evening.with_cold(site, site.cold_water_c[0], cold_m3).unwrap();
    let next = date + Days::new(1);
    let at = next.and_time(NaiveTime::MIN).and_local_timezone(site.offset).unwrap();
    let start = pool.profile(site, at).unwrap();
    let setup = Setup {
        start: &start,
        begins: next,
        decides: next,
        ..tiny.setup(skies, Choosing::By(Strategy::Best))
    };
    let run = run(&setup, &go_on).unwrap();
    assert!(run.ended.is_none(), "{:?}", run.ended);
    let of = tallies(site, &skies.conditions, &run.days);
    of.iter().map(|held| held.outside().into_iter().collect::<BTreeSet<_>>().len()).sum()
}

#[test]
fn law_what_is_needed_is_enough_and_less_is_not() {
    let tiny = Tiny::new(OF);
    let skies = tiny.skies(0.0);
    let date = begins() + Days::new(2);
    let setup = tiny.setup(&skies, Choosing::By(Strategy::Best));
    let Needed { made, found, not_judged, .. } = needed(&setup, date, &go_on).unwrap();
    let (made, found) = (made.unwrap(), found.unwrap());
    assert!(made.days_outside > 0, "the season as it is has too little: {made:?}");
    assert!(found.least.is_enough() && found.remain.is_empty() && not_judged.is_empty(), "{found:?}");
    assert!(found.least.usable_m3 > made.usable_m3, "{found:?}");
    let lower = found.lower.unwrap();
    assert!(lower.days_outside > 0 && lower.total_m3 < found.least.total_m3);
    // as near as is said: a fifth of a twelfth of the pool
    let apart = (found.least.total_m3 - lower.total_m3) / found.tried.last().unwrap().total_m3;
    assert!(apart > 0.0 && apart < 0.01, "{apart}");
    assert!(found.tried.contains(&made) && found.tried.is_sorted_by(|a, b| a.total_m3 < b.total_m3));
    // seasons that begin on the next day with what is needed, a little more, and less
    assert_eq!(begun_anew(&tiny, &skies, date, 1.03 * found.least.total_m3), 0);
    let less = begun_anew(&tiny, &skies, date, 0.94 * lower.total_m3);
    assert!(less > 0, "{less}");
    // with half of it more days than with a little less
    let half = begun_anew(&tiny, &skies, date, 0.5 * lower.total_m3);
    assert!(half > less, "{half} {less}");
}

#[test]
fn law_a_season_nearer_its_end_needs_less() {
    let tiny = Tiny::new(OF);
    let skies = tiny.skies(0.0);
    let setup = tiny.setup(&skies, Choosing::By(Strategy::Best));
    let least = [2, 5, 8].map(|day| {
        let found = needed(&setup, begins() + Days::new(day), &go_on).unwrap().found.unwrap();
        assert!(found.least.is_enough(), "{day}: {found:?}");
        found.least.usable_m3.unwrap()
    });
    assert!(least.is_sorted_by(|earlier, later| earlier > later), "{least:?}");
}

#[test]
fn law_days_that_no_cold_water_cures_remain_and_are_told() {
    // water of the pool is warmer than 5 C, however much of it is cold
    let tiny = Tiny::new(Of { late_high_c: 5.0, ..OF });
    let skies = tiny.skies(0.0);
    let setup = tiny.setup(&skies, Choosing::By(Strategy::Best));
    let found = needed(&setup, begins() + Days::new(2), &go_on).unwrap().found.unwrap();
    assert_eq!((found.least.days_outside, found.least.is_enough()), (6, false), "{:?}", found.least);
    let [row] = found.remain[..] else { panic!("{:?}", found.remain) };
    assert_eq!((row.target, row.side.word(), row.days()), (1, "above", 6));
    assert_eq!((row.first, row.last), (begins() + Days::new(6), begins() + Days::new(11)));
    assert!(found.tried.iter().all(|one| one.days_outside >= 6));
}

#[test]
fn law_cores_change_nothing_and_whoever_stops_it_gets_nothing() {
    let tiny = Tiny::new(OF);
    let skies = tiny.skies(0.0);
    let setup = tiny.setup(&skies, Choosing::By(Strategy::Best));
    let date = begins() + Days::new(5);
    let on = |threads: usize| {
        let pool = rayon::ThreadPoolBuilder::new().num_threads(threads).build().unwrap();
        pool.install(|| needed(&setup, date, &go_on)).unwrap()
    };
    assert_eq!(on(1), on(3));
    let stop = |done: f64| if done > 0.3 { ControlFlow::Break(()) } else { ControlFlow::Continue(()) };
    assert_eq!(needed(&setup, date, &stop), None);
}

#[test]
fn law_what_cannot_be_sought_says_why() {
    let why = |edit: &str, date: NaiveDate| {
        let tiny = Tiny::edited(OF, &|text| text.replace("cold_water: [12]", edit));
        let skies = tiny.skies(0.0);
        let setup = tiny.setup(&skies, Choosing::By(Strategy::Best));
        needed(&setup, date, &go_on).map(|needed| (needed.made.is_some(), needed.found.unwrap_err()))
    };
    let date = begins() + Days::new(2);
    let is = |told: Option<(bool, String)>, made: bool, words: &str| {
        let (is_made, why) = told.unwrap();
        assert!(is_made == made && why.contains(words), "{is_made} {why}");
    };
    is(why("cold_water: [3]", date), true, "no water of the pool is that cold on 2026-07-03");
    is(why("cold_water: [29]", date), true, "all water of the pool is that cold on 2026-07-03");
    is(why("cold_water: [12]", begins() + Days::new(40)), false, "2026-08-10 is no day of the season");
    assert_eq!(why("", date), None, "without a threshold nothing counts as cold");
    is(why(OUT, begins() + Days::new(8)), false, "the season stops on 2026-07-08");
}

/// Both gates are out from the eighth day on.
const OUT: &str = "cold_water: [12]\nlimits: { outages: [{ outlet: G0, from: 2026-07-08, to: 2026-07-09, reason: repair }, \
                   { outlet: G1, from: 2026-07-08, to: 2026-07-09, reason: repair }] }";

#[test]
fn law_days_that_a_season_does_not_reach_are_not_enough() {
    let tiny = Tiny::edited(OF, &|text| text.replace("cold_water: [12]", OUT));
    let skies = tiny.skies(0.0);
    let setup = tiny.setup(&skies, Choosing::By(Strategy::Best));
    let found = needed(&setup, begins() + Days::new(2), &go_on).unwrap().found.unwrap();
    assert!(found.tried.iter().all(|one| one.lost == 5 && !one.is_enough()), "{found:?}");
    assert_eq!(found.least.days_outside, 0);
}
