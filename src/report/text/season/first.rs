//! The few figures people decide by.

use std::fmt::Write as _;

use crate::problem::harmless;
use crate::season::{Exhausted, Outcome, Spell, TargetTally};
use crate::target::{Tally, Target};
use crate::tasks::Context;
use crate::tasks::season::{SeasonAnswer, SeasonRun};
use crate::units::{Dimension, System, in_system, say, show};

use super::super::learned::applied;
use super::super::river::record::{days_of, tally};
use super::super::river::{amounts, rules};
use super::super::volume;
use super::{at_place, exhausted_words, short, unjudged};

/// Cases whose dates are all told (choice: a line or two of them).
const LISTED: usize = 6;

/// Degree-days outside that are told, C days (choice: half of the whole one shown).
const SEEN_C_DAYS: f64 = 0.5;

/// A pool this little above full is not told of, m (choice: a gauge shows no less).
const ABOVE_FULL_M: f64 = 0.01;

/// Label and words of each of them.
pub(super) fn first(context: &Context, answer: &SeasonAnswer, system: System) -> Vec<(&'static str, String)> {
    let outcome = &answer.main.outcome;
    let mut out = vec![("Runs out", exhausted(outcome, system))];
    out.extend(out_of_reach(answer).map(|words| ("", words)));
    out.extend(reserve(context, outcome, system).map(|words| ("Reserve", words)));
    let targets = targets(context, &answer.main, system);
    for (i, words) in targets.into_iter().enumerate() {
        out.push((if i == 0 { "Outside" } else { "" }, words));
    }
    out.extend(above_full(context, &answer.main).map(|words| ("POOL", in_system(&words, system))));
    out.extend(learned(context, answer, system).map(|words| ("Learned", words)));
    if let Some(ended) = &answer.main.run.ended {
        out.push(("STOPS", format!("on {}: {}", ended.date, harmless(&ended.words))));
    }
    out
}

/// What was learned and is applied, and the season without it.
pub(super) fn learned(context: &Context, answer: &SeasonAnswer, system: System) -> Option<String> {
    let applied = applied(context.site(), system)?;
    let Some(without) = &answer.without else { return Some(applied) };
    let both = [&answer.main, without];
    let mean = |run: &SeasonRun| {
        let released: Vec<f64> = run.run.days.iter().filter_map(|d| Some(d.release?.temperature_c)).collect();
        let mean_c = released.iter().sum::<f64>() / released.len() as f64;
        if released.is_empty() {
            "nothing".to_owned()
        } else {
            show(mean_c, Dimension::Temperature, system, 1)
        }
    };
    let [with, plain] = both.map(mean);
    let outside = both.map(|run| days(run.outcome.score.days_outside));
    let without = exhausted(&without.outcome, system);
    Some(format!(
        "{applied}: the release is {with} on the mean of the days, {} outside; without it {plain}, {}; runs out: {without}",
        outside[0], outside[1]
    ))
}

/// That the pool comes to stand above full, from when on, and how high at most.
fn above_full(context: &Context, run: &SeasonRun) -> Option<String> {
    let full_m = context.site().pool.full_m;
    let above = || run.run.days.iter().filter(|day| day.pool_m > full_m + ABOVE_FULL_M);
    let first = above().next()?;
    let highest = above().max_by(|a, b| a.pool_m.total_cmp(&b.pool_m))?;
    Some(format!(
        "the pool stands ABOVE FULL on {}, from {} on: {} at most, on {}, full being {}; look at the flows of the plan",
        days(u32::try_from(above().count()).unwrap_or(u32::MAX)),
        first.date,
        say::m(highest.pool_m, 2),
        highest.date,
        say::m(full_m, 2)
    ))
}

/// When no allowed mix reaches a target any more, by how much, and how near it comes where one does.
pub fn exhausted(outcome: &Outcome, system: System) -> String {
    let what = "even the coldest mix allowed is too warm for the target at the dam";
    match &outcome.exhausted {
        Exhausted::On(date) => {
            let spells: Vec<String> = outcome.spells.iter().map(|of| spell(of, system)).collect();
            format!("from {date} on {what}: {} (looked at on days of decision)", spells.join(", "))
        }
        Exhausted::NotBy(date) => {
            let nearest = outcome.nearest.map_or_else(String::new, |(room_c, on)| {
                let room = show(room_c.max(0.0), Dimension::TemperatureDifference, system, 2);
                format!("; the nearest is {on}, with {room} to spare")
            });
            format!(
                "not by {date}: on every day of decision a mix is allowed that is cold enough for the target at the \
                 dam{nearest}"
            )
        }
        Exhausted::Unknown(why) => format!("not known: {}", harmless(why)),
    }
}

/// `09-29 to 10-20, by 0.8 C at most`, and whether one is cold enough again after.
fn spell(of: &Spell, system: System) -> String {
    let days =
        if of.from == of.to { short(of.from) } else { format!("{} to {}", short(of.from), short(of.to)) };
    let after = of.until.map_or_else(
        || ", the last day of decision on which a rule asks".to_owned(),
        |until| format!(", from {} on one is cold enough again", short(until)),
    );
    format!("{days} by {}{after}", super::super::step(of.most_c, system))
}

/// `it runs out in 2 of 3 cases: on 2026-09-12 (warm), 2026-10-03 (cool)`, in the order of the dates; the first and the
/// last where there are many; `None` of a single case.
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
        count if count <= LISTED => {
            let each: Vec<String> = dates.iter().map(|(date, case)| format!("{date} ({case})")).collect();
            format!("on {}", each.join(", "))
        }
        _ => format!("first on {} ({}), last on {} ({})", first.0, first.1, last.0, last.1),
    };
    Some(format!("it runs out in {} of {known} cases: {when}", dates.len()))
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
    if of.sum_outside >= SEEN_C_DAYS && rule.is_of_temperature() && !rule.statistic.counts_days() {
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
