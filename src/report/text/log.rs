//! The log: what was decided, what happened, what was written.

use std::fmt::Write as _;

use crate::problem::harmless;
use crate::record::Decided;
use crate::record::line::{Considered, Decision, Event, Expected, Gates, Line};
use crate::site::Site;
use crate::tasks::Context;
use crate::tasks::log::Logged;
use crate::units::System;

use super::{flow, labelled, list, oxygen, temperature, wrapped};
use crate::report::caution;
use crate::report::sentence::flags_of;

/// The answer of `log`: every decision and event, the last first.
pub fn log(context: &Context) -> String {
    let (site, system) = (context.site(), context.system);
    let mut out = super::head(context, &context.fingerprint);
    let log = &context.log.log;
    let (decisions, events) = (log.decisions(), log.events());
    if decisions.is_empty() && events.is_empty() {
        let words = "nothing is logged yet: gatemix log SITE --decide --by NAME --why TEXT";
        out.push_str(&labelled("Log", words));
    }
    for decided in decisions.iter().rev() {
        out.push_str(&decision(context, decided));
        out.push('\n');
    }
    for event in &events {
        out.push_str(&labelled("Event", &event_words(site, event)));
    }
    out.push('\n');
    out.push_str(&list("The log", &flags_of(&context.log.problems), true, system));
    out.push_str(&wrapped(caution(), 0));
    out
}

/// What was written, and where.
pub fn logged(context: &Context, logged: &Logged) -> String {
    let (site, system) = (context.site(), context.system);
    let mut out = String::new();
    let file = harmless(&logged.appended.path.display().to_string());
    match &logged.appended.line {
        Line::Decision(decision) => {
            let what = match decision.amends {
                Some(amends) if decision.withdrawn => format!("decision {amends} is withdrawn"),
                Some(amends) => format!("decision {amends} is amended"),
                None => format!("decision {}", decision.id),
            };
            out.push_str(&labelled("Logged", &format!("{what}, on the disk in {file}")));
            out.push_str(&body(site, decision, system));
        }
        Line::Event(event) => {
            out.push_str(&labelled("Logged", &format!("event {}, on the disk in {file}", event.id)));
            out.push_str(&labelled("Event", &event_words(site, event)));
        }
    }
    out.push_str(&list("To know", &flags_of(&logged.said), true, system));
    out.push_str(&wrapped(caution(), 0));
    out
}

fn decision(context: &Context, decided: &Decided) -> String {
    let (site, system) = (context.site(), context.system);
    let standing = if decided.stands(context.on) { ", set now" } else { "" };
    let amended = match decided.amended {
        0 => String::new(),
        1 => ", amended once".to_owned(),
        times => format!(", amended {times} times"),
    };
    labelled("Decision", &format!("{}{standing}{amended}", decided.id))
        + &body(site, decided.decision, system)
}

/// A decision, from whom it is to what is expected.
fn body(site: &Site, decision: &Decision, system: System) -> String {
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
    let mut out = labelled("", &from);
    out.push_str(&labelled("Why", &harmless(&decision.why)));
    out.push_str(&labelled("Set", &gates(&decision.chosen, system)));
    for expected in &decision.expected {
        out.push_str(&labelled("Expected", &expected_words(expected, system)));
    }
    if !decision.considered.is_empty() {
        let first: Vec<String> = decision.considered.iter().take(3).map(|c| considered(c, system)).collect();
        out.push_str(&labelled("Ranked", &first.join("; ")));
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
    out.push_str(&labelled("Known", &words));
    out
}

fn gates(gates: &Gates, system: System) -> String {
    let one = |(name, &flow_m3s): (&String, &f64)| {
        let open = gates.open.get(name).map_or_else(String::new, |percent| format!(" at {percent:.0}%"));
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

fn considered(mix: &Considered, system: System) -> String {
    let outside = if mix.outside.is_empty() {
        String::new()
    } else {
        format!(", outside {}", harmless(&mix.outside.join(", ")))
    };
    format!("{} = {}{outside}", gates(&mix.gates, system), temperature(mix.temperature_c, system))
}

fn event_words(site: &Site, event: &Event) -> String {
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
