//! The dam and the points side by side, and the release each would need.

use crate::report::text::river;
use crate::tasks::river::Which;
use crate::tui::look::Role;

use super::super::write::cut;
use super::picture::mark;
use super::{Lines, Screen, say};

/// Columns of the labels.
const LABEL: usize = 16;
/// Least columns of a place.
const CELL: usize = 10;

/// As many rows as there is room for; first what is of every release.
pub(super) fn lines(screen: &Screen, width: usize, height: usize) -> Lines {
    let (context, answer, system) = (&screen.down.context, &screen.down.answer, screen.model.system());
    let mut out = Lines::new();
    if screen.old {
        out.push(("from before; the new is being computed".to_owned(), Role::Old));
    }
    let rows = river::places(context, answer, system);
    let count = rows.first().map_or(1, |r| r.cells.len()).max(1);
    let each = (width.saturating_sub(LABEL) / count).max(CELL);
    let mut before = None;
    for row in &rows {
        if row.of != before && height > rows.len() + answer.windows.len() + 4 {
            out.push((String::new(), Role::Plain));
        }
        before = row.of;
        let cells: String = row.cells.iter().map(|c| format!("{:<each$}", cut(c, each - 1))).collect();
        let letter = row.of.map_or(' ', |w: Which| mark(w).0);
        let role = row.of.map_or(Role::Quiet, |w| mark(w).1);
        let role = if row.label.is_empty() { Role::Strong } else { role };
        let label = row.of.map_or(row.label.clone(), |w| {
            format!("{letter} {}", row.label.trim_start_matches(w.word()).trim_start())
        });
        out.push((format!("{:<LABEL$}{cells}", cut(&label, LABEL - 1)), role));
    }
    for window in &answer.windows {
        let name = window.point.map_or_else(
            || "dam".to_owned(),
            |i| format!("{} {}", i + 1, super::rules::point_name(screen, i)),
        );
        let role = if window.reachable { Role::Range } else { Role::Outside };
        say(&mut out, &format!("{name} needs {}", river::window_words(window, system)), width, 2, role);
    }
    for late in river::timely_words(context, answer, system) {
        say(&mut out, &late, width, 2, Role::Warn);
    }
    out
}
