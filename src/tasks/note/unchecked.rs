//! Limits that are not checked, of the setting now and of the one wanted as one list.

use crate::mix::limits::{Group, Rule};

/// A limit that nobody gave, or that what is known does not reach.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Unchecked {
    /// Which.
    pub rule: Rule,
    /// Outlets or wells it is missing for; empty where it is of the whole.
    pub of: Vec<String>,
}

impl Unchecked {
    /// Whether an order is not ready for signature while it is missing.
    pub fn weighs(&self) -> bool {
        matches!(self.rule.group(), Group::Structure | Group::WaterControlPlan)
    }

    /// The limit by its name, with what it is missing for.
    pub fn words(&self) -> String {
        if self.of.is_empty() {
            self.rule.name().to_owned()
        } else {
            format!("{} of {}", self.rule.name(), self.of.join(", "))
        }
    }
}

/// Limits of a change: they say nothing of gates that stand already.
const OF_A_CHANGE: [Rule; 7] = [
    Rule::MovesUnderFlow,
    Rule::FlowChangePerHour,
    Rule::FlowChangePerDay,
    Rule::TemperatureChangePerHour,
    Rule::TemperatureChangePerDay,
    Rule::MaxMoves,
    Rule::MaxCrewHours,
];

/// What mixes tell of it (`flow.max of N1, N2`) as one list, the weightiest first; without those of a change where
/// nothing moves.
pub(super) fn unchecked<'a>(told: impl Iterator<Item = &'a String>, stands: bool) -> Vec<Unchecked> {
    let mut out: Vec<Unchecked> = Vec::new();
    for (rule, of) in told.filter_map(|text| read(text)) {
        if stands && OF_A_CHANGE.contains(&rule) {
            continue;
        }
        match out.iter_mut().find(|known| known.rule == rule) {
            Some(known) => known.of.extend(of),
            None => out.push(Unchecked { rule, of }),
        }
    }
    for one in &mut out {
        one.of.sort_unstable();
        one.of.dedup();
    }
    out.sort_by_key(|one| one.rule);
    out
}

fn read(text: &str) -> Option<(Rule, Vec<String>)> {
    let of = |rule: &Rule| {
        let rest = text.strip_prefix(rule.name())?;
        match rest.strip_prefix(" of ") {
            _ if rest.is_empty() => Some((*rule, Vec::new())),
            Some(names) => Some((*rule, names.split(", ").map(str::to_owned).collect())),
            None => None,
        }
    };
    Rule::ALL.iter().find_map(of)
}
