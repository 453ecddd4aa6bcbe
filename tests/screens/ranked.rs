//! Ranked mixes by keys: taken, lost, asked anew, stopped.

use std::fs;
use std::ops::ControlFlow;

use chrono::{DateTime, Utc};
use crossterm::event::{KeyCode, KeyEvent, KeyModifiers};

use gatemix::tasks::Asked;
use gatemix::tui::model::{Likes, Model, Page, Screen};
use gatemix::tui::{Effect, Event, Lane, Sent, Theme, begin, update};

/// A small invented site: three gates, so that one can be lost.
const SITE: &str = "name: Test Dam (invented)
demonstration: true
units: { length: m, area: m2, volume: m3, flow: m3/s, temperature: C }
utc_offset: \"-07:00\"
pool: { bed: 0, full: 62, table: [[0, 0, 0], [20, 2.0e6, 2.0e7], [40, 5.0e6, 9.0e7], [62, 9.0e6, 2.44e8]] }
outlets:
  - { name: High, centre: 50, height: 3, width: 4, flow: { max: 80 } }
  - { name: Middle, centre: 35, height: 3, width: 4, flow: { max: 80 } }
  - { name: Low, centre: 8, height: 2, width: 2, flow: { max: 40 } }
now: { High: 30, Low: 5 }
targets: [{ name: holding, from: 05-01, to: 09-15, low: 9, preferred: 12, high: 14, oxygen_min: 5 }]
";

const CAST: &str = "# taken: 2025-07-14T10:30
# pool: 60
depth_m,temperature_C,oxygen_mg_l
0.5,22.0,8.5
9,18.0,8.0
14,12.5,7.0
30,7.5,5.5
59,6.2,3.5
";

/// The model of the site with everything answered.
fn opened() -> Model {
    let dir = tempfile::tempdir().unwrap();
    fs::write(dir.path().join("site.yaml"), SITE).unwrap();
    fs::create_dir(dir.path().join("profiles")).unwrap();
    fs::write(dir.path().join("profiles/a.csv"), CAST).unwrap();
    let asked = Asked { site: Some(dir.path().display().to_string()), ..Asked::default() };
    let clock: DateTime<Utc> = "2025-07-15T12:00:00Z".parse().unwrap();
    let mut model = Model::new(asked, Likes::default(), Theme::Mono, (80, 24), clock);
    let effects = begin(&mut model);
    answer(&mut model, effects);
    key(&mut model, KeyCode::Char('3'));
    model
}

/// Computes what is asked, and what that asks in turn.
fn answer(model: &mut Model, effects: Vec<Effect>) {
    for effect in effects {
        if let Effect::Ask(generation, work) = effect {
            let lane = work.lane();
            let done = work.perform(&|_| ControlFlow::Continue(()));
            let more = update(model, Event::Sent(Sent::Done(lane, generation, done)));
            answer(model, more);
        }
    }
}

/// What a key asks for, not computed.
fn press(model: &mut Model, code: KeyCode) -> Vec<Effect> {
    update(model, Event::Key(KeyEvent::new(code, KeyModifiers::NONE)))
}

/// A key with everything it asks for computed.
fn key(model: &mut Model, code: KeyCode) {
    let effects = press(model, code);
    answer(model, effects);
}

/// Gates that stand open in the mix chosen.
fn chosen(model: &Model) -> Vec<usize> {
    let session = model.session().unwrap();
    let mix = &session.ranked.as_ref().unwrap().answer.mixes[session.rank.at];
    mix.day.gates.iter().map(|g| g.outlet).collect()
}

/// Takes the gate of a line out of the ranking, or in again, and leaves the list.
fn drill(model: &mut Model, line: usize) {
    key(model, KeyCode::Char('l'));
    for _ in 0..line {
        key(model, KeyCode::Down);
    }
    key(model, KeyCode::Char(' '));
    key(model, KeyCode::Enter);
}

#[test]
fn law_taking_a_mix_loses_no_try() {
    let mut model = opened();
    key(&mut model, KeyCode::Enter);
    let session = model.session().unwrap();
    assert_eq!((session.screen, session.draft().tries.len()), (Screen::Mix, 1), "the setting now gives way");
    let first = session.draft().tries[0].clone();
    key(&mut model, KeyCode::Char('3'));
    key(&mut model, KeyCode::Down);
    key(&mut model, KeyCode::Enter);
    let draft = model.session().unwrap().draft().clone();
    assert_eq!((draft.tries.len(), draft.at), (2, 1));
    assert_eq!(draft.tries[0], first);
    assert_ne!(draft.tries[1], first);
    assert!(model.session().unwrap().tried().is_some(), "it is computed");
    // the same again is no third try
    key(&mut model, KeyCode::Char('3'));
    key(&mut model, KeyCode::Up);
    key(&mut model, KeyCode::Enter);
    let draft = model.session().unwrap().draft();
    assert_eq!((draft.tries.len(), draft.at), (2, 0));
}

