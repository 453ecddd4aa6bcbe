//! When nothing is learned and why, what a window holds, and which sensor a mixed pool speaks against.

use std::ops::ControlFlow;

use chrono::{Days, NaiveDate};
use gatemix::mix::{Gate, Setting};
use gatemix::profile::Profile;
use gatemix::record::{
    Day, Effect, LEAST_DAYS, Learned, Pair, Sensor, Verdict, WINDOW_DAYS, Why, learn, pairs,
};
use gatemix::series::{self, Daily};
use gatemix::units::{System, say::in_system};

use super::made::{Hidden, Luck, Season, site, still};
use super::of;

/// A season of pairs with a bias of half a degree.
fn biased() -> (Season, Vec<Pair>) {
    let mut luck = Luck::new(7);
    let season = Season::new(&mut luck, 45, true);
    let pairs = season.record(&mut luck, Hidden::Bias(0.8), 0.2).0;
    (season, pairs)
}

fn refused(pairs: &[Pair], window_days: u64, effect: Effect) -> String {
    let learning = learn(&site(), pairs, window_days);
    match &of(&learning, effect).verdict {
        Verdict::Refused(words) => in_system(words, System::Si),
        other => panic!("{other:?}"),
    }
}

#[test]
fn scenario_too_few_days_or_stretches_teach_nothing() {
    let (_, pairs) = biased();
    let words = refused(&pairs[..LEAST_DAYS - 1], WINDOW_DAYS, Effect::Bias);
    assert_eq!(words, "7 days can be held against the gauge, and 8 are needed");
    // eight days and more of two casts are two days, whatever their number
    let mut alike = pairs.clone();
    for (i, pair) in alike.iter_mut().enumerate() {
        pair.cast = if i < 20 { "a.csv".into() } else { "b.csv".into() };
    }
    let words = refused(&alike, WINDOW_DAYS, Effect::Bias);
    assert_eq!(words, "the days fall into 2 stretches with casts of their own, and 4 are needed");
    let learned = learn(&site(), &alike, WINDOW_DAYS).learned;
    assert_eq!(learned.bias_c, None);
    assert_eq!(learned.release_c, None, "two casts do not show how errors scatter");
    assert_eq!(
        refused(&[], WINDOW_DAYS, Effect::Bias),
        "0 days can be held against the gauge, and 8 are needed"
    );
}

#[test]
fn scenario_a_plain_bias_is_kept_and_mends_the_days() {
    let (season, pairs) = biased();
    let learning = learn(season.site(), &pairs, WINDOW_DAYS);
    let bias = of(&learning, Effect::Bias);
    assert_eq!(bias.verdict, Verdict::Kept, "{learning:?}");
    let [before, after] = bias.held_out.unwrap();
    assert!(after < before, "{before} {after}");
    let with = |pair: &Pair| (pair.measured_c.unwrap() - pair.with(&learning.learned).0).powi(2);
    let rmse = (pairs.iter().map(with).sum::<f64>() / pairs.len() as f64).sqrt();
    assert!(
        (rmse - bias.rmse.unwrap()[1]).abs() < 1e-9,
        "the shift that is shown is the one that is applied"
    );
    // without oxygen there is nothing to learn of it
    assert_eq!(of(&learning, Effect::OxygenGain).n, 0);
}

#[test]
fn law_nothing_learned_changes_nothing() {
    let (_, pairs) = biased();
    for pair in &pairs {
        let (temperature_c, oxygen_mg_l) = pair.with(&Learned::default());
        assert!((temperature_c - pair.computed_c).abs() < 1e-9);
        assert_eq!(oxygen_mg_l.is_some(), pair.computed_mg_l.is_some());
    }
}

