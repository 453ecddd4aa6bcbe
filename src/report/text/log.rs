//! The log: what was decided, what happened, what was written.

mod learning;
mod past;

use std::fmt::Write as _;

use crate::problem::{Problem, harmless};
use crate::record::Decided;
use crate::record::line::{Considered, Decision, Event, Expected, Gates, Line};
use crate::site::Site;
use crate::tasks::Context;
use crate::tasks::log::{Logged, Past};
use crate::units::System;

use crate::report::caution;
use crate::report::sentence::flags_of;

use super::{flow, labelled, list, oxygen, temperature, wrapped};

pub use learning::{candidate, learning};
pub(in crate::report) use past::{apart, count, signed, span};
pub use past::{hindcast, left_out, level_name, scores, spell, spells, turned};

/// The answer of `log`: every decision and event, the last first; then what happened.
pub fn log(context: &Context, past: &Past) -> String {
    let (site, system) = (context.site(), context.system);
    let mut out = super::head(context, &context.fingerprint);
    let log = &context.log.log;
    let (decisions, events) = (log.decisions(), log.events());
    if decisions.is_empty() && events.is_empty() {
        let words = "nothing is logged yet: gatemix log SITE --decide --by NAME --why TEXT";
        out.push_str(&labelled("Log", words));
    }
    for decided in decisions.iter().rev() {
        for (label, words) in decision(context, decided) {
            out.push_str(&labelled(label, &words));
        }
        if let Some(turned) = past.decisions.iter().find(|turned| turned.id == decided.id) {
            for words in self::turned(turned, system) {
                out.push_str(&labelled("Came", &words));
            }
        }
        out.push('\n');
    }
    for event in &events {
        out.push_str(&labelled("Event", &event_words(site, event)));
    }
    out.push('\n');
    out.push_str(&happened(context, past));
    out.push_str(&list("The log", &flags_of(&context.log.problems), true, system));
    out.push_str(&wrapped(caution(), 0));
    out
}

/// What happened, under its headings; nothing where no day is past.
fn happened(context: &Context, past: &Past) -> String {
    let (Some(first), Some(last)) = (past.days.first(), past.days.last()) else { return String::new() };
    let held = past.temperature.all.n.max(past.oxygen.all.n);
    let words = format!(
        "What happened, {} to {}: {held} of {} days can be held against the gauge, each with a band computed anew",
        first.date,
        last.date,
        past.days.len()
    );
    let mut out = wrapped(&words, 2);
    for line in scores(context, past) {
        out.push_str(&line);
        out.push('\n');
    }
    out.push('\n');
    out.push_str(&section("Left out", indented(left_out(past))));
    out.push_str(&section("Outside the band of the day", indented(spells(context, past))));
    out.push_str(&section("The season gone through again", indented(hindcast(context, past))));
    out.push_str(&section("What the record teaches", indented(learning(context, past))));
    out.push_str(&section(
        "What is applied",
        indented(super::learned::applied(context.site(), context.system).into_iter().collect()),
    ));
    if let Some(lines) = super::learned::learned_yaml(context.site(), &past.learning) {
        out.push_str("For site.yaml, in the place of `learned` where it has one; nothing was written\n");
        for line in lines.lines() {
            _ = writeln!(out, "  {}", harmless(line));
        }
        out.push('\n');
    }
    let notes: Vec<&Problem> = past.notes.iter().collect();
    out.push_str(&list("Assumed", &notes, false, context.system));
    out
}

fn indented(lines: Vec<String>) -> Vec<String> {
    lines.into_iter().map(|line| format!("  {line}")).collect()
}

/// Lines under a heading, each wrapped two cells further in than it begins; nothing without lines.
fn section(heading: &str, lines: Vec<String>) -> String {
    if lines.is_empty() {
        return String::new();
    }
    let mut out = format!("{heading}\n");
    for line in lines {
        let lead = line.len() - line.trim_start().len();
        out.push_str(&wrapped(&line, lead + 2));
    }
    out.push('\n');
    out
}

/// What was written, and where.
pub fn logged(context: &Context, logged: &Logged) -> String {
    let (site, system) = (context.site(), context.system);
    let mut out = String::new();
    let file = harmless(&logged.appended.path.display().to_string());
    // before the rest: a limit that is broken is not to be scrolled past
    let known = list("To know", &flags_of(&logged.said), true, system);
    match &logged.appended.line {
        Line::Decision(decision) => {
            let what = match decision.amends {
                Some(amends) if decision.withdrawn => format!("decision {amends} is withdrawn"),
                Some(amends) => format!("decision {amends} is amended"),
                None => format!("decision {}", decision.id),
            };
            out.push_str(&labelled("Logged", &format!("{what}, on the disk in {file}")));
            out.push_str(&known);
            for (label, words) in body(site, decision, system) {
                out.push_str(&labelled(label, &words));
            }
        }
        Line::Event(event) => {
            out.push_str(&labelled("Logged", &format!("event {}, on the disk in {file}", event.id)));
            out.push_str(&labelled("Event", &event_words(site, event)));
            out.push_str(&known);
        }
    }
    out.push_str(&wrapped(caution(), 0));
    out
}

