//! Days without a release: the pool takes in what comes, nothing is judged at the dam, and the season goes on.

use std::sync::Arc;

use chrono::Days;
use gatemix::mix::{Gate, Setting};
use gatemix::season::{Choosing, Run, Schedule, Score, Setup, Why, outcome, run};
use gatemix::site::{Outage, Strategy};
use std::ops::ControlFlow;

use super::strategies::OF;
use super::tiny::{AREA_M2, Of, SURFACE_M, Tiny, begins};

/// Days without a release, from 0.
const CLOSED: std::ops::Range<usize> = 3..6;

/// Ten days with a decision every third, nothing released on three of them.
fn closed() -> Tiny {
    let mut tiny = Tiny::new(OF);
    tiny.plan.days[CLOSED].iter_mut().for_each(|day| day.release_m3s = Some(0.0));
    tiny
}

fn day_of(run: &Run, decision: usize) -> u64 {
    (run.decisions[decision].date - begins()).num_days().unsigned_abs()
}

#[test]
fn law_a_day_without_a_release_fills_the_pool_and_is_not_judged() {
    let tiny = closed();
    let skies = tiny.skies(0.0);
    for strategy in [Strategy::Hold, Strategy::Best] {
        let run = tiny.by(&skies, strategy);
        assert!(run.ended.is_none() && run.days.len() == 10, "{:?}", run.ended);
        for (i, day) in run.days.iter().enumerate() {
            assert_eq!(day.release.is_none(), CLOSED.contains(&i), "{i}");
            assert_eq!(day.gates.is_empty(), CLOSED.contains(&i), "{i}");
            let before = i.checked_sub(1).map_or(SURFACE_M, |i| run.days[i].pool_m);
            let gain_m3 = (0.8 * OF.release_m3s - day.release_m3s()) * 86_400.0;
            assert!((day.pool_m - before - gain_m3 / AREA_M2).abs() < 1e-9, "{i}: {}", day.pool_m - before);
            assert!(day.balance.water_m3.relative_error() < 1e-9);
        }
        let setup = tiny.setup(&skies, Choosing::By(strategy));
        let out = outcome(&setup, &run);
        let told = out.targets.iter().filter_map(|t| t.temperature);
        let (judged, unknown) = told.fold((0, 0), |sum, t| (sum.0 + t.judged, sum.1 + t.unknown));
        assert_eq!((judged, unknown), (7, 3));
        assert!(out.cold[0].days[4].usable_m3.unwrap() > 0.5 * out.cold[0].days[2].usable_m3.unwrap());
    }
}

#[test]
fn law_what_is_due_without_a_release_is_decided_with_the_next() {
    let tiny = closed();
    let best = tiny.by(&tiny.skies(0.0), Strategy::Best);
    // due on the fourth and the seventh day, and nothing is released from the fourth to the sixth
    let days: Vec<u64> = (0..best.decisions.len()).map(|i| day_of(&best, i)).collect();
    assert_eq!(days, [0, 6, 9]);
    let mut tiny = Tiny::new(OF);
    tiny.plan.days[3].release_m3s = Some(0.0);
    let best = tiny.by(&tiny.skies(0.0), Strategy::Best);
    let days: Vec<u64> = (0..best.decisions.len()).map(|i| day_of(&best, i)).collect();
    assert_eq!(days, [0, 4, 6, 9], "once, and then in its turn");
    let hold = tiny.by(&tiny.skies(0.0), Strategy::Hold);
    assert_eq!(hold.days[2].gates.len(), hold.days[4].gates.len());
    assert_eq!(hold.decisions.iter().map(|d| d.moves).sum::<usize>(), 0);
}

