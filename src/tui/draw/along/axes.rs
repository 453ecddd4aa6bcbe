//! Frame of the picture: scales, axes, names below.
//!
//! Figures of the layout are choices.

use ratatui::layout::Rect;
use unicode_width::UnicodeWidthStr;

use crate::plot::{Scale, ticks};
use crate::tui::draw::pen::{Pen, cut, decimals};
use crate::tui::{Look, Role, Symbols};
use crate::units::Dimension;

use super::AlongPicture;

/// Columns left of the plot: numbers and the axis.
pub(super) const SIDE: usize = 6;
/// Rows over it: the title.
pub(super) const OVER: usize = 1;
/// Rows under it: the axis, distances, names.
pub(super) const UNDER: usize = 3;
/// Least columns and rows of a plot.
const LEAST: (usize, usize) = (16, 3);
/// Least span of the scale, units shown: noise must not fill the picture.
const LEAST_SPAN: f64 = 2.0;
/// Bounds this near the water, as a share of what it spans, are drawn in.
const NEAR: f64 = 0.6;
/// Cells a tick wants along and up.
const TICK_COLS: usize = 10;
const TICK_ROWS: usize = 2;
/// Rows that hold no more than every second a tick.
const FEW_ROWS: usize = 5;

/// Where the plot lies, and its scales: distance in m, the value in the unit shown.
pub(super) struct Frame {
    pub(super) cols: usize,
    pub(super) rows: usize,
    pub(super) x: Scale,
    pub(super) y: Scale,
    width: usize,
}

impl Frame {
    /// `None` where there is nothing to draw or no room for it.
    pub(super) fn of(picture: &AlongPicture, area: Rect) -> Option<Self> {
        let (width, height) = (usize::from(area.width), usize::from(area.height));
        let under = if picture.foot { UNDER } else { 1 };
        let (cols, rows) = (width.checked_sub(SIDE)?, height.checked_sub(OVER + under)?);
        if cols < LEAST.0 || rows < LEAST.1 {
            return None;
        }
        let values: Vec<f64> = picture.values().into_iter().map(|v| picture.shown(v)).collect();
        let low = values.iter().copied().reduce(f64::min)?;
        let high = values.iter().copied().reduce(f64::max)?;
        let near = NEAR * (high - low).max(LEAST_SPAN);
        let windows = picture.points.iter().filter_map(|p| p.window);
        let ends = picture.points.iter().map(|p| p.range).chain(windows).chain([picture.dam]);
        let bounds = ends.flat_map(|(a, b)| [a, b]).flatten().map(|v| picture.shown(v));
        let near: Vec<f64> = bounds.filter(|b| low - near <= *b && *b <= high + near).collect();
        let low = near.iter().copied().fold(low, f64::min);
        let high = near.iter().copied().fold(high, f64::max);
        let y = Scale::round(low, high, LEAST_SPAN, ticks_up(rows));
        let x = Scale::new(0.0, picture.length_m.max(1.0))?;
        Some(Self { cols, rows, x, y, width })
    }

    /// Column of a distance on the picture.
    pub(super) fn col(&self, at_m: f64) -> usize {
        SIDE + self.x.cell(at_m, self.cols).unwrap_or(0)
    }

    /// Row of a value in the unit shown; beyond the scale its edge.
    pub(super) fn row(&self, shown: f64) -> usize {
        OVER + self.rows - 1 - self.y.cell(shown, self.rows).unwrap_or(0)
    }

    /// Draws everything but the water.
    pub(super) fn draw(&self, picture: &AlongPicture, pen: &mut Pen, look: Look) {
        let ascii = look.symbols == Symbols::Ascii;
        self.heading(picture, pen, ascii);
        self.side(pen, ascii);
        self.foot(picture, pen, ascii);
    }

    fn heading(&self, picture: &AlongPicture, pen: &mut Pen, ascii: bool) {
        let unit = picture.system.unit(picture.dimension).symbol();
        let title = format!("{}, {unit}", picture.title);
        pen.put(0, 0, &title, Role::Strong);
        let mut legend: Vec<String> =
            picture.ways.iter().map(|w| format!("{} {}", w.letter, w.name)).collect();
        let any = |ends: super::Ends| ends.0.is_some() || ends.1.is_some();
        if any(picture.dam) || picture.points.iter().any(|p| any(p.range)) {
            legend.push(format!("{} asked", if ascii { '[' } else { '┃' }));
        }
        if picture.points.iter().filter_map(|p| p.window).any(any) {
            legend.push(format!("{} needed", if ascii { '(' } else { '┋' }));
        }
        if picture.ways.iter().any(|w| !w.bands.is_empty()) {
            legend.push(format!("{} 10-90 %", if ascii { 'I' } else { '│' }));
        }
        let room = self.width.saturating_sub(title.width() + 2);
        while legend.join("  ").width() > room && legend.len() > picture.ways.len() {
            legend.pop();
        }
        pen.put_before(self.width, 0, &cut(&legend.join("  "), room), Role::Quiet);
    }

