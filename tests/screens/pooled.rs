//! The pool by keys: casts stepped through, laid over and worked with, the cursor, a threshold.

use std::ops::ControlFlow;

use chrono::Utc;
use crossterm::event::{KeyCode, KeyEvent, KeyModifiers};

use gatemix::tasks::{self, Asked};
use gatemix::tui::model::{self, Likes, Model, Session};
use gatemix::tui::{Effect, Event, Lane, Sent, Theme, Work, begin, update};

/// Does what is asked for until nothing is left; the ranking is left out, and what was asked of it given back.
fn settle(model: &mut Model, effects: Vec<Effect>) -> Vec<Work> {
    let (mut left, mut ranked) = (effects, Vec::new());
    while let Some(effect) = left.pop() {
        match effect {
            Effect::Ask(_, work) if work.lane() == Lane::Long => ranked.push(*work),
            Effect::Ask(generation, work) => {
                let lane = work.lane();
                let done = work.perform(&|_| ControlFlow::Continue(()));
                left.extend(update(model, Event::Sent(Sent::Done(lane, generation, done))));
            }
            _ => {}
        }
    }
    // the ranking is not waited for
    model.long = None;
    ranked
}

fn opened() -> Model {
    let asked = Asked { site: Some("ashlar".into()), ..Asked::default() };
    let mut model = Model::new(asked, Likes::default(), Theme::Mono, (120, 40), Utc::now());
    let effects = begin(&mut model);
    settle(&mut model, effects);
    model
}

fn press(model: &mut Model, keys: &str) -> Vec<Work> {
    let mut ranked = Vec::new();
    for key in keys.chars() {
        ranked.extend(pressed(model, KeyCode::Char(key)));
    }
    ranked
}

fn pressed(model: &mut Model, code: KeyCode) -> Vec<Work> {
    let effects = update(model, Event::Key(KeyEvent::new(code, KeyModifiers::NONE)));
    settle(model, effects)
}

fn session(model: &Model) -> &Session {
    model.session().unwrap()
}

/// Files of the season.
fn files(model: &Model) -> Vec<String> {
    session(model).casts.iter().flatten().map(|c| c.file.clone()).collect()
}

#[test]
fn scenario_stepping_goes_through_the_season_and_stops_at_its_ends() {
    let mut model = opened();
    let files = files(&model);
    let last = files.len() - 1;
    assert_eq!(session(&model).context().profile.file, files[last]);
    assert_eq!(session(&model).looked_at().map(|c| &c.file), None);
    press(&mut model, "]");
    assert_eq!(model.message.as_ref().unwrap().words, "this is the last cast");
    press(&mut model, "[[[");
    assert_eq!(session(&model).looked_at().unwrap().file, files[last - 3]);
    assert_eq!(model.message, None);
    press(&mut model, &"[".repeat(files.len()));
    assert_eq!(session(&model).looked_at().unwrap().file, files[0]);
    assert_eq!(model.message.as_ref().unwrap().words, "this is the first cast");
    // what is worked with stays; looking at it again is no looking at another
    assert_eq!(session(&model).context().profile.file, files[last]);
    press(&mut model, &"]".repeat(last));
    assert!(session(&model).looked_at().is_none());
    press(&mut model, "[");
    pressed(&mut model, KeyCode::Esc);
    assert!(session(&model).looked_at().is_none());
}

#[test]
fn scenario_casts_are_laid_over_and_taken_off() {
    let mut model = opened();
    let files = files(&model);
    press(&mut model, "[l[l");
    let last = files.len() - 1;
    assert_eq!(session(&model).pool.over, [files[last - 1].clone(), files[last - 2].clone()]);
    press(&mut model, "]l");
    assert_eq!(session(&model).pool.over, [files[last - 2].clone()]);
    press(&mut model, "l[[l[l[l[l");
    assert_eq!(session(&model).pool.over.len(), 6);
    press(&mut model, "[l");
    assert_eq!(session(&model).pool.over.len(), 6);
    assert!(model.message.as_ref().unwrap().wrong);
}

