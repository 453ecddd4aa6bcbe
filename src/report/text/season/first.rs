//! The few figures people decide by.

use std::fmt::Write as _;

use crate::problem::harmless;
use crate::season::{Exhausted, Outcome, TargetTally};
use crate::target::{Tally, Target};
use crate::tasks::Context;
use crate::tasks::season::{SeasonAnswer, SeasonRun};
use crate::units::System;

use super::super::river::record::{days_of, tally};
use super::super::river::{amounts, rules};
use super::super::volume;
use super::{at_place, exhausted_words, unjudged};

/// Label and words of each of them.
pub(super) fn first(context: &Context, answer: &SeasonAnswer, system: System) -> Vec<(&'static str, String)> {
    let outcome = &answer.main.outcome;
    let mut out = vec![("Runs out", exhausted(outcome))];
    out.extend(out_of_reach(answer).map(|words| ("", words)));
    out.extend(reserve(context, outcome, system).map(|words| ("Reserve", words)));
    let targets = targets(context, &answer.main, system);
    for (i, words) in targets.into_iter().enumerate() {
        out.push((if i == 0 { "Outside" } else { "" }, words));
    }
    if let Some(ended) = &answer.main.run.ended {
        out.push(("STOPS", format!("on {}: {}", ended.date, harmless(&ended.words))));
    }
    out
}

/// When no allowed mix reaches a target any more.
pub fn exhausted(outcome: &Outcome) -> String {
    let what = "even the coldest mix allowed is too warm for the target at the dam";
    match (&outcome.exhausted, outcome.exhausted_until) {
        (Exhausted::On(date), None) => {
            let last = outcome.exhausted_last.unwrap_or(*date);
            format!("from {date} on {what}; to {last}, the last day of decision on which a rule asks")
        }
        (Exhausted::On(date), Some(until)) => {
            format!(
                "from {date} on {what}; from {until} on one is cold enough again (looked at on days of decision)"
            )
        }
        (Exhausted::NotBy(date), _) => {
            format!(
                "not by {date}: on every day of decision a mix is allowed that is cold enough for the target at the dam"
            )
        }
        (Exhausted::Unknown(why), _) => format!("not known: {}", harmless(why)),
    }
}

/// `it runs out in 3 of 3 cases, first on 2026-09-12 (warm), last on 2026-10-03 (cool)`; `None` of a single case.
pub fn out_of_reach(answer: &SeasonAnswer) -> Option<String> {
    let cases = answer.cases();
    let known = cases.iter().filter(|r| !matches!(r.outcome.exhausted, Exhausted::Unknown(_))).count();
    let mut dates: Vec<_> =
        cases.iter().filter_map(|r| Some((r.outcome.exhausted.on()?, harmless(&r.run.case)))).collect();
    dates.sort();
    if known < 2 {
        return None;
    }
    let Some((first, last)) = dates.first().zip(dates.last()) else {
        return Some(format!("it runs out in none of {known} cases"));
    };
    let when = match dates.len() {
        1 => format!("on {} ({})", first.0, first.1),
        _ if first.0 == last.0 => format!("on {} in each of them", first.0),
        _ => format!("first on {} ({}), last on {} ({})", first.0, first.1, last.0, last.1),
    };
    Some(format!("it runs out in {} of {known} cases, {when}", dates.len()))
}

/// When the first reserve is gone into; `None` of a site without.
pub fn reserve(context: &Context, outcome: &Outcome, system: System) -> Option<String> {
    let reserves = &context.site().season.reserves;
    let told = reserves.iter().zip(&outcome.reserves).map(|(reserve, (_, under))| {
        let what = format!(
            "{} colder than {} from {:02}-{:02} on",
            volume(reserve.volume_m3, system),
            super::super::temperature(reserve.colder_c, system),
            reserve.from.month,
            reserve.from.day
        );
        match under {
            Exhausted::On(date) => format!("under it from {date}: {what}"),
            kept => format!("{}: {what}", exhausted_words(kept)),
        }
    });
    let told: Vec<String> = told.collect();
    (!told.is_empty()).then(|| told.join("; "))
}

/// Every target with its days outside in the season.
pub fn targets(context: &Context, run: &SeasonRun, system: System) -> Vec<String> {
    let site = context.site();
    let of = |told: &TargetTally| {
        let rule = site.targets.get(told.target)?;
        let unjudged = |oxygen: bool| unjudged::why(site, &run.run.days, rule, told, oxygen);
        let range = told.temperature.as_ref().filter(|t| is_valid(t));
        let range = range.map(|t| counted(rule, t, &unjudged(false), system));
        let floor = told.oxygen.as_ref().filter(|t| is_valid(t)).map(|t| {
            let by = |by: f64| outside_by(rule, by, true, system);
            format!("oxygen {}", judged(t, &by, &unjudged(true)))
        });
        let words: Vec<String> = [range, floor].into_iter().flatten().collect();
        let asks = rules::asks(rule, system);
        (!words.is_empty())
            .then(|| format!("{} ({asks}): {}", at_place(&rule.name, &rule.point), words.join("; ")))
    };
    let told: Vec<String> = run.outcome.targets.iter().filter_map(of).collect();
    if told.is_empty() { vec!["no target is valid on a day of the season".to_owned()] } else { told }
}

/// A range's tally, its degree-days with it.
fn counted(rule: &Target, of: &Tally, unjudged: &str, system: System) -> String {
    let mut out = judged(of, &|by| outside_by(rule, by, false, system), unjudged);
    if of.sum_outside > 0.0 && rule.is_of_temperature() && !rule.statistic.counts_days() {
        let _ = write!(out, ", {} in all", amounts::degree_days(of.sum_outside, system));
    }
    out
}

/// Whether the rule is valid on any day of the season.
fn is_valid(of: &Tally) -> bool {
    of.judged + of.unknown > 0
}

fn judged(of: &Tally, amount: &dyn Fn(f64) -> String, unjudged: &str) -> String {
    if of.judged == 0 {
        return format!("not judged on any of {}: {unjudged}", days(of.unknown));
    }
    tally(of, amount, &format!("not judged ({unjudged})"))
}

/// How far outside a rule: of its oxygen floor, or in the unit of its range.
pub fn outside_by(rule: &Target, by: f64, oxygen: bool, system: System) -> String {
    match (oxygen, rule.oxygen_min_mg_l) {
        (true, Some(_)) => format!("{by:.1} mg/L"),
        (true, None) => format!("{:.0} % of saturation", 100.0 * by),
        (false, _) => amounts::by(rule, by, system),
    }
}

/// `34 days`.
pub(super) fn days(count: u32) -> String {
    days_of(f64::from(count))
}
