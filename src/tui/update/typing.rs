//! Typing: checked at every key.

use crossterm::event::{Event as TermEvent, KeyCode, KeyEvent, KeyEventKind, KeyModifiers};
use tui_input::backend::crossterm::EventHandler as _;

use super::super::keys::{Action, Place, action};
use super::super::model::{Field, Model, Over, Typed, Value};
use super::{Effect, change, mix, say};

/// Longest text of a field: more is no figure and no folder (choice).
const LONGEST: usize = 200;

/// A key while typing.
pub(super) fn key(model: &mut Model, key: &KeyEvent) -> Vec<Effect> {
    match action(key, &[Place::Field]) {
        Some(Action::Enter) => entered(model),
        Some(_) => {
            model.over = None;
            Vec::new()
        }
        None => {
            if key.kind != KeyEventKind::Release {
                edited(model, |field| {
                    let held = key.modifiers.intersects(KeyModifiers::CONTROL | KeyModifiers::ALT);
                    let letter = matches!(key.code, KeyCode::Char(_)) && !held;
                    if letter && field.untouched {
                        field.input.reset();
                    }
                    field.untouched = false;
                    field.input.handle_event(&TermEvent::Key(*key));
                });
            }
            Vec::new()
        }
    }
}

/// Text pasted: into a field, else nowhere.
pub(super) fn pasted(model: &mut Model, text: &str) -> Vec<Effect> {
    let line: String = text.lines().next().unwrap_or("").chars().filter(|c| !c.is_control()).collect();
    edited(model, |field| {
        if field.untouched {
            field.input.reset();
        }
        field.untouched = false;
        for c in line.chars() {
            field.input.handle(tui_input::InputRequest::InsertChar(c));
        }
    });
    Vec::new()
}

fn edited(model: &mut Model, edit: impl FnOnce(&mut Field)) {
    let system = model.system();
    let context = model.session().map(|s| s.context().clone());
    if let Some(Over::Field(field)) = &mut model.over {
        let before = field.input.clone();
        edit(field);
        if field.input.value().chars().count() > LONGEST {
            field.input = before;
        }
        field.check(context.as_deref(), system);
    }
}

fn entered(model: &mut Model) -> Vec<Effect> {
    let system = model.system();
    let context = model.session().map(|s| s.context().clone());
    let Some(Over::Field(field)) = &mut model.over else { return Vec::new() };
    // what was not touched stays as it is, to the last digit
    if field.untouched && !field.input.value().is_empty() {
        model.over = None;
        return Vec::new();
    }
    let value = match field.value(context.as_deref(), system) {
        Ok(value) => value,
        Err(why) => {
            field.wrong = Some(why);
            return Vec::new();
        }
    };
    let typed = field.typed;
    model.over = None;
    match (typed, value) {
        (Typed::Cell(cell), value) => mix::put(model, cell, &value),
        (Typed::Colder, Value::Number(colder_c)) => {
            if let Some(session) = model.session_mut() {
                session.pool.colder_c = colder_c;
            }
            Vec::new()
        }
        (Typed::Release, Value::Number(flow)) => change(model, |_, draft| draft.release_m3s = flow),
        (Typed::NewSite, Value::Words(folder)) => super::list::new_site(model, &folder),
        _ => {
            say(model, "nothing was set");
            Vec::new()
        }
    }
}
