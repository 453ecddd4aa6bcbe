//! Lists: help, settings, criteria, gates of the drill, sites, problems.

use crate::rank::Criterion;
use crate::units::System;

use super::super::keys::Action;
use super::super::look::{Symbols, Theme};
use super::super::model::{Choice, Field, Likes, Model, Over, Stage, Typed};
use super::{Effect, change, open, say};

/// Lines of a page (choice).
const PAGE: usize = 10;
/// Lines of the settings.
const SETTINGS: [&str; 4] = ["units", "symbols", "colours", "mouse"];

/// Asks for the list of sites.
pub(super) fn sites(model: &mut Model) -> Vec<Effect> {
    model.over = None;
    vec![Effect::List(model.folder.clone())]
}

/// Shows the list of sites.
pub(super) fn listed(model: &mut Model, list: Vec<Choice>) -> Vec<Effect> {
    let stage = std::mem::replace(&mut model.stage, Stage::Opening { kept: None });
    let kept = match stage {
        Stage::Site(session) => Some(session),
        Stage::Broken { kept, .. } | Stage::Opening { kept } | Stage::Sites { kept, .. } => kept,
    };
    // no answer that is still to come may take the list away
    (model.quick, model.long, model.aside) = (None, None, None);
    model.stage = Stage::Sites { list, at: 0, kept };
    Vec::new()
}

/// Asks for a new site in a folder.
pub(super) fn new_site(model: &mut Model, folder: &str) -> Vec<Effect> {
    let system = model.likes.units.or(model.asked.units).unwrap_or_default();
    vec![Effect::NewSite(folder.to_owned(), system)]
}

/// Does what a key asks for in the list that is open.
pub(super) fn act(model: &mut Model, action: Action) -> Vec<Effect> {
    if model.over.is_some() {
        return over(model, action);
    }
    match &mut model.stage {
        Stage::Sites { list, at, .. } => match action {
            Action::Enter => {
                let named = list.get(*at).map(|c| c.named.clone());
                named.map_or_else(Vec::new, |named| open(model, named))
            }
            Action::NewSite => {
                model.over = Some(Over::Field(Field::new(Typed::NewSite, String::new())));
                Vec::new()
            }
            other => {
                *at = moved(*at, other, list.len());
                Vec::new()
            }
        },
        Stage::Broken { problems, scroll, .. } => {
            *scroll = moved(*scroll, action, problems.len());
            Vec::new()
        }
        Stage::Opening { .. } | Stage::Site(_) => Vec::new(),
    }
}

/// The line after a key, of so many.
fn moved(at: usize, action: Action, count: usize) -> usize {
    let to = match action {
        Action::Up => at.saturating_sub(1),
        Action::Down => at + 1,
        Action::PageUp => at.saturating_sub(PAGE),
        Action::PageDown => at + PAGE,
        Action::First => 0,
        Action::Last => count,
        _ => at,
    };
    to.min(count.saturating_sub(1))
}

fn over(model: &mut Model, action: Action) -> Vec<Effect> {
    let Some(over) = model.over.clone() else { return Vec::new() };
    match (over, action) {
        (
            Over::Help(_) | Over::Settings(_) | Over::Order(_) | Over::Drill(_),
            Action::Back | Action::Enter,
        ) => {
            model.over = None;
        }
        (Over::Help(at), _) => {
            let lines = super::super::view::help_lines(model.size.1);
            model.over = Some(Over::Help(moved(at, action, lines)));
        }
        (Over::Settings(at), Action::Toggle | Action::More) => {
            turn(&mut model.likes, at, true);
            return settled(model);
        }
        (Over::Settings(at), Action::Less) => {
            turn(&mut model.likes, at, false);
            return settled(model);
        }
        (Over::Settings(at), _) => model.over = Some(Over::Settings(moved(at, action, SETTINGS.len()))),
        (Over::Order(at), Action::More | Action::Less) => {
            let to = if action == Action::More { at.checked_sub(1) } else { Some(at + 1) };
            let Some(to) = to.filter(|to| *to < Criterion::NAMES.len()) else { return Vec::new() };
            model.over = Some(Over::Order(to));
            return change(model, |_, draft| draft.order.swap(at, to));
        }
        (Over::Order(at), _) => model.over = Some(Over::Order(moved(at, action, Criterion::NAMES.len()))),
        (Over::Drill(at), Action::Toggle) => {
            return change(model, |session, draft| {
                if at >= session.base.site().outlets.len() {
                    return;
                }
                if draft.without.contains(&at) {
                    draft.without.retain(|o| *o != at);
                } else {
                    draft.without.push(at);
                    draft.without.sort_unstable();
                }
            });
        }
        (Over::Drill(at), _) => {
            let count = model.session().map_or(0, |s| s.base.site().outlets.len());
            model.over = Some(Over::Drill(moved(at, action, count)));
        }
        (Over::Field(_) | Over::Form(_), _) => {}
    }
    Vec::new()
}

/// The next of some choices, or the one before.
fn next<T: PartialEq + Copy>(choices: &[T], now: T, on: bool) -> T {
    let at = choices.iter().position(|c| *c == now).unwrap_or(0);
    let count = choices.len().max(1);
    choices.get((if on { at + 1 } else { at + count - 1 }) % count).copied().unwrap_or(now)
}

fn turn(likes: &mut Likes, line: usize, on: bool) {
    match line {
        0 => likes.units = next(&[None, Some(System::Us), Some(System::Si)], likes.units, on),
        1 => likes.look.symbols = next(&Symbols::NAMES.map(|n| n.1), likes.look.symbols, on),
        2 => likes.look.theme = next(&Theme::NAMES.map(|n| n.1), likes.look.theme, on),
        _ => likes.no_mouse = !likes.no_mouse,
    }
}

fn settled(model: &mut Model) -> Vec<Effect> {
    model.look = model.likes.look.settled(model.terminal);
    say(model, "kept for the next time");
    vec![Effect::Keep(model.likes)]
}
