//! Dams that a random one is seldom like, each with the answer a hand gives.

use gatemix::mix::limits::{Before, Of, Rule};
use gatemix::rank::{Criterion, Ranking, Stopped};
use gatemix::site::{Position, RawOutage, RawOutlet, RawUndrawn};

use super::brute::{compare, ranked, summed};
use super::parts::Works;
use super::sites::Case;
use crate::columns::worked;
use crate::mix::sites::{basin, port};

/// The worked water before some outlets, 20 m3/s wanted in steps of a quarter.
fn before(outlets: Vec<RawOutlet>) -> Case {
    let water = worked();
    let mut raw = basin(&water);
    raw.outlets = outlets;
    Case {
        raw,
        water,
        blocks: vec![(1.0, 20.0)],
        now: None,
        before: Before::default(),
        steps: 4,
        order: Criterion::NAMES.map(|c| c.1).to_vec(),
        without: Vec::new(),
        recorded: None,
    }
}

/// The ranking, held against every mix tried one by one.
fn tried(case: &Case) -> Ranking {
    let dam = case.dam().unwrap();
    let question = case.question(&dam);
    let ranking = ranked(&question).unwrap();
    let works = Works::new(&question);
    compare(&works, &summed(&works), &ranking);
    ranking
}

/// Its neighbour out of use, a gate still draws the level they share.
#[test]
fn scenario_a_layer_is_kept_by_a_level_whose_other_outlets_are_all_out_of_use() {
    let mut case = before(vec![
        port("Left", 50.0, 2.0, 3.0),
        port("Right", 50.0, 2.0, 3.0),
        port("Low", 10.0, 2.0, 3.0),
    ]);
    case.raw.limits.outages.push(RawOutage {
        outlet: Some("Right".into()),
        from: Some("2025-07-01".into()),
        ..RawOutage::default()
    });
    // the surface layer, which 5 m3/s at 50 m do not reach and 10 m3/s do
    case.raw.limits.undrawn.push(RawUndrawn { depths_m: Some((0.0, 10.0)), ..RawUndrawn::default() });
    let ranking = tried(&case);
    let layer = ranking.rejected.iter().find(|r| r.check.rule == Rule::Undrawn).unwrap();
    assert_eq!(layer.check.of, Of::Whole);
    assert!(ranking.mixes.iter().all(|m| !m.open.contains(&1)));
    assert!(layer.check.found > 0.0 && layer.check.found <= 10.0, "told in metres: {:?}", layer.check);
}

/// A leak nobody can help draws what it draws: it forbids no mix.
#[test]
fn scenario_a_leak_in_a_layer_not_to_be_drawn_forbids_nothing() {
    let mut leaking = port("Old", 6.0, 2.0, 3.0);
    leaking.leakage = Some(gatemix::site::Leakage { flow_m3s: 0.2, head_m: 50.0, range_m3s: None });
    let mut case = before(vec![leaking, port("High", 45.0, 2.0, 3.0)]);
    case.raw.limits.undrawn.push(RawUndrawn { from_m: Some(5.0), to_m: Some(7.0), ..RawUndrawn::default() });
    let ranking = tried(&case);
    assert_eq!(ranking.allowed, 1);
    assert_eq!(ranking.mixes[0].open, [1]);
}

/// A gate whose only position is shut is never opened.
#[test]
fn scenario_a_gate_that_can_only_stand_shut_stays_shut() {
    let mut blank = port("Blank", 30.0, 2.0, 3.0);
    blank.positions = vec![Position { name: "0".into(), opening: 0.0, crest_m: None }];
    let ranking = tried(&before(vec![blank, port("High", 45.0, 2.0, 3.0)]));
    assert_eq!((ranking.examined, ranking.allowed), (1, 1));
    assert_eq!(ranking.mixes[0].open, [1]);
}

/// One outlet alone has to give all of the release: what it would miss at less is no mix.
#[test]
fn scenario_a_miss_is_one_of_a_mix_there_is() {
    let mut only = port("Only", 30.0, 2.0, 3.0);
    only.flow_max_m3s = Some(12.0);
    let ranking = tried(&before(vec![only]));
    assert_eq!(ranking.rejected.len(), 1);
    let check = ranking.rejected[0].check;
    // 20 wanted, 12 possible; the 15 m3/s of three quarters come nearer but are not wanted
    assert_eq!((check.rule, ranking.rejected[0].count), (Rule::FlowMax, 1));
    assert!((check.room + 8.0).abs() < 1e-9, "{check:?}");
}

/// Few steps among many outlets make few mixes, but choices for more numbers than there are: 5^28 exceeds 2^64.
#[test]
fn scenario_more_choices_than_numbers_are_refused() {
    let outlets = |count: usize| {
        let low = |i: usize| 3.0 + 1.9 * i as f64;
        (0..count).map(|i| port(&format!("P{i}"), low(i), 0.5, 8.0)).collect::<Vec<_>>()
    };
    let few = before(outlets(12));
    let dam = few.dam().unwrap();
    assert!(ranked(&few.question(&dam)).unwrap().examined > 1000);
    let many = before(outlets(28));
    let dam = many.dam().unwrap();
    match ranked(&many.question(&dam)) {
        Err(Stopped::Refused(problem)) => assert_eq!(problem.kind, "too-many"),
        other => panic!("{other:?}"),
    }
}