    fn side(&self, pen: &mut Pen, ascii: bool) {
        let (line, tick) = if ascii { ("|", "+") } else { ("│", "┤") };
        (0..self.rows).for_each(|row| pen.put(SIDE - 1, OVER + row, line, Role::Quiet));
        let marks = self.y.marks(ticks_up(self.rows));
        let decimals = usize::from(marks.decimals);
        for value in marks.values {
            let row = self.row(value);
            pen.put_before(SIDE - 1, row, &format!("{value:.decimals$} "), Role::Quiet);
            pen.put(SIDE - 1, row, tick, Role::Quiet);
        }
    }

    /// The axis of distance, with the streams that join and the points.
    fn foot(&self, picture: &AlongPicture, pen: &mut Pen, ascii: bool) {
        let (line, tick, corner) = if ascii { ("-", "+", "+") } else { ("─", "┬", "└") };
        let row = OVER + self.rows;
        pen.put(SIDE - 1, row, corner, Role::Quiet);
        (0..self.cols).for_each(|col| pen.put(SIDE + col, row, line, Role::Quiet));
        let unit = picture.system.unit(Dimension::Distance);
        let length = unit.from_si(picture.length_m);
        let ticks = ticks(0.0, length, ticks_in(self.cols, TICK_COLS));
        let decimals = decimals(&ticks);
        let mut places = Row::default();
        if picture.foot {
            places.put(pen, row + 1, SIDE, "dam", Role::Quiet, self.width);
            let end = self.width.saturating_sub(unit.symbol().len());
            places.put(pen, row + 1, end, unit.symbol(), Role::Quiet, self.width);
        }
        for value in ticks.into_iter().filter(|v| *v > 0.0 && *v <= length) {
            let col = self.col(unit.to_si(value));
            pen.put(col, row, tick, Role::Quiet);
            if picture.foot {
                let text = format!("{value:.decimals$}");
                let start = col.saturating_sub(text.len() / 2);
                places.put(pen, row + 1, start, &text, Role::Quiet, self.width);
            }
        }
        let mut names = Row::default();
        for (i, point) in picture.points.iter().enumerate() {
            let col = self.col(point.at_m);
            pen.put(col, row, "^", Role::Strong);
            if picture.foot {
                let role = if picture.chosen == Some(i) { Role::Chosen } else { Role::Strong };
                names.beside(pen, row + 2, col, &format!("{} {}", i + 1, point.name), role, self.width);
            }
        }
        for (at_m, name) in &picture.joins {
            let col = self.col(*at_m);
            pen.put(col, row, if ascii { "v" } else { "▾" }, Role::Oxygen);
            if picture.foot {
                names.beside(pen, row + 2, col, name, Role::Quiet, self.width);
            }
        }
    }
}

/// A row of labels none of which touches another.
#[derive(Default)]
struct Row {
    taken: Vec<(usize, usize)>,
}

impl Row {
    /// A label at a column, where it has room.
    fn put(&mut self, pen: &mut Pen, row: usize, start: usize, text: &str, role: Role, width: usize) -> bool {
        let stop = start + text.width();
        let free = stop <= width && self.taken.iter().all(|t| stop < t.0 || t.1 < start);
        if free {
            pen.put(start, row, text, role);
            self.taken.push((start, stop));
        }
        free
    }

    /// A label about a column: centred, or to either side of it.
    fn beside(&mut self, pen: &mut Pen, row: usize, col: usize, text: &str, role: Role, width: usize) {
        let wide = text.width();
        for back in [wide / 2, wide.saturating_sub(1), 0] {
            let start = col.saturating_sub(back).max(SIDE).min(width.saturating_sub(wide));
            if self.put(pen, row, start, text, role, width) {
                return;
            }
        }
    }
}

/// Ticks up the side: enough of them that a round scale is not much longer than what it holds.
fn ticks_up(rows: usize) -> u32 {
    let least = if rows > FEW_ROWS { 5 } else { 2 };
    ticks_in(rows, TICK_ROWS).max(least)
}

fn ticks_in(cells: usize, each: usize) -> u32 {
    u32::try_from(cells / each).unwrap_or(9).clamp(2, 9)
}
