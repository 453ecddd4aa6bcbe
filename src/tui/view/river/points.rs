//! The dam and the points side by side, and the release each would need.

use unicode_width::UnicodeWidthStr;

use crate::report::text::river::{self, PlaceRow};
use crate::tui::look::Role;

use super::super::write::{cut, wrapped};
use super::picture::mark;
use super::{Lines, Screen, say};

/// Columns between two places.
const GAP: usize = 2;
/// Most lines of a name over its column.
const NAME_LINES: usize = 2;

/// As many rows as there is room for: what can be spared goes first.
pub(super) fn lines(screen: &Screen, width: usize, height: usize) -> Lines {
    let (context, answer, system) = (&screen.down.context, &screen.down.answer, screen.model.system());
    let mut below = Lines::new();
    for window in &answer.windows {
        let name = window.point.map_or_else(
            || "dam".to_owned(),
            |i| format!("{} {}", i + 1, super::rules::point_name(screen, i)),
        );
        let role = if window.reachable != Some(false) { Role::Range } else { Role::Outside };
        say(&mut below, &format!("{name} needs {}", river::window_words(window, system)), width, 2, role);
    }
    for words in river::timely_words(context, answer, system) {
        say(&mut below, &words, width, 2, Role::Warn);
    }
    let head = usize::from(screen.old) + 1;
    let mut rows = river::places(context, answer, system);
    let room = height.saturating_sub(head + below.len().min(height / 3));
    while rows.len() > room || wide(&rows) > width {
        let Some(spare) = rows.iter().map(|r| r.spare).max().filter(|s| *s > 0) else { break };
        rows.retain(|row| row.spare < spare);
    }
    let mut out = Lines::new();
    out.extend(screen.old_words().map(|words| (words.to_owned(), Role::Old)));
    let gaps = rows.len() + below.len() + answer.ways.len() < height;
    let (label, cells) = columns(&rows, width);
    let mut before = None;
    for row in &rows {
        if row.of != before && gaps {
            out.push((String::new(), Role::Plain));
        }
        before = row.of;
        if row.short.is_empty() {
            out.extend(named(&row.cells, label, cells).into_iter().map(|line| (line, Role::Strong)));
            continue;
        }
        let text: String = row.cells.iter().map(|c| padded(c, cells, GAP)).collect();
        let (letter, role) = row.of.map_or((None, Role::Quiet), |w| (Some(mark(w).0), mark(w).1));
        let name = letter.map_or_else(|| row.short.clone(), |l| format!("{l} {}", row.short));
        out.push((format!("{name:<label$}{text}"), role));
    }
    if gaps {
        out.push((String::new(), Role::Plain));
    }
    out.extend(below);
    out
}

/// A cell cut and filled up to its columns.
fn padded(text: &str, cells: usize, gap: usize) -> String {
    let text = cut(text, cells.saturating_sub(gap));
    format!("{text}{}", " ".repeat(cells.saturating_sub(text.width())))
}

/// The names of the places, over two lines where they are long.
fn named(names: &[String], label: usize, cells: usize) -> Vec<String> {
    // a name needs no more than a blank after it
    let lines: Vec<Vec<String>> = names.iter().map(|n| wrapped(n, cells.saturating_sub(1), 0)).collect();
    let line = |i: usize| {
        let of = |name: &Vec<String>| {
            // what is left over stands on the last line, cut
            let end = if i + 1 == NAME_LINES { name.len() } else { (i + 1).min(name.len()) };
            padded(&name.get(i..end).unwrap_or(&[]).join(" "), cells, 1)
        };
        format!("{}{}", " ".repeat(label), lines.iter().map(of).collect::<String>())
    };
    (0..NAME_LINES.min(lines.iter().map(Vec::len).max().unwrap_or(1))).map(line).collect()
}

/// Columns of the labels and of each place.
fn columns(rows: &[PlaceRow], width: usize) -> (usize, usize) {
    let label =
        rows.iter().map(|r| r.short.width() + 2 * usize::from(r.of.is_some())).max().unwrap_or(0) + GAP;
    let count = rows.first().map_or(1, |r| r.cells.len()).max(1);
    (label, (width.saturating_sub(label) / count).max(GAP + 4))
}

/// Columns that every figure needs; the names may be cut.
fn wide(rows: &[PlaceRow]) -> usize {
    let (label, _) = columns(rows, 0);
    let cells = rows.iter().skip(1).flat_map(|r| &r.cells).map(|c| c.width() + GAP).max().unwrap_or(0);
    label + rows.first().map_or(0, |r| r.cells.len()) * cells
}
