//! What a setting gives: release, standings, levels and the drawn column.

use std::fmt::Write as _;

use crate::mix::{Drawn, Gate, Mix, Setting, Spread};
use crate::problem::harmless;
use crate::site::{Outlet, Site};
use crate::target::Standing;
use crate::tasks::{Context, DayAnswer, MixAnswer};
use crate::units::{Dimension, System, figure};
use crate::withdrawal::{End, Side};

use super::gates::moves;
use super::learned::with_and_without;
use super::targets::standings;
use super::{drawn_column, fitted, flags_of, flow, labelled, length, list, oxygen, temperature, wrapped};

pub(super) fn body(context: &Context, answer: &MixAnswer) -> String {
    let (site, system) = (context.site(), context.system);
    let total = flow(answer.mix.release.flow_m3s, system);
    let set: f64 = answer.setting.gates.iter().map(|g| g.flow_m3s).sum();
    let leaks = if answer.mix.release.flow_m3s > set * (1.0 + 1e-9) { ", leaks included" } else { "" };
    let mut out = labelled(
        "Set",
        &format!("{} = {total} in total{leaks}", setting_words(site, &answer.setting, system)),
    );
    out.push_str(&labelled("Release", &release_line(&answer.mix, system)));
    let learned = with_and_without(site, answer.without.as_ref(), system);
    out.extend(learned.map(|words| labelled("Learned", &words)));
    if let Some(day) = &answer.day {
        out.push_str(&blocks(site, day, system));
    }
    if let Some((now, mix)) = &answer.now {
        out.push_str(&against_now(site, now, mix, &answer.mix, system));
        if let Some(change) = &answer.change {
            let crew = format!("{:.1} crew hours", change.moves.crew_hours);
            out.push_str(&labelled("Change", &format!("{}; {crew}", moves(context, change, context.system))));
        }
    }
    out.push_str(&labelled("", &where_told(site, &answer.mix)));
    out.push('\n');
    out.push_str(&standings(site, &answer.mix.targets, system));
    out.push_str(&levels(site, &answer.mix.levels, system));
    out.push_str(&wells(site, &answer.setting, system));
    out.push('\n');
    out.push_str(&drawn_column(site, &context.profile, &answer.mix.levels, system));
    out.push('\n');
    out.push_str(&list("This setting", &flags_of(&answer.mix.warnings), false, system));
    out
}

/// Where the figures of a release are told: leaving the pool, or below the dam where the conduits add oxygen.
fn where_told(site: &Site, mix: &Mix) -> String {
    let of_cases = "brackets hold 10-90 % of our perturbed cases";
    if site.aerates() {
        let pool = oxygen(mix.release.oxygen_mg_l);
        return format!(
            "oxygen below the dam, with what the conduits add; {pool} leaving the pool; {of_cases}"
        );
    }
    format!("leaving the pool; {of_cases}")
}

/// Each block of the day, then the day as a gauge sees it and by flow.
fn blocks(site: &Site, day: &DayAnswer, system: System) -> String {
    let mut out = String::new();
    for (label, block) in std::iter::once("Blocks").chain(std::iter::repeat("")).zip(&day.blocks) {
        let of = &site.blocks[block.block];
        let release = &block.mix.release;
        let words = format!(
            "{} {:.1} h {}: {}, {}",
            harmless(&of.name),
            of.hours,
            flow(release.flow_m3s, system),
            temperature(release.temperature_c, system),
            oxygen(release.oxygen_below_mg_l)
        );
        out.push_str(&labelled(label, &words));
    }
    let [coldest, warmest] = day.extremes_c;
    let words = format!(
        "by time {} ({} to {}), as a gauge sees it; by flow {}; standings below are of the day, the rest of the longest block",
        temperature(day.time_mean_c, system),
        temperature(coldest, system),
        temperature(warmest, system),
        temperature(day.by_flow_c, system)
    );
    out.push_str(&labelled("Day", &words));
    out
}

