//! Writing lines into cells.

use ratatui::buffer::Buffer;
use ratatui::layout::Rect;
use ratatui::style::Style;
use unicode_width::UnicodeWidthStr;

/// Writes text on a row of an area from a column of it, cut at its edge; the column after it.
pub(super) fn put(buf: &mut Buffer, area: Rect, column: u16, row: u16, text: &str, style: Style) -> u16 {
    let inside = area.intersection(*buf.area());
    if row >= inside.height || column >= inside.width {
        return column;
    }
    let room = usize::from(inside.width - column);
    let (x, _) = buf.set_stringn(inside.x + column, inside.y + row, text, room, style);
    x - inside.x
}

/// Writes text so that it ends at a column.
pub(super) fn put_right(buf: &mut Buffer, area: Rect, end: u16, row: u16, text: &str, style: Style) {
    let wide = u16::try_from(text.width()).unwrap_or(u16::MAX);
    put(buf, area, end.saturating_sub(wide), row, text, style);
}

/// Words wrapped at a width, later lines indented.
pub(super) fn wrapped(text: &str, width: usize, indent: usize) -> Vec<String> {
    filled(text.split_whitespace(), width, indent)
}

/// The same, parted behind commas; only what is too long between two of them is parted at its words.
pub(super) fn at_commas(text: &str, width: usize, indent: usize) -> Vec<String> {
    let pieces = text.split_inclusive(", ").map(str::trim).flat_map(|piece| {
        if indent + piece.width() <= width { vec![piece] } else { piece.split_whitespace().collect() }
    });
    filled(pieces, width, indent)
}

fn filled<'a>(words: impl Iterator<Item = &'a str>, width: usize, indent: usize) -> Vec<String> {
    let mut lines = Vec::new();
    let mut line = String::new();
    let mut used = 0;
    for word in words {
        let wide = word.width();
        if used > 0 && used + 1 + wide > width {
            lines.push(std::mem::take(&mut line));
            line = " ".repeat(indent);
            used = indent;
        } else if used > 0 && !line.trim().is_empty() {
            line.push(' ');
            used += 1;
        }
        line.push_str(word);
        used += wide;
    }
    if !line.trim().is_empty() {
        lines.push(line);
    }
    lines
}

/// Text cut to so many cells, its end marked where something is lost.
pub(super) fn cut(text: &str, cells: usize) -> String {
    if text.width() <= cells {
        return text.to_owned();
    }
    let mut out = String::new();
    let mut used = 0;
    for c in text.chars() {
        let wide = unicode_width::UnicodeWidthChar::width(c).unwrap_or(0);
        if used + wide + 1 > cells {
            break;
        }
        used += wide;
        out.push(c);
    }
    if cells > 0 {
        out.push('~');
    }
    out
}

/// A row of an area, with the style of the whole row.
pub(super) fn row_style(buf: &mut Buffer, area: Rect, row: u16, style: Style) {
    if row < area.height {
        buf.set_style(Rect { y: area.y + row, height: 1, ..area }.intersection(*buf.area()), style);
    }
}
