//! Below the list: no. 1 in words, and the answers beyond the list.

use std::fmt::Write as _;

use crate::mix::Gate;
use crate::mix::limits::Check;
use crate::problem::harmless;
use crate::tasks::Context;
use crate::tasks::rank::{
    Least, Lost, Part, Pocket, PreferredSplit, RankAnswer, Root, Shown, ShownPart, Trade,
};
use crate::units::{Dimension, System, figure, in_system};

use super::super::learned::with_and_without;
use super::{block_name, flags, flow, labelled, oxygen, temperature};
use crate::report::sentence::unsure_words;
use crate::report::text::gates::{instruction, moves, named, openings};

/// A step of the release that the pocket rule speaks of, cfs and m3/s.
const POCKET: (f64, f64) = (100.0, 10.0);

/// What is said of a mix, in words.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Said {
    /// What to set, in each part of the day.
    pub set: Vec<String>,
    /// Which gates move; `None` where none does or the setting now is not known.
    pub moves: Option<String>,
    /// What it gives and takes, and what puts it where it stands.
    pub why: Vec<String>,
    /// What comes out if gates not confirmed in position stand otherwise.
    pub unsure: Vec<String>,
    /// What to beware of; broken limits are told in the list.
    pub beware: Vec<String>,
}

/// What is said of a mix.
pub fn said(context: &Context, shown: &Shown, system: System) -> Said {
    let set = |(at, part): (usize, &ShownPart)| {
        let lead = if shown.parts.len() > 1 { block_name(context, at) + ": " } else { String::new() };
        lead + &instruction(context, part, system)
    };
    // that no gate moves is among the reasons
    let change = shown.change.as_ref().filter(|c| !c.moved.is_empty());
    let mut why: Vec<String> = shown.reasons.iter().map(|r| harmless(&in_system(r, system))).collect();
    if let Some(lost) = shown.generation_lost_mw.filter(|mw| *mw > 0.0) {
        why.push(format!("{lost:.1} MW not made"));
    }
    if shown.parts.len() > 1 {
        why.push(format!("weighted with the flow {}", temperature(shown.by_flow_c, system)));
    }
    let unsure = |unsure| harmless(&in_system(&unsure_words(context.site(), unsure), system));
    Said {
        set: shown.parts.iter().enumerate().map(set).collect(),
        moves: change.map(|change| moves(context, change, system)),
        why,
        unsure: shown.unsure.iter().map(unsure).collect(),
        beware: flags(&shown.warnings).filter(|p| p.kind != "limit").map(|p| p.advice(system)).collect(),
    }
}

/// What to set for the best mix, why it stands first, what is not sure of it, and what to beware of.
pub(super) fn best(context: &Context, best: &Shown, system: System) -> String {
    let Said { mut set, moves, why, unsure, beware } = said(context, best, system);
    set.extend(moves);
    // without a target and without a setting now there is nothing that puts it first but the fixed order
    let why = if why.is_empty() { String::new() } else { format!(" Why: {}.", why.join("; ")) };
    let mut out = labelled("No. 1", &format!("{}.{why}", set.join("; ")));
    let learned = with_and_without(context.site(), best.without.as_ref(), system);
    out.extend(learned.map(|words| labelled("Learned", &words)));
    out.extend(unsure.iter().map(|words| labelled("Unsure", words)));
    out.extend(beware.iter().map(|words| labelled("Beware", words)));
    out
}

/// The answers beyond the list, each with its label.
pub fn answers(context: &Context, answer: &RankAnswer, system: System) -> Vec<(&'static str, String)> {
    let mut out = Vec::new();
    if let Some([coldest, warmest]) = answer.attainable_c {
        let unit = system.unit(Dimension::Temperature);
        let warmest = temperature(warmest, system);
        let mut words = format!("allowed mixes give {} to {warmest}", figure(coldest, unit, 1));
        match answer.attainable_oxygen_mg_l {
            Some([least, most]) => {
                // mixes of unknown oxygen are allowed too, and may lie outside
                let unknown = answer.ranking.mixes.iter().any(|m| m.oxygen_mg_l.is_none());
                let known = if unknown { ", unknown for some" } else { "" };
                _ = write!(words, " and {least:.1} to {most:.1} mg/L oxygen{known}");
            }
            None => words.push_str(", oxygen unknown"),
        }
        out.push(("Range", words));
    }
    if answer.trade.len() > 1 {
        out.push(("Trade", trade(context, &answer.trade, system)));
    }
    out.extend(answer.split.as_ref().map(|s| ("Split", split(context, answer, s, system))));
    out.extend(answer.least.as_ref().map(|l| ("Least", least(context, l, system))));
    out.extend(answer.pocket.map(|p| ("More", pocket(p, system))));
    if !answer.lost.is_empty() && !answer.mixes.is_empty() {
        out.push(("If lost", lost(context, &answer.lost, system)));
    }
    out
}

