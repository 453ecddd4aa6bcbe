//! The rules valid on the date: where, what they ask, how each release stands, which governs.

use ratatui::buffer::Buffer;
use ratatui::layout::Rect;

use crate::problem::harmless;
use crate::report::text::river::{self, RuleRow};
use crate::target::Target;
use crate::tui::look::Role;
use crate::tui::model::Row;
use crate::tui::update::rules;

use super::super::write::{cut, row_style};
use super::picture::{at, mark as letter};
use super::{Lines, Screen, say};

/// The lines, each with the rule it is of.
fn told(screen: &Screen, width: usize) -> Vec<(Option<usize>, String, Role)> {
    let (context, answer, system) = (&screen.down.context, &screen.down.answer, screen.model.system());
    let mut out: Vec<(Option<usize>, String, Role)> = Vec::new();
    let mut add = |rule: Option<usize>, text: &str, indent: usize, role: Role| {
        let mut lines = Lines::new();
        say(&mut lines, text, width, indent, role);
        out.extend(lines.into_iter().map(|(line, role)| (rule, line, role)));
    };
    add(None, "Rules today; Enter types over the value in brackets, d days, v record", 2, Role::Quiet);
    let rows = river::rules(context, answer, system);
    if rows.is_empty() {
        add(None, "No rule is valid on this date.", 2, Role::Strong);
    }
    for (i, row) in rows.iter().enumerate() {
        let chosen = screen.session.river.rule == i;
        let mark = if chosen { ">" } else { " " };
        let governs = if row.governs { "; governs" } else { "" };
        let stands = row.standings.iter().map(|s| format!("{} {}", letter(s.of).0, s.short));
        let head = format!(
            "{mark} {} at {}: {}{governs}",
            row.name,
            row.point,
            stands.collect::<Vec<_>>().join("; ")
        );
        let missed = row.standings.iter().any(|s| s.missed);
        // the row chosen is reversed, and reversed colours would part it
        add(Some(i), &head, 4, if missed && !chosen { Role::Outside } else { Role::Strong });
        add(Some(i), &format!("    {} {}", typed(screen, i, row), row.source), 6, Role::Quiet);
        for standing in row.standings.iter().filter(|_| chosen) {
            let role = if standing.missed { Role::Outside } else { Role::Plain };
            add(Some(i), &format!("    {}", standing.words), 6, role);
        }
    }
    for words in river::conflicts(context, answer, system) {
        add(None, &format!("! {words}"), 2, Role::Outside);
    }
    for note in &answer.notes {
        add(None, &format!("! {}", note.advice(system)), 2, Role::Warn);
    }
    out.push((None, String::new(), Role::Plain));
    out.extend(super::days::strip(screen).into_iter().map(|(line, role)| (None, line, role)));
    out
}

/// What a rule asks, the cell chosen in brackets.
fn typed(screen: &Screen, at: usize, row: &RuleRow) -> String {
    if screen.session.river.rule != at {
        return row.asks.clone();
    }
    let cells = row.cells.iter().enumerate().map(|(i, (name, value))| {
        let value = value.as_deref().unwrap_or("none");
        if i == screen.session.river.column { format!("[{name} {value}]") } else { format!("{name} {value}") }
    });
    let example = row.example.map_or_else(String::new, |words| format!(", {words}"));
    let statistic = if row.statistic.is_empty() { String::new() } else { format!("{}, ", row.statistic) };
    format!("{statistic}{}{example}", cells.collect::<Vec<_>>().join(" "))
}

pub(super) fn lines(screen: &Screen, width: usize) -> Lines {
    told(screen, width).into_iter().map(|(_, line, role)| (line, role)).collect()
}

/// First and last line of the rule chosen.
pub(super) fn lines_of_chosen(screen: &Screen, width: usize) -> (usize, usize) {
    let told = told(screen, width);
    let of = |line: &(Option<usize>, String, Role)| line.0 == Some(screen.session.river.rule);
    let first = told.iter().position(of).unwrap_or(0);
    (first, told.iter().rposition(of).map_or(0, |i| i + 1))
}

/// Marks the first line of the rule chosen.
pub(super) fn mark(screen: &Screen, area: Rect, from: usize, buf: &mut Buffer) {
    let (first, _) = lines_of_chosen(screen, usize::from(area.width));
    if let Some(row) = first.checked_sub(from).and_then(|r| u16::try_from(r).ok()) {
        row_style(buf, area, row, screen.model.look.style(Role::Chosen));
    }
}

/// The rule a line is of.
pub(super) fn at_line(screen: &Screen, width: usize, line: usize) -> Option<usize> {
    told(screen, width).get(line)?.0
}

/// The rule chosen.
pub(super) fn chosen<'a>(screen: &Screen<'a>) -> Option<&'a Target> {
    let row = rules(screen.session).get(screen.session.river.rule).copied()?;
    let Row::Target(i) = row else { return None };
    screen.down.context.site().targets.get(i)
}

/// The first rule of a point, from 0.
pub(super) fn first_at(screen: &Screen, point: usize) -> Option<usize> {
    let site = screen.down.context.site();
    let of = |row: &Row| match row {
        Row::Target(i) => site.targets.get(*i).and_then(|rule| at(screen, rule)) == Some(point),
        _ => false,
    };
    rules(screen.session).iter().position(of)
}

/// The name of a point.
pub(super) fn point_name(screen: &Screen, point: usize) -> String {
    let river = screen.down.context.site().river.as_ref();
    river.and_then(|r| r.points.get(point)).map_or_else(String::new, |p| harmless(&p.name))
}

/// What governs, in short: for small windows.
pub(super) fn in_short(screen: &Screen, width: usize) -> Lines {
    let (context, answer, system) = (&screen.down.context, &screen.down.answer, screen.model.system());
    let mut out = Lines::new();
    for row in river::rules(context, answer, system).iter().filter(|r| r.governs) {
        say(&mut out, &format!("{} at {}: {}", row.name, row.point, row.asks), width, 2, Role::Strong);
        for standing in &row.standings {
            let role = if standing.missed { Role::Outside } else { Role::Plain };
            say(&mut out, &standing.words, width, 2, role);
        }
    }
    for window in &answer.windows {
        let name = window.point.map_or_else(|| "dam".to_owned(), |i| point_name(screen, i));
        let words = format!("{name} needs {}", river::window_words(window, system));
        out.extend(super::wrapped(&cut(&words, 3 * width), width, 2).into_iter().map(|l| (l, Role::Range)));
    }
    out
}
