//! The rules valid on the date: where, what they ask, how each release stands, which governs.

use ratatui::buffer::Buffer;
use ratatui::layout::Rect;

use crate::problem::harmless;
use crate::report::text::river::{self, RuleRow};
use crate::target::Target;
use crate::tasks::river::Timely;
use crate::tui::look::Role;
use crate::tui::model::Row;
use crate::tui::update::rules;

use super::super::write::{cut, row_style};
use super::picture::{at, mark as letter};
use super::{Lines, Screen, say};

/// Rows from which every rule has its words, not the one chosen alone (choice).
const TALL: u16 = 14;

/// The lines, each with the rule it is of.
fn told(screen: &Screen, area: Rect) -> Vec<(Option<usize>, String, Role)> {
    let (width, brief) = (usize::from(area.width), area.height < TALL);
    let (context, answer, system) = (&screen.down.context, &screen.down.answer, screen.model.system());
    let mut out: Vec<(Option<usize>, String, Role)> = Vec::new();
    let mut add = |rule: Option<usize>, text: &str, indent: usize, role: Role| {
        let mut lines = Lines::new();
        say(&mut lines, text, width, indent, role);
        out.extend(lines.into_iter().map(|(line, role)| (rule, line, role)));
    };
    let rows = river::rules(context, answer, system);
    let which =
        rows.iter().find(|r| r.governs).map_or_else(String::new, |r| format!("; `{}` governs", r.name));
    let head = format!("Rules today; Enter types over [ ]{which}");
    add(None, &head, 2, Role::Quiet);
    for words in soon(screen) {
        add(None, &words, 2, Role::Warn);
    }
    if rows.is_empty() {
        add(None, "No rule is valid on this date.", 2, Role::Strong);
    }
    let listed = rules(screen.session);
    for row in &rows {
        // an answer of before may tell of other rules than those there are now
        let at = listed.iter().position(|r| *r == Row::Target(row.target));
        let chosen = at == Some(screen.session.river.rule);
        let mark = if chosen { ">" } else { " " };
        let governs = if row.governs { " (governs)" } else { "" };
        let stands = row.standings.iter().map(|s| format!("{} {}", letter(s.of).0, s.short));
        let head = format!(
            "{mark} {} at {}{governs}: {}",
            row.name,
            row.point,
            stands.collect::<Vec<_>>().join("; ")
        );
        let missed = row.standings.iter().any(|s| s.missed);
        // the row chosen is reversed, and reversed colours would part it
        add(at, &head, 4, if missed && !chosen { Role::Outside } else { Role::Strong });
        if chosen || !brief {
            add(at, &format!("    {} {}", typed(screen, chosen, row), row.source), 6, Role::Quiet);
        }
        for standing in row.standings.iter().filter(|_| chosen) {
            let role = if standing.missed { Role::Outside } else { Role::Plain };
            add(at, &format!("    {}", standing.words), 6, role);
        }
        for words in needed(screen, row.target).filter(|_| chosen) {
            add(at, &format!("    {words}"), 6, Role::Range);
        }
    }
    for words in river::conflicts(context, answer, system) {
        add(None, &format!("! {words}"), 2, Role::Outside);
    }
    for note in &answer.notes {
        add(None, &format!("! {}", note.advice(system)), 2, Role::Warn);
    }
    let points = context.site().river.as_ref().map_or(0, |r| r.points.len());
    for (i, words) in (0..points).filter_map(|i| Some((i, river::stage_words(context, answer, i, system)?))) {
        add(None, &format!("- {} {}: {words}", i + 1, point_name(screen, i)), 2, Role::Plain);
    }
    out.push((None, String::new(), Role::Plain));
    out.extend(super::days::strip(screen, width).into_iter().map(|(line, role)| (None, line, role)));
    out
}

/// That a day ahead would be too warm, and when a change for it must leave: in short, the whole is beside the picture
/// where it has room and on the page of the days.
fn soon(screen: &Screen) -> Vec<String> {
    let (context, answer) = (&screen.down.context, &screen.down.answer);
    let words = |t: &Timely| {
        let rule = context.site().targets.get(t.target)?;
        let (day, leave) = (t.day.format("%m-%d"), t.leave_by.format("%m-%d %H:%M"));
        let late = if t.late { ", which is past" } else { "" };
        let place = point_name(screen, t.point);
        let name = harmless(&rule.name);
        Some(format!("! {place}: `{name}` missed from {day} if held; change by {leave}{late}; d tells more"))
    };
    answer.timely.iter().filter_map(words).collect()
}

/// The release that the place of a rule needs for all its rules, and which set the ends.
fn needed(screen: &Screen, target: usize) -> impl Iterator<Item = String> {
    let site = screen.down.context.site();
    let rule = site.targets.get(target).filter(|rule| !rule.soft);
    let window = rule.and_then(|rule| {
        let place = at(screen, rule);
        screen.down.answer.windows.iter().find(|w| w.point == place)
    });
    let words = window.zip(rule).map(|(window, rule)| {
        let words = river::window_words(window, screen.model.system());
        format!("release needed for all rules at {}: {words}", harmless(&rule.point))
    });
    words.into_iter()
}

/// What a rule asks, the cell chosen in brackets.
fn typed(screen: &Screen, chosen: bool, row: &RuleRow) -> String {
    if !chosen {
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

pub(super) fn lines(screen: &Screen, area: Rect) -> Lines {
    told(screen, area).into_iter().map(|(_, line, role)| (line, role)).collect()
}

/// First and last line of the rule chosen.
pub(super) fn lines_of_chosen(screen: &Screen, area: Rect) -> (usize, usize) {
    let told = told(screen, area);
    let of = |line: &(Option<usize>, String, Role)| line.0 == Some(screen.session.river.rule);
    let first = told.iter().position(of).unwrap_or(0);
    (first, told.iter().rposition(of).map_or(0, |i| i + 1))
}

/// Marks the first line of the rule chosen.
pub(super) fn mark(screen: &Screen, (whole, area): (Rect, Rect), from: usize, buf: &mut Buffer) {
    let (first, _) = lines_of_chosen(screen, whole);
    if let Some(row) = first.checked_sub(from).and_then(|r| u16::try_from(r).ok()) {
        row_style(buf, area, row, screen.model.look.style(Role::Chosen));
    }
}

/// The rule a line is of.
pub(super) fn at_line(screen: &Screen, area: Rect, line: usize) -> Option<usize> {
    told(screen, area).get(line)?.0
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
