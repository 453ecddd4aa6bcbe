//! What calls for a decision besides its time: rules that begin, outages, crews that can come.

use std::ops::ControlFlow;

use chrono::Days;
use gatemix::mix::{Gate, Setting};
use gatemix::season::{Choosing, Outcome, Run, Setup, Why, outcome, run};
use gatemix::site::{Outage, Strategy};

use super::strategies::OF;
use super::tiny::{Of, Tiny, begins};

/// A season by a strategy from what is set now, and what comes of it.
fn from(tiny: &Tiny, strategy: Strategy, now: &Setting) -> (Run, Outcome) {
    let skies = tiny.skies(0.0);
    let setup = Setup { now: Some(now), ..tiny.setup(&skies, Choosing::By(strategy)) };
    let run = run(&setup, &|_| ControlFlow::Continue(())).unwrap();
    assert!(run.ended.is_none(), "{:?}", run.ended);
    let out = outcome(&setup, &run);
    (run, out)
}

fn open(outlet: usize) -> Setting {
    Setting::of(vec![Gate { outlet, opening: 1.0, flow_m3s: OF.release_m3s }])
}

fn days(run: &Run) -> Vec<i64> {
    run.decisions.iter().map(|d| (d.date - begins()).num_days()).collect()
}

fn is_open(run: &Run, day: usize, outlet: usize) -> bool {
    run.days[day].gates.iter().any(|gate| gate.outlet == outlet && gate.flow_m3s > 0.0)
}

#[test]
fn law_a_rule_is_met_on_the_day_it_begins() {
    let tiny = Tiny::new(Of { every: 7, ..OF });
    let (run, out) = from(&tiny, Strategy::Best, &open(2));
    // the late rule, 12 C at most, begins on the sixth day
    assert_eq!(days(&run), [0, 5, 7]);
    assert_eq!(run.decisions[1].why, Why::Rule { target: 1, begins: true });
    assert!(run.days[4].release.unwrap().temperature_c > OF.late_high_c);
    assert!(run.days[5].release.unwrap().temperature_c < OF.late_high_c + 0.1);
    assert_eq!(out.reached[1].because.as_deref(), Some("`late` begins"));
    let held = from(&tiny, Strategy::Hold, &open(2)).0;
    assert_eq!((days(&held), held.decisions.iter().map(|d| d.moves).sum::<usize>()), (vec![0, 5, 7], 0));
}

#[test]
fn law_a_gate_stands_as_it_should_when_its_outage_begins() {
    let mut tiny = Tiny::edited(OF, &|text| text.replace("name: G0,", "name: G0, crew: { lead_days: 1.5 },"));
    let day = |i: u64| begins() + Days::new(i);
    tiny.plan.outages = vec![Outage { outlet: 0, from: day(4), to: Some(day(6)), reason: "works".into() }];
    let (run, out) = from(&tiny, Strategy::Hold, &open(0));
    assert!(is_open(&run, 2, 0) && (3..10).all(|day| !is_open(&run, day, 0)));
    let shut = run.decisions.iter().find(|d| d.moves > 0).unwrap();
    assert_eq!(shut.date, day(3));
    assert!(matches!(shut.why, Why::Forced(check) if check.rule.name() == "outage"));
    let moved = out.calendar.iter().find(|on| on.date == day(3)).unwrap();
    let lost = out.gates.iter().find(|life| life.outlet == 0).unwrap();
    assert_eq!((lost.last_day, lost.book_by), (Some(day(3)), Some(day(1))));
    assert_eq!(lost.book_by, moved.book_by, "one date for one move");
    // when it is over something is decided again
    let over = run.decisions.iter().find(|d| d.date == day(7)).unwrap();
    assert_eq!(over.why, Why::OutageOver(0));
    let told = out.reached.iter().find(|on| on.date == day(7)).unwrap();
    assert_eq!(told.because.as_deref(), Some("the outage of `G0` is over"));
}

