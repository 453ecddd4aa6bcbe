//! Sums of a mix in the making, one set for each depth of the head.
//!
//! Methods: `docs/methods.md`, section 10.

use super::choices::{Choice, Part};

/// Sums of the head of a mix.
pub(super) struct Sums<'a> {
    pub(super) lanes: Vec<f64>,
    pub(super) unknown: bool,
    pub(super) idea: usize,
    pub(super) number: u64,
    pub(super) parts: Vec<&'a Part>,
    /// Slots of the parts, and of those with several, as bits.
    pub(super) slots: u64,
    pub(super) shared: u64,
}

impl Sums<'_> {
    pub(super) fn nothing(lanes: usize) -> Self {
        Self {
            lanes: vec![0.0; lanes],
            unknown: false,
            idea: 0,
            number: 0,
            parts: Vec::new(),
            slots: 0,
            shared: 0,
        }
    }
}

/// Sums at `depth + 1` are those at `depth` with a choice put on.
pub(super) fn put<'a>(stack: &mut [Sums<'a>], depth: usize, choice: &'a Choice) {
    let (below, above) = stack.split_at_mut(depth + 1);
    let (before, after) = (&below[depth], &mut above[0]);
    for (lane, (a, b)) in after.lanes.iter_mut().zip(before.lanes.iter().zip(&choice.lanes)) {
        *lane = a + b;
    }
    after.unknown = before.unknown || choice.unknown;
    after.idea = before.idea + choice.idea;
    after.number = before.number + choice.number;
    after.slots = before.slots | choice.slots;
    after.shared = before.shared | (before.slots & choice.slots);
    after.parts.clear();
    after.parts.extend_from_slice(&before.parts);
    after.parts.extend(&choice.parts);
}
