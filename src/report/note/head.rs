//! What the change order begins with: the dam, what it is of, what is released now and in the end, what is missed.

use crate::mix::{Blend, Setting, TargetStanding};
use crate::order::Order;
use crate::site::Site;
use crate::tasks::Context;
use crate::tasks::note::{NoteAnswer, Subject};
use crate::units::say;

use super::words::{dam, flow, gates, moment, named, stands, subject};

/// Flows nearer than this are one, m3/s (choice: no figure of the order shows less).
const SAME_FLOW_M3S: f64 = 0.05;

pub(super) fn facts(context: &Context, answer: &NoteAnswer) -> Vec<(String, String)> {
    let site = context.site();
    let fact = |label: &str, value: String| (label.to_owned(), value);
    let datum = site.datum.name();
    let mut out = vec![
        fact("Dam", dam(site)),
        fact("Pool", format!("{} above {datum}", say::m(context.profile.pool_m, 2))),
        fact("Order of", subject(answer)),
    ];
    out.extend(site.order.to.clone().map(|to| fact("To", to)));
    let in_all = |setting: &Setting| {
        let flows = setting.gates.iter().chain(&setting.leaks).map(|gate| gate.flow_m3s);
        flow(flows.sum())
    };
    let wanted = &answer.mix.setting;
    let whole = || format!("{}; in all {}", gates(site, wanted), in_all(wanted));
    // what is set now and what is to be stand in a table below, where both are known
    match &answer.before {
        _ if answer.stands => out.push(fact("Set", whole())),
        Some(before) => {
            let way = answer.order.as_ref().and_then(|order| order.as_ref().ok()).and_then(highest);
            let way = way.map_or_else(String::new, |most| format!(", on the way up to {}", flow(most)));
            out.push(fact("Release", format!("now {}{way}, to be {}", in_all(before), in_all(wanted))));
        }
        None => {
            out.push(fact("Set now", "NOT KNOWN".to_owned()));
            out.push(fact("To be set", whole()));
        }
    }
    out.extend(logged(context, answer).map(|words| fact("Log", words)));
    out.extend(missed(site, answer).map(|words| fact("Targets", words)));
    if !answer.stands {
        out.push(fact("Begins", format!("{}, not before", moment(site, answer.begins))));
    }
    if let Some(change) =
        answer.mix.change.as_ref().filter(|change| change.moves.crew_hours > 0.0 && !answer.stands)
    {
        let from = change.earliest.map_or_else(String::new, |day| format!("; the crew can come from {day}"));
        out.push(fact("Crew", format!("{:.1} crew hours{from}", change.moves.crew_hours)));
    }
    out
}

/// What the log says of the decision: that it was amended, or that one is due again.
fn logged(context: &Context, answer: &NoteAnswer) -> Option<String> {
    let decided = context.standing()?;
    let (id, until) = (decided.id, decided.decision.until);
    match answer.subject {
        Subject::Decision(of) if of == id => {
            let amended = match decided.amended {
                0 => None,
                1 => Some("amended once".to_owned()),
                times => Some(format!("amended {times} times")),
            };
            let again = until.map(|until| format!("to be decided again by {until}"));
            let words: Vec<String> = amended.into_iter().chain(again).collect();
            (!words.is_empty()).then(|| format!("decision {id}: {}", words.join(", ")))
        }
        _ => until
            .filter(|_| decided.is_overdue(context.on.date_naive()))
            .map(|until| format!("decision {id} was to be decided again by {until}: it holds no longer")),
    }
}

/// Targets that are missed or unknown.
fn missed(site: &Site, answer: &NoteAnswer) -> Option<String> {
    let row = |standing: &TargetStanding| {
        let rule = site.targets.get(standing.target)?;
        Some(format!("{}: {}", named(rule), stands(standing, rule)))
    };
    let unlike = |standing: &&TargetStanding| standing.missed() || standing.unknown(site);
    let all: Vec<String> = answer.mix.mix.targets.iter().filter(unlike).filter_map(row).collect();
    (!all.is_empty()).then(|| all.join("; "))
}

/// The greatest flow after a step, m3/s, where it is greater than before and in the end.
fn highest(order: &Order) -> Option<f64> {
    let of = |release: Option<Blend>| release.map_or(0.0, |release| release.flow_m3s);
    let ends = of(order.before).max(of(order.after));
    let most = order.steps.iter().map(|step| of(step.after)).fold(0.0, f64::max);
    (most > ends + SAME_FLOW_M3S).then_some(most)
}
