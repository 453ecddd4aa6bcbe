//! What the allowed mixes reach on the days of decisions against what the rules at the dam ask, and the day on which
//! none reaches it any more.
//!
//! Methods: `docs/methods.md`, section 8.

use chrono::NaiveDate;

use crate::mix::Day;
use crate::site::Site;
use crate::target::Figure;

use super::called::because;
use super::decide::{Decision, Why};
use super::gates;
use super::outcome::{Asks, Exhausted, Reached, Spell};
use super::run::{Run, Setup};

/// A release no farther than this outside a range reaches it, C (choice: half the tenth of a degree shown; the water of a
/// decision is read to about 0.01 C).
pub(super) const SAME_C: f64 = 0.05;

/// What every decision could reach, and what the hard rules at the dam ask on its day.
pub(super) fn reached(setup: &Setup, site: &Site, run: &Run) -> Vec<Reached> {
    run.decisions
        .iter()
        .map(|decision| Reached {
            date: decision.date,
            attainable_c: decision.attainable_c,
            asks: asks(setup, site, decision.date),
            because: forced(site, decision).or_else(|| because(site, decision)),
        })
        .collect()
}

/// The limit that forces a decision, in words.
fn forced(site: &Site, decision: &Decision) -> Option<String> {
    let Why::Forced(check) = decision.why else { return None };
    Some(gates::why(site, &check, true).1)
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

/// The first day of decision on which no allowed mix comes down to the high of a hard rule at the dam, and every such
/// stretch; days on which no rule asks are passed over. Autumn cools what summer spent, so that one may end.
pub(super) fn exhausted(reached: &[Reached], run: &Run) -> (Exhausted, Vec<Spell>) {
    let spells = spells(reached);
    let Some(end) = run.days.last().map(|day| day.date) else {
        return (Exhausted::Unknown("the season has no day".to_owned()), spells);
    };
    let first = match (spells.first(), &run.ended) {
        (Some(spell), _) => Exhausted::On(spell.from),
        (None, Some(ended)) => Exhausted::Unknown(format!("the season stops on {}", ended.date)),
        (None, None) if reached.iter().all(|one| room_c(one).is_none()) => {
            let words = "no hard rule at the dam bounds the temperature from above on a day of decision";
            Exhausted::Unknown(words.to_owned())
        }
        (None, None) => Exhausted::NotBy(end),
    };
    (first, spells)
}

fn spells(reached: &[Reached]) -> Vec<Spell> {
    let mut out: Vec<Spell> = Vec::new();
    for (date, room_c) in rooms(reached) {
        let open = out.last_mut().filter(|spell| spell.until.is_none());
        match (open, room_c < -SAME_C) {
            (Some(spell), true) => (spell.to, spell.most_c) = (date, spell.most_c.max(-room_c)),
            (None, true) => out.push(Spell { from: date, to: date, until: None, most_c: -room_c }),
            (Some(spell), false) => spell.until = Some(date),
            (None, false) => {}
        }
    }
    out
}

/// The least room between the high of a hard rule at the dam and the coldest release within reach, C, below zero where
/// that is warmer, and its day of decision; the first of equals. `None` where no day tells.
pub(super) fn nearest(reached: &[Reached]) -> Option<(f64, NaiveDate)> {
    let least = |least: (NaiveDate, f64), one: (NaiveDate, f64)| if one.1 < least.1 { one } else { least };
    rooms(reached).reduce(least).map(|(date, room_c)| (room_c, date))
}

fn rooms(reached: &[Reached]) -> impl Iterator<Item = (NaiveDate, f64)> + '_ {
    reached.iter().filter_map(|one| Some((one.date, room_c(one)?)))
}

/// How far the coldest mix of a day of decision lies under the high of the hard rules, C; `None` where no rule or no
/// range tells.
fn room_c(one: &Reached) -> Option<f64> {
    Some(one.range_c().1? - one.attainable_c?[0])
}
