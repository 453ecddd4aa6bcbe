//! Which mixes fit, on one screen: what was asked, the list, why no. 1, and the answers beyond it. The lines are made
//! for the command and the screens alike.

mod below;
mod list;
mod refused;

pub use below::{Said, answers, said};
pub use list::{CAPTION, Line, lines, standing, table};
pub use refused::{COUNT, Told, heading, rejected};

use std::fmt::Write as _;

use crate::problem::{Problem, Weight, harmless};
use crate::rank::Criterion;
use crate::target::Target;
use crate::tasks::Context;
use crate::tasks::rank::{NothingFits, RankAnswer, Shown};
use crate::units::{Dimension, System, show};

use super::gates::openings;
use super::targets::{named, range};
use super::{flow, labelled, oxygen, temperature, wrapped};

/// What was asked, the list and what follows from it.
pub(super) fn body(context: &Context, answer: &RankAnswer) -> String {
    let (site, system) = (context.site(), context.system);
    let mut out = labelled("Release", &asked(context, answer, system));
    let date = context.on.date_naive();
    let valid: Vec<&Target> = site.targets_on(date).map(|(_, t)| t).collect();
    for rule in &valid {
        out.push_str(&labelled("Target", &format!("{}: {}", named(rule, system), range(rule, system))));
    }
    if valid.is_empty() {
        out.push_str(&labelled("Target", "none is valid on this date"));
    }
    out.push('\n');
    if let Some(words) = nothing_fits(context, answer, system) {
        out.push_str(&wrapped(&words, 0));
    }
    out.push_str(&list::list(context, answer, system));
    if let Some(best) = answer.mixes.first() {
        out.push_str(&below::best(context, best, system));
    }
    let answers: String = answers(context, answer, system).iter().map(|(l, t)| labelled(l, t)).collect();
    let rejected = refused::list(context, answer, system);
    // where nothing fits, what stands in the way comes first
    let [first, second] = if answer.mixes.is_empty() { [rejected, answers] } else { [answers, rejected] };
    out.push_str(&first);
    out.push_str(&second);
    out.push_str(&labelled("Examined", &examined(answer, system)));
    for note in answer.notes.iter().chain(flags(&context.profile.flags)) {
        out.push_str(&labelled("Note", &note.advice(system)));
    }
    if let Some(told) = answer.mixes.first().and_then(|best| not_checked(context, best)) {
        out.push_str(&wrapped(&format!("Not checked of no. 1: {told}"), 2));
    }
    out
}

/// What to beware of, without what was merely assumed.
fn flags(problems: &[Problem]) -> impl Iterator<Item = &Problem> {
    problems.iter().filter(|p| p.weight == Weight::Flag)
}

/// Limits of a mix that nobody gave or that what is known does not reach; which gates they are missing for only where
/// that is not all of its open gates. `None` where every limit is checked.
pub fn not_checked(context: &Context, shown: &Shown) -> Option<String> {
    let mut open: Vec<&str> =
        shown.day.gates.iter().map(|g| context.site().outlets[g.outlet].name.as_str()).collect();
    open.sort_unstable();
    let all = format!(" of {}", open.join(", "));
    let told: Vec<&str> =
        shown.not_checked.iter().map(|words| words.strip_suffix(all.as_str()).unwrap_or(words)).collect();
    (!told.is_empty()).then(|| harmless(&told.join("; ")))
}

/// How much is released, and where that comes from: `1,200 cfs (release.wanted in the site file)`.
pub fn release(context: &Context, answer: &RankAnswer, system: System) -> String {
    let flows = match &answer.blocks[..] {
        [(_, total)] => flow(*total, system),
        blocks => {
            let one = |(i, &(share, total)): (usize, &(f64, f64))| {
                format!("{} {} for {:.0} h", block_name(context, i), flow(total, system), 24.0 * share)
            };
            blocks.iter().enumerate().map(one).collect::<Vec<_>>().join(", ")
        }
    };
    format!("{flows} ({})", answer.release_from.words())
}

fn asked(context: &Context, answer: &RankAnswer, system: System) -> String {
    let step = 100.0 / answer.steps as f64;
    let out = format!("{}, split in steps of {step:.3}", release(context, answer, system));
    let mut out = out.trim_end_matches('0').trim_end_matches('.').to_owned() + " %";
    if answer.order != Criterion::USUAL {
        let by: Vec<&str> = answer.order.iter().map(|c| c.name()).collect();
        let _ = write!(out, "; ordered by {}", by.join(", "));
    }
    if !answer.without.is_empty() {
        let _ = write!(out, "; without {}", without(context, answer));
    }
    out
}

/// Names of the gates left out.
pub fn without(context: &Context, answer: &RankAnswer) -> String {
    let outlets = &context.site().outlets;
    let names: Vec<&str> =
        answer.without.iter().filter_map(|&o| Some(outlets.get(o)?.name.as_str())).collect();
    harmless(&names.join(", "))
}

fn block_name(context: &Context, index: usize) -> String {
    context.site().blocks.get(index).map_or_else(String::new, |b| harmless(&b.name))
}

/// Plainly, where no mix is allowed or none reaches the targets.
pub fn nothing_fits(context: &Context, answer: &RankAnswer, system: System) -> Option<String> {
    let why = answer.nothing_fits()?;
    let words = match (why, &answer.nearest) {
        (NothingFits::NoneReaches, Some(nearest)) => {
            format!("No mix examined is known to reach every target. Nearest: {}", nearly(context, nearest, system))
        }
        _ if answer.ranking.examined == 0 => "There is no mix: every outlet is left out.".into(),
        _ => "No mix is allowed: every one examined breaks a limit. What rejects them, with its smallest miss, stands below."
            .into(),
    };
    Some(words)
}

/// A mix that misses targets, and by how much.
fn nearly(context: &Context, nearest: &Shown, system: System) -> String {
    let site = context.site();
    let mut misses = Vec::new();
    for standing in nearest.targets.iter().filter(|s| s.missed() || s.unknown(site)) {
        let name = harmless(&site.targets[standing.target].name);
        let words = list::standing(site, std::slice::from_ref(standing), system);
        misses.push(format!("{name}: {words}"));
    }
    format!(
        "{}, {}, oxygen {}: {}",
        openings(context, nearest, system).join(", "),
        temperature(nearest.temperature_c, system),
        oxygen(nearest.oxygen_mg_l),
        misses.join("; ")
    )
}

/// How many mixes were examined, and how.
pub fn examined(answer: &RankAnswer, system: System) -> String {
    let r = &answer.ranking;
    let mut words = format!(
        "{}: {} judged, {} skipped with proof; {} allowed",
        if r.examined == 1 { "1 mix".to_owned() } else { grouped(r.examined) + " mixes" },
        grouped(r.judged),
        grouped(r.skipped),
        grouped(r.allowed)
    );
    if !answer.mixes.is_empty() {
        let apart = show(answer.apart.0, Dimension::TemperatureDifference, system, 3);
        let _ = write!(words, "; full computation differs by up to {apart}");
        if let Some(oxygen) = answer.apart.1 {
            let _ = write!(words, ", {oxygen:.3} mg/L");
        }
    }
    words
}

/// `77,991,781`.
fn grouped(count: u64) -> String {
    let digits = count.to_string();
    let mut out = String::with_capacity(digits.len() + digits.len() / 3);
    for (at, c) in digits.chars().enumerate() {
        if at > 0 && (digits.len() - at).is_multiple_of(3) {
            out.push(',');
        }
        out.push(c);
    }
    out
}