/// Nearest to the preferred temperature first; of those that read alike in oxygen only the nearest.
fn trade(context: &Context, trade: &[Trade], system: System) -> String {
    let mut words: Vec<(String, String)> = Vec::new();
    for t in trade {
        let air = oxygen(t.oxygen_mg_l);
        if words.last().is_none_or(|last| last.1 != air) {
            words.push((temperature(t.temperature_c, system), air));
        }
    }
    let words: Vec<String> =
        words.iter().map(|(t, o)| format!("{t} {}", o.trim_end_matches(" mg/L"))).collect();
    let last = trade.last().map_or_else(String::new, |t| named(context, &[&t.gates], system).join(", "));
    format!("unbeaten in both: {} mg/L ({last})", words.join(", "))
}

fn split(context: &Context, answer: &RankAnswer, split: &PreferredSplit, system: System) -> String {
    let site = context.site();
    let [a, b] = split.between.map(|part| {
        harmless(match part {
            Part::Outlet(i) => &site.outlets[i].name,
            Part::Well(i) => &site.wells[i].name,
        })
    });
    let preferred = temperature(split.preferred_c, system);
    let stands = |gates: &[Gate]| -> Vec<(usize, u64)> {
        gates.iter().map(|g| (g.outlet, g.opening.to_bits())).collect()
    };
    let of_best = answer.mixes.first().is_some_and(|m| stands(&m.day.gates) == stands(&split.gates));
    let rest = if of_best {
        "the rest as no. 1".to_owned()
    } else {
        format!("of {}", named(context, &[&split.gates], system).join(", "))
    };
    let one = |r: &Root| {
        let air = oxygen(r.oxygen_mg_l);
        let broken = |c: &Check| match c.of.name(site) {
            Some(name) => format!("{} of {}", c.rule.name(), harmless(name)),
            None => c.rule.name().to_owned(),
        };
        let breaks: Vec<String> = r.breaks.iter().map(broken).collect();
        let breaks =
            if breaks.is_empty() { String::new() } else { format!("; BREAKS {}", breaks.join(", ")) };
        let [one, other] = r.flows_m3s.map(|f| flow(f, system));
        format!("{a} {one}, {b} {other} (oxygen {air}{breaks})")
    };
    let roots: Vec<String> = split.roots.iter().map(one).collect();
    if roots.is_empty() {
        let unit = system.unit(Dimension::Temperature);
        let [coldest, warmest] = split.bracket_c;
        let (coldest, warmest) = (figure(coldest, unit, 1), temperature(warmest, system));
        return format!("no split of {a} and {b} gives {preferred}: {coldest} to {warmest}, {rest}");
    }
    format!("{preferred} with {}, {rest}", roots.join(", or "))
}

fn least(context: &Context, least: &Least, system: System) -> String {
    if let Some(found) = least.flow_m3s {
        let gates = named(context, &[&least.gates], system).join(", ");
        let end = if found > least.tried_m3s[0] { "in all" } else { "in all, the least tried," };
        format!("{} {end} keeps every target: {gates}", flow(found, system))
    } else {
        let [low, high] = least.tried_m3s.map(|f| flow(f, system));
        format!("no release tried, from {low} to {high}, has an allowed mix known to keep every target")
    }
}

fn pocket(pocket: Pocket, system: System) -> String {
    let (release, warmth) = (system.unit(Dimension::Flow), system.unit(Dimension::TemperatureDifference));
    let more_m3s = release.to_si(if system == System::Us { POCKET.0 } else { POCKET.1 });
    let by = warmth.from_si(pocket.c_per_m3s * more_m3s);
    let way = if by < 0.0 { "colder" } else { "warmer" };
    let words = if by.abs() < 0.05 { "less than 0.1".to_owned() } else { format!("{:.1}", by.abs()) };
    format!(
        "each {} more in proportion: {words} {} {way} ({}-{})",
        flow(more_m3s, system),
        warmth.symbol(),
        figure(pocket.from_m3s, release, u8::from(system != System::Us)),
        flow(pocket.to_m3s, system)
    )
}

fn lost(context: &Context, lost: &[Lost], system: System) -> String {
    let one = |l: &Lost| {
        let name = harmless(&context.site().outlets[l.outlet].name);
        l.fallback.as_ref().map_or_else(
            || format!("{name}: no allowed mix without it"),
            |shown| {
                format!(
                    "{name}: {} ({}, {})",
                    openings(context, shown, system).join(", "),
                    temperature(shown.temperature_c, system),
                    oxygen(shown.oxygen_mg_l)
                )
            },
        )
    };
    lost.iter().map(one).collect::<Vec<_>>().join("; ")
}
