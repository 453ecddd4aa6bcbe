//! Which parts of the dam are taken one inside the other, and which are taken together beforehand.
//!
//! Methods: `docs/methods.md`, section 10.

use super::choices::{Choice, Choices, Levels, settled, together};

/// Parts that stand alone are taken together while they make no more rows than this (choice: they stay in the
/// nearest cache).
const MOST_ROWS: usize = 60_000;

/// Number of ways lists fill up exactly `k` steps, for each `k`; it stops at the greatest number there is.
pub(super) fn ways(counts: &[Vec<u64>], steps: usize) -> Vec<u64> {
    let mut out = vec![0_u64; steps + 1];
    out[0] = 1;
    for list in counts {
        let mut next = vec![0_u64; steps + 1];
        for (k, &have) in out.iter().enumerate() {
            for (j, &more) in list.iter().take(steps + 1 - k).enumerate() {
                next[k + j] = next[k + j].saturating_add(have.saturating_mul(more));
            }
        }
        out = next;
    }
    out
}

/// Which parts are taken one inside the other, and the rest taken together. Parts that share a level stand beside
/// each other; where they make few pairs they too are taken together. The head is never empty.
pub(super) fn arranged(
    units: &[Choices],
    steps: usize,
    levels: &Levels,
    undrawn: bool,
) -> (Vec<Choices>, Choices) {
    let mut nothing = Choices { by_share: vec![Vec::new(); steps + 1], units: 0 };
    nothing.by_share[0].push(Choice {
        lanes: vec![0.0; levels.lanes.count()],
        unknown: false,
        idea: 0,
        number: 0,
        parts: Vec::new(),
        slots: 0,
    });
    let mut head = Vec::new();
    let mut alone = Vec::new();
    for island in islands(units) {
        // a level can be one that parts share though the other has no choice left that draws there
        let mut choices = island.iter().flat_map(|&u| units[u].by_share.iter().flatten());
        let shares = choices.any(|c| !c.parts.is_empty());
        let joined = island.iter().try_fold(nothing.clone(), |so_far, &unit| {
            let fits = so_far.pairs(&units[unit]) <= MOST_ROWS;
            (fits && !(shares && undrawn)).then(|| together(&so_far, &units[unit]))
        });
        match joined {
            Some(joined) => alone.push(settled(joined, levels)),
            None => head.extend(island.into_iter().map(|unit| units[unit].clone())),
        }
    }
    // the smallest first, so that as many as can be fit
    alone.sort_by_key(|c| (c.len(), c.units));
    let mut tail = nothing.clone();
    for choices in alone {
        if tail.pairs(&choices) <= MOST_ROWS {
            tail = together(&tail, &choices);
        } else {
            head.push(choices);
        }
    }
    if head.is_empty() {
        head.push(nothing);
    }
    (head, tail)
}

/// Units that share levels, directly or through others, in the order of the units.
fn islands(units: &[Choices]) -> Vec<Vec<usize>> {
    let slots: Vec<Vec<usize>> = units
        .iter()
        .map(|u| {
            let mut slots: Vec<usize> =
                u.by_share.iter().flatten().flat_map(|c| c.parts.iter().map(|p| p.slot)).collect();
            slots.sort_unstable();
            slots.dedup();
            slots
        })
        .collect();
    let mut islands: Vec<Vec<usize>> = Vec::new();
    for unit in 0..units.len() {
        let touches = |other: &usize| slots[*other].iter().any(|s| slots[unit].contains(s));
        let (linked, apart): (Vec<_>, Vec<_>) = islands.into_iter().partition(|i| i.iter().any(touches));
        islands = apart;
        let mut joined: Vec<usize> = linked.into_iter().flatten().chain([unit]).collect();
        joined.sort_unstable();
        islands.push(joined);
    }
    islands.sort();
    islands
}
