//! A piece as plain text of 80 columns. A warning is marked by its word, pictures are told in theirs.

use std::fmt::Write as _;

use unicode_width::{UnicodeWidthChar, UnicodeWidthStr};

use super::table::Squared;
use super::{Block, Page, clean};
use crate::report::text::wrapped_at;

/// Width of the text.
const WIDTH: usize = 80;
/// Widest label of a fact that keeps its value on its own line.
const LABEL: usize = 28;
/// Least width a column of a table is narrowed to; tables that need less are told row by row.
const LEAST: usize = 7;
/// Blanks between the columns of a table.
const GAP: usize = 2;

/// The piece as text.
pub(super) fn written(page: &Page) -> String {
    let mut out = underlined(&page.title, '=');
    for block in &page.blocks {
        out.push('\n');
        out.push_str(&one(block));
    }
    out
}

fn one(block: &Block) -> String {
    match block {
        Block::Heading(1, text) => underlined(text, '-'),
        Block::Heading(_, text) | Block::Words(text) => wrapped(text),
        Block::Warning(text) => wrapped(&format!("WARNING: {text}")),
        Block::List(texts) => texts.iter().map(|text| hung("  - ", text)).collect(),
        Block::Facts(facts) => told(facts),
        Block::Table(table) => rows(&Squared::of(table)),
        Block::Blanks(labels) => labels.iter().map(|label| blank(label)).collect::<Vec<_>>().join("\n"),
        Block::Picture(picture) => hung("  ", &format!("Picture: {}. {}", picture.title, picture.words)),
        Block::Beside(table, picture) => {
            format!("{}\n{}", rows(&Squared::of(table)), one(&Block::Picture(picture.clone())))
        }
        Block::Sheet => format!("{}\n", "=".repeat(WIDTH)),
    }
}

fn wrapped(text: &str) -> String {
    wrapped_at(&clean(text), 0, WIDTH)
}

fn underlined(text: &str, with: char) -> String {
    let text = wrapped(text);
    let wide = text.lines().map(UnicodeWidthStr::width).max().unwrap_or(0).min(WIDTH);
    format!("{text}{}\n", String::from(with).repeat(wide))
}

/// Text behind a lead, its later lines below its first.
fn hung(lead: &str, text: &str) -> String {
    let indent = lead.width();
    let body = wrapped_at(&format!("{:indent$}{}", "", clean(text)), indent, WIDTH);
    // the blanks of the first line are as many as the lead is wide
    let text = format!("{lead}{}", body.get(indent..).unwrap_or_default());
    format!("{}\n", text.trim_end())
}

fn told(facts: &[(String, String)]) -> String {
    let wide = facts.iter().map(|(label, _)| clean(label).width()).filter(|w| *w <= LABEL).max().unwrap_or(0);
    let line = |(label, value): &(String, String)| {
        let label = clean(label);
        if label.width() <= LABEL {
            hung(&format!("{}  ", padded(&label, wide, false)), value)
        } else {
            format!("{}{}", wrapped(&label), hung(&" ".repeat(wide + GAP), value))
        }
    };
    facts.iter().map(line).collect()
}

/// A label with a rule to write on, as long as the line leaves, on a line of its own below a long label.
fn blank(label: &str) -> String {
    let label = wrapped(label);
    let last = label.trim_end().lines().last().map_or(0, UnicodeWidthStr::width);
    if last + 2 + LABEL <= WIDTH {
        format!("{} {}\n", label.trim_end(), "_".repeat(WIDTH - last - 1))
    } else {
        format!("{label}{}\n", "_".repeat(WIDTH))
    }
}

fn rows(table: &Squared) -> String {
    let mut out = if table.caption.is_empty() { String::new() } else { wrapped(&table.caption) };
    let Some(widths) = widths(table) else {
        return out + &one_by_one(table);
    };
    let line = |cells: &[String]| -> String {
        let cells: Vec<Vec<String>> =
            cells.iter().zip(&widths).map(|(cell, wide)| cut(cell, *wide)).collect();
        let high = cells.iter().map(Vec::len).max().unwrap_or(0);
        let mut lines = String::new();
        for k in 0..high {
            let mut text = String::new();
            for (column, (cell, wide)) in cells.iter().zip(&widths).enumerate() {
                let part = cell.get(k).map_or("", String::as_str);
                text.push_str(&padded(part, *wide, table.is_right(column)));
                text.push_str(&" ".repeat(GAP));
            }
            let _ = writeln!(lines, "{}", text.trim_end());
        }
        lines
    };
    out.push_str(&line(&table.head));
    let rules: Vec<String> = widths.iter().map(|wide| "-".repeat(*wide)).collect();
    let _ = writeln!(out, "{}", rules.join(&" ".repeat(GAP)));
    table.rows.iter().for_each(|row| out.push_str(&line(row)));
    out
}

/// Widths of the columns: as their cells need, the widest narrowed until the row fits. `None` where it does not.
fn widths(table: &Squared) -> Option<Vec<usize>> {
    let mut widths: Vec<usize> = table.head.iter().map(|cell| cell.width().max(1)).collect();
    for row in &table.rows {
        widths.iter_mut().zip(row).for_each(|(wide, cell)| *wide = (*wide).max(cell.width()));
    }
    let room = WIDTH.checked_sub(GAP * widths.len().saturating_sub(1))?;
    while widths.iter().sum::<usize>() > room {
        let widest = widths.iter_mut().max_by_key(|wide| **wide)?;
        if *widest <= LEAST {
            return None;
        }
        *widest -= 1;
    }
    Some(widths)
}

/// A table too wide for the page, each row as lines of head and cell.
fn one_by_one(table: &Squared) -> String {
    let row = |cells: &Vec<String>| -> String {
        let facts: Vec<(String, String)> = table.head.iter().cloned().zip(cells.iter().cloned()).collect();
        told(&facts)
    };
    table.rows.iter().map(row).collect::<Vec<_>>().join("\n")
}

/// A cell as lines of a width; a word wider than that is cut.
fn cut(text: &str, wide: usize) -> Vec<String> {
    let mut lines = Vec::new();
    let mut line = String::new();
    for word in text.split(' ') {
        if !line.is_empty() && line.width() + 1 + word.width() > wide {
            lines.push(std::mem::take(&mut line));
        }
        if !line.is_empty() {
            line.push(' ');
        }
        for c in word.chars() {
            if !line.is_empty() && line.width() + c.width().unwrap_or(0) > wide {
                lines.push(std::mem::take(&mut line));
            }
            line.push(c);
        }
    }
    lines.push(line);
    lines
}

fn padded(text: &str, wide: usize, right: bool) -> String {
    let blanks = " ".repeat(wide.saturating_sub(text.width()));
    if right { format!("{blanks}{text}") } else { format!("{text}{blanks}") }
}
