//! The rules valid on the date, as a table: where, what they ask, how each release stands, which governs.

use crate::mix::TargetStanding;
use crate::problem::harmless;
use crate::target::{Standing, Target};
use crate::tasks::Context;
use crate::tasks::river::{RiverAnswer, Way, Which};
use crate::units::{Dimension, System, figure, in_system};

use super::super::mix::missed;
use super::super::targets::{EXAMPLE, HELD_AS_WISH, range, standing_words, value_words};

/// How one release stands against a rule.
#[derive(Debug, Clone, PartialEq)]
pub struct RuleStanding {
    /// Which release.
    pub of: Which,
    /// In words, the release named first.
    pub words: String,
    /// What is outside and by how much, else that all is inside, or unknown.
    pub short: String,
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
    /// What its range is of; empty where it sets none.
    pub statistic: String,
    /// Statistic and range in words, and what the standing rests on.
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
                of: way.which,
                short: short(s, rule, system),
                words: format!("{}: {value}{}{why}", way.which.word(), standing_words(s, rule, system)),
                missed: s.missed(),
            })
        };
        let wish = if s.wish && !rule.soft { format!(", {HELD_AS_WISH}") } else { String::new() };
        Some(RuleRow {
            target: s.target,
            name: harmless(&rule.name),
            point: harmless(&rule.point),
            statistic: statistic(rule, system),
            asks: format!("{}{wish}; {}", asks(rule, system), s.basis.words()),
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

/// What is outside and by how much; else that all is inside, or that something is not known.
fn short(s: &TargetStanding, rule: &Target, system: System) -> String {
    let unit = system.unit(Dimension::TemperatureDifference);
    let warm = s.temperature.1.map(|by| missed(s.temperature.0, unit.from_si(by), unit.symbol()));
    let aired = s.oxygen.1.map(|by| format!("oxygen {}", missed(s.oxygen.0, by, "mg/L")));
    let outside = |standing: Standing| matches!(standing, Standing::Above | Standing::Below);
    let told = [warm.filter(|_| outside(s.temperature.0)), aired.filter(|_| outside(s.oxygen.0))];
    let told: Vec<String> = told.into_iter().flatten().collect();
    let unknown = (rule.has_range() && s.temperature.0 == Standing::Unknown)
        || (rule.has_floor() && s.oxygen.0 == Standing::Unknown);
    match (told.is_empty(), unknown) {
        (true, true) => "UNKNOWN".to_owned(),
        (true, false) => "inside".to_owned(),
        (false, _) => told.join(", "),
    }
}

/// What a rule asks, with its statistic.
pub(in crate::report::text) fn asks(rule: &Target, system: System) -> String {
    let statistic = statistic(rule, system);
    if statistic.is_empty() { range(rule, system) } else { format!("{statistic}, {}", range(rule, system)) }
}

/// What its range is of; empty where it sets none, since a floor names its own.
fn statistic(rule: &Target, system: System) -> String {
    if rule.has_range() { in_system(&rule.statistic.words(), system) } else { String::new() }
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
    let share = rule.oxygen_min_share.map(|share| format!("{:.0} %", 100.0 * share));
    let air = rule.oxygen_min_mg_l.map(|o| format!("{o:.1} mg/L")).or(share);
    [
        ("low", warm(rule.low_c)),
        ("preferred", warm(rule.preferred_c)),
        ("high", warm(rule.high_c)),
        ("oxygen", air),
    ]
}

/// Who set a rule and where it is written.
pub(super) fn source(rule: &Target) -> String {
    let mut parts = Vec::new();
    parts.extend(rule.authority.as_deref().map(|a| format!("set by {}", harmless(a))));
    parts.push(rule.source.as_deref().map_or_else(|| "no source given".to_owned(), harmless));
    format!("[{}]", parts.join("; "))
}
