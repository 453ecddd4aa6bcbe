//! Writing into a rectangle of a buffer that may be smaller than what is written.

use ratatui::buffer::Buffer;
use ratatui::layout::{Position, Rect};
use ratatui::style::Style;
use unicode_width::{UnicodeWidthChar, UnicodeWidthStr};

use crate::tui::{Look, Role};

/// A rectangle of a buffer: columns and rows count from its corner, and what falls outside is not drawn.
pub(super) struct Pen<'a> {
    buf: &'a mut Buffer,
    area: Rect,
    look: Look,
}

impl<'a> Pen<'a> {
    pub(super) fn new(buf: &'a mut Buffer, area: Rect, look: Look) -> Self {
        Self { buf, area, look }
    }

    fn place(&self, col: usize, row: usize) -> Option<Position> {
        let col = u16::try_from(col).ok().filter(|c| *c < self.area.width)?;
        let row = u16::try_from(row).ok().filter(|r| *r < self.area.height)?;
        let at = Position { x: self.area.x.checked_add(col)?, y: self.area.y.checked_add(row)? };
        self.buf.area.contains(at).then_some(at)
    }

    /// Text from a cell on, cut at the right edge.
    pub(super) fn put(&mut self, col: usize, row: usize, text: &str, role: Role) {
        let style = self.look.style(role);
        self.styled(col, row, text, style);
    }

    fn styled(&mut self, col: usize, row: usize, text: &str, style: Style) {
        if let Some(at) = self.place(col, row) {
            let room = usize::from(self.area.width).saturating_sub(col);
            self.buf.set_stringn(at.x, at.y, text, room, style);
        }
    }

    /// Text that ends before a cell.
    pub(super) fn put_before(&mut self, end: usize, row: usize, text: &str, role: Role) {
        let text = cut(text, end);
        self.put(end.saturating_sub(text.width()), row, &text, role);
    }

    /// The colour behind a meaning, behind what stands in a cell.
    pub(super) fn behind(&mut self, col: usize, row: usize, role: Role) {
        let cell = self.place(col, row).and_then(|at| self.buf.cell_mut(at));
        if let (Some(cell), Some(colour)) = (cell, self.look.style(role).bg) {
            cell.set_bg(colour);
        }
    }

    /// A character where nothing stands yet.
    pub(super) fn fill(&mut self, col: usize, row: usize, symbol: &str, role: Role) {
        let blank = |at| self.buf.cell(at).is_some_and(|c| c.symbol() == " ");
        if self.place(col, row).is_some_and(blank) {
            self.put(col, row, symbol, role);
        }
    }
}

/// Text of at most so many cells; what is cut ends in two points where there is room for them.
pub(super) fn cut(text: &str, cells: usize) -> String {
    if text.width() <= cells {
        return text.to_owned();
    }
    let end = if cells >= 5 { ".." } else { "" };
    let mut room = cells - end.len();
    let mut out = String::new();
    for c in text.chars() {
        let wide = c.width().unwrap_or(0);
        if wide > room {
            break;
        }
        room -= wide;
        out.push(c);
    }
    out.truncate(out.trim_end().len());
    out + end
}

/// Decimals that ticks a step apart need.
pub(super) fn decimals(ticks: &[f64]) -> usize {
    let step = ticks.get(1).zip(ticks.first()).map_or(1.0, |(b, a)| b - a);
    (0..3).find(|&d| step >= 0.999 * 10_f64.powi(-d)).map_or(3, |d| d.unsigned_abs() as usize)
}
