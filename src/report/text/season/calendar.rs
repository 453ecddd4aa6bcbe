//! The calendar: when gates can be used, what is moved, what is within reach.

use chrono::NaiveDate;

use crate::mix::limits::Move;
use crate::problem::harmless;
use crate::rank::Criterion;
use crate::season::{Decision, Fully, GateLife, Reached, Why};
use crate::site::Site;
use crate::target::{DAM, Target};
use crate::tasks::Context;
use crate::tasks::season::SeasonRun;
use crate::units::{Dimension, System, figure, in_system};

use super::super::gates::moved;
use super::short;

/// Columns of a name, and of a date in a table.
const NAME: usize = 16;
const DATE: usize = 8;
/// Columns of what is released.
const RELEASED: usize = 9;
/// A miss that shows as a tenth, C (choice: half a tenth of the larger degree).
const SEEN_C: f64 = 0.05;
/// A miss that is round-off, C (choice).
const SAME_C: f64 = 1e-9;
/// Columns of a range.
const RANGE: usize = 13;

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
        return format!("{name:<NAME$}from {first} to the end{}{before}", fully(life));
    };
    let book = life.book_by.map_or_else(String::new, |by| format!("; {}", book(context, by)));
    format!("{name:<NAME$}from {first} to {last}{}; then {}{book}", fully(life), reason.unwrap_or_default())
}

/// On which days of a stretch a gate can be opened as wide as it goes, where that is not all of them.
fn fully(life: &GateLife) -> String {
    let (from, to) = match life.fully {
        Fully::Always => return String::new(),
        Fully::Never => return ", never fully open".to_owned(),
        Fully::Within(from, to) => (from, to),
    };
    let ends = [
        (Some(from) != life.first_day).then(|| format!(" from {from}")),
        (Some(to) != life.last_day).then(|| format!(" to {to}")),
    ];
    let ends: String = ends.into_iter().flatten().collect();
    format!(", fully open only{ends}")
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
        let forced = on.forced.as_ref().map(|(_, words)| harmless(&in_system(words, system)));
        let by = on.book_by.map_or_else(String::new, |by| format!("; {}", book(context, by)));
        let decision = run.run.decisions.iter().find(|d| d.date == on.date);
        let past =
            decision.and_then(|d| past(site, d, system)).map_or_else(String::new, |p| format!("; {p}"));
        let called = || on.because.as_deref().map(harmless);
        let why = forced.map(|limit| format!("forced: {limit}")).or_else(called);
        let why = why.unwrap_or_else(|| decision.map_or("", due).to_owned());
        let makes = changed(run, on.date, system).map_or_else(String::new, |words| format!("; {words}"));
        format!("{}  {}; {why}{makes}{by}{past}", on.date, moved_words(site, &on.moved, system))
    }));
    // a limit of the change can be broken where no gate moves
    let still = run.run.decisions.iter().filter(|d| !outcome.calendar.iter().any(|on| on.date == d.date));
    out.extend(still.filter_map(|d| Some(format!("{}  no gate moved; {}", d.date, past(site, d, system)?))));
    out
}

/// Why something was decided that no limit forced.
fn due(of: &Decision) -> &'static str {
    match of.why {
        Why::Begin => "the first decision",
        Why::Forced(_) => "forced",
        Why::Due | Why::Rule { .. } | Why::OutageOver(_) | Why::Crew(_) => "due",
    }
}