#[test]
fn law_a_schedule_moves_gates_without_a_release_and_the_moves_count() {
    let tiny = closed();
    let gate = |outlet: usize, flow_m3s: f64| Gate { outlet, opening: 1.0, flow_m3s };
    let follow = |changes: Vec<(u64, Vec<Gate>)>| {
        let changes = changes.into_iter().map(|(day, gates)| (begins() + Days::new(day), gates)).collect();
        let schedule = Schedule { file: "by-hand.csv".into(), changes };
        tiny.run(&tiny.skies(0.0), Choosing::Schedule(Arc::new(schedule)))
    };
    let moved = |run: &Run| -> Vec<(u64, usize)> {
        let moved = (0..run.decisions.len()).map(|i| (day_of(run, i), run.decisions[i].moves));
        moved.filter(|m| m.1 > 0).collect()
    };
    let turned = follow(vec![(0, vec![gate(0, 5.0)]), (4, vec![gate(1, 1.0)])]);
    assert_eq!(moved(&turned), [(4, 2)]);
    let set: Vec<usize> =
        turned.days[6].gates.iter().filter(|g| g.flow_m3s > 0.0).map(|g| g.outlet).collect();
    assert_eq!(set, [1]);
    // shut with a row of its own and opened again: both count
    let shut = follow(vec![(0, vec![gate(0, 5.0)]), (3, Vec::new()), (6, vec![gate(0, 5.0)])]);
    assert_eq!(moved(&shut), [(3, 1), (6, 1)]);
    assert!(shut.ended.is_none());
}

#[test]
fn law_every_outlet_may_be_out_where_nothing_is_to_be_released() {
    let out = |release_m3s: f64| {
        let mut tiny = Tiny::new(OF);
        tiny.plan.days[CLOSED].iter_mut().for_each(|day| day.release_m3s = Some(release_m3s));
        let [from, to] = [CLOSED.start, CLOSED.end - 1].map(|i| tiny.plan.days[i].date);
        let outage = |outlet: usize| Outage { outlet, from, to: Some(to), reason: "works".into() };
        tiny.plan.outages = (0..3).map(outage).collect();
        tiny.by(&tiny.skies(0.0), Strategy::Best)
    };
    let closed = out(0.0);
    assert!(closed.ended.is_none() && closed.days.len() == 10, "{:?}", closed.ended);
    assert!(closed.decisions.iter().all(|d| !matches!(d.why, Why::Forced(_))));
    let asked = out(1.0);
    let ended = asked.ended.as_ref().unwrap();
    assert_eq!((asked.days.len(), ended.check.map(|c| c.rule.name())), (3, Some("outage")));
}

#[test]
fn law_a_season_that_begins_shut_knows_what_is_set() {
    let mut tiny = Tiny::new(OF);
    tiny.plan.days[..2].iter_mut().for_each(|day| day.release_m3s = Some(0.0));
    let now = Setting::of(vec![Gate { outlet: 1, opening: 1.0, flow_m3s: 1.2 }]);
    let skies = tiny.skies(0.0);
    let setup = Setup { now: Some(&now), ..tiny.setup(&skies, Choosing::By(Strategy::Hold)) };
    let run = run(&setup, &|_| ControlFlow::Continue(())).unwrap();
    assert_eq!((run.days.len(), day_of(&run, 0), run.decisions[0].moves), (10, 2, 0));
    assert!(run.days[2..].iter().all(|day| day.gates.iter().all(|g| g.outlet == 1)));
}

#[test]
fn law_a_pool_can_be_filled_by_all_that_comes_in_and_no_more() {
    let fill = |inflow_m3s: f64| {
        let mut tiny = Tiny::new(OF).by_pool(SURFACE_M, 0.0);
        for (i, day) in tiny.plan.days.iter_mut().enumerate() {
            day.inflow_m3s = inflow_m3s;
            day.pool_m = Some(SURFACE_M + 0.5 * (i + 1) as f64 * 86_400.0 / AREA_M2);
        }
        tiny.by(&tiny.skies(0.0), Strategy::Best)
    };
    let all = fill(0.5);
    assert!(all.ended.is_none() && all.days.iter().all(|day| day.release.is_none()), "{:?}", all.ended);
    let ended = fill(0.4).ended.unwrap();
    assert_eq!(ended.date, begins());
    assert!(ended.words.contains("more would have to come in"), "{}", ended.words);
}

#[test]
fn law_thrift_is_no_worse_than_best_across_days_without_a_release() {
    for days in [8, 14] {
        let of = Of { gates: 2, days, every: 2, ..OF };
        let mut tiny = Tiny::new(of);
        tiny.plan.days[3..6].iter_mut().for_each(|day| day.release_m3s = Some(0.0));
        let skies = tiny.skies(1.0);
        let score = |strategy| {
            let run = tiny.by(&skies, strategy);
            Score::of(&tiny.setup(&skies, Choosing::By(strategy)), &run)
        };
        assert!(score(Strategy::Thrift).order(&score(Strategy::Best)).is_le());
    }
}
