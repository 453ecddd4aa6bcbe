//! Checks of the limits of the site as a whole, the release and the parts of the day.

use std::collections::HashSet;

use chrono::NaiveDate;

use crate::problem::Problem;
use crate::site::{
    Block, Layer, Limits, Outage, Pool, Raw, RawOutage, RawUndrawn, ReleaseLimits, Reserved, ShareRule,
    Undrawn,
};
use crate::units::say;

use super::outlets::{not_negative, positive};

/// Sums of hours this near to a day are a day (choice: round-off).
const SAME_HOURS: f64 = 1e-6;

pub(super) fn limits(raw: &Raw, pool: Option<&Pool>, problems: &mut Vec<Problem>) -> Limits {
    let r = &raw.limits;
    let at = |key: &str| format!("limits.{key}");
    for (value, key) in [
        (r.flow_change_m3s_per_hour, "max_flow_change_per_hour"),
        (r.flow_change_m3s_per_day, "max_flow_change_per_day"),
        (r.temperature_change_c_per_hour, "max_temperature_change_per_hour"),
        (r.temperature_change_c_per_day, "max_temperature_change_per_day"),
        (r.change_hours, "change_hours"),
        (r.solids_max_mg_l, "solids_max"),
    ] {
        positive(value, at(key), key, problems);
    }
    // of these nothing at all can be the rule
    for (value, key) in [(r.drawdown_m_per_day, "max_drawdown_per_day"), (r.max_crew_hours, "max_crew_hours")]
    {
        not_negative(value, at(key), key, problems);
    }
    Limits {
        outages: outages(raw, problems),
        shares: shares(raw, problems),
        reserved: reserved(raw, problems),
        undrawn: r.undrawn.iter().enumerate().filter_map(|(i, u)| undrawn(u, i, pool, problems)).collect(),
        flow_change_m3s_per_hour: r.flow_change_m3s_per_hour,
        flow_change_m3s_per_day: r.flow_change_m3s_per_day,
        temperature_change_c_per_hour: r.temperature_change_c_per_hour,
        temperature_change_c_per_day: r.temperature_change_c_per_day,
        change_hours: r.change_hours,
        drawdown_m_per_day: r.drawdown_m_per_day,
        solids_max_mg_l: r.solids_max_mg_l,
        max_moves: r.max_moves,
        max_crew_hours: r.max_crew_hours,
    }
}

/// Index of an outlet a limit names.
fn outlet(raw: &Raw, name: &str, path: String, problems: &mut Vec<Problem>) -> Option<usize> {
    let found = raw.outlets.iter().position(|o| o.name.as_deref() == Some(name));
    if found.is_none() {
        let words = format!("no outlet is named `{name}`");
        problems.push(Problem::refused("unknown-outlet", words, "correct the name").at(path));
    }
    found
}

fn date(text: &str, path: String, problems: &mut Vec<Problem>) -> Option<NaiveDate> {
    // `26-7-1` would be read as the year 26
    let day = NaiveDate::parse_from_str(text, "%Y-%m-%d").ok().filter(|_| text.len() == 10);
    if day.is_none() {
        let words = format!("`{text}` is not a date");
        problems.push(Problem::refused("day", words, "write year-month-day, such as 2026-07-01").at(path));
    }
    day
}

fn outages(raw: &Raw, problems: &mut Vec<Problem>) -> Vec<Outage> {
    let mut seen = HashSet::new();
    let mut build = |(i, r): (usize, &RawOutage)| {
        let at = |key: &str| format!("limits.outages[{i}].{key}");
        let index = r.outlet.as_deref().and_then(|name| outlet(raw, name, at("outlet"), problems));
        let from = r.from.as_deref().and_then(|text| date(text, at("from"), problems));
        let to = r.to.as_deref().map(|text| date(text, at("to"), problems));
        let (outlet, from) = (index?, from?);
        // a last day that cannot be read must not make the outage endless
        let to = match to {
            None => None,
            Some(day) => Some(day?),
        };
        if to.is_some_and(|to| to < from) {
            problems.push(
                Problem::refused("day-order", "the outage ends before it begins", "swap the dates")
                    .at(at("to")),
            );
        }
        if !seen.insert((outlet, from)) {
            let words = "an outage of this outlet from this day is already listed";
            problems.push(Problem::refused("listed-twice", words, "keep one of them").at(at("outlet")));
        }
        Some(Outage { outlet, from, to, reason: r.reason.clone() })
    };
    raw.limits.outages.iter().enumerate().filter_map(&mut build).collect()
}

