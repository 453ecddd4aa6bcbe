//! Strips below the curves: moves, days outside, and a row for every gate.
//!
//! Figures of the layout are choices.

use crate::tui::draw::pen::{Pen, cut};
use crate::tui::{Look, Role, Symbols};

use super::axes::Frame;
use super::water::turns;
use super::{GateDay, SeasonPicture};

pub(super) fn draw(picture: &SeasonPicture, frame: &Frame, pen: &mut Pen, look: Look) {
    let ascii = look.symbols == Symbols::Ascii;
    let end = frame.time.side - 1;
    pen.put(0, frame.moves, "moves", Role::Strong);
    for col in 0..frame.time.cols {
        let here = |day: &usize| frame.time.col_of(*day) == col;
        let moved: usize = picture.moves.iter().filter(|m| here(&m.0)).map(|m| m.1).sum();
        let forced = picture.moves.iter().any(|m| here(&m.0) && m.2);
        let text = match moved {
            _ if forced => "!".to_owned(),
            0 => continue,
            1..=9 => moved.to_string(),
            _ => "+".to_owned(),
        };
        pen.put(frame.time.side + col, frame.moves, &text, if forced { Role::Outside } else { Role::Plain });
    }
    let (top, rows) = frame.outside;
    for (row, (name, days)) in (top..top + rows).zip(&picture.outside) {
        pen.put(0, row, &cut(name, end), Role::Strong);
        for day in days {
            pen.put(frame.time.side + frame.time.col_of(*day), row, "!", Role::Outside);
        }
    }
    let (top, rows) = frame.gates;
    for (row, gate) in (top..top + rows).zip(&picture.gates) {
        pen.put(0, row, &cut(&gate.name, end), Role::Plain);
        for col in 0..frame.time.cols {
            let (glyph, role) = match (gate.days.get(frame.time.day_of(col)), ascii) {
                (Some(GateDay::Open(_)), true) => ("#", Role::Zone),
                (Some(GateDay::Open(_)), false) => ("█", Role::Zone),
                (Some(GateDay::Shut), true) => ("-", Role::Quiet),
                (Some(GateDay::Shut), false) => ("─", Role::Quiet),
                (Some(GateDay::Lost) | None, _) => continue,
            };
            pen.put(frame.time.side + col, row, glyph, role);
        }
        for (day, lost) in turns(&gate.days) {
            let glyph = if lost { "x" } else { "+" };
            pen.put(frame.time.side + frame.time.col_of(day), row, glyph, Role::Outside);
        }
    }
}
