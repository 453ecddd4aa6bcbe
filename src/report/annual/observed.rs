//! Every target against what was recorded at its point: days inside and outside, how far, and by month.

use std::collections::BTreeSet;

use crate::report::page::{Block, Table};
use crate::report::text::river::{by, degree_days};
use crate::report::text::{EXAMPLE, named};
use crate::target::{Held, Target};
use crate::tasks::Context;
use crate::tasks::report::ReportAnswer;
use crate::tasks::river::Observed;
use crate::units::{System, figure};

use super::cells;

/// What of a target a record is held against.
#[derive(Clone, Copy, PartialEq)]
enum Of {
    Range,
    Oxygen,
    Share,
}

pub(super) fn blocks(context: &Context, answer: &ReportAnswer) -> Vec<Block> {
    let (site, system) = (context.site(), context.system);
    let held: Vec<(&Target, Of, &Held)> = answer
        .observed
        .iter()
        .filter_map(|observed| Some((site.targets.get(observed.target)?, observed)))
        .flat_map(|(rule, observed)| bounds(observed).into_iter().map(move |(of, held)| (rule, of, held)))
        .collect();
    let mut out = Vec::new();
    if held.is_empty() {
        out.push(Block::Words(
            "No day on which a target is valid was recorded at its point: nothing can be judged.".to_owned(),
        ));
    } else {
        out.push(Block::Table(all(&held, system)));
        out.extend(by_month(&held, system).map(Block::Table));
    }
    let untold: Vec<String> =
        answer.unobserved.iter().filter_map(|&index| Some(named(site.targets.get(index)?, system))).collect();
    if !untold.is_empty() {
        out.push(Block::Words(format!(
            "Not judged, for want of a record at their points: {}.",
            untold.join("; ")
        )));
    }
    let rules = || held.iter().map(|(rule, ..)| rule);
    if rules().any(|rule| rule.example) {
        out.push(Block::Warning(format!(
            "Targets with {EXAMPLE}: what is counted against them judges no river."
        )));
    }
    let sources: BTreeSet<String> = rules()
        .filter(|rule| !rule.example)
        .filter_map(|rule| Some(format!("{}: {}", rule.name, rule.source.as_ref()?)))
        .collect();
    if !sources.is_empty() {
        out.push(Block::List(sources.into_iter().collect()));
    }
    out
}

fn bounds(observed: &Observed) -> Vec<(Of, &Held)> {
    let record = &observed.record;
    let all =
        [(Of::Range, &record.temperature), (Of::Oxygen, &record.oxygen), (Of::Share, &record.oxygen_share)];
    all.into_iter()
        .filter_map(|(of, held)| Some((of, held.as_ref()?)))
        .filter(|(_, held)| !held.days.is_empty())
        .collect()
}

/// The target and what of it: `growing season, 10.0 to 16.0 C`.
fn asked(rule: &Target, of: Of, system: System) -> String {
    let unit = system.unit(rule.dimension());
    let one = |c: f64| format!("{} {}", figure(c, unit, 1), unit.symbol());
    let bound = match of {
        Of::Range => match (rule.low_c, rule.high_c) {
            (Some(low), Some(high)) => format!("{} to {}", figure(low, unit, 1), one(high)),
            (Some(low), None) => format!("from {}", one(low)),
            (None, Some(high)) => format!("to {}", one(high)),
            (None, None) => String::new(),
        },
        Of::Oxygen => rule.oxygen_min_mg_l.map_or_else(String::new, |o| format!("oxygen from {o:.1} mg/L")),
        Of::Share => rule
            .oxygen_min_share
            .map_or_else(String::new, |share| format!("oxygen from {:.0} % of saturation", 100.0 * share)),
    };
    let wish = if rule.soft { ", a wish" } else { "" };
    format!("{}, {bound}{wish}", named(rule, system))
}

/// How far outside, in the unit of what is held.
fn amount(rule: &Target, of: Of, value: f64, system: System) -> String {
    match of {
        Of::Range => by(rule, value, system),
        Of::Oxygen => format!("{value:.1} mg/L"),
        Of::Share => format!("{:.0} % of saturation", 100.0 * value),
    }
}

fn all(held: &[(&Target, Of, &Held)], system: System) -> Table {
    let row = |(rule, of, held): &(&Target, Of, &Held)| {
        let tally = &held.all;
        let worst = tally.worst.map_or_else(
            || "none".to_owned(),
            |(by, on)| {
                format!("{} on {on}, {} in a row at most", amount(rule, *of, by, system), tally.longest_run)
            },
        );
        let sum = if *of == Of::Range && rule.is_of_temperature() && !rule.statistic.is_sum() {
            degree_days(tally.sum_outside, system)
        } else {
            "-".to_owned()
        };
        vec![
            asked(rule, *of, system),
            tally.judged.to_string(),
            tally.judged.saturating_sub(tally.over + tally.under).to_string(),
            tally.under.to_string(),
            tally.over.to_string(),
            sum,
            worst,
            tally.unknown.to_string(),
        ]
    };
    Table {
        caption: "Days on which each target is valid, as the gauge at its point read them; days without enough readings \
                  are not judged"
            .to_owned(),
        head: cells(&["Target", "Judged", "Inside", "Below", "Above", "Sum outside", "Farthest", "Not judged"]),
        rows: held.iter().map(row).collect(),
        right: vec![1, 2, 3, 4, 5, 7],
    }
}

/// Days outside by month, where there is more than one month.
fn by_month(held: &[(&Target, Of, &Held)], system: System) -> Option<Table> {
    let months: BTreeSet<(i32, u32)> =
        held.iter().flat_map(|(.., held)| held.months.keys().copied()).collect();
    if months.len() < 2 {
        return None;
    }
    let row = |(rule, of, held): &(&Target, Of, &Held)| {
        let month = |month: &(i32, u32)| {
            held.months.get(month).map_or_else(
                || "-".to_owned(),
                |tally| format!("{} of {}", tally.over + tally.under, tally.judged),
            )
        };
        std::iter::once(asked(rule, *of, system)).chain(months.iter().map(month)).collect()
    };
    let head = months.iter().map(|(year, month)| format!("{year}-{month:02}"));
    Some(Table {
        caption: "Days outside, of those judged, by month".to_owned(),
        head: std::iter::once("Target".to_owned()).chain(head).collect(),
        rows: held.iter().map(row).collect(),
        right: (1..=months.len()).collect(),
    })
}
