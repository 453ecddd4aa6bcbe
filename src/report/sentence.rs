//! Sentences that every output shares.

use crate::problem::{Problem, Weight};

/// How the figures were made.
pub const METHOD: &str = "point-sink withdrawal (WES H-73-4, E-87-2), samples as measured, levelled density; 10-90 % of seeded perturbed cases";

/// What every output says, on one line.
pub fn caution() -> &'static str {
    "Advisory estimate. Operations defer to the dam-safety authority and the approved water control plan; a responsible licensed engineer decides. Warn downstream users of changes in stage and cold water."
}

/// Flags and notes of a list, flags first, each in the order it was found.
pub fn flags_of(problems: &[Problem]) -> Vec<&Problem> {
    let mut out: Vec<&Problem> = problems.iter().collect();
    out.sort_by_key(|p| std::cmp::Reverse(p.weight));
    out.retain(|p| p.weight != Weight::Refused);
    out
}
