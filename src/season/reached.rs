//! What the allowed mixes reach on the days of decisions against what the rules at the dam ask, and the day on which
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

/// A stretch without reach.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct OutOfReach {
    /// Its first day of decision, on which no allowed mix comes down to the high of a hard rule at the dam.
    pub(super) first: Exhausted,
    /// Its last.
    pub(super) last: Option<NaiveDate>,
    /// The first after it on which one does again.
    pub(super) until: Option<NaiveDate>,
}

/// The first stretch of days of decision on which no allowed mix comes down to the high of a hard rule at the dam; days
/// on which no rule asks are passed over. Autumn cools what summer spent, so it may end.
pub(super) fn exhausted(reached: &[Reached], run: &Run) -> OutOfReach {
    let never = |first| OutOfReach { first, last: None, until: None };
    let Some(end) = run.days.last().map(|day| day.date) else {
        return never(Exhausted::Unknown("the season has no day".to_owned()));
    };
    let told: Vec<(NaiveDate, bool)> =
        reached.iter().filter_map(|one| Some((one.date, out_of_reach(one)?))).collect();
    let first = told.iter().position(|(_, out)| *out);
    match (first, &run.ended) {
        (Some(first), _) => {
            let from = &told[first..];
            let last = from.iter().take_while(|(_, out)| *out).last().map(|(date, _)| *date);
            let until = from.iter().find(|(_, out)| !out).map(|(date, _)| *date);
            OutOfReach { first: Exhausted::On(told[first].0), last, until }
        }
        (None, Some(ended)) => never(Exhausted::Unknown(format!("the season stops on {}", ended.date))),
        (None, None) if told.is_empty() => {
            let words = "no hard rule at the dam bounds the temperature from above on a day of decision";
            never(Exhausted::Unknown(words.to_owned()))
        }
        (None, None) => never(Exhausted::NotBy(end)),
    }
}

/// Whether the coldest mix of a day of decision is too warm for a hard rule; `None` where no rule or no range tells.
fn out_of_reach(one: &Reached) -> Option<bool> {
    let high_c = one.asks.iter().filter_map(|asks| asks.high_c).reduce(f64::min)?;
    Some(one.attainable_c?[0] > high_c + SAME_C)
}