#[test]
fn law_the_mix_taken_gives_what_the_list_says() {
    let mut model = opened();
    let listed = model.session().unwrap().ranked.as_ref().unwrap().answer.mixes[0].temperature_c;
    key(&mut model, KeyCode::Enter);
    let tried = model.session().unwrap().tried().unwrap().mix.release.temperature_c;
    assert!((tried - listed).abs() < 1e-9, "{tried} and {listed}");
}

#[test]
fn scenario_a_drill_is_held_against_every_gate_and_ends_with_escape() {
    let mut model = opened();
    let best = chosen(&model);
    let lost = best[0];
    drill(&mut model, lost);
    let session = model.session().unwrap();
    let ranked = session.ranked.as_ref().unwrap();
    assert_eq!(ranked.answer.without, [lost]);
    assert!(ranked.answer.mixes.iter().all(|m| m.day.gates.iter().all(|g| g.outlet != lost)));
    let whole = session.whole_beside(ranked).unwrap().best.as_ref().unwrap();
    assert!(whole.day.gates.iter().any(|g| g.outlet == lost));
    // a page is left first, then the drill
    key(&mut model, KeyCode::Char('x'));
    key(&mut model, KeyCode::Esc);
    assert_eq!(model.session().unwrap().rank.page, Page::List);
    assert_eq!(model.session().unwrap().draft().without, [lost]);
    key(&mut model, KeyCode::Esc);
    let session = model.session().unwrap();
    assert!(session.draft().without.is_empty());
    assert!(session.ranked.as_ref().unwrap().answer.without.is_empty());
    assert_eq!(chosen(&model), best);
}

#[test]
fn scenario_every_gate_lost_leaves_nothing_to_take() {
    let mut model = opened();
    for line in 0..3 {
        drill(&mut model, line);
    }
    assert!(model.session().unwrap().ranked.as_ref().unwrap().answer.mixes.is_empty());
    for code in [KeyCode::Down, KeyCode::End, KeyCode::Enter, KeyCode::PageDown] {
        key(&mut model, code);
    }
    assert_eq!(model.session().unwrap().screen, Screen::Rank);
}

#[test]
fn law_another_release_makes_no_comparison_with_the_old_one() {
    let mut model = opened();
    let lost = chosen(&model)[0];
    drill(&mut model, lost);
    key(&mut model, KeyCode::Char('t'));
    for c in "20".chars() {
        key(&mut model, KeyCode::Char(c));
    }
    key(&mut model, KeyCode::Enter);
    let session = model.session().unwrap();
    let ranked = session.ranked.as_ref().unwrap();
    assert!((ranked.answer.blocks[0].1 - 20.0).abs() < 1e-9);
    assert!(session.whole_beside(ranked).is_none());
}

#[test]
fn scenario_a_release_typed_away_is_the_sites_own_again() {
    let mut model = opened();
    let own = model.session().unwrap().ranked.as_ref().unwrap().answer.blocks.clone();
    for typed in ["20", " "] {
        key(&mut model, KeyCode::Char('t'));
        typed.chars().for_each(|c| key(&mut model, KeyCode::Char(c)));
        key(&mut model, KeyCode::Enter);
    }
    assert_eq!(model.session().unwrap().draft().release_m3s, None);
    assert_eq!(model.session().unwrap().ranked.as_ref().unwrap().answer.blocks, own);
}

#[test]
fn law_the_mix_chosen_stays_chosen_in_a_new_ranking() {
    let mut model = opened();
    key(&mut model, KeyCode::End);
    let last = chosen(&model);
    assert!(model.session().unwrap().rank.at > 0);
    // moves first: the list has another order
    key(&mut model, KeyCode::Char('c'));
    key(&mut model, KeyCode::End);
    for _ in 0..4 {
        key(&mut model, KeyCode::Char('+'));
    }
    key(&mut model, KeyCode::Enter);
    assert_eq!(chosen(&model), last);
}

#[test]
fn scenario_a_stopped_ranking_is_from_before_until_it_is_asked_again() {
    let mut model = opened();
    assert!(model.session().unwrap().ranks_now());
    press(&mut model, KeyCode::Char('l'));
    press(&mut model, KeyCode::Char(' '));
    press(&mut model, KeyCode::Enter);
    assert!(!model.session().unwrap().ranks_now());
    let stopped = press(&mut model, KeyCode::Esc);
    assert!(matches!(stopped[..], [Effect::Stop(Lane::Long, _)]));
    assert!(!model.session().unwrap().ranks_now(), "what is shown is still from before");
    key(&mut model, KeyCode::Char('r'));
    let session = model.session().unwrap();
    assert!(session.ranks_now());
    assert_eq!(session.ranked.as_ref().unwrap().answer.without, [0]);
}

#[test]
fn law_scrolling_ends_with_the_last_line() {
    let mut model = opened();
    key(&mut model, KeyCode::Char('m'));
    key(&mut model, KeyCode::End);
    let last = model.session().unwrap().rank.scroll;
    key(&mut model, KeyCode::PageDown);
    assert_eq!(model.session().unwrap().rank.scroll, last);
    key(&mut model, KeyCode::Home);
    assert_eq!(model.session().unwrap().rank.scroll, 0);
}
