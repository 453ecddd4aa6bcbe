//! The log as it stands: amendments in the place of what they amend, what holds on a date, days not to be learned from.

use chrono::{DateTime, FixedOffset, NaiveDate};

use crate::problem::Problem;

use super::line::{Decision, Event, Line};

/// A line of the log with its place in the file.
#[derive(Debug, Clone, PartialEq)]
pub struct Placed {
    /// Line of the file, from 1.
    pub number: usize,
    /// What it says.
    pub line: Line,
}

/// The lines of a log that can be read, in their order.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct Log {
    lines: Vec<Placed>,
}

/// A decision as it stands after its amendments.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Decided<'a> {
    /// The number it was first written under.
    pub id: u64,
    /// The line that says what holds.
    pub decision: &'a Decision,
    /// How often it was amended.
    pub amended: usize,
    /// When the next decision takes its place; `None` while none does.
    pub ends: Option<DateTime<FixedOffset>>,
}

impl Decided<'_> {
    /// Whether its gates stand at a moment.
    pub fn stands(&self, at: DateTime<FixedOffset>) -> bool {
        self.decision.from <= at && self.ends.is_none_or(|ends| at < ends)
    }

    /// Whether it was to be decided again before a date.
    pub fn is_overdue(&self, date: NaiveDate) -> bool {
        self.decision.until.is_some_and(|until| until < date)
    }
}

impl Log {
    /// The log of some lines; a number that is given twice, and a line that amends nothing, are told.
    pub fn of(lines: Vec<Placed>) -> (Self, Vec<Problem>) {
        let mut problems = Vec::new();
        for (at, placed) in lines.iter().enumerate() {
            let before = || lines.iter().take(at);
            let id = placed.line.id();
            if let Some(same) = before().find(|other| other.line.id() == id) {
                let words = format!("the number {id} stands on line {} too: the first counts", same.number);
                let cure = "lines are written by `gatemix log` alone: do not edit them";
                problems.push(Problem::flag("log-number", words, cure).on_line(placed.number));
            }
            let (amends, is_decision) = match &placed.line {
                Line::Decision(decision) => (decision.amends, true),
                Line::Event(event) => (event.amends, false),
            };
            let same_kind = |other: &Placed| matches!(other.line, Line::Decision(_)) == is_decision;
            if let Some(amends) = amends
                && !before().any(|other| other.line.id() == amends && same_kind(other))
            {
                let words = format!("it amends {amends}, which no line before it is: it stands for itself");
                problems.push(Problem::flag("log-amends", words, "").on_line(placed.number));
            }
        }
        (Self { lines }, problems)
    }

    /// Its lines.
    pub fn lines(&self) -> &[Placed] {
        &self.lines
    }

    /// The number that the next line takes.
    pub fn next_id(&self) -> u64 {
        self.lines.iter().map(|placed| placed.line.id()).max().unwrap_or(0).saturating_add(1)
    }

    /// Every decision as it stands, by the time from which it holds; what was withdrawn is left out.
    pub fn decisions(&self) -> Vec<Decided<'_>> {
        let lines: Vec<&Decision> = self.lines.iter().filter_map(|p| decision(&p.line)).collect();
        let chains = chains(&lines, |d| (d.id, d.amends));
        let stands = |(id, decision, amended)| Decided { id, decision, amended, ends: None };
        let mut out: Vec<Decided> =
            chains.into_iter().map(stands).filter(|d| !d.decision.withdrawn).collect();
        out.sort_by_key(|d| (d.decision.from, d.id));
        let next: Vec<Option<DateTime<FixedOffset>>> =
            out.iter().skip(1).map(|d| Some(d.decision.from)).chain([None]).collect();
        for (decided, ends) in out.iter_mut().zip(next) {
            decided.ends = ends;
        }
        out
    }

    /// The decision whose gates stand at a moment.
    pub fn standing(&self, at: DateTime<FixedOffset>) -> Option<Decided<'_>> {
        self.decisions().into_iter().rev().find(|decided| decided.stands(at))
    }

    /// A decision by the number of any of its lines.
    pub fn decision(&self, id: u64) -> Option<Decided<'_>> {
        let mut root = id;
        // each amends an earlier one, so this ends
        while let Some(amends) =
            self.lines.iter().find_map(|p| decision(&p.line).filter(|d| d.id == root)?.amends)
        {
            if amends >= root {
                break;
            }
            root = amends;
        }
        self.decisions().into_iter().find(|decided| decided.id == root)
    }

    /// Every event as it stands, in the order of the file.
    pub fn events(&self) -> Vec<&Event> {
        let lines: Vec<&Event> = self.lines.iter().filter_map(|p| event(&p.line)).collect();
        chains(&lines, |e| (e.id, e.amends)).into_iter().map(|(_, event, _)| event).collect()
    }

    /// The event that makes a day tell nothing, where one does.
    pub fn event_on(&self, date: NaiveDate) -> Option<&Event> {
        self.events().into_iter().find(|event| event.covers(date))
    }
}

fn decision(line: &Line) -> Option<&Decision> {
    match line {
        Line::Decision(decision) => Some(decision),
        Line::Event(_) => None,
    }
}

fn event(line: &Line) -> Option<&Event> {
    match line {
        Line::Event(event) => Some(event),
        Line::Decision(_) => None,
    }
}

/// What stands of lines that amend one another: the number of the first, the last, and how many came after the first. Of
/// two lines with one number the first counts.
fn chains<'a, T>(lines: &[&'a T], told: impl Fn(&T) -> (u64, Option<u64>)) -> Vec<(u64, &'a T, usize)> {
    let mut roots: Vec<(u64, u64)> = Vec::new();
    let mut out: Vec<(u64, &T, usize)> = Vec::new();
    for &line in lines {
        let (id, amends) = told(line);
        if roots.iter().any(|known| known.0 == id) {
            continue;
        }
        let root = amends
            .and_then(|amends| roots.iter().find(|known| known.0 == amends))
            .map_or(id, |known| known.1);
        roots.push((id, root));
        match out.iter_mut().find(|chain| chain.0 == root) {
            Some(chain) => (chain.1, chain.2) = (line, chain.2 + 1),
            None => out.push((root, line, 0)),
        }
    }
    out
}