pub(super) fn not_checked(answer: &MixAnswer) -> String {
    wrapped(&format!("Not checked: {}", harmless(&answer.mix.not_checked.join("; "))), 13)
}

/// What is set, for each gate: `N3 600 cfs`, or `N3 50 % 600 cfs` where it is not known to be fully open.
pub fn setting_words(site: &Site, setting: &Setting, system: System) -> String {
    let mut gates: Vec<(&Outlet, &Gate)> =
        setting.gates.iter().filter_map(|g| Some((site.outlets.get(g.outlet)?, g))).collect();
    gates.sort_by(|a, b| a.0.name.cmp(&b.0.name));
    let shared = |o: &Outlet| setting.wells.iter().any(|w| Some(w.well) == o.well && !w.given);
    let words: Vec<String> = gates
        .iter()
        .map(|(o, g)| {
            let opening =
                if g.opening < 1.0 || shared(o) { o.opening_name(g.opening) + " " } else { String::new() };
            harmless(&format!("{} {opening}{}", o.name, flow(g.flow_m3s, system)))
        })
        .collect();
    words.join(", ")
}

/// What each well carries, and the head of the pool over it.
fn wells(site: &Site, setting: &Setting, system: System) -> String {
    let unit = system.unit(Dimension::Length);
    let mut out = String::new();
    for state in &setting.wells {
        let well = &site.wells[state.well];
        let head = match (setting.head_m(state.well), well.max_head_loss_m) {
            (None, _) => "head over it unknown: its gates give no loss".to_owned(),
            (Some(head), None) => {
                format!("head over it {} {}, no limit given", figure(head, unit, 2), unit.symbol())
            }
            (Some(head), Some(most)) => {
                format!(
                    "head over it {} of {} {}",
                    figure(head, unit, 2),
                    figure(most, unit, 2),
                    unit.symbol()
                )
            }
        };
        let words = format!("{} {}, {head}", harmless(&well.name), flow(state.flow_m3s, system));
        out.push_str(&labelled("Well", &words));
    }
    out
}

/// Temperature and oxygen of a release with their bands: `54.6 F (53.5 to 56.1), oxygen 7.1 mg/L (6.3 to 7.9)`.
pub fn release_line(mix: &Mix, system: System) -> String {
    release_words((mix.release.temperature_c, mix.release.oxygen_below_mg_l), &mix.spread, system)
}

/// The same of temperature (C), oxygen (mg/L) and the perturbed cases.
pub fn release_words(
    (temperature_c, oxygen_mg_l): (f64, Option<f64>),
    spread: &Spread,
    system: System,
) -> String {
    let unit = system.unit(Dimension::Temperature);
    let ends = |band: Option<(f64, f64)>, digits: &dyn Fn(f64) -> String| {
        band.map_or_else(
            || "no band".to_owned(),
            |(low, high)| format!("{} to {}", digits(low), digits(high)),
        )
    };
    let mut out = format!(
        "{} ({}), oxygen {}",
        temperature(temperature_c, system),
        ends(spread.band_c(), &|c| figure(c, unit, 1)),
        oxygen(oxygen_mg_l)
    );
    if oxygen_mg_l.is_some() {
        let _ = write!(out, " ({})", ends(spread.band_oxygen_mg_l(), &|o| format!("{o:.1}")));
    }
    out
}

fn against_now(site: &Site, now: &Setting, was: &Mix, tried: &Mix, system: System) -> String {
    let mut out = labelled("Now", &setting_words(site, now, system));
    out.push_str(&labelled("", &release_line(was, system)));
    out.push_str(&labelled("", &format!("against now: {}", difference(was, tried, system))));
    out
}

/// What differs from one mix to another, of the figures as they are shown: `temperature 1.7 F colder, oxygen 0.1 mg/L
/// lower`.
pub fn difference(was: &Mix, tried: &Mix, system: System) -> String {
    let water = |mix: &Mix| (mix.release.temperature_c, mix.release.oxygen_below_mg_l);
    apart(water(was), water(tried), system)
}

