//! Typing: checked at every key.

use crossterm::event::{Event as TermEvent, KeyCode, KeyEvent, KeyEventKind, KeyModifiers};
use tui_input::backend::crossterm::EventHandler as _;

use super::super::keys::{Action, Place, action};
use super::super::model::{Field, Model, NoteLine, Over, Typed, Value};
use super::{Effect, change, mix, say};

/// Longest text of a field: more is no figure and no folder (choice).
const LONGEST: usize = 200;
/// The same of words to be logged or written in a note (choice: a paragraph).
const LONGEST_WORDS: usize = 1500;

/// A key while typing.
pub(super) fn key(model: &mut Model, key: &KeyEvent) -> Vec<Effect> {
    match action(key, &[Place::Field]) {
        Some(Action::Enter) => entered(model),
        Some(_) => {
            model.over = None;
            Vec::new()
        }
        None => {
            type_key(model, key);
            Vec::new()
        }
    }
}

/// Types a key into what is being typed.
pub(super) fn type_key(model: &mut Model, key: &KeyEvent) {
    if key.kind == KeyEventKind::Release {
        return;
    }
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
    let field = match &mut model.over {
        Some(Over::Field(field)) => Some(field),
        Some(Over::Form(form)) => {
            form.wrong = None;
            form.fields.get_mut(form.at)
        }
        _ => None,
    };
    if let Some(field) = field {
        let before = field.input.clone();
        edit(field);
        let words = matches!(field.typed, Typed::Line(_) | Typed::Note(NoteLine::Why | NoteLine::Remarks));
        if field.input.value().chars().count() > if words { LONGEST_WORDS } else { LONGEST } {
            field.input = before;
        }
        // another name is not the one that is there
        if field.typed == Typed::Note(NoteLine::FileThere) {
            field.typed = Typed::Note(NoteLine::File);
        }
        field.check(context.as_deref(), system);
    }
}

fn entered(model: &mut Model) -> Vec<Effect> {
    let system = model.system();
    let context = model.session().map(|s| s.context().clone());
    let Some(Over::Field(field)) = &mut model.over else { return Vec::new() };
    // what was not touched stays as it is, to the last digit
    let is_file = matches!(field.typed, Typed::Note(NoteLine::File | NoteLine::FileThere));
    if field.untouched && !is_file && !field.input.value().is_empty() {
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
        (Typed::Note(line), Value::Words(words)) => super::note::entered(model, line, words),
        (Typed::NewSite, Value::Words(folder)) => super::list::new_site(model, &folder),
        _ => {
            say(model, "nothing was set");
            Vec::new()
        }
    }
}