#[test]
fn law_only_the_window_is_looked_at() {
    let (season, pairs) = biased();
    let all = learn(season.site(), &pairs, WINDOW_DAYS);
    // what was three years ago has no part in it
    let mut older = pairs.clone();
    for pair in &mut older {
        pair.date = pair.date - Days::new(1100);
        pair.measured_c = pair.measured_c.map(|c| c + 5.0);
    }
    older.extend(pairs.iter().cloned());
    assert_eq!(learn(season.site(), &older, WINDOW_DAYS).candidates, all.candidates);
    assert_ne!(learn(season.site(), &older, 2000).candidates, all.candidates);
    let short = learn(season.site(), &pairs, 30).learned;
    let (from, to) = short.window.unwrap();
    assert!((to - from).num_days() <= 29 && short.n < pairs.len());
}

/// Pairs of a mixed pool, six days to each of four casts, that the gauge reads off by so much.
fn mixed(off_c: [f64; 4]) -> Vec<Pair> {
    let (_, pairs) = biased();
    let first = NaiveDate::from_ymd_opt(2025, 12, 1).unwrap();
    (0..24_usize)
        .zip(first.iter_days())
        .map(|(i, date)| Pair {
            date,
            cast: format!("cast-{}.csv", i / 6),
            cast_c: (6.9, 7.1),
            computed_c: 7.0,
            measured_c: Some(7.0 + off_c[i / 6] + 0.05 * (i % 3) as f64),
            ..pairs[0].clone()
        })
        .collect()
}

#[test]
fn scenario_a_mixed_pool_names_the_sensor() {
    let of = |off_c| learn(&site(), &mixed(off_c), WINDOW_DAYS).suspect;
    assert_eq!(of([0.2, -0.2, 0.1, 0.0]), None, "casts may be off by so much");
    assert_eq!(of([0.8, 0.9, 0.7, 0.8]).unwrap().sensor, Sensor::Common);
    let one = of([0.1, 0.0, 1.2, 0.0]).unwrap();
    assert_eq!(one.sensor, Sensor::Casts(vec!["cast-2.csv".into()]));
    let words = in_system(&one.words(), System::Si);
    assert!(words.starts_with("on 24 days the pool was of one temperature within 0.3 C"), "{words}");
    assert!(words.contains("+1.25 C at cast-2.csv"), "{words}");
    assert!(words.ends_with("look at the thermistor that took cast-2.csv"), "{words}");
    let single = learn(&site(), &mixed([0.9; 4])[..6], WINDOW_DAYS).suspect.unwrap();
    assert_eq!(single.sensor, Sensor::Either);
    // water in layers explains itself otherwise
    let mut layered = mixed([0.9; 4]);
    for pair in &mut layered {
        pair.cast_c = (6.0, 15.0);
    }
    assert_eq!(learn(&site(), &layered, WINDOW_DAYS).suspect, None);
}

#[test]
fn scenario_one_level_does_not_tell_a_bias_from_zones() {
    // one outlet of one pool: thicker zones make each day colder by about the same
    let (season, mut pairs) = biased();
    let apart = |p: &Pair| (p.curve.at(1.15).0 - p.curve.at(0.7).0).abs();
    let one = pairs.iter().max_by(|a, b| apart(a).total_cmp(&apart(b))).unwrap().clone();
    assert!(apart(&one) > 0.6);
    for (i, pair) in pairs.iter_mut().enumerate() {
        let scatter = 0.2 * ((i * 7) % 5) as f64 - 0.4;
        let measured_c = Some(one.curve.at(0.85).0 + scatter);
        *pair = Pair { date: pair.date, cast: pair.cast.clone(), measured_c, ..one.clone() };
    }
    let learning = learn(season.site(), &pairs, WINDOW_DAYS);
    assert_eq!(learning.alike.len(), 1, "{learning:?}");
    assert!(learning.alike[0].contains("does not tell a constant bias from a zone factor"));
    let verdicts = [Effect::Bias, Effect::ZoneFactor].map(|effect| of(&learning, effect).verdict.clone());
    assert!(verdicts.contains(&Verdict::Kept));
    assert!(verdicts.iter().any(|v| matches!(v, Verdict::Passed(_))));
}