#[test]
fn scenario_working_with_a_cast_computes_everything_on_it_as_if_it_had_been_named() {
    let mut model = opened();
    let files = files(&model);
    let other = &files[files.len() - 2];
    let clock = "2026-07-20T12:00:00Z".parse().unwrap();
    let asked = Asked {
        site: Some("ashlar".into()),
        profile: other.rsplit('/').next().map(str::to_owned),
        ..Asked::default()
    };
    let named = tasks::open(&asked, clock).unwrap();
    let ranked = press(&mut model, "[w");
    let context = session(&model).context();
    assert_eq!((&context.profile.file, &context.fingerprint), (other, &named.fingerprint));
    assert_eq!((context.age_days, &context.profile.flags), (named.age_days, &named.profile.flags));
    let shown = &session(&model).shown.as_ref().unwrap().on.pool;
    assert_eq!(format!("{shown:?}"), format!("{:?}", tasks::pool(&named)));
    assert!(session(&model).looked_at().is_none() && session(&model).is_current());
    // the mixes and the ranking are asked for on the same cast
    let given = session(&model).draft().tries[0].clone();
    let mix = tasks::mix_given(&named, &model::asked(named.site(), &given));
    let tried = session(&model).tried().unwrap();
    assert_eq!(format!("{:?}", tried.mix), format!("{:?}", mix.unwrap().mix));
    let [Work::Rank { changed, .. }] = &ranked[..] else { panic!("{ranked:?}") };
    assert_eq!(changed.cast.as_ref(), Some(other));
    // taken back, made again, and the newest chosen
    let newest = &files[files.len() - 1];
    press(&mut model, "u");
    assert_eq!(&session(&model).context().profile.file, newest);
    press(&mut model, "r");
    assert_eq!(&session(&model).context().profile.file, other);
    press(&mut model, "]w");
    assert_eq!(&session(&model).context().profile.file, newest);
    assert_eq!(session(&model).draft().changed.cast, None);
    press(&mut model, "w");
    assert!(model.message.as_ref().unwrap().words.contains("already"));
}

#[test]
fn law_the_cursor_moves_by_a_row_within_the_water() {
    let mut model = opened();
    let column = session(&model).context().profile.column.clone();
    for (start, step, sign) in [(KeyCode::End, KeyCode::Up, 1.0), (KeyCode::Home, KeyCode::Down, -1.0)] {
        pressed(&mut model, start);
        let mut before = session(&model).pool.cursor_m.unwrap();
        let ends = [column.bed_m(), column.surface_m()];
        assert!(ends.contains(&before));
        for row in 0..20 {
            pressed(&mut model, step);
            let now = session(&model).pool.cursor_m.unwrap();
            let moved = (now - before) * sign;
            // the first step leaves the very edge for the middle of the row beside it
            assert!(moved > 0.0 && moved < (ends[1] - ends[0]) / 10.0, "row {row}: {before} to {now}");
            assert!((ends[0]..=ends[1]).contains(&now));
            before = now;
        }
    }
    pressed(&mut model, KeyCode::Esc);
    assert_eq!(session(&model).pool.cursor_m, None);
}

#[test]
fn scenario_a_threshold_is_typed_and_taken_off_and_the_words_scroll_to_their_end() {
    let mut model = opened();
    press(&mut model, "c45");
    pressed(&mut model, KeyCode::Enter);
    let typed = session(&model).pool.colder_c.unwrap();
    assert!((typed - 65.0 / 9.0).abs() < 1e-9, "{typed}");
    press(&mut model, "c");
    for _ in 0..8 {
        pressed(&mut model, KeyCode::Backspace);
    }
    pressed(&mut model, KeyCode::Enter);
    assert_eq!(session(&model).pool.colder_c, None);
    model.size = (80, 24);
    let mut seen = vec![session(&model).pool.scroll];
    for _ in 0..12 {
        pressed(&mut model, KeyCode::PageDown);
        seen.push(session(&model).pool.scroll);
    }
    assert!(seen.is_sorted() && seen[1] > 0 && seen[11] == seen[12], "{seen:?}");
    pressed(&mut model, KeyCode::PageUp);
    assert!(session(&model).pool.scroll < seen[12]);
}