/// The same of temperatures (C) and oxygen (mg/L).
pub fn apart(was: (f64, Option<f64>), is: (f64, Option<f64>), system: System) -> String {
    let shown = |by: f64, unit: &str, words: [&str; 2]| {
        if by.abs() < 0.05 {
            "the same to a tenth".to_owned()
        } else {
            format!("{:.1} {unit} {}", by.abs(), words[usize::from(by < 0.0)])
        }
    };
    let tenths = |value: f64| (10.0 * value).round() / 10.0;
    let unit = system.unit(Dimension::TemperatureDifference);
    let [then, now] = [was.0, is.0].map(|c| tenths(system.unit(Dimension::Temperature).from_si(c)));
    let warmer = now - then;
    let mut words = format!("temperature {}", shown(warmer, unit.symbol(), ["warmer", "colder"]));
    if let Some((a, b)) = is.1.zip(was.1) {
        let _ = write!(words, ", oxygen {}", shown(tenths(a) - tenths(b), "mg/L", ["higher", "lower"]));
    }
    words
}

/// What wells carry otherwise than now: `North 600 cfs to 120 cfs`; empty where all carry the same to the figure shown.
pub fn wells_changed(site: &Site, now: &Setting, to: &Setting, system: System) -> String {
    let total = |setting: &Setting, well: usize| -> f64 {
        let on = |g: &&Gate| site.outlets[g.outlet].well == Some(well);
        setting.gates.iter().filter(on).map(|g| g.flow_m3s).sum()
    };
    let words = (0..site.wells.len()).filter_map(|well| {
        let [was, is] = [now, to].map(|setting| flow(total(setting, well), system));
        (was != is).then(|| format!("{} {was} to {is}", harmless(&site.wells[well].name)))
    });
    words.collect::<Vec<_>>().join(", ")
}

/// `ABOVE by 0.4 F`; a miss smaller than the last digit shown must not read as none.
pub fn missed(standing: Standing, by: f64, unit: &str) -> String {
    let amount = if by < 0.05 { format!("less than 0.1 {unit}") } else { format!("{by:.1} {unit}") };
    format!("{} by {amount}", standing.word().to_uppercase())
}

fn levels(site: &Site, drawn: &[Drawn], system: System) -> String {
    let mut out = format!(
        "{:<14} {:>11} {:>10}  {:<22} {:>7}  oxygen\n",
        "Level", "elevation", "flow", "draws from", "water"
    );
    for d in drawn.iter().rev() {
        let names: Vec<String> = d.level.outlets.iter().map(|&i| harmless(&site.outlets[i].name)).collect();
        let zone = d.zone.map_or_else(|| "nothing".to_owned(), |z| between(&z.lower, &z.upper, system));
        let _ = writeln!(
            out,
            "{} {:>11} {:>10}  {zone:<22} {:>7}  {}",
            fitted(&names.join(" "), 14),
            length(d.level.sink.centre_m, system),
            flow(d.level.sink.flow_m3s, system),
            d.draw.map_or_else(|| "-".to_owned(), |w| temperature(w.temperature_c, system)),
            d.draw.map_or_else(|| "-".to_owned(), |w| oxygen(w.oxygen_mg_l)),
        );
    }
    out
}

fn between(lower: &Side, upper: &Side, system: System) -> String {
    let unit = system.unit(Dimension::Length);
    match (lower.end, upper.end) {
        (End::Free, End::Free) => {
            format!("{} to {}", figure(lower.limit_m, unit, 1), length(upper.limit_m, system))
        }
        (End::Free, End::Boundary) => format!("{} to surface", length(lower.limit_m, system)),
        (End::Boundary, End::Free) => format!("bed to {}", length(upper.limit_m, system)),
        (End::Boundary, End::Boundary) => "bed to surface".to_owned(),
    }
}
