//! What the allowed mixes reach on the days of decisions against what the rules at the dam ask, and the day from which
//! none reaches it any more.
//!
//! Methods: `docs/methods.md`, section 8.

use chrono::NaiveDate;

use crate::mix::Day;
use crate::site::Site;
use crate::target::Figure;

use super::outcome::{Asks, Exhausted, Reached};
use super::run::{Run, Setup};

/// A release this much warmer than a rule's high is round-off, C (choice).
const SAME_C: f64 = 1e-9;

/// What every decision could reach, and what the hard rules at the dam ask on its day.
pub(super) fn reached(setup: &Setup, site: &Site, run: &Run) -> Vec<Reached> {
    run.decisions
        .iter()
        .map(|decision| Reached {
            date: decision.date,
            attainable_c: decision.attainable_c,
            asks: asks(setup, site, decision.date),
        })
        .collect()
}

/// Ranges that the hard rules at the dam leave to the temperature of a steady day, buffer counted in.
fn asks(setup: &Setup, site: &Site, date: NaiveDate) -> Vec<Asks> {
    let day = Day::new(site, date, setup.skies.conditions.clone());
    let of_dam = |rule: &crate::mix::RuleToday| {
        let target = site.targets.get(rule.target)?;
        let today = rule.today.as_ref().ok().filter(|_| rule.point.is_none() && !target.soft)?;
        let is_temperature = !target.statistic.is_sum() && today.figure != Figure::HourlyChange;
        let range = (today.low_asked_c(), today.high_c);
        (is_temperature && range != (None, None)).then_some(Asks {
            target: rule.target,
            low_c: range.0,
            high_c: range.1,
        })
    };
    day.rules(site).iter().filter_map(of_dam).collect()
}

/// First day of decision from which, to the end of the season or of the rule, no allowed mix comes down to the high
/// of a hard rule at the dam: the earliest of all rules.
pub(super) fn exhausted(site: &Site, reached: &[Reached], run: &Run) -> Exhausted {
    let Some(end) = run.days.last().map(|day| day.date) else {
        return Exhausted::Unknown("the season has no day".to_owned());
    };
    let ends: Vec<Reach> = (0..site.targets.len()).map(|rule| of_rule(reached, rule)).collect();
    let since =
        ends.iter().filter_map(|end| if let Reach::OutSince(date) = end { Some(*date) } else { None });
    match (since.min(), &run.ended) {
        (Some(on), _) => Exhausted::On(on),
        (None, Some(ended)) => Exhausted::Unknown(format!("the season stops on {}", ended.date)),
        (None, None) if ends.iter().all(|end| *end == Reach::Untold) => {
            let words = "no hard rule at the dam bounds the temperature from above on a day of decision";
            Exhausted::Unknown(words.to_owned())
        }
        (None, None) => Exhausted::NotBy(end),
    }
}

/// How a rule's high ends in the season.
#[derive(Debug, Clone, Copy, PartialEq)]
enum Reach {
    /// No decision tells.
    Untold,
    /// On its last day of decision a mix comes down to it.
    Kept,
    /// From this day of decision on none does, to its end.
    OutSince(NaiveDate),
}

fn of_rule(reached: &[Reached], rule: usize) -> Reach {
    let told = reached.iter().filter_map(|one| {
        let high_c = one.asks.iter().find(|a| a.target == rule)?.high_c?;
        Some((one.date, one.attainable_c?[0] > high_c + SAME_C))
    });
    told.fold(Reach::Untold, |before, (date, out)| match (out, before) {
        (false, _) => Reach::Kept,
        (true, Reach::OutSince(_)) => before,
        (true, _) => Reach::OutSince(date),
    })
}

/// Days of decision in a row on which no allowed mix comes down to the high of the hard rules at the dam: first and
/// last of each stretch.
pub(super) fn stretches(reached: &[Reached]) -> Vec<(NaiveDate, NaiveDate)> {
    let mut out: Vec<(NaiveDate, NaiveDate)> = Vec::new();
    let mut goes_on = false;
    for one in reached {
        let is_out = one.by_c().is_some_and(|by| by > SAME_C);
        match out.last_mut() {
            Some(last) if is_out && goes_on => last.1 = one.date,
            _ if is_out => out.push((one.date, one.date)),
            _ => {}
        }
        goes_on = is_out;
    }
    out
}
