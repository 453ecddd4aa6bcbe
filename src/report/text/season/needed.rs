//! The cold water needed on a date, case by case, in words.

use crate::problem::{Problem, harmless};
use crate::season::{Amount, Found, Stretch};
use crate::target::Standing;
use crate::tasks::Context;
use crate::tasks::season::{CaseNeeded, NeededAnswer};
use crate::units::System;

use super::super::{labelled, list, temperature, volume};
use super::first::days;
use super::{at_place, section, short};

/// Columns of a case, of an amount with its days, and of the difference; a space stands before each but the first.
const NAME: usize = 11;
const AMOUNT: usize = 15;
const DAYS: usize = 5;
const APART: usize = 21;

/// Everything but head and caution.
pub(in crate::report::text) fn body(context: &Context, answer: &NeededAnswer) -> String {
    let system = context.system;
    let mut out = labelled("Season", &asked(answer));
    let left = format!(
        "on {} below {}, of what the outlets can draw, for no day outside the hard targets by their temperature from \
         then to the end",
        answer.date,
        temperature(answer.threshold_c, system)
    );
    out.push_str(&labelled("Left", &left));
    out.push('\n');
    out.push_str(&section("Case by case", needed(context, answer, system)));
    out.push_str(&section("How it is sought", vec![how(answer, system)]));
    let notes: Vec<&Problem> = answer.notes.iter().collect();
    out.push_str(&list("The season", &notes, false, system));
    out
}

fn asked(answer: &NeededAnswer) -> String {
    let last = answer.plan.span().map_or(answer.begins, |(_, last)| last);
    format!(
        "{} to {last}; plan {} ({}), {}, decided every {}",
        answer.begins,
        harmless(&answer.plan.name),
        harmless(&answer.plan.file),
        harmless(&answer.strategy),
        days(answer.decide_days)
    )
}

/// A table of the cases, then what is to be known of each, a line each.
pub fn needed(context: &Context, answer: &NeededAnswer, system: System) -> Vec<String> {
    let mut out = vec![row(["case", "left", "days", "needed", "days", ""])];
    out.extend(answer.cases.iter().map(|case| cells(case, system)));
    out.push("days: outside from then on, as the season is and with what is needed".to_owned());
    out.extend(answer.cases.iter().flat_map(|case| told(context, case, system)));
    let amounts =
        answer.cases.iter().filter_map(|case| case.needed.found.as_ref().ok()).flat_map(|found| &found.tried);
    if amounts.into_iter().any(|one| one.lost > 0) {
        out.push("!: the season stops before its end, and days after it are not counted".to_owned());
    }
    if answer.cases.iter().any(|case| case.foresight) {
        out.push(
            "*: solved with that very case in view, no evidence, so unseen cases stand first".to_owned(),
        );
    }
    out
}

fn row([case, left, outside, needed, remain, apart]: [&str; 6]) -> String {
    let case = super::super::fitted(case, NAME);
    let row = format!(
        "{case:<NAME$} {left:>AMOUNT$} {outside:>DAYS$} {needed:>AMOUNT$} {remain:>DAYS$} {apart:>APART$}"
    );
    row.trim_end().to_owned()
}

fn cells(of: &CaseNeeded, system: System) -> String {
    let usable = |amount: &Amount| {
        amount.usable_m3.map_or_else(|| "nothing usable".to_owned(), |m3| volume(m3, system))
    };
    let blank = || "-".to_owned();
    let made = of.needed.made.as_ref();
    let least = of.needed.found.as_ref().ok().map(|found| &found.least);
    let mark = if of.foresight { "*" } else { "" };
    row([
        &format!("{mark}{}", harmless(&of.case)),
        &made.map_or_else(blank, usable),
        &made.map_or_else(blank, outside),
        &least.map_or_else(blank, usable),
        &least.map_or_else(blank, outside),
        &of.needed.to_spare_m3().map_or_else(String::new, |m3| apart(m3, system)),
    ])
}

/// Days outside, marked where the season stops before its end.
fn outside(of: &Amount) -> String {
    format!("{} d{}", of.days_outside, if of.lost > 0 { "!" } else { "" })
}

/// `short 2.90 hm3`, `spare 2.90 hm3`
fn apart(to_spare_m3: f64, system: System) -> String {
    let word = if to_spare_m3 < 0.0 { "short" } else { "spare" };
    format!("{word} {}", volume(to_spare_m3.abs(), system))
}

/// What is to be known of a case.
fn told(context: &Context, of: &CaseNeeded, system: System) -> Vec<String> {
    let case = harmless(&of.case);
    let mut out = Vec::new();
    match &of.needed.found {
        Err(why) => out.push(format!("{case}: what is needed cannot be told: {why}")),
        Ok(found) => {
            out.extend(found_words(context, found, system).into_iter().map(|w| format!("{case}: {w}")));
        }
    }
    let unjudged = of.needed.not_judged.iter().filter_map(|&at| context.site().targets.get(at));
    let unjudged: Vec<String> = unjudged.map(|rule| at_place(&rule.name, &rule.point)).collect();
    if !unjudged.is_empty() {
        out.push(format!("{case}: not judged on any day, so not among the days: {}", unjudged.join(", ")));
    }
    out
}

fn found_words(context: &Context, found: &Found, system: System) -> Vec<String> {
    let mut out = Vec::new();
    let least = &found.least;
    if !least.is_enough() {
        let most = found.tried.last().and_then(|most| most.usable_m3);
        let most = most.map_or_else(String::new, |m3| format!(", up to {}", volume(m3, system)));
        let remain: Vec<String> = found.remain.iter().map(|row| stretch(context, row)).collect();
        let stops = if least.lost > 0 {
            format!("; the season stops {} before its end", days(least.lost))
        } else {
            String::new()
        };
        out.push(format!(
            "{} outside remain however much is left, of {} amounts tried{most}: {}{stops}",
            days(least.days_outside),
            found.tried.len(),
            if remain.is_empty() { "none of those reached".to_owned() } else { remain.join("; ") }
        ));
    }
    let tried: Vec<String> = found
        .tried
        .iter()
        .filter_map(|one| Some(format!("{} {}", volume(one.usable_m3?, system), outside(one))))
        .collect();
    out.push(format!("tried {}", tried.join(", ")));
    if least.oxygen_days > 0 {
        out.push(format!(
            "by oxygen {} outside with what is needed: that is not counted, since cold water does not cure it",
            days(least.oxygen_days)
        ));
    }
    out
}

/// `autumn at dam below 09-21 to 09-28`
fn stretch(context: &Context, of: &Stretch) -> String {
    let rule = context.site().targets.get(of.target);
    let name = rule.map_or_else(String::new, |rule| at_place(&rule.name, &rule.point));
    let side = if of.side == Standing::Below { "below" } else { "above" };
    let to = if of.first == of.last { String::new() } else { format!(" to {}", short(of.last)) };
    format!("{name} {side} {}{to}", short(of.first))
}

/// What the figures are and what they are not.
fn how(answer: &NeededAnswer, system: System) -> String {
    let cold = temperature(answer.threshold_c, system);
    format!(
        "the season is run to {}, its pool is then given more or less water below {cold} in the same volume, by moving \
         the boundary to the warmer water up or down, and it goes on to its end with gates chosen as before. Needed is \
         the least of the amounts tried with the fewest days outside; less between two of them is not ruled out, and \
         more may bring days below a range",
        answer.date
    )
}
