//! Limits that reject mixes: a line for each, with its smallest miss.

use std::fmt::Write as _;

use crate::mix::limits::{Group, Of, Rule};
use crate::problem::harmless;
use crate::rank::Rejected;
use crate::tasks::Context;
use crate::tasks::rank::RankAnswer;
use crate::units::{System, in_system};

use super::{grouped, wrapped};

/// Width of the count.
pub const COUNT: usize = 11;
/// Limits the command shows before the rest is counted.
const LINES: usize = 8;

/// What a rule rejects.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Told {
    /// The group of the rule.
    pub group: Group,
    /// How many mixes, in figures or words.
    pub count: String,
    /// The nearest miss, and where else.
    pub words: String,
}

/// Limits by group, in their order; a rule of several outlets or wells is told by the one that is missed least, its
/// count that of the one that rejects most.
pub fn rejected(context: &Context, answer: &RankAnswer, system: System) -> Vec<Told> {
    let mut rules: Vec<(Rule, Vec<&Rejected>)> = Vec::new();
    for r in &answer.ranking.rejected {
        match rules.iter_mut().find(|(rule, _)| *rule == r.check.rule) {
            Some((_, list)) => list.push(r),
            None => rules.push((r.check.rule, vec![r])),
        }
    }
    rules.iter().filter_map(|(rule, list)| told(context, answer, (*rule, list), system)).collect()
}

/// The limits as the command lists them.
pub(super) fn list(context: &Context, answer: &RankAnswer, system: System) -> String {
    let told = rejected(context, answer, system);
    let mut out = String::new();
    let mut before: Option<Group> = None;
    for Told { group, count, words } in told.iter().take(LINES) {
        if before != Some(*group) {
            let _ = writeln!(out, "{}", heading(*group));
            before = Some(*group);
        }
        out.push_str(&wrapped(&format!("{count:>COUNT$}  {words}"), COUNT + 4));
    }
    if told.len() > LINES {
        let _ = writeln!(out, "{:COUNT$}  and {} more: --json", "", told.len() - LINES);
    }
    out
}

/// Stands over the limits of a group.
pub fn heading(group: Group) -> String {
    format!("Rejected by {} limits: mixes, and the nearest miss", group.words())
}

fn told(
    context: &Context,
    answer: &RankAnswer,
    (rule, list): (Rule, &[&Rejected]),
    system: System,
) -> Option<Told> {
    let site = context.site();
    let nearest = list.iter().max_by(|a, b| a.check.room.total_cmp(&b.check.room))?;
    let mut words = harmless(&in_system(&nearest.check.words(site), system));
    if let (Rule::Outage, Of::Outlet(outlet)) = (nearest.check.rule, nearest.check.of)
        && let Some(day) = site.limits.in_use_from(outlet, context.on.date_naive())
    {
        let _ = write!(words, ", possible from {day}");
    }
    if list.len() > 1 {
        let _ = write!(words, "; and {} more", list.len() - 1);
    }
    let most = list.iter().map(|r| r.count).max().unwrap_or(0);
    let count = if most == answer.ranking.examined { "every mix".to_owned() } else { grouped(most) };
    Some(Told { group: rule.group(), count, words })
}
