//! When gates can be used and by when their crews must be told, from days made by hand.

use gatemix::mix::limits::Move;
use gatemix::season::{Decision, Fully, GateLife, SeasonDay};
use gatemix::site::Outage;

use crate::outcome::{SITE, begin, checked, date, days, decision, layers, of};

#[test]
fn scenario_a_gate_half_open_lasts_longer() {
    let site = checked(&SITE.replace("name: High,", "name: High, positions: [0, 50, 100],"));
    let mut season = days(6);
    // 3 m over its top: 49 m for the whole of it, 48 m for the lower half
    for (day, pool_m) in season.iter_mut().zip([49.5, 49.1, 48.8, 48.2, 47.9, 47.0]) {
        day.pool_m = pool_m;
        day.layers = layers(10.0, pool_m);
    }
    let lives = |season: Vec<SeasonDay>| -> Vec<GateLife> { of(&site, season, Vec::new(), Vec::new()).gates };
    let gates = lives(season.clone());
    let high = gates.iter().find(|g| g.outlet == 0).unwrap();
    assert_eq!((high.first_day, high.last_day), (Some(begin()), Some(date("2026-08-05"))));
    assert_eq!(high.fully, Fully::Within(begin(), date("2026-08-03")));
    assert!(gates.iter().all(|g| g.outlet == 0 || g.fully == Fully::Always));
    for day in &mut season {
        day.pool_m = 48.5;
    }
    let gates = lives(season);
    let high = gates.iter().find(|g| g.outlet == 0).unwrap();
    assert_eq!(
        (high.last_day, high.fully),
        (None, Fully::Within(begin(), begin())),
        "but for the first morning"
    );
}

#[test]
fn scenario_gates_are_lost_by_a_falling_pool_and_come_with_a_rising_one() {
    let site = checked(SITE);
    let mut season = days(6);
    // the high gate wants 3 m over its top at 46 m; a day goes by the pool of its morning, 55.5 m on the first
    for (day, pool_m) in season.iter_mut().zip([49.0, 48.9, 48.0, 49.5, 50.0, 50.0]) {
        day.pool_m = pool_m;
        day.layers = layers(10.0, pool_m);
    }
    // shut on the first day of too little water, as a limit forces it
    let shut = Decision {
        moved: vec![Move { outlet: 0, from: 1.0, to: 0.0, from_m3s: 5.0, to_m3s: 0.0 }],
        lead_days: 10.0,
        ..decision(2, None)
    };
    let out = of(&site, season, vec![shut], Vec::new());
    assert_eq!(out.calendar[0].book_by, Some(date("2026-07-24")));
    let of_high: Vec<_> = out.gates.iter().filter(|g| g.outlet == 0).collect();
    assert_eq!(of_high.len(), 2);
    assert_eq!((of_high[0].first_day, of_high[0].last_day), (Some(begin()), Some(date("2026-08-02"))));
    assert_eq!(of_high[0].reason.as_ref().unwrap().0, "min_submergence");
    assert_eq!(of_high[0].book_by, out.calendar[0].book_by, "ten days before it is moved");
    assert_eq!((of_high[1].first_day, of_high[1].last_day), (Some(date("2026-08-05")), None));
    assert_eq!(of_high[1].reason.as_ref().unwrap().0, "min_submergence", "why not before");
    assert_eq!(out.gates.iter().filter(|g| g.outlet == 1).count(), 1);
    // one that is out all season has no day, and says why
    let outage = Outage { outlet: 2, from: begin(), to: None, reason: "hoist".into() };
    let out = of(&site, days(3), Vec::new(), vec![outage]);
    let low = out.gates.iter().find(|g| g.outlet == 2).unwrap();
    assert_eq!((low.first_day, low.reason.as_ref().unwrap().0), (None, "outage"));
    assert!(low.reason.as_ref().unwrap().1.contains("hoist"));
}

#[test]
fn scenario_what_moves_is_told_with_the_day_its_crew_must_know() {
    let site = checked(SITE);
    let moved = |outlet: usize, to_m3s: f64| Move { outlet, from: 1.0, to: 1.0, from_m3s: 5.0, to_m3s };
    let change = Decision {
        moves: 2,
        moved: vec![moved(1, 0.0), moved(2, 20.0)],
        crew_hours: 3.0,
        lead_days: 2.5,
        ..decision(7, None)
    };
    let out = of(&site, days(10), vec![decision(0, None), change], Vec::new());
    assert_eq!((out.moves, out.calendar.len()), (2, 1), "the first decision leaves everything as it is");
    let on = &out.calendar[0];
    assert_eq!((on.date, on.crew_hours, on.moved.len()), (date("2026-08-08"), 3.0, 2));
    assert_eq!(on.book_by, Some(date("2026-08-05")), "a part of a day counts as one");
}
