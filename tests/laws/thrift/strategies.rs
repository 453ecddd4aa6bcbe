//! What each strategy does, and what every season keeps.

use std::sync::Arc;

use chrono::Days;
use gatemix::mix::Gate;
use gatemix::season::{Choosing, Schedule, Why};
use gatemix::site::Strategy;

use super::tiny::{Of, Tiny, begins};

pub(super) const OF: Of = Of {
    gates: 3,
    on_a_well: false,
    days: 10,
    every: 3,
    thermocline_m: 12.0,
    warm_c: 21.0,
    cold_c: 7.0,
    release_m3s: 1.2,
    early_high_c: 18.0,
    late_high_c: 12.0,
    equilibrium_c: 22.0,
};

#[test]
fn law_hold_never_moves_unless_it_must() {
    let tiny = Tiny::new(OF);
    let run = tiny.by(&tiny.skies(0.0), Strategy::Hold);
    assert!(run.ended.is_none() && run.days.len() == 10);
    assert!(run.decisions.iter().skip(1).all(|d| d.moves == 0), "{:?}", run.decisions);
    let open = |day: usize| run.days[day].gates.iter().map(|g| g.outlet).collect::<Vec<_>>();
    assert!((0..10).all(|day| open(day) == open(0)));
    // the same with an outage of what it holds from the sixth day on
    let name = &format!("G{}", open(0)[0]);
    let outage = format!(
        "limits: {{ outages: [{{ outlet: {name}, from: 2026-07-06, to: 2026-07-08, reason: repair }}] }}"
    );
    let tiny = Tiny::with(OF, &[&outage]);
    let run = tiny.by(&tiny.skies(0.0), Strategy::Hold);
    let moved: Vec<_> = run.decisions.iter().filter(|d| d.moves > 0).collect();
    assert_eq!(moved.len(), 1, "{moved:?}");
    assert_eq!(moved[0].date, begins() + Days::new(5));
    assert!(matches!(moved[0].why, Why::Forced(check) if check.rule.name() == "outage"));
    assert!(run.days[5..].iter().all(|day| day.gates.iter().all(|g| format!("G{}", g.outlet) != *name)));
}

#[test]
fn law_a_schedule_is_followed() {
    let tiny = Tiny::new(OF);
    let gate = |outlet: usize, flow_m3s: f64| Gate { outlet, opening: 1.0, flow_m3s };
    let day = |i: u64| begins() + Days::new(i);
    let schedule = Schedule {
        file: "by-hand.csv".into(),
        changes: vec![(day(0), vec![gate(0, 5.0)]), (day(4), vec![gate(1, 1.0), gate(2, 3.0)])],
    };
    let run = tiny.run(&tiny.skies(0.0), Choosing::Schedule(Arc::new(schedule)));
    for (i, day) in run.days.iter().enumerate() {
        let set: Vec<(usize, f64)> = day.gates.iter().map(|g| (g.outlet, g.flow_m3s)).collect();
        let wanted = if i < 4 { vec![(0, 1.2)] } else { vec![(1, 0.3), (2, 0.9)] };
        assert_eq!(set.len(), wanted.len());
        for (a, b) in set.iter().zip(&wanted) {
            assert!(a.0 == b.0 && (a.1 - b.1).abs() < 1e-12, "{i}: {set:?}");
        }
    }
    let moves: Vec<(u64, usize)> = run
        .decisions
        .iter()
        .filter(|d| d.moves > 0)
        .map(|d| ((d.date - begins()).num_days().unsigned_abs(), d.moves))
        .collect();
    assert_eq!(moves, [(4, 3)]);
}

#[test]
fn law_every_season_closes_its_balances_and_releases_what_is_planned() {
    for strategy in [Strategy::Hold, Strategy::Best] {
        let tiny = Tiny::new(OF);
        let run = tiny.by(&tiny.skies(1.0), strategy);
        assert_eq!(run.days.len(), 10);
        for day in &run.days {
            assert!(
                day.balance.water_m3.relative_error() < 1e-9 && day.balance.heat_j.relative_error() < 1e-9
            );
            assert!((day.release_m3s() - 1.2).abs() < 1e-9, "{}", day.release_m3s());
            let set: f64 = day.gates.iter().map(|g| g.flow_m3s).sum();
            assert!((set - 1.2).abs() < 1e-9);
        }
        for pair in run.days.windows(2) {
            assert!((pair[1].balance.heat_j.before - pair[0].balance.heat_j.after).abs() < 1.0);
        }
    }
}

#[test]
fn law_best_decides_every_so_many_days_and_says_what_is_attainable() {
    let tiny = Tiny::new(OF);
    let run = tiny.by(&tiny.skies(0.0), Strategy::Best);
    let due: Vec<i64> = run.decisions.iter().map(|d| (d.date - begins()).num_days()).collect();
    assert_eq!(due, [0, 3, 6, 9]);
    for decision in &run.decisions {
        let [low, high] = decision.attainable_c.unwrap();
        let day = run.days.iter().find(|day| day.date == decision.date).unwrap();
        // what is released over the day differs a little from its morning
        assert!(
            (low - 0.3..=high + 0.3).contains(&day.release.unwrap().temperature_c),
            "{low} {high} {day:?}"
        );
        assert!(low < high);
    }
    let aims = Choosing::Aims(Arc::new(vec![1.0; 4]));
    let warmer = tiny.run(&tiny.skies(0.0), aims);
    assert!(warmer.days[0].release.unwrap().temperature_c > run.days[0].release.unwrap().temperature_c + 1.0);
    assert!(
        (warmer.days[0].release.unwrap().temperature_c - 18.0).abs() < 0.1,
        "the aim of 1 is the top of the range"
    );
}

#[test]
fn law_the_order_of_gates_in_the_file_changes_nothing() {
    for on_a_well in [false, true] {
        let of = Of { on_a_well, days: 6, ..OF };
        let (tiny, other) = (Tiny::new(of), Tiny::new(of).reversed());
        for strategy in [Strategy::Hold, Strategy::Best] {
            let runs = [&tiny, &other].map(|tiny| tiny.by(&tiny.skies(0.0), strategy));
            assert_eq!(runs[0].days.len(), runs[1].days.len());
            for (a, b) in runs[0].days.iter().zip(&runs[1].days) {
                let apart = (a.release.unwrap().temperature_c - b.release.unwrap().temperature_c).abs();
                assert!(apart < 1e-9, "{on_a_well} {strategy:?} {}: {apart}", a.date);
            }
        }
    }
}

#[test]
fn law_one_core_finds_what_many_find() {
    let tiny = Tiny::new(Of { gates: 2, days: 4, every: 2, ..OF });
    let skies = tiny.skies(0.0);
    let one_core = rayon::ThreadPoolBuilder::new().num_threads(1).build().unwrap();
    let many = tiny.by(&skies, Strategy::Thrift);
    let one = one_core.install(|| tiny.by(&skies, Strategy::Thrift));
    assert_eq!(one.aims, many.aims);
    assert_eq!(one.decisions, many.decisions);
    for (a, b) in one.days.iter().zip(&many.days) {
        assert_eq!(a.release, b.release);
        assert_eq!(a.layers, b.layers);
    }
}
