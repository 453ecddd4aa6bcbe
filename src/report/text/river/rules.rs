//! The rules valid on the date, as a table: where, what they ask, how each release stands, which governs.

use crate::mix::TargetStanding;
use crate::problem::harmless;
use crate::target::Target;
use crate::tasks::Context;
use crate::tasks::river::{RiverAnswer, Way};
use crate::units::{Dimension, System, figure, in_system};

use super::super::targets::{EXAMPLE, HELD_AS_WISH, range, standing_words, value_words};

/// How one release stands against a rule.
#[derive(Debug, Clone, PartialEq)]
pub struct RuleStanding {
    /// In words, the release named first.
    pub words: String,
    /// Whether it is a miss.
    pub missed: bool,
}

/// A rule with its standings.
#[derive(Debug, Clone, PartialEq)]
pub struct RuleRow {
    /// Its index in the targets.
    pub target: usize,
    /// Its name.
    pub name: String,
    /// Where it applies.
    pub point: String,
    /// Its statistic.
    pub statistic: String,
    /// Statistic and range in words.
    pub asks: String,
    /// Low, preferred, high and oxygen, each with its value in the unit shown.
    pub cells: [(&'static str, Option<String>); 4],
    /// Standings, in the order of the releases.
    pub standings: Vec<RuleStanding>,
    /// Whether it governs.
    pub governs: bool,
    /// Authority and source.
    pub source: String,
    /// What an example is not.
    pub example: Option<&'static str>,
}

/// The rules valid on the date, in the order of the site.
pub fn rules(context: &Context, answer: &RiverAnswer, system: System) -> Vec<RuleRow> {
    let site = context.site();
    let Some(spoken) = answer.spoken() else { return Vec::new() };
    let row = |s: &TargetStanding| {
        let rule = site.targets.get(s.target)?;
        let of = |way: &Way| {
            let s = way.targets.iter().find(|t| t.target == s.target)?;
            let value = value_words(s, rule, system).map_or_else(String::new, |v| format!("{v}, "));
            let why = s.words.as_deref().map_or_else(String::new, |w| format!(" ({})", in_system(w, system)));
            Some(RuleStanding {
                words: format!("{}: {value}{}{why}", way.which.word(), standing_words(s, rule, system)),
                missed: s.missed(),
            })
        };
        let wish = if s.wish && !rule.soft { format!(", {HELD_AS_WISH}") } else { String::new() };
        Some(RuleRow {
            target: s.target,
            name: harmless(&rule.name),
            point: harmless(&rule.point),
            statistic: in_system(&rule.statistic.words(), system),
            asks: format!("{}{wish}", asks(rule, system)),
            cells: cells(rule, system),
            standings: answer.ways.iter().filter_map(of).collect(),
            governs: s.governs,
            source: source(rule),
            example: rule.example.then_some(EXAMPLE),
        })
    };
    spoken.targets.iter().filter_map(row).collect()
}

/// Rules that leave no release in common.
pub fn conflicts(context: &Context, answer: &RiverAnswer, system: System) -> Vec<String> {
    let told = answer.conflicts().iter().map(|c| c.problem(context.site()).advice(system));
    told.collect()
}

/// What a rule asks, with its statistic.
pub(super) fn asks(rule: &Target, system: System) -> String {
    format!("{}, {}", in_system(&rule.statistic.words(), system), range(rule, system))
}

/// Its floor of oxygen.
pub(super) fn floor(rule: &Target) -> String {
    let statistic = rule.oxygen_statistic().words();
    let example = if rule.example { format!(", {EXAMPLE}") } else { String::new() };
    match (rule.oxygen_min_mg_l, rule.oxygen_min_share) {
        (Some(least), _) => format!("{statistic} of oxygen at least {least:.1} mg/L{example}"),
        (None, Some(share)) => {
            format!("{statistic} of oxygen at least {:.0} % of saturation{example}", 100.0 * share)
        }
        (None, None) => String::new(),
    }
}

fn cells(rule: &Target, system: System) -> [(&'static str, Option<String>); 4] {
    let dimension =
        if rule.is_of_temperature() { Dimension::Temperature } else { Dimension::TemperatureDifference };
    let unit = system.unit(dimension);
    let warm = |c: Option<f64>| c.map(|c| format!("{} {}", figure(c, unit, 1), unit.symbol()));
    [
        ("low", warm(rule.low_c)),
        ("preferred", warm(rule.preferred_c)),
        ("high", warm(rule.high_c)),
        ("oxygen", rule.oxygen_min_mg_l.map(|o| format!("{o:.1} mg/L"))),
    ]
}

/// Who set a rule and where it is written.
pub(super) fn source(rule: &Target) -> String {
    let mut parts = Vec::new();
    parts.extend(rule.authority.as_deref().map(|a| format!("set by {}", harmless(a))));
    parts.push(rule.source.as_deref().map_or_else(|| "no source given".to_owned(), harmless));
    format!("[{}]", parts.join("; "))
}
