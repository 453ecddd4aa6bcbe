//! The rank screen.

use ratatui::buffer::Buffer;
use ratatui::layout::{Position, Rect};

use super::super::look::Role;
use super::super::model::{Model, Session};
use super::Hit;
use super::write::put;

/// Draws the rank screen.
pub(super) fn draw(model: &Model, session: &Session, area: Rect, buf: &mut Buffer) {
    let words = if session.shown.is_some() { "" } else { "computing ..." };
    put(buf, area, 0, 0, words, model.look.style(Role::Quiet));
}

/// What lies under a place.
pub(super) fn hit(_model: &Model, _session: &Session, _area: Rect, _at: Position) -> Option<Hit> {
    None
}
