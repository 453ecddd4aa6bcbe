//! The mouse does in its place what a key does.

use crossterm::event::{MouseButton, MouseEvent, MouseEventKind};

use super::super::keys::Action;
use super::super::model::{Model, Over, Screen, Stage};
use super::super::view::{Hit, hit};
use super::{Effect, act};

/// Does what the mouse asks for.
pub(super) fn moused(model: &mut Model, mouse: MouseEvent) -> Vec<Effect> {
    match mouse.kind {
        MouseEventKind::ScrollUp if !typing(model) => act(model, Action::Up),
        MouseEventKind::ScrollDown if !typing(model) => act(model, Action::Down),
        MouseEventKind::Down(MouseButton::Left) => pointed(model, mouse, true),
        MouseEventKind::Drag(MouseButton::Left) => pointed(model, mouse, false),
        _ => Vec::new(),
    }
}

fn typing(model: &Model) -> bool {
    matches!(model.over, Some(Over::Field(_) | Over::Form(_)))
}

fn pointed(model: &mut Model, mouse: MouseEvent, pressed: bool) -> Vec<Effect> {
    if model.over.is_some() {
        return Vec::new();
    }
    let Some(hit) = hit(model, mouse.column, mouse.row) else { return Vec::new() };
    match hit {
        Hit::Screen(number) if pressed => return act(model, Action::Screen(number)),
        Hit::Site(line) if pressed => {
            if let Stage::Sites { at, .. } = &mut model.stage {
                // a second press on the line chosen opens it
                if *at == line {
                    return act(model, Action::Enter);
                }
                *at = line;
            }
        }
        Hit::Elevation(elevation_m) => {
            if let Some(session) = model.session_mut() {
                session.pool.cursor_m = Some(elevation_m);
            }
        }
        Hit::Cell(cell) if pressed => {
            if let Some(session) = model.session_mut() {
                let again = session.mix.cell == cell;
                session.mix.cell = cell;
                if again {
                    return act(model, Action::Enter);
                }
            }
        }
        Hit::Mix(at) if pressed => {
            if let Some(session) = model.session_mut() {
                super::rank::choose_mix(session, at);
            }
        }
        Hit::Day(day) if model.session().is_some_and(|s| s.screen == Screen::Log) => {
            super::log::pressed(model, day);
        }
        Hit::Day(day) => super::season::pressed(model, day),
        Hit::Rule(at) if pressed => return super::river::pressed(model, at),
        Hit::Screen(_) | Hit::Site(_) | Hit::Cell(_) | Hit::Mix(_) | Hit::Rule(_) => {}
    }
    Vec::new()
}