/// What the gates of a day make of the release of the day before.
fn changed(run: &SeasonRun, date: NaiveDate, system: System) -> Option<String> {
    let at = run.run.days.iter().position(|day| day.date == date)?;
    let (before, after) = (run.run.days.get(at.checked_sub(1)?)?.release?, run.run.days.get(at)?.release?);
    let unit = system.unit(Dimension::Temperature);
    let [from, to] = [before, after].map(|release| figure(release.temperature_c, unit, 1));
    let oxygen = before.oxygen_below_mg_l.zip(after.oxygen_below_mg_l);
    let oxygen =
        oxygen.map_or_else(String::new, |(from, to)| format!(", its oxygen from {from:.1} to {to:.1} mg/L"));
    Some(format!("the release goes from {from} to {to} {}{oxygen}", unit.symbol()))
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

/// The range within reach on every day of decision, what is released and the range asked: a line each.
pub fn reach(run: &SeasonRun, system: System) -> Vec<String> {
    let unit = system.unit(Dimension::Temperature);
    let c = |c: f64| figure(c, unit, 1);
    let mut out = vec![format!(
        "{:<DATE$}{:<RANGE$}{:<RELEASED$}asked at the dam",
        format!("in {}", unit.symbol()),
        "within reach",
        "released"
    )];
    out.extend(run.outcome.reached.iter().map(|on| {
        let within =
            on.attainable_c.map_or_else(|| "not known".to_owned(), |[a, b]| format!("{} to {}", c(a), c(b)));
        let asked = match on.range_c() {
            (None, None) => "nothing".to_owned(),
            (Some(low), None) => format!("from {}", c(low)),
            (None, Some(high)) => format!("to {}", c(high)),
            (Some(low), Some(high)) => format!("{} to {}", c(low), c(high)),
        };
        let released = released_c(run, on.date);
        let shown = released.map_or_else(|| "nothing".to_owned(), c);
        let remark =
            missed(on, system).or_else(|| passed_over(run, on, released?, system)).unwrap_or_default();
        format!("{:<DATE$}{within:<RANGE$}{shown:<RELEASED$}{asked:<RANGE$}{remark}", short(on.date))
            .trim_end()
            .to_owned()
    }));
    out
}

/// Temperature of the release of a day, C.
fn released_c(run: &SeasonRun, date: NaiveDate) -> Option<f64> {
    run.run.days.iter().find(|day| day.date == date)?.release.map(|release| release.temperature_c)
}

/// Where no mix reaches the range.
fn missed(on: &Reached, system: System) -> Option<String> {
    Some(format!("no mix reaches it: {}", outside(on.by_c()?, system)?))
}

/// Where one reaches it and what is released does not: what came before it.
fn passed_over(run: &SeasonRun, on: &Reached, released_c: f64, system: System) -> Option<String> {
    let (low, high) = on.range_c();
    let over = high.map_or(0.0, |high| (released_c - high).max(0.0));
    let under = low.map_or(0.0, |low| (released_c - low).min(0.0));
    let by = outside(if over > 0.0 { over } else { under }, system)?;
    let place = |of: Criterion| run.order.iter().position(|criterion| *criterion == of);
    let why = match (place(Criterion::Oxygen), place(Criterion::Range)) {
        (Some(oxygen), Some(range)) if oxygen < range && is_short_of_oxygen(run, on.date) => {
            ": oxygen comes first"
        }
        _ => ", though within reach",
    };
    Some(format!("{by}{why}"))
}

/// Whether the oxygen of a day lies below a hard floor, or no more than a step of the order above it.
fn is_short_of_oxygen(run: &SeasonRun, date: NaiveDate) -> bool {
    let site = &run.skies.site;
    let points = site.river.as_ref().map_or(&[][..], |river| &river.points);
    let Some(day) = run.run.days.iter().find(|day| day.date == date) else { return false };
    let oxygen = |rule: &Target| {
        if rule.point == DAM {
            return day.release?.oxygen_below_mg_l;
        }
        let point = points.iter().position(|point| point.name == rule.point)?;
        day.points.as_ref()?.get(point)?.oxygen_min_mg_l
    };
    let hard = site.targets.iter().filter(|rule| !rule.soft);
    let mut floors = hard
        .filter(|rule| rule.valid_on(date, site.year_type.as_deref()))
        .filter_map(|rule| Some((oxygen(rule)?, rule.oxygen_min_mg_l?)));
    floors.any(|(oxygen, floor)| oxygen < floor + site.bins.oxygen_mg_l)
}

/// How far outside a range, more than zero above it; `None` where that is less than is shown.
fn outside(by_c: f64, system: System) -> Option<String> {
    let by = super::super::step(by_c.abs(), system);
    let side = if by_c > 0.0 { "ABOVE" } else { "BELOW" };
    if by_c.abs() >= SEEN_C {
        return Some(format!("{side} by {by}"));
    }
    (by_c.abs() > SAME_C).then(|| format!("{side} by a hair"))
}