#[test]
fn law_a_gate_that_nothing_can_stand_in_for_is_used_up_to_its_outage() {
    let mut tiny = Tiny::new(Of { days: 6, ..OF });
    let all = 0..3;
    let day = |i: u64| begins() + Days::new(i);
    let outage = |outlet: usize| Outage { outlet, from: day(4), to: None, reason: String::new() };
    tiny.plan.outages = all.map(outage).collect();
    let run = tiny.by(&tiny.skies(0.0), Strategy::Best);
    assert_eq!((run.days.len(), run.ended.map(|end| end.date)), (4, Some(day(4))));
    assert!(run.decisions.iter().all(|d| d.date != day(3) || d.moves == 0));
}

#[test]
fn law_a_gate_stays_until_its_crew_can_come() {
    let wells = |text: String| text.replace("max_open: 1", "max_open: 2");
    let of = Of { on_a_well: true, every: 7, ..OF };
    let noticed = |lead: &str| {
        let crew = format!("name: G2, crew: {{ lead_days: {lead} }},");
        Tiny::edited(of, &|text| wells(text).replace("name: G2,", &crew))
    };
    let (free, _) = from(&Tiny::edited(of, &wells), Strategy::Best, &open(2));
    assert!(free.decisions[0].moved.iter().any(|one| one.outlet == 2), "{:?}", free.decisions[0]);
    let (run, out) = from(&noticed("1.2"), Strategy::Best, &open(2));
    assert_eq!(days(&run), [0, 2, 5, 7], "told on the first day, the crew comes on the third");
    assert!((0..2).all(|day| is_open(&run, day, 2)));
    assert!(run.decisions[0].moved.iter().all(|one| one.outlet != 2), "{:?}", run.decisions[0]);
    assert!(run.decisions[0].moves > 0, "others are moved at once: {:?}", run.decisions[0]);
    assert_eq!(run.decisions[1].why, Why::Crew(2));
    assert!(out.calendar.iter().all(|on| on.book_by.is_none_or(|by| by >= begins())), "{:?}", out.calendar);
    // what is within reach is told as if it could be moved
    let [a, b] = [&free, &run].map(|run| run.decisions[0].attainable_c.unwrap());
    assert!((a[0] - b[0]).abs() < 1e-9, "{a:?} {b:?}");
    // where it cannot stay it is moved all the same, and the day to tell its crew by is past
    let mut out_now = noticed("1.2");
    out_now.plan.outages = vec![Outage { outlet: 2, from: begins(), to: None, reason: "works".into() }];
    let (run, out) = from(&out_now, Strategy::Best, &open(2));
    assert!(!is_open(&run, 0, 2));
    assert!(out.calendar[0].book_by.unwrap() < begins());
}

#[test]
fn law_what_needs_notice_stays_where_no_other_mix_is_allowed() {
    // one gate open at a time: every change moves two that need notice
    let crew = |text: String| text.replace("height: 1.5", "crew: { lead_days: 3 }, height: 1.5");
    for strategy in [Strategy::Best, Strategy::Thrift] {
        let tiny = Tiny::edited(Of { on_a_well: true, gates: 2, days: 8, every: 2, ..OF }, &crew);
        let (run, out) = from(&tiny, strategy, &open(1));
        assert!((0..3).all(|day| is_open(&run, day, 1)), "{strategy:?}");
        assert!(out.calendar.iter().all(|on| on.date >= begins() + Days::new(3)), "{:?}", out.calendar);
        assert!(!out.calendar.is_empty(), "{strategy:?}");
    }
}

#[test]
fn law_what_is_turned_between_decisions_is_told() {
    let mut tiny = Tiny::new(Of { every: 10, late_high_c: OF.early_high_c, ..OF });
    for (i, day) in tiny.plan.days.iter_mut().enumerate() {
        day.release_m3s = Some(if i < 3 { 1.0 } else { 1.5 });
    }
    let (run, out) = from(&tiny, Strategy::Hold, &open(1));
    assert_eq!(run.decisions.iter().map(|d| d.moves).sum::<usize>(), 0);
    let [turned] = &out.turned[..] else { panic!("{:?}", out.turned) };
    assert_eq!((turned.outlet, turned.days, turned.date), (1, 1, begins() + Days::new(3)));
    assert!((turned.most_m3s - 0.5).abs() < 1e-9);
}
