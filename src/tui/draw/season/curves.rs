//! Curves over time, with a shaded range behind them.
//!
//! Figures of the layout are choices.

use crate::plot::{Dots, Grain, Scale, Stroke};
use crate::tui::draw::pen::{Pen, cut};
use crate::tui::{Look, Role, Symbols};

use super::axes::{Frame, Rows, counted, scale, steps};
use super::{CurvesThrough, LineThrough, SeasonPicture};

pub(super) fn draw(
    picture: &SeasonPicture,
    curves: &CurvesThrough,
    (top, rows): Rows,
    frame: &Frame,
    pen: &mut Pen,
    look: Look,
) {
    let unit = picture.system.unit(curves.dimension);
    let (times, counted) = counted(curves.dimension, picture.system, curves.span.1);
    let shown = |value: f64| unit.from_si(value) / times;
    let Some(y) = scale(shown(curves.span.0), shown(curves.span.1)) else { return };
    let row_of = |value: f64| top + rows - 1 - y.cell(shown(value), rows).unwrap_or(0);
    let ascii = look.symbols == Symbols::Ascii;
    if let Some(x) = Scale::new(0.0, picture.days as f64) {
        for line in &curves.lines {
            let mut dots = Dots::new(look.symbols.grain(), frame.cols, rows);
            let point = |(i, v): (usize, &Option<f64>)| (i as f64 + 0.5, v.map_or(f64::NAN, shown));
            let points: Vec<(f64, f64)> = line.values.iter().enumerate().map(point).collect();
            dots.curve(0, line.stroke, &points, &x, &y);
            let cells = (0..rows).flat_map(|row| (0..frame.cols).map(move |col| (col, row)));
            for (col, row) in cells {
                let Some(spot) = dots.spot(col, row) else { continue };
                let glyph = spot.glyph.to_string();
                let plain = look.symbols.grain() == Grain::Ascii;
                pen.put(frame.side + col, top + row, if plain { line.mark } else { &glyph }, line.role);
            }
        }
    }
    // behind the curves: a cell holds one or the other
    for col in 0..frame.cols {
        let Some([low, high]) = curves.shaded.1.get(frame.day_of(col)).copied().flatten() else { continue };
        for row in row_of(high)..=row_of(low) {
            pen.fill(frame.side + col, row, if ascii { ":" } else { "░" }, Role::Quiet);
        }
    }
    side(curves, &counted, (top, rows), frame, pen, (&y, ascii));
    if frame.titles {
        title(curves, &counted, top - 1, frame, pen, ascii);
    }
}

/// The axis with its numbers; without titles the name stands over them.
fn side(
    curves: &CurvesThrough,
    counted: &str,
    (top, rows): Rows,
    frame: &Frame,
    pen: &mut Pen,
    (y, ascii): (&Scale, bool),
) {
    let (line, tick) = if ascii { ("|", "+") } else { ("│", "┤") };
    let end = frame.side - 1;
    (top..top + rows).for_each(|row| pen.put(end, row, line, Role::Quiet));
    let marks = y.marks(steps(rows));
    let decimals = usize::from(marks.decimals);
    let wide = marks.values.iter().map(|v| format!("{v:.decimals$}").len() + 1).max().unwrap_or(0);
    let mut numbered = Vec::new();
    for value in marks.values {
        let row = top + rows - 1 - y.cell(value, rows).unwrap_or(0);
        pen.put_before(end, row, &format!("{value:.decimals$} "), Role::Quiet);
        pen.put(end, row, tick, Role::Quiet);
        numbered.push(row);
    }
    if !frame.titles {
        let room = end.saturating_sub(wide + 1);
        pen.put(0, top, &cut(&curves.name, room), Role::Strong);
        // the unit where no number needs the room
        if let Some(free) = (top + 1..top + rows).find(|row| !numbered.contains(row)) {
            pen.put(0, free, &cut(counted, end), Role::Quiet);
        }
    }
}

/// The name, and what each mark means.
fn title(curves: &CurvesThrough, counted: &str, row: usize, frame: &Frame, pen: &mut Pen, ascii: bool) {
    let text = format!("{}, {counted}", curves.name);
    pen.put(0, row, &text, Role::Strong);
    let mut col = text.chars().count() + 3;
    let shade = if ascii { ":" } else { "░" };
    let mut entries: Vec<(&str, &str, Role)> =
        curves.lines.iter().rev().map(|l| (sign(l, ascii), l.name.as_str(), l.role)).collect();
    if curves.shaded.1.iter().any(Option::is_some) {
        entries.push((shade, &curves.shaded.0, Role::Quiet));
    }
    for (glyph, word, role) in entries.into_iter().filter(|e| !e.1.is_empty()) {
        let wide = word.chars().count() + 4;
        if col + wide > frame.side + frame.cols {
            return;
        }
        pen.put(col, row, glyph, role);
        pen.put(col + 2, row, word, Role::Quiet);
        col += wide;
    }
}

/// What a curve looks like.
fn sign(line: &LineThrough, ascii: bool) -> &'static str {
    match (ascii, line.stroke) {
        (true, _) => line.mark,
        (false, Stroke::Heavy) => "━",
        (false, Stroke::Dotted) => "┄",
        (false, Stroke::Thin) => "─",
    }
}
