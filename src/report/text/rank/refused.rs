//! Limits that reject mixes: a line for each, with its smallest miss.

use crate::mix::limits::{Of, Rule};
use crate::problem::harmless;
use crate::rank::Rejected;
use crate::tasks::Context;
use crate::tasks::rank::RankAnswer;
use crate::units::in_system;

use super::{grouped, labelled};

/// Lines shown before the rest is counted.
const LINES: usize = 8;

/// Limits by group; one rule of several outlets or wells is told by the one that is missed least.
pub(super) fn rejected(context: &Context, answer: &RankAnswer) -> String {
    let mut rules: Vec<(Rule, Vec<&Rejected>)> = Vec::new();
    for r in &answer.ranking.rejected {
        match rules.iter_mut().find(|(rule, _)| *rule == r.check.rule) {
            Some((_, list)) => list.push(r),
            None => rules.push((r.check.rule, vec![r])),
        }
    }
    let mut out = String::new();
    for (at, (rule, list)) in rules.iter().take(LINES).enumerate() {
        let group = rule.group().words();
        let label = if at == 0 { "Rejected" } else { "" };
        out.push_str(&labelled(label, &format!("{group}: {}", told(context, list))));
    }
    if rules.len() > LINES {
        out.push_str(&labelled("", &format!("and {} more: --json", rules.len() - LINES)));
    }
    out
}

fn told(context: &Context, list: &[&Rejected]) -> String {
    let site = context.site();
    let Some(nearest) = list.iter().max_by(|a, b| a.check.room.total_cmp(&b.check.room)) else {
        return String::new();
    };
    let mut words = harmless(&in_system(&nearest.check.words(site), context.system));
    if let (Rule::Outage, Of::Outlet(outlet)) = (nearest.check.rule, nearest.check.of)
        && let Some(day) = site.limits.in_use_from(outlet, context.on.date_naive())
    {
        words.push_str(&format!(", possible from {day}"));
    }
    let count = list.iter().map(|r| r.count).max().unwrap_or(0);
    if list.len() == 1 {
        return format!("{words}: {} mixes", grouped(count));
    }
    let others: Vec<&str> =
        list.iter().filter(|r| !std::ptr::eq(**r, *nearest)).filter_map(|r| r.check.of.name(site)).collect();
    format!("{words}; farther off at {}: up to {} mixes each", harmless(&others.join(", ")), grouped(count))
}
