//! The calendar: when gates can be used, what is moved, what is within reach.

use chrono::NaiveDate;

use crate::mix::limits::Move;
use crate::problem::harmless;
use crate::season::{Decision, GateLife, Reached};
use crate::site::Site;
use crate::tasks::Context;
use crate::tasks::season::SeasonRun;
use crate::units::{Dimension, System, figure, in_system};

use super::super::gates::moved;
use super::short;

/// Columns of a name, and of a date in a table.
const NAME: usize = 16;
const DATE: usize = 8;
/// Columns of a range.
const RANGE: usize = 16;

/// When every gate can be used: first and last day, why not longer, whom to tell by when.
pub fn gates(context: &Context, run: &SeasonRun, system: System) -> Vec<String> {
    run.outcome.gates.iter().map(|life| gate(context, life, system)).collect()
}

fn gate(context: &Context, life: &GateLife, system: System) -> String {
    let name = context.site().outlets.get(life.outlet).map_or_else(String::new, |o| harmless(&o.name));
    let reason = life.reason.as_ref().map(|(_, words)| harmless(&in_system(words, system)));
    let Some(first) = life.first_day else {
        return format!("{name:<NAME$}not on any day: {}", reason.unwrap_or_default());
    };
    let Some(last) = life.last_day else {
        let before = reason.map_or_else(String::new, |why| format!("; before that: {why}"));
        return format!("{name:<NAME$}from {first} to the end{before}");
    };
    let book = life.book_by.map_or_else(String::new, |by| format!("; open then: {}", book(context, by)));
    format!("{name:<NAME$}from {first} to {last}; then {}{book}", reason.unwrap_or_default())
}

/// What is moved when, by whom, and by when the crew must be told.
pub fn moves(context: &Context, run: &SeasonRun, system: System) -> Vec<String> {
    let (site, outcome) = (context.site(), &run.outcome);
    let mut out = vec![format!(
        "{} gates moved on {}, {:.1} crew hours",
        outcome.moves,
        super::super::days(outcome.calendar.len() as f64),
        outcome.crew_hours
    )];
    out.extend(outcome.calendar.iter().map(|on| {
        let forced = on.forced.as_ref().map_or_else(String::new, |(_, words)| {
            format!("; forced by {}", harmless(&in_system(words, system)))
        });
        let by = on.book_by.map_or_else(String::new, |by| format!("; {}", book(context, by)));
        let decision = run.run.decisions.iter().find(|d| d.date == on.date);
        let past =
            decision.and_then(|d| past(site, d, system)).map_or_else(String::new, |p| format!("; {p}"));
        format!("{}  {}{forced}{by}{past}", on.date, moved_words(site, &on.moved, system))
    }));
    // a limit of the change can be broken where no gate moves
    let still = run.run.decisions.iter().filter(|d| !outcome.calendar.iter().any(|on| on.date == d.date));
    out.extend(still.filter_map(|d| Some(format!("{}  no gate moved; {}", d.date, past(site, d, system)?))));
    out
}

/// Limits of the change that a decision breaks, since no mix keeps them; `None` where it breaks none.
pub fn past(site: &Site, of: &Decision, system: System) -> Option<String> {
    let words: Vec<String> =
        of.past.iter().map(|check| harmless(&in_system(&check.words(site), system))).collect();
    (!words.is_empty()).then(|| format!("NO MIX KEEPS {}", words.join(", NOR ")))
}

/// Which gates move, from where to where.
pub fn moved_words(site: &Site, moves: &[Move], system: System) -> String {
    moved(site, moves, system).join(", ")
}

/// By when the crew must be told; said where that day is past already.
fn book(context: &Context, by: NaiveDate) -> String {
    let past = if by < context.on.date_naive() { ", WHICH IS PAST" } else { "" };
    format!("book the crew by {by}{past}")
}

/// The range within reach on every day of decision against the range asked: a line each.
pub fn reach(run: &SeasonRun, system: System) -> Vec<String> {
    let unit = system.unit(Dimension::Temperature);
    let c = |c: f64| figure(c, unit, 1);
    let mut out =
        vec![format!("{:<DATE$}{:<RANGE$}asked at the dam", format!("in {}", unit.symbol()), "within reach")];
    out.extend(run.outcome.reached.iter().map(|on| {
        let within =
            on.attainable_c.map_or_else(|| "not known".to_owned(), |[a, b]| format!("{} to {}", c(a), c(b)));
        let asked = match on.range_c() {
            (None, None) => "nothing".to_owned(),
            (Some(low), None) => format!("from {}", c(low)),
            (None, Some(high)) => format!("to {}", c(high)),
            (Some(low), Some(high)) => format!("{} to {}", c(low), c(high)),
        };
        format!("{:<DATE$}{within:<RANGE$}{asked:<RANGE$}{}", short(on.date), missed(on, system))
            .trim_end()
            .to_owned()
    }));
    out
}

/// Where no mix reaches the range.
fn missed(on: &Reached, system: System) -> String {
    let by = |by: f64| super::super::step(by.abs(), system);
    match on.by_c() {
        Some(over) if over > 0.0 => format!("no mix reaches it: ABOVE by {}", by(over)),
        Some(under) if under < 0.0 => format!("no mix reaches it: BELOW by {}", by(under)),
        _ => String::new(),
    }
}
