//! The pool screen: reading the water, stepping through the casts, laying them over one another, working with one.

use crate::units::{Dimension, figure};

use super::super::keys::Action;
use super::super::model::{Field, Model, Over, Session, Typed};
use super::super::view::{cast_named, pool_scrolled, pool_stepped_m};
use super::{Effect, change, complain, mix, say};

/// Casts laid over at most: more cannot be told apart (choice).
const LAID_OVER: usize = 6;

/// Does what a key asks for.
pub(super) fn act(model: &mut Model, action: Action) -> Vec<Effect> {
    match action {
        Action::Up | Action::Down => {
            let next = pool_stepped_m(model, if action == Action::Up { -1 } else { 1 });
            read(model, |_| next);
        }
        Action::First => {
            read(model, |s| s.pool_shown().map(|(context, _)| context.profile.column.surface_m()));
        }
        Action::Last => {
            read(model, |s| s.pool_shown().map(|(context, _)| context.profile.column.bed_m()));
        }
        Action::PageUp | Action::PageDown => {
            let scroll = pool_scrolled(model, if action == Action::PageUp { -1 } else { 1 });
            if let Some(session) = model.session_mut() {
                session.pool.scroll = scroll;
            }
        }
        Action::Before => stepped(model, -1),
        Action::After => stepped(model, 1),
        Action::Overlay => laid(model),
        Action::UseCast => return used(model),
        Action::Undo | Action::Redo => return taken_back(model, action),
        Action::Colder => {
            let unit = model.system().unit(Dimension::Temperature);
            let now = model.session().and_then(|s| s.pool.colder_c);
            let text = now.map_or_else(String::new, |c| figure(c, unit, 1));
            model.over = Some(Over::Field(Field::new(Typed::Colder, text)));
        }
        _ => {}
    }
    Vec::new()
}

/// Takes the last change back or makes it again, and says so where this screen does not show it.
fn taken_back(model: &mut Model, action: Action) -> Vec<Effect> {
    let cast = |model: &Model| model.session().map(|s| s.draft().changed.cast.clone());
    let before = cast(model);
    let effects = mix::act(model, action);
    if model.message.is_none() {
        let what = if cast(model) == before {
            "the last change, of another screen,"
        } else {
            "the choice of the cast"
        };
        let (done, other) = match action {
            Action::Undo => ("taken back", "r makes it again"),
            _ => ("made again", "u takes it back"),
        };
        say(model, format!("{what} is {done}; {other}"));
    }
    effects
}

/// Reads the water at an elevation; where there is no picture, nothing.
fn read(model: &mut Model, at: impl FnOnce(&Session) -> Option<f64>) {
    if let Some(session) = model.session_mut() {
        session.pool.cursor_m = at(session).or(session.pool.cursor_m);
    }
}

/// Looks at the cast so many after the one shown.
fn stepped(model: &mut Model, by: isize) {
    let Some(session) = model.session() else { return };
    let Some(casts) = &session.casts else {
        let why = if session.casts_wrong.is_some() {
            "the casts could not be read"
        } else {
            "the casts are being read"
        };
        complain(model, why);
        return;
    };
    let used = &session.context().profile.file;
    let shown = session.looked_at().map_or(used, |c| &c.file);
    // a cast from elsewhere stands after the last
    let at = casts.iter().position(|c| c.file == *shown).unwrap_or(casts.len());
    let next = at.checked_add_signed(by).and_then(|next| casts.get(next)).map(|c| c.file.clone());
    let Some(next) = next else {
        say(model, if by < 0 { "this is the first cast" } else { "this is the last cast" });
        return;
    };
    let next = Some(next).filter(|file| file != used);
    model.message = None;
    if let Some(session) = model.session_mut() {
        session.pool.cast = next;
        session.pool.scroll = 0;
    }
}

/// Lays the cast shown over the others, or takes it off.
fn laid(model: &mut Model) {
    let Some(session) = model.session_mut() else { return };
    let Some((context, _)) = session.pool_shown() else {
        complain(model, "this cast cannot be read, so it cannot be drawn");
        return;
    };
    let file = context.profile.file.clone();
    let Some(name) = session.cast(&file).map(|cast| cast_named(session, cast)) else {
        complain(model, "the casts are not read yet");
        return;
    };
    let over = &mut session.pool.over;
    if let Some(at) = over.iter().position(|f| *f == file) {
        over.remove(at);
        say(model, format!("{name} is no longer laid over"));
    } else if over.len() >= LAID_OVER {
        complain(model, format!("{LAID_OVER} casts are laid over; l on one of them takes it off"));
    } else {
        over.push(file);
        say(model, format!("{name} is laid over: [ ] step on to see it, l takes it off"));
    }
}

/// Works with the cast looked at, under its own pool.
fn used(model: &mut Model) -> Vec<Effect> {
    let Some(session) = model.session() else { return Vec::new() };
    let Some(cast) = session.looked_at() else {
        say(model, "this cast is worked with already; [ ] step to another");
        return Vec::new();
    };
    if cast.pool.is_none() {
        complain(model, "this cast cannot be read, so nothing can be computed on it");
        return Vec::new();
    }
    let name = cast_named(session, cast);
    let file = Some(cast.file.clone()).filter(|file| *file != session.base.profile.file);
    let effects = change(model, |_, draft| {
        draft.changed.cast = file;
        draft.changed.pool_m = None;
    });
    if let Some(session) = model.session_mut() {
        session.pool.cast = None;
        session.pool.scroll = 0;
    }
    say(model, format!("pool, mix and rank stand on the cast of {name}; u takes it back"));
    effects
}
