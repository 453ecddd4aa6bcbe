//! What the record teaches, in words.

use crate::problem::harmless;
use crate::record::{Candidate, Verdict};
use crate::tasks::Context;
use crate::tasks::log::Past;
use crate::units::in_system;

use super::past::{count, level_name};

/// Each effect with its value, its interval, its days, the error on days left out, and the verdict; then what cannot be
/// told apart, and a sensor that is suspected.
pub fn learning(context: &Context, past: &Past) -> Vec<String> {
    let of = &past.learning;
    if of.learned.n == 0 {
        return Vec::new();
    }
    let mut out = Vec::new();
    if let Some((from, to)) = of.learned.window {
        out.push(format!("{} that can be held against the gauge, {from} to {to}", count(of.learned.n)));
    }
    out.extend(of.candidates.iter().map(|candidate| self::candidate(context, candidate)));
    out.extend(of.alike.iter().map(|words| harmless(&in_system(words, context.system))));
    out.extend(of.suspect.iter().map(|suspect| harmless(&in_system(&suspect.words(), context.system))));
    out
}

/// One effect that was tried.
pub fn candidate(context: &Context, candidate: &Candidate) -> String {
    let Candidate { effect, figures, n, stretches, held_out, verdict, .. } = candidate;
    let figures: Vec<String> = figures
        .iter()
        .map(|figure| {
            let at = figure.level.map_or_else(String::new, |l| format!("{} ", level_name(context.site(), l)));
            let range = figure.interval.map_or_else(String::new, |interval| {
                format!(" (80 % interval {})", effect.interval_words(interval))
            });
            format!("{at}{}{range}", effect.value_words(figure.value))
        })
        .collect();
    let value = if figures.is_empty() { "no value".to_owned() } else { figures.join("; ") };
    let error = held_out.map_or_else(String::new, |[before, after]| {
        format!(
            "; error on days left out {} without, {} with it",
            effect.error_words(before),
            effect.error_words(after)
        )
    });
    let verdict = match verdict {
        Verdict::Kept => "kept".to_owned(),
        Verdict::Passed(why) => format!("passed over: {why}"),
        Verdict::Refused(why) => format!("refused: {why}"),
    };
    let told =
        format!("{}: {value}, {} in {stretches} stretches{error}; {verdict}", effect.name(), count(*n));
    harmless(&in_system(&told, context.system))
}