fn shares(raw: &Raw, problems: &mut Vec<Problem>) -> Vec<ShareRule> {
    let mut rules: Vec<ShareRule> = Vec::new();
    for (i, r) in raw.limits.shares.iter().enumerate() {
        let at = |key: &str| format!("limits.shares[{i}].{key}");
        if let Some(name) = r.name.as_deref().filter(|name| rules.iter().any(|rule| rule.name == *name)) {
            let words = format!("the name `{name}` is already used by another share");
            problems.push(
                Problem::refused("name-twice", words, "give every share a name of its own").at(at("name")),
            );
        }
        if r.outlets.is_empty() {
            let words = "the share names no outlet";
            problems.push(Problem::refused("share", words, "list its outlets").at(at("outlets")));
        }
        let mut outlets = Vec::new();
        for (k, name) in r.outlets.iter().enumerate() {
            let path = format!("limits.shares[{i}].outlets[{k}]");
            let Some(index) = outlet(raw, name, path.clone(), problems) else { continue };
            if outlets.contains(&index) {
                let words = format!("`{name}` is listed twice");
                problems.push(Problem::refused("listed-twice", words, "list each outlet once").at(path));
            }
            outlets.push(index);
        }
        for (value, key) in [(r.min, "min"), (r.max, "max")] {
            if value.is_some_and(|v| !(0.0..=1.0).contains(&v)) {
                let words = format!("{key} lies outside 0 to 100 % of the release");
                problems.push(Problem::refused("share", words, "give percent of the release").at(at(key)));
            }
        }
        match (r.min, r.max) {
            (Some(min), Some(max)) if min > max => {
                problems.push(Problem::refused("share", "min is above max", "swap them").at(at("min")));
            }
            (None, None) => {
                let path = format!("limits.shares[{i}]");
                problems.push(
                    Problem::refused("share", "the share has neither min nor max", "give one of them")
                        .at(path),
                );
            }
            _ => {}
        }
        let Some(name) = r.name.clone() else { continue };
        rules.push(ShareRule { name, outlets, min: r.min, max: r.max });
    }
    rules
}

fn reserved(raw: &Raw, problems: &mut Vec<Problem>) -> Vec<Reserved> {
    let mut rules: Vec<Reserved> = Vec::new();
    for (i, r) in raw.limits.reserved.iter().enumerate() {
        let at = |key: &str| format!("limits.reserved[{i}].{key}");
        positive(r.flow_m3s, at("flow"), "flow", problems);
        let Some(name) = r.outlet.as_deref() else { continue };
        let Some(index) = outlet(raw, name, at("outlet"), problems) else { continue };
        let Some(flow_m3s) = r.flow_m3s else { continue };
        if rules.iter().any(|rule| rule.outlet == index) {
            let words = format!("a flow of `{name}` is already reserved");
            problems.push(Problem::refused("listed-twice", words, "keep one of them").at(at("outlet")));
        }
        if let Some(most) = raw.outlets[index].flow_max_m3s
            && flow_m3s > most
        {
            let words = format!(
                "{} reserved from `{name}` is above its flow.max {}",
                say::m3s(flow_m3s, 2),
                say::m3s(most, 2)
            );
            problems.push(Problem::refused("reserved", words, "correct one of them").at(at("flow")));
        }
        rules.push(Reserved { outlet: index, flow_m3s, reason: r.reason.clone() });
    }
    rules
}