/// A decision: its number and standing, then what it says, each with its label.
pub fn decision(context: &Context, decided: &Decided) -> Vec<(&'static str, String)> {
    let standing = if decided.stands(context.on) { ", set now" } else { "" };
    let amended = match decided.amended {
        0 => String::new(),
        1 => ", amended once".to_owned(),
        times => format!(", amended {times} times"),
    };
    let mut out = vec![("Decision", format!("{}{standing}{amended}", decided.id))];
    out.extend(body(context.site(), decided.decision, context.system));
    out
}

/// What a decision says, from whom it is to what is expected.
fn body(site: &Site, decision: &Decision, system: System) -> Vec<(&'static str, String)> {
    let time = |t: chrono::DateTime<chrono::FixedOffset>| {
        t.with_timezone(&site.offset).format("%Y-%m-%d %H:%M %:z").to_string()
    };
    let mut from = format!("from {}, by {}", time(decision.from), harmless(&decision.by));
    if let Some(until) = decision.until {
        _ = write!(from, ", to be decided again by {until}");
    }
    if let Some(trigger) = &decision.trigger {
        _ = write!(from, ", or when {}", harmless(trigger));
    }
    let mut out =
        vec![("", from), ("Why", harmless(&decision.why)), ("Set", gates(site, &decision.chosen, system))];
    out.extend(decision.expected.iter().map(|expected| ("Expected", expected_words(expected, system))));
    if !decision.considered.is_empty() {
        let first: Vec<String> =
            decision.considered.iter().take(3).map(|c| considered(site, c, system)).collect();
        out.push(("Ranked", first.join("; ")));
    }
    let known = &decision.known;
    let words = format!(
        "written {}; inputs {}, site {}, cast {}; gatemix {}",
        time(decision.at),
        harmless(&known.inputs),
        harmless(&known.site),
        harmless(&known.profile),
        harmless(&decision.version)
    );
    out.push(("Known", words));
    out
}

/// Gates with their flows and openings.
pub fn gates(site: &Site, gates: &Gates, system: System) -> String {
    // of what is set by its flow alone nobody told how far it is open
    let by_flow = |name: &str| {
        let outlet = site.outlets.iter().find(|outlet| outlet.name == name);
        outlet.is_some_and(|outlet| outlet.well.is_none() && outlet.positions.is_empty())
    };
    let one = |(name, &flow_m3s): (&String, &f64)| {
        let open = gates
            .open
            .get(name)
            .filter(|_| !by_flow(name))
            .map_or_else(String::new, |percent| format!(" at {percent:.0}%"));
        format!("{} {}{open}", harmless(name), flow(flow_m3s, system))
    };
    let all: Vec<String> = gates.set.iter().map(one).collect();
    if all.is_empty() { "every gate shut".to_owned() } else { all.join(", ") }
}

fn expected_words(expected: &Expected, system: System) -> String {
    let warmth = expected.temperature_c.map(|c| temperature(c, system));
    let band = |range: Option<[f64; 2]>, say: &dyn Fn(f64) -> String| {
        range.map_or_else(String::new, |[low, high]| format!(" [{} to {}]", say(low), say(high)))
    };
    let mut out = match warmth {
        None => "temperature not known".to_owned(),
        Some(warmth) => warmth + &band(expected.band_c, &|c| temperature(c, system)),
    };
    if let Some(mg_l) = expected.oxygen_mg_l {
        _ = write!(out, ", {}{}", oxygen(Some(mg_l)), band(expected.band_oxygen_mg_l, &|o| oxygen(Some(o))));
    }
    format!("at {}: {out}", harmless(&expected.point))
}

fn considered(site: &Site, mix: &Considered, system: System) -> String {
    let outside = if mix.outside.is_empty() {
        String::new()
    } else {
        format!(", outside {}", harmless(&mix.outside.join(", ")))
    };
    format!("{} = {}{outside}", gates(site, &mix.gates, system), temperature(mix.temperature_c, system))
}

/// An event in one line.
pub fn event_words(site: &Site, event: &Event) -> String {
    let from = event.from.with_timezone(&site.offset).date_naive();
    let span = match event.until {
        None => format!("from {from} on, until it is amended"),
        Some(until) if until == from => format!("on {from}"),
        Some(until) => format!("from {from} to {until}"),
    };
    format!(
        "{} {span}: {} (by {}); its days are left out of learning",
        event.id,
        harmless(&event.text),
        harmless(&event.by)
    )
}
