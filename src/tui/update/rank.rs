//! The rank screen: choosing a mix, taking it.

use super::super::keys::Action;
use super::super::model::{Field, Model, Over, Screen, Typed, taken};
use super::{Effect, change, say};

/// Does what a key asks for.
pub(super) fn act(model: &mut Model, action: Action) -> Vec<Effect> {
    match action {
        Action::Enter => return take(model),
        Action::Drill => model.over = Some(Over::Drill(0)),
        Action::Order => model.over = Some(Over::Order(0)),
        Action::Release => model.over = Some(Over::Field(Field::new(Typed::Release, String::new()))),
        _ => {}
    }
    let Some(session) = model.session_mut() else { return Vec::new() };
    let count = session.ranked.as_ref().map_or(0, |r| r.answer.mixes.len());
    let at = &mut session.rank.at;
    match action {
        Action::Up => *at = at.saturating_sub(1),
        Action::Down => *at = (*at + 1).min(count.saturating_sub(1)),
        _ => {}
    }
    Vec::new()
}

/// Takes the mix chosen to the mix screen, as a try of its own.
fn take(model: &mut Model) -> Vec<Effect> {
    let Some(session) = model.session() else { return Vec::new() };
    let Some(ranked) = &session.ranked else { return Vec::new() };
    let Some(mix) = ranked.answer.mixes.get(session.rank.at) else { return Vec::new() };
    let given = taken(ranked.context.site(), mix);
    let number = session.rank.at + 1;
    let effects = change(model, |_, draft| {
        if let Some(tried) = draft.tried_mut() {
            *tried = given;
        }
    });
    if let Some(session) = model.session_mut() {
        session.screen = Screen::Mix;
    }
    say(model, format!("no. {number} of the ranking is tried; u takes it back"));
    effects
}
