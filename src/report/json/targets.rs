//! Standings against targets, conflicts among them, and what arrives at the points.

use serde::Serialize;

use crate::mix::{Conflict, TargetStanding};
use crate::report::text::EXAMPLE;
use crate::river::AtPoint;
use crate::site::Site;
use crate::target::Reference;
use crate::units::{System, in_system};

/// A target with its standing. Keys in `_c` are of temperatures and their differences, null for a sum of degrees; `value`,
/// `low` and `high` are in `unit`, the statistic's own.
#[derive(Serialize)]
pub(super) struct TargetJson {
    name: String,
    point: String,
    statistic: &'static str,
    statistic_words: String,
    basis: &'static str,
    value_c: Option<f64>,
    low_c: Option<f64>,
    preferred_c: Option<f64>,
    high_c: Option<f64>,
    buffer_c: f64,
    standing: &'static str,
    by_c: Option<f64>,
    value: Option<f64>,
    low: Option<f64>,
    high: Option<f64>,
    unit: &'static str,
    today_c: Option<f64>,
    today_low_c: Option<f64>,
    today_high_c: Option<f64>,
    reference: Option<String>,
    oxygen_mg_l: Option<f64>,
    oxygen_min_mg_l: Option<f64>,
    oxygen_percent: Option<f64>,
    oxygen_min_percent: Option<f64>,
    oxygen_statistic: &'static str,
    oxygen_standing: &'static str,
    oxygen_by_mg_l: Option<f64>,
    share_inside: Option<f64>,
    oxygen_share_inside: Option<f64>,
    share_inside_both: Option<f64>,
    governs: bool,
    soft: bool,
    held_as_wish: bool,
    priority: u32,
    words: Option<String>,
    authority: Option<String>,
    source: Option<String>,
    example: bool,
    example_words: Option<&'static str>,
}

/// Two hard rules that leave nothing in common: the one that allows at most, and the one that asks at least.
#[derive(Serialize)]
pub(super) struct ConflictJson {
    targets: [String; 2],
    at_most_c: f64,
    at_least_c: f64,
    text: String,
}

/// What arrives at a point.
#[derive(Serialize)]
pub(super) struct PointJson {
    name: String,
    distance_km: f64,
    travel_h: f64,
    temperature_c: f64,
    temperature_max_c: Option<f64>,
    oxygen_mg_l: Option<f64>,
    oxygen_least_mg_l: Option<f64>,
}

pub(super) fn targets(site: &Site, standings: &[TargetStanding]) -> Vec<TargetJson> {
    standings.iter().map(|s| target(site, s)).collect()
}

fn target(site: &Site, s: &TargetStanding) -> TargetJson {
    let rule = &site.targets[s.target];
    let is_sum = rule.statistic.is_sum();
    let in_c = |value: Option<f64>| value.filter(|_| !is_sum);
    let unit = match s.count {
        Some(_) => rule.statistic.unit(),
        None if is_sum => rule.statistic.unit(),
        None => "C",
    };
    TargetJson {
        name: rule.name.clone(),
        point: rule.point.clone(),
        statistic: rule.statistic.name(),
        statistic_words: in_system(&rule.statistic.words(), System::Si),
        basis: s.basis.words(),
        value_c: in_c(s.value_c),
        low_c: in_c(rule.low_c),
        preferred_c: in_c(rule.preferred_c),
        high_c: in_c(rule.high_c),
        buffer_c: rule.buffer_c,
        standing: s.temperature.0.word(),
        by_c: s.by_c(site),
        value: s.count.or(s.value_c),
        low: rule.low_c.filter(|_| s.count.is_none()),
        high: rule.high_c.filter(|_| s.count.is_none()),
        unit,
        today_c: s.figure_c,
        today_low_c: s.left_c[0],
        today_high_c: s.left_c[1],
        reference: rule.reference.as_ref().map(|reference| match reference {
            Reference::Natural => "natural".to_owned(),
            Reference::Stream(name) => name.clone(),
        }),
        oxygen_mg_l: s.oxygen_mg_l,
        oxygen_min_mg_l: rule.oxygen_min_mg_l,
        oxygen_percent: s.oxygen_share.map(|share| 100.0 * share),
        oxygen_min_percent: rule.oxygen_min_share.map(|share| 100.0 * share),
        oxygen_statistic: rule.oxygen_statistic().name(),
        oxygen_standing: s.oxygen.0.word(),
        oxygen_by_mg_l: s.oxygen.1,
        share_inside: s.share_inside,
        oxygen_share_inside: s.oxygen_share_inside,
        share_inside_both: s.share_inside_both,
        governs: s.governs,
        soft: rule.soft,
        held_as_wish: s.wish,
        priority: rule.priority,
        words: s.words.as_deref().map(|words| in_system(words, System::Si)),
        authority: rule.authority.clone(),
        source: rule.source.clone(),
        example: rule.example,
        example_words: rule.example.then_some(EXAMPLE),
    }
}

pub(super) fn conflicts(site: &Site, conflicts: &[Conflict]) -> Vec<ConflictJson> {
    let one = |c: &Conflict| ConflictJson {
        targets: c.targets.map(|i| site.targets[i].name.clone()),
        at_most_c: c.bounds_c[0],
        at_least_c: c.bounds_c[1],
        text: c.problem(site).advice(System::Si),
    };
    conflicts.iter().map(one).collect()
}

pub(super) fn points(site: &Site, points: &[AtPoint]) -> Vec<PointJson> {
    let one = |at: &AtPoint| {
        let point = site.river.as_ref()?.points.get(at.point)?;
        Some(PointJson {
            name: point.name.clone(),
            distance_km: point.at_m / 1000.0,
            travel_h: at.travel_h,
            temperature_c: at.figures.mean_c,
            temperature_max_c: at.figures.range_c.map(|range| range.0),
            oxygen_mg_l: at.figures.oxygen_mean_mg_l,
            oxygen_least_mg_l: at.figures.oxygen_min_mg_l,
        })
    };
    points.iter().filter_map(one).collect()
}