fn undrawn(r: &RawUndrawn, i: usize, pool: Option<&Pool>, problems: &mut Vec<Problem>) -> Option<Undrawn> {
    let path = format!("limits.undrawn[{i}]");
    let at = |key: &str| format!("{path}.{key}");
    let elevations = r.from_m.is_some() || r.to_m.is_some();
    let layer = match (elevations, r.depths_m, r.oxygen_below_mg_l) {
        (true, None, None) => r.from_m.zip(r.to_m).map(|(from, to)| Layer::Elevations(from, to)),
        (false, Some((from, to)), None) => Some(Layer::Depths(from, to)),
        (false, None, Some(least)) => Some(Layer::OxygenBelow(least)),
        _ => None,
    };
    let Some(layer) = layer else {
        let words = "the layer is not told in one way";
        let cure = "give from and to, or depth: [from, to], or oxygen_below, and one of these only";
        problems.push(Problem::refused("layer", words, cure).at(path));
        return None;
    };
    let order = "the layer ends where it begins or before";
    match layer {
        Layer::Elevations(from, to) => {
            if from >= to {
                problems.push(
                    Problem::refused("layer", order, "give the lower elevation as from").at(at("from")),
                );
            } else if let Some(pool) = pool.filter(|p| to <= p.bed_m || from >= p.top_m()) {
                let words = format!(
                    "the layer {} to {} lies outside the pool ({})",
                    say::m(from, 2),
                    say::m(to, 2),
                    pool.extent()
                );
                problems.push(
                    Problem::refused("outside-pool", words, "give elevations, or use depth").at(at("from")),
                );
            }
        }
        Layer::Depths(from, to) => {
            not_negative(Some(from), at("depth"), "depth", problems);
            if from >= to {
                problems
                    .push(Problem::refused("layer", order, "give the smaller depth first").at(at("depth")));
            }
        }
        Layer::OxygenBelow(least) => {
            positive(Some(least), at("oxygen_below"), "oxygen_below", problems);
        }
    }
    Some(Undrawn { layer, reason: r.reason.clone() })
}

pub(super) fn release(raw: &Raw, problems: &mut Vec<Problem>) -> ReleaseLimits {
    let release = ReleaseLimits {
        min_m3s: raw.release_min_m3s,
        max_m3s: raw.release_max_m3s,
        wanted_m3s: raw.release_wanted_m3s,
    };
    if let (Some(min), Some(max)) = (release.min_m3s, release.max_m3s)
        && min > max
    {
        let words = format!("release.min {} is above release.max {}", say::m3s(min, 2), say::m3s(max, 2));
        problems.push(Problem::refused("release-order", words, "swap them").at("release.min"));
    } else if let Some(wanted) = release.wanted_m3s
        && (release.min_m3s.is_some_and(|min| wanted < min)
            || release.max_m3s.is_some_and(|max| wanted > max))
    {
        let words =
            format!("release.wanted {} lies outside release.min and release.max", say::m3s(wanted, 2));
        problems.push(Problem::refused("release-wanted", words, "correct the figure").at("release.wanted"));
    }
    positive(release.wanted_m3s, "release.wanted".into(), "wanted", problems);
    not_negative(raw.inflow_m3s, "inflow".into(), "inflow", problems);
    release
}

pub(super) fn blocks(blocks: &[Block], problems: &mut Vec<Problem>) {
    if blocks.is_empty() {
        return;
    }
    let mut whole = |words: String, cure| problems.push(Problem::refused("blocks", words, cure).at("blocks"));
    let hours: f64 = blocks.iter().map(|b| b.hours).sum();
    if !(2..=4).contains(&blocks.len()) {
        whole(format!("the day has {} parts", blocks.len()), "give 2 to 4 blocks, or none for a steady day");
    } else if (hours - 24.0).abs() > SAME_HOURS {
        whole(format!("the hours of the blocks sum to {hours}"), "let them sum to 24");
    }
    for (i, block) in blocks.iter().enumerate() {
        let at = |key: &str| format!("blocks[{i}].{key}");
        positive(Some(block.hours), at("hours"), "hours", problems);
        positive(Some(block.flow_m3s), at("flow"), "flow", problems);
        if blocks[..i].iter().any(|other| other.name == block.name) {
            let words = format!("the name `{}` is already used by another block", block.name);
            problems.push(
                Problem::refused("name-twice", words, "give every block a name of its own").at(at("name")),
            );
        }
    }
}
