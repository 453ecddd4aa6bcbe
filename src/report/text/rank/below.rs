//! Below the list: no. 1 in words, and the answers beyond the list.

use std::fmt::Write as _;

use crate::problem::harmless;
use crate::tasks::Context;
use crate::tasks::rank::{Least, Lost, Part, Pocket, PreferredSplit, RankAnswer, Shown, Trade};
use crate::units::{Dimension, figure, in_system};

use super::gates::{instruction, moves, named, openings};
use super::{block_name, flow, labelled, oxygen, step, temperature};
use crate::report::sentence::unsure_words;

/// A step of the release that the pocket rule speaks of, cfs and m3/s.
const POCKET: (f64, f64) = (100.0, 10.0);

/// What to set for the best mix, why it stands first, and what is not sure of it.
pub(super) fn best(context: &Context, best: &Shown) -> String {
    let system = context.system;
    let mut set: Vec<String> = Vec::new();
    for (at, part) in best.parts.iter().enumerate() {
        let lead = if best.parts.len() > 1 { block_name(context, at) + ": " } else { String::new() };
        set.push(lead + &instruction(context, part));
    }
    if let Some(words) = moves(context, best) {
        set.push(words);
    }
    if let Some(day) = best.change.as_ref().and_then(|c| c.earliest) {
        set.push(format!("the crew can come from {day}"));
    }
    let mut out = labelled("No. 1", &format!("{}.", set.join("; ")));
    let mut why: Vec<String> = best.reasons.iter().map(|r| harmless(&in_system(r, system))).collect();
    if let Some(lost) = best.generation_lost_mw.filter(|mw| *mw > 0.0) {
        why.push(format!("{lost:.1} MW not made"));
    }
    if best.parts.len() > 1 {
        why.push(format!("weighted with the flow {}", temperature(best.by_flow_c, system)));
    }
    out.push_str(&labelled("", &format!("Why: {}.", why.join("; "))));
    for unsure in &best.unsure {
        let words = harmless(&in_system(&unsure_words(context.site(), unsure), system));
        out.push_str(&labelled("Unsure", &words));
    }
    out
}

/// The answers beyond the list.
pub(super) fn answers(context: &Context, answer: &RankAnswer) -> String {
    let mut out = String::new();
    if let Some([coldest, warmest]) = answer.attainable_c {
        let unit = context.system.unit(Dimension::Temperature);
        let warmest = temperature(warmest, context.system);
        let mut words = format!("allowed mixes give {} to {warmest}", figure(coldest, unit, 1));
        match answer.attainable_oxygen_mg_l {
            Some([least, most]) => _ = write!(words, " and {least:.1} to {most:.1} mg/L oxygen"),
            None => words.push_str(", oxygen unknown"),
        }
        out.push_str(&labelled("Range", &words));
    }
    if answer.trade.len() > 1 {
        out.push_str(&labelled("Trade", &trade(context, &answer.trade)));
    }
    out.push_str(&answer.split.as_ref().map_or_else(String::new, |s| labelled("Split", &split(context, s))));
    out.push_str(&answer.least.as_ref().map_or_else(String::new, |l| labelled("Least", &least(context, l))));
    out.push_str(&answer.pocket.map_or_else(String::new, |p| labelled("More", &pocket(context, p))));
    if !answer.lost.is_empty() {
        out.push_str(&labelled("If lost", &lost(context, &answer.lost)));
    }
    out
}

fn trade(context: &Context, trade: &[Trade]) -> String {
    let one = |t: &Trade| format!("{} with {}", temperature(t.temperature_c, context.system), oxygen(t.oxygen_mg_l));
    let mut words: Vec<String> = trade.iter().map(one).collect();
    // neighbours that read alike are one
    words.dedup();
    let ends = trade.last().map_or_else(String::new, |t| named(context, &[&t.gates]).join(", "));
    format!("more oxygen, farther from the preferred: {} ({ends})", words.join(", "))
}

fn split(context: &Context, split: &PreferredSplit) -> String {
    let (site, system) = (context.site(), context.system);
    let [a, b] = split.between.map(|part| {
        harmless(match part {
            Part::Outlet(i) => &site.outlets[i].name,
            Part::Well(i) => &site.wells[i].name,
        })
    });
    let preferred = temperature(split.preferred_c, system);
    let open = named(context, &[&split.gates]).join(", ");
    let roots: Vec<String> = split
        .roots
        .iter()
        .map(|r| format!("{a} {} and {b} {}", flow(r.flows_m3s[0], system), flow(r.flows_m3s[1], system)))
        .collect();
    if roots.is_empty() {
        let unit = system.unit(Dimension::Temperature);
        let [coldest, warmest] = split.bracket_c;
        return format!(
            "no split of {a} and {b} gives {preferred}: they give {} to {} ({open})",
            figure(coldest, unit, 1),
            temperature(warmest, system)
        );
    }
    format!("{} gives {preferred} exactly ({})", roots.join(", or "), open_only(&open))
}

/// Names and openings without flows, which the split gives.
fn open_only(open: &str) -> String {
    format!("open {open}")
}

fn least(context: &Context, least: &Least) -> String {
    let system = context.system;
    let [low, high] = least.tried_m3s.map(|f| flow(f, system));
    match least.flow_m3s {
        Some(found) => format!(
            "{} keeps every target with {}; tried {low} to {high}",
            flow(found, system),
            named(context, &[&least.gates]).join(", ")
        ),
        None => format!("no release tried from {low} to {high} keeps every target"),
    }
}

fn pocket(context: &Context, pocket: Pocket) -> String {
    let system = context.system;
    let unit = system.unit(Dimension::Flow);
    let more = unit.to_si(if system == crate::units::System::Us { POCKET.0 } else { POCKET.1 });
    let by = pocket.c_per_m3s * more;
    let way = if by < 0.0 { "colder" } else { "warmer" };
    let words = if by.abs() < 0.05 { format!("less than {}", step(0.1, system)) } else { step(by.abs(), system) };
    format!(
        "each {} more through no. 1 in proportion: {words} {way}, from {} to {}",
        flow(more, system),
        flow(pocket.from_m3s, system),
        flow(pocket.to_m3s, system)
    )
}

fn lost(context: &Context, lost: &[Lost]) -> String {
    let one = |l: &Lost| {
        let name = harmless(&context.site().outlets[l.outlet].name);
        l.fallback.as_ref().map_or_else(
            || format!("{name}: no allowed mix without it"),
            |shown| {
                format!(
                    "{name}: {} ({}, {})",
                    openings(context, shown).join(", "),
                    temperature(shown.temperature_c, context.system),
                    oxygen(shown.oxygen_mg_l)
                )
            },
        )
    };
    lost.iter().map(one).collect::<Vec<_>>().join("; ")
}
