//! Limits that reject mixes: a line for each, with its smallest miss.

use std::fmt::Write as _;

use crate::mix::limits::{Group, Of, Rule};
use crate::problem::harmless;
use crate::rank::Rejected;
use crate::tasks::Context;
use crate::tasks::rank::RankAnswer;
use crate::units::in_system;

use super::{grouped, wrapped};

/// Width of the count.
const COUNT: usize = 11;
/// Limits shown before the rest is counted.
const LINES: usize = 8;

/// Limits by group; a rule of several outlets or wells is told by the one that is missed least, its
/// count that of the one that rejects most.
pub(super) fn rejected(context: &Context, answer: &RankAnswer) -> String {
    let mut rules: Vec<(Rule, Vec<&Rejected>)> = Vec::new();
    for r in &answer.ranking.rejected {
        match rules.iter_mut().find(|(rule, _)| *rule == r.check.rule) {
            Some((_, list)) => list.push(r),
            None => rules.push((r.check.rule, vec![r])),
        }
    }
    let mut out = String::new();
    let mut before: Option<Group> = None;
    for (rule, list) in rules.iter().take(LINES) {
        let group = rule.group();
        if before != Some(group) {
            let _ = writeln!(out, "Rejected by {} limits: mixes, and the nearest miss", group.words());
            before = Some(group);
        }
        out.push_str(&told(context, answer, list));
    }
    if rules.len() > LINES {
        let _ = writeln!(out, "{:COUNT$}  and {} more: --json", "", rules.len() - LINES);
    }
    out
}

/// One line: how many mixes, the nearest miss in words, where else.
fn told(context: &Context, answer: &RankAnswer, list: &[&Rejected]) -> String {
    let site = context.site();
    let Some(nearest) = list.iter().max_by(|a, b| a.check.room.total_cmp(&b.check.room)) else {
        return String::new();
    };
    let mut words = harmless(&in_system(&nearest.check.words(site), context.system));
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
    wrapped(&format!("{count:>COUNT$}  {words}"), COUNT + 4)
}
