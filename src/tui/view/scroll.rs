//! Lines that may be more than there are rows: how far they scroll, and the row that says what is left.

use ratatui::buffer::Buffer;
use ratatui::layout::Rect;

use crate::tui::look::{Look, Role};

use super::write::{cut, put, put_right, wrapped};

/// Lines with their meaning.
pub(super) type Lines = Vec<(String, Role)>;

/// The furthest first line: where not all lines have room, one row tells how many there are.
pub(super) fn last(lines: &Lines, area: Rect) -> usize {
    let rows = usize::from(area.height);
    if lines.len() > rows { lines.len() - rows.saturating_sub(1) } else { 0 }
}

/// The rows left to the lines.
pub(super) fn rows(lines: &Lines, area: Rect) -> Rect {
    let height = if last(lines, area) > 0 { area.height.saturating_sub(1) } else { area.height };
    Rect { height, ..area }
}

/// Writes lines from the first.
pub(super) fn write(lines: &Lines, area: Rect, look: Look, buf: &mut Buffer) {
    write_from(lines, area, 0, look, buf);
}

/// Writes lines from one on, and in a row of its own how many are left: words it covered could turn what they say round.
pub(super) fn scrolled(lines: &Lines, area: Rect, from: usize, look: Look, buf: &mut Buffer) {
    let (rows, last) = (rows(lines, area), last(lines, area));
    write_from(lines, rows, from, look, buf);
    if last > 0 && area.height > 0 {
        let below = last.saturating_sub(from);
        let words = if below > 0 { format!("{below} more, PgDn ") } else { "the end, PgUp ".to_owned() };
        put_right(buf, area, area.width, rows.height, &words, look.style(Role::Key));
    }
}

fn write_from(lines: &Lines, area: Rect, from: usize, look: Look, buf: &mut Buffer) {
    for (row, (line, role)) in (0..area.height).zip(lines.iter().skip(from)) {
        put(buf, area, 0, row, &cut(line, usize::from(area.width)), look.style(*role));
    }
}

/// Adds words, wrapped, later lines indented; the first as far as its words are.
pub(super) fn say(lines: &mut Lines, text: &str, width: usize, indent: usize, role: Role) {
    let lead = text.len() - text.trim_start().len();
    let mut told = wrapped(text, width.saturating_sub(lead), indent.saturating_sub(lead));
    for line in &mut told {
        line.insert_str(0, &text[..lead]);
    }
    lines.extend(told.into_iter().map(|line| (line, role)));
}
