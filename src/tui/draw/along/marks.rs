//! What is asked at each point, the release that would give it, and the letters of the releases.
//!
//! Figures of the layout are choices.

use crate::tui::draw::pen::Pen;
use crate::tui::{Look, Role, Symbols};

use super::axes::{Frame, OVER, SIDE};
use super::{AlongPicture, Ends};

/// Ranges at the points and windows at the dam.
pub(super) fn asked(picture: &AlongPicture, frame: &Frame, pen: &mut Pen, look: Look) {
    let ascii = look.symbols == Symbols::Ascii;
    let bar = if ascii { "[" } else { "┃" };
    bracket(picture, frame, pen, (SIDE, "d", Role::Range), picture.dam, bar);
    for (i, point) in picture.points.iter().enumerate() {
        let number = (i + 1).to_string();
        let role = if picture.chosen == Some(i) { Role::Chosen } else { Role::Range };
        let col = frame.col(point.at_m).min(SIDE + frame.cols - 1);
        bracket(picture, frame, pen, (col, &number, role), point.range, bar);
        if let Some(window) = point.window {
            // windows of later points stand to the right of those of earlier ones
            bracket(
                picture,
                frame,
                pen,
                (SIDE + 2 * (i + 1), &number, role),
                window,
                if ascii { "(" } else { "┋" },
            );
        }
    }
}

/// A bar over what lies between two ends, its number over it; nothing where there is no end at all.
fn bracket(
    picture: &AlongPicture,
    frame: &Frame,
    pen: &mut Pen,
    (col, number, role): (usize, &str, Role),
    (low, high): Ends,
    bar: &str,
) {
    if low.is_none() && high.is_none() {
        return;
    }
    let (low, high) = (low.map(|v| picture.shown(v)), high.map(|v| picture.shown(v)));
    let beyond = |v: f64| v > frame.y.high() || v < frame.y.low();
    let last = OVER + frame.rows - 1;
    let top = high.map_or(OVER, |v| frame.row(v));
    let foot = low.map_or(last, |v| frame.row(v));
    (top..=foot).for_each(|row| pen.put(col, row, bar, Role::Range));
    // an end inside the picture is closed, one beyond it stays open
    for (end, row) in [(high, top), (low, foot)] {
        if end.is_some_and(|v| !beyond(v)) {
            pen.put(col, row, "+", Role::Range);
        }
    }
    pen.put(col, top.saturating_sub(usize::from(top > OVER)), number, role);
}

/// The letter of each release where its line ends, and its band at the points.
pub(super) fn ways(picture: &AlongPicture, frame: &Frame, pen: &mut Pen, look: Look) {
    let bar = if look.symbols == Symbols::Ascii { "I" } else { "│" };
    for way in &picture.ways {
        for (at_m, [low, high]) in &way.bands {
            let col = frame.col(*at_m).saturating_sub(1).max(SIDE);
            let (top, foot) = (frame.row(picture.shown(*high)), frame.row(picture.shown(*low)));
            (top..=foot).for_each(|row| pen.put(col, row, bar, way.role));
        }
    }
    // lines that end on one row stand side by side
    let mut rows: Vec<(usize, usize)> = Vec::new();
    for way in picture.ways.iter().rev() {
        let Some((at_m, value)) = way.places.last() else { continue };
        let row = frame.row(picture.shown(*value));
        let beside = rows.iter().filter(|r| r.0 == row).count();
        let col = frame.col(*at_m).saturating_sub(beside).max(SIDE);
        pen.put(col, row, &way.letter.to_string(), way.role);
        rows.push((row, col));
    }
}