#[test]
fn scenario_days_left_out_say_why() {
    let site = site();
    let first = NaiveDate::from_ymd_opt(2025, 6, 1).unwrap();
    let profile = still(&site, first);
    let undated = Profile { taken: None, ..profile.clone() };
    let setting = Setting::of(vec![Gate { outlet: 1, opening: 1.0, flow_m3s: 30.0 }]);
    let nothing = Setting::default();
    let day = |i: u64| Day {
        date: first + Days::new(i),
        setting: Some(&setting),
        profile: Some(&profile),
        changed: false,
        event: None,
    };
    let days = [
        day(0),
        Day { event: Some("gate jammed half way"), ..day(1) },
        Day { setting: None, ..day(2) },
        Day { changed: true, ..day(3) },
        Day { profile: None, ..day(4) },
        Day { profile: Some(&undated), ..day(5) },
        day(15),
        day(7),
        Day { setting: Some(&nothing), ..day(8) },
        day(14),
    ];
    let mean = |mean: f64| series::Day { mean, max: mean, min: mean, hourly_change: None };
    let valid = days.iter().map(|d| d.date).filter(|d| *d != first + Days::new(7)).map(|d| (d, mean(9.0)));
    let gauge = Daily { temperature_c: series::Days { days: valid.collect() }, ..Daily::default() };
    let paired = pairs(&site, &days, &gauge, &|_| ControlFlow::Continue(())).unwrap();
    assert_eq!(paired.pairs.iter().map(|p| p.age_days).collect::<Vec<_>>(), [0, 14]);
    let why: Vec<&Why> = paired.left_out.iter().map(|left| &left.why).collect();
    let event = Why::Event("gate jammed half way".into());
    let told = [
        &event,
        &Why::NotSet,
        &Why::Changed,
        &Why::NoCast,
        &Why::Undated,
        &Why::NoGauge,
        &Why::NoWater,
        &Why::Stale(15),
    ];
    assert_eq!(why, told);
    let words: Vec<String> = why.iter().map(|why| why.words()).collect();
    assert_eq!(
        words,
        [
            "unplanned event: gate jammed half way",
            "no setting is known",
            "the setting was changed that day",
            "no cast had been taken",
            "the cast does not say when it was taken",
            "the gauge has no valid mean of the day",
            "what was set draws no water at this pool",
            "the cast is 15 days off",
        ]
    );
    let pair = &paired.pairs[0];
    assert_eq!((pair.shares.as_slice(), pair.level()), ([(1, 1.0)].as_slice(), Some(1)));
    assert_eq!(pair.before_c.len(), 3);
    assert!(pairs(&site, &days, &gauge, &|_| ControlFlow::Break(())).is_none());
}

#[test]
fn law_learning_never_learns_on_top_of_what_is_applied() {
    let plain = site();
    let first = NaiveDate::from_ymd_opt(2025, 6, 1).unwrap();
    let profile = still(&plain, first);
    let setting = Setting::of(vec![Gate { outlet: 1, opening: 1.0, flow_m3s: 30.0 }]);
    let days = [0, 1].map(|i| Day {
        date: first + Days::new(i),
        setting: Some(&setting),
        profile: Some(&profile),
        changed: false,
        event: None,
    });
    let mean = |mean: f64| series::Day { mean, max: mean, min: mean, hourly_change: None };
    let valid = days.iter().map(|d| (d.date, mean(9.0))).collect();
    let gauge = Daily { temperature_c: series::Days { days: valid }, ..Daily::default() };
    let pairs = |site| pairs(site, &days, &gauge, &|_| ControlFlow::Continue(())).unwrap();
    let applied = plain.clone().with_learned(Some(Learned {
        bias_c: Some(0.7),
        by_level_c: vec![(1, -0.2)],
        zone_factor: Some(0.8),
        zone_range: Some((0.7, 0.9)),
        oxygen_gain_mg_l: Some(0.5),
        release_c: Some(0.1),
        ..Learned::default()
    }));
    assert_eq!(pairs(&applied), pairs(&plain));
    assert_eq!(pairs(&plain).pairs.len(), 2);
}
