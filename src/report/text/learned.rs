//! What was learned and is applied, with what the answer would be without it; and what to paste to apply it.

use std::fmt::Write as _;

use crate::mix::groups;
use crate::problem::harmless;
use crate::record::Learning;
use crate::site::{Learned, Site};
use crate::tasks::learned::Without;
use crate::units::{Dimension, System, in_system, say};

use super::mix::release_words;

/// Decimals of what is to be pasted (choice: far finer than what is learned).
const DECIMALS: usize = 4;

/// What is applied, and of which days: `bias +0.3 C, of 41 days, 2025-05-01 to 2025-10-31, is applied`; `None` where
/// nothing was learned.
pub fn applied(site: &Site, system: System) -> Option<String> {
    applied_words(site).map(|words| in_system(&words, system))
}

/// The same, quantities as [`say`](crate::units::say) marks them.
pub(in crate::report) fn applied_words(site: &Site) -> Option<String> {
    site.learned().map(|learned| format!("{}, is applied", values(site, learned)))
}

/// What was learned and of which days, quantities as [`say`](crate::units::say) marks them.
pub(in crate::report) fn values(site: &Site, learned: &Learned) -> String {
    let mut values = Vec::new();
    values.extend(learned.bias_c.map(|bias_c| format!("bias {}", say::dc(bias_c, 2).signed())));
    values.extend(learned.by_level_c.iter().filter_map(|(level, bias_c)| {
        Some(format!("bias of {} {}", harmless(name(site, *level)?), say::dc(*bias_c, 2).signed()))
    }));
    values.extend(learned.zone_factor.map(|factor| format!("zone factor {factor:.2}")));
    values.extend(learned.oxygen_gain_mg_l.map(|gain| format!("oxygen gain {gain:+.2} mg/L")));
    if learned.release_c.is_some() || learned.release_mg_l.is_some() {
        values.push("scatter of its own".to_owned());
    }
    let window = learned.window.map_or_else(String::new, |(from, to)| format!(", {from} to {to}"));
    format!("{}, of {} days{window}", values.join(", "), learned.n)
}

/// What is applied, and the release without it; `None` where nothing was learned.
pub fn with_and_without(site: &Site, without: Option<&Without>, system: System) -> Option<String> {
    let applied = applied(site, system)?;
    let without = without.map(|w| release_words((w.temperature_c, w.oxygen_mg_l), &w.spread, system));
    Some(match without {
        Some(without) => format!("{applied}; without it {without}"),
        None => applied,
    })
}

/// The lines of `learned:` that apply what was learned, in the units of the site's file; `None` where nothing is kept.
pub fn learned_yaml(site: &Site, learning: &Learning) -> Option<String> {
    let learned = &learning.learned;
    learned.has_effect().then(|| yaml(site, learned))
}

fn yaml(site: &Site, learned: &Learned) -> String {
    let unit = site.units.unit(Dimension::TemperatureDifference);
    let warmth = |value_c: f64| figure(unit.from_si(value_c));
    let mut out = String::from("learned:\n");
    let mut line = |key: &str, value: Option<String>| {
        if let Some(value) = value {
            let _ = writeln!(out, "  {key}: {value}");
        }
    };
    line("bias", learned.bias_c.map(warmth));
    let by_level = learned.by_level_c.iter().filter_map(|(level, bias_c)| {
        Some(format!("{}: {}", serde_json::to_string(name(site, *level)?).ok()?, warmth(*bias_c)))
    });
    let by_level: Vec<String> = by_level.collect();
    line("by_level", (!by_level.is_empty()).then(|| format!("{{ {} }}", by_level.join(", "))));
    line("zone_factor", learned.zone_factor.map(figure));
    line("zone_range", learned.zone_range.map(|(low, high)| format!("[{}, {}]", figure(low), figure(high))));
    line("oxygen_gain", learned.oxygen_gain_mg_l.map(figure));
    line("window", learned.window.map(|(from, to)| format!("[{from}, {to}]")));
    line("n", Some(learned.n.to_string()));
    line("release", learned.release_c.map(warmth));
    line("release_oxygen", learned.release_mg_l.map(figure));
    out
}

/// The first outlet of a level.
fn name(site: &Site, level: usize) -> Option<&str> {
    let outlet = groups(site).get(level)?.first().copied()?;
    Some(&site.outlets.get(outlet)?.name)
}

fn figure(value: f64) -> String {
    format!("{value:.DECIMALS$}")
}
