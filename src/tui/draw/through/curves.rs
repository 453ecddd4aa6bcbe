//! Curves over time, with a shaded range behind them.
//!
//! Figures of the layout are choices.

use unicode_width::UnicodeWidthStr;

use crate::plot::{Dots, Grain, Scale, Stroke};
use crate::tui::draw::pen::{Pen, cut};
use crate::tui::{Look, Role, Symbols};
use crate::units::{System, Unit};

use super::CurvesThrough;
use super::values::{counted, middle, row, scale, steps};
use super::{Rows, Time};

/// Curves over one time, and where they lie.
pub(in crate::tui::draw) struct Curves<'a> {
    of: &'a CurvesThrough,
    rows: Rows,
    time: Time,
    /// Whether they have a title in the row over them.
    titled: bool,
    look: Look,
    /// The values, in the unit and the count shown.
    y: Scale,
    unit: Unit,
    times: f64,
    counted: String,
}

impl<'a> Curves<'a> {
    /// `None` where the values have no scale.
    pub(in crate::tui::draw) fn of(
        system: System,
        curves: &'a CurvesThrough,
        rows: Rows,
        (time, titled): (Time, bool),
        look: Look,
    ) -> Option<Self> {
        let unit = system.unit(curves.dimension);
        let (times, counted) = counted(curves.dimension, system, curves.span.1);
        let shown = |value: f64| unit.from_si(value) / times;
        let y = scale(shown(curves.span.0), shown(curves.span.1))?;
        Some(Self { of: curves, rows, time, titled, look, y, unit, times, counted })
    }

    fn shown(&self, si: f64) -> f64 {
        self.unit.from_si(si) / self.times
    }

    /// The curves with their axis. Where they meet in a cell their dots merge, in the colour of the last.
    pub(in crate::tui::draw) fn draw(&self, pen: &mut Pen) {
        let ((top, rows), grain) = (self.rows, self.look.symbols.grain());
        let mut dots = Dots::new(grain, self.time.cols, rows);
        if let Some(x) = Scale::new(0.0, self.time.days as f64) {
            for (i, line) in self.of.lines.iter().enumerate() {
                let point =
                    |(i, v): (usize, &Option<f64>)| (i as f64 + 0.5, v.map_or(f64::NAN, |v| self.shown(v)));
                let points: Vec<(f64, f64)> = line.values.iter().enumerate().map(point).collect();
                dots.curve(i, line.stroke, &points, &x, &self.y);
            }
        }
        let cells = (0..rows).flat_map(|row| (0..self.time.cols).map(move |col| (col, row)));
        for (col, row) in cells {
            let Some(spot) = dots.spot(col, row) else { continue };
            let Some(line) = self.of.lines.get(spot.curve) else { continue };
            let glyph = spot.glyph.to_string();
            let mark = if grain == Grain::Ascii { line.mark } else { &glyph };
            pen.put(self.time.side + col, top + row, mark, line.role);
        }
        self.side(pen);
        if self.titled {
            self.title(pen);
        }
    }

    /// The range behind the curves: its sign in the cells they leave, its colour in all of them. A cell is in it where
    /// its middle is; of a range too narrow for that the cell of its middle.
    pub(in crate::tui::draw) fn shade(&self, pen: &mut Pen) {
        let (top, rows) = self.rows;
        for col in 0..self.time.cols {
            let of = self.of.shaded.1.get(self.time.day_of(col)).copied().flatten();
            let Some([low, high]) = of.map(|range| range.map(|v| self.shown(v))) else { continue };
            let held = |row: &usize| (low..=high).contains(&middle(&self.y, *row, rows));
            let mut held: Vec<usize> = (0..rows).filter(held).collect();
            if held.is_empty() {
                held.push(row(&self.y, 0.5 * (low + high), rows));
            }
            for row in held {
                let (col, row) = (self.time.side + col, top + row);
                pen.fill(col, row, shade(self.look), Role::Reach);
                pen.behind(col, row, Role::Reach);
            }
        }
    }

    /// The axis with its numbers; without titles the name stands over them.
    fn side(&self, pen: &mut Pen) {
        let ascii = self.look.symbols == Symbols::Ascii;
        let (line, tick) = if ascii { ("|", "+") } else { ("│", "┤") };
        let ((top, rows), end) = (self.rows, self.time.side - 1);
        (top..top + rows).for_each(|row| pen.put(end, row, line, Role::Quiet));
        let marks = self.y.marks(steps(rows));
        let decimals = usize::from(marks.decimals);
        let wide = marks.values.iter().map(|v| format!("{v:.decimals$}").len() + 1).max().unwrap_or(0);
        let mut numbered = Vec::new();
        for value in marks.values {
            let row = top + row(&self.y, value, rows);
            pen.put_before(end, row, &format!("{value:.decimals$} "), Role::Quiet);
            pen.put(end, row, tick, Role::Quiet);
            numbered.push(row);
        }
        if !self.titled {
            let room = end.saturating_sub(wide + 1);
            pen.put(0, top, &cut(&self.of.name, room), Role::Strong);
            // the unit where no number needs the room
            if let Some(free) = (top + 1..top + rows).find(|row| !numbered.contains(row)) {
                pen.put(0, free, &cut(&self.counted, end), Role::Quiet);
            }
        }
    }

    /// The name, and what each mark means.
    fn title(&self, pen: &mut Pen) {
        let (row, curves) = (self.rows.0 - 1, self.of);
        let text = format!("{}, {}", curves.name, self.counted);
        pen.put(0, row, &text, Role::Strong);
        let lines = curves.lines.iter().rev().filter(|line| !line.name.is_empty());
        let mut entries: Vec<(&str, &str, Role)> =
            lines.map(|of| (sign(of.stroke, of.mark, self.look), of.name.as_str(), of.role)).collect();
        if curves.shaded.1.iter().any(Option::is_some) {
            entries.push((shade(self.look), &curves.shaded.0, Role::Reach));
        }
        self.time.entries(text.width() + 3, row, &entries, pen);
    }
}

/// What a curve looks like; its plain character where there are no others.
pub fn sign(stroke: Stroke, mark: &'static str, look: Look) -> &'static str {
    match (look.symbols, stroke) {
        (Symbols::Ascii, _) => mark,
        (_, Stroke::Heavy | Stroke::Broad) => "━",
        (_, Stroke::Dotted) => "┄",
        (_, Stroke::Thin) => "─",
    }
}

/// What the range behind curves looks like.
pub fn shade(look: Look) -> &'static str {
    if look.symbols == Symbols::Ascii { ":" } else { "░" }
}
