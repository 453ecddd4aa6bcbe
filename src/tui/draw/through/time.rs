//! The axis of time of pictures that run by days.
//!
//! Figures of the layout are choices.

use chrono::{Datelike, Days, NaiveDate};
use ratatui::layout::Rect;
use unicode_width::UnicodeWidthStr;

use crate::tui::draw::pen::Pen;
use crate::tui::{Look, Role, Symbols};

/// Days so few that weeks are marked instead of months.
const SHORT: usize = 45;
/// Days of a year.
const YEAR: usize = 366;

/// Days side by side.
#[derive(Debug, Clone, Copy)]
pub(in crate::tui::draw) struct Time {
    /// Columns left of the plot.
    pub(in crate::tui::draw) side: usize,
    /// Columns of the plot.
    pub(in crate::tui::draw) cols: usize,
    /// How many days there are.
    pub(in crate::tui::draw) days: usize,
}

impl Time {
    /// The day that a column of the plot shows.
    pub(in crate::tui::draw) fn day_of(self, col: usize) -> usize {
        day_of(col, self.cols, self.days)
    }

    /// Column of the plot of a day.
    pub(in crate::tui::draw) fn col_of(self, day: usize) -> usize {
        col_of(day, self.cols, self.days)
    }

    /// Months, or weeks of a short season, and the day read.
    pub(in crate::tui::draw) fn draw(
        self,
        first: NaiveDate,
        cursor: Option<usize>,
        row: usize,
        pen: &mut Pen,
        look: Look,
    ) {
        let ascii = look.symbols == Symbols::Ascii;
        let mut free = 0;
        for day in 0..self.days {
            let Some(date) = first.checked_add_days(Days::new(day as u64)) else { return };
            let text = match (day, self.days < SHORT) {
                (0, _) => date.format("%b %-d").to_string(),
                (_, true) if day.is_multiple_of(7) => date.format("%b %-d").to_string(),
                // of more than a year the year is told too
                (_, false) if self.days > YEAR && date.ordinal() == 1 => date.format("%Y").to_string(),
                (_, false) if date.day() == 1 => date.format("%b").to_string(),
                _ => continue,
            };
            let col = self.col_of(day);
            if col < free || col + 1 + text.len() > self.cols {
                continue;
            }
            pen.put(self.side + col, row, if ascii { "|" } else { "╷" }, Role::Quiet);
            pen.put(self.side + col + 1, row, &text, Role::Quiet);
            free = col + text.len() + 2;
        }
        if let Some(day) = cursor.filter(|d| *d < self.days) {
            pen.put(self.side + self.col_of(day), row, "^", Role::Chosen);
        }
    }

    /// A line down some rows at the day read, where nothing stands yet.
    pub(in crate::tui::draw) fn line(
        self,
        cursor: Option<usize>,
        rows: impl Iterator<Item = usize>,
        pen: &mut Pen,
        look: Look,
    ) {
        let Some(day) = cursor.filter(|d| *d < self.days) else { return };
        let line = if look.symbols == Symbols::Ascii { "|" } else { "│" };
        for row in rows {
            pen.fill(self.side + self.col_of(day), row, line, Role::Strong);
        }
    }

    /// Signs with what they mean from a cell on, as far as there is room.
    pub(in crate::tui::draw) fn entries(
        self,
        mut col: usize,
        row: usize,
        of: &[(&str, &str, Role)],
        pen: &mut Pen,
    ) {
        for (glyph, word, role) in of {
            let wide = word.width() + 4;
            if col + wide > self.side + self.cols {
                return;
            }
            pen.put(col, row, glyph, *role);
            pen.put(col + 2, row, word, Role::Quiet);
            col += wide;
        }
    }

    /// The day under a cell of the buffer, of a picture in an area.
    pub(in crate::tui::draw) fn day_at(self, area: Rect, col: u16, row: u16) -> Option<usize> {
        let col = usize::from(col.checked_sub(area.x)?).checked_sub(self.side)?;
        (row >= area.y && row < area.bottom() && col < self.cols).then(|| self.day_of(col))
    }
}

/// The day that a column shows: the one in its middle.
fn day_of(col: usize, cols: usize, days: usize) -> usize {
    ((2 * col + 1) * days / (2 * cols.max(1))).min(days.saturating_sub(1))
}

/// The column of a day: that of its middle.
fn col_of(day: usize, cols: usize, days: usize) -> usize {
    ((2 * day + 1) * cols / (2 * days.max(1))).min(cols.saturating_sub(1))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn law_a_column_and_its_day_find_each_other() {
        for days in 1..250 {
            for cols in [1, 2, 17, 36, 80, 210, 300] {
                let (mut before, mut seen) = (0, 0);
                for col in 0..cols {
                    let day = day_of(col, cols, days);
                    assert!(day < days && day >= before);
                    before = day;
                    if days >= cols {
                        assert_eq!(col_of(day, cols, days), col, "{days} days on {cols} columns");
                    }
                }
                for day in 0..days {
                    let col = col_of(day, cols, days);
                    assert!(col < cols && col >= seen);
                    seen = col;
                    if days <= cols {
                        assert_eq!(day_of(col, cols, days), day, "{days} days on {cols} columns");
                    }
                }
            }
        }
    }
}
