//! What the units offer at each share of the release, counted: which of their ways can be part of a mix, and how many
//! mixes each limit of theirs rejects.
//!
//! A limit that a unit breaks on its own is broken in every mix that holds the unit so: those mixes are counted and
//! passed over, and that is the proof.
//!
//! Methods: `docs/methods.md`, section 10.

use rayon::prelude::*;

use crate::mix::limits::{self, Check, Rule};

use super::arrange::ways;
use super::choices::Choices;
use super::tries::{Kitchen, Tried};
use super::units::Unit;

/// The smallest miss of one limit, and how many mixes miss it.
#[derive(Debug, Clone)]
pub(super) struct Miss {
    /// The limit, broken, with its room.
    pub(super) check: Check,
    /// Number of mixes examined that break it.
    pub(super) count: u64,
    /// Openings of the unit that comes nearest.
    pub(super) open: Vec<(usize, f64)>,
}

/// What a choice of a unit is.
#[derive(Debug, Clone, Copy)]
pub(super) struct Code {
    /// Steps of the release.
    pub(super) share: usize,
    /// Index of the state; `None` for shut.
    pub(super) state: Option<usize>,
    /// Index among the choices of that share.
    pub(super) at: usize,
}

/// Everything known of the units before they are put together.
pub(super) struct Offers {
    /// Choices of each unit.
    pub(super) choices: Vec<Choices>,
    /// What each choice is, in the order of its code.
    pub(super) codes: Vec<Vec<Code>>,
    /// Place of each unit's code in the number of a mix.
    pub(super) places: Vec<u64>,
    /// Sets of open outlets of each unit, and the place of their index in that of ideas.
    pub(super) masks: Vec<(Vec<Vec<usize>>, usize)>,
    /// Limits that units break on their own.
    pub(super) misses: Vec<Miss>,
    /// Mixes there are.
    pub(super) examined: u64,
    /// Whether every mix has a number, and every set of open outlets an index.
    pub(super) numbered: bool,
}

impl Kitchen<'_> {
    /// Tries every state of every unit at every share.
    pub(super) fn offers(&self) -> Offers {
        let steps = self.steps();
        let counts: Vec<Vec<u64>> = self.units.iter().map(|u| all_states(u, steps)).collect();
        let examined = ways(&counts, steps)[steps];
        let mut out = Offers {
            choices: Vec::new(),
            codes: Vec::new(),
            places: Vec::new(),
            masks: Vec::new(),
            misses: Vec::new(),
            examined,
            numbered: false,
        };
        for (u, unit) in self.units.iter().enumerate() {
            let others: Vec<Vec<u64>> =
                counts.iter().enumerate().filter(|(other, _)| *other != u).map(|(_, c)| c.clone()).collect();
            let completions = ways(&others, steps);
            self.unit(unit, &completions, &mut out);
        }
        out.numbered = number(&mut out).is_some();
        out
    }

    /// Adds the choices and misses of one unit; `completions[k]` counts what the others make of `k` steps.
    fn unit(&self, unit: &Unit, completions: &[u64], out: &mut Offers) {
        let steps = self.steps();
        let mut choices = Choices {
            by_share: vec![Vec::new(); steps + 1],
            units: if out.choices.len() < 64 { 1 << out.choices.len() } else { 0 },
        };
        let mut codes = Vec::new();
        let mut masks: Vec<Vec<usize>> = Vec::new();
        let mut keep = |share: usize, state: Option<usize>, tried: Tried, misses: &mut Vec<Miss>| {
            let open: Vec<(usize, f64)> =
                state.map_or_else(Vec::new, |s| unit.states[s].open(unit).collect());
            for check in worst(tried.broken) {
                note(misses, check, completions[steps - share], &open);
            }
            let Some(mut choice) = tried.choice else { return };
            let mut mask: Vec<usize> = open.iter().map(|o| o.0).collect();
            if unit.spills_m3s.is_some() {
                mask.clone_from(&unit.outlets);
            }
            mask.sort_unstable();
            choice.idea = masks.iter().position(|m| *m == mask).unwrap_or_else(|| {
                masks.push(mask);
                masks.len() - 1
            });
            choice.number = codes.len() as u64;
            codes.push(Code { share, state, at: choices.by_share[share].len() });
            choices.by_share[share].push(choice);
        };
        keep(0, None, self.shut(unit), &mut out.misses);
        let still: Vec<Vec<Check>> = unit.states.iter().map(|s| self.still(unit, s)).collect();
        let all_shares: u64 = (1..=steps).map(|k| completions[steps - k]).fold(0, u64::saturating_add);
        for (state, broken) in unit.states.iter().zip(&still) {
            let open: Vec<(usize, f64)> = state.open(unit).collect();
            for check in worst(broken.clone()) {
                note(&mut out.misses, check, all_shares, &open);
            }
        }
        if let Some(well) = unit.well {
            for &(open, states) in &unit.too_many {
                let mut checks = Vec::new();
                limits::well(self.site(), well, open, 0.0, None, &mut checks);
                if let Some(check) = checks.into_iter().find(|c| c.rule == Rule::MaxOpen) {
                    note(&mut out.misses, check, states.saturating_mul(all_shares), &[]);
                }
            }
        }
        let wanted: Vec<(usize, usize)> = (1..=steps)
            .flat_map(|share| (0..unit.states.len()).map(move |state| (share, state)))
            .filter(|&(_, state)| still[state].is_empty())
            .collect();
        let tried: Vec<Tried> =
            wanted.par_iter().map(|&(share, state)| self.flowing(unit, &unit.states[state], share)).collect();
        for (&(share, state), tried) in wanted.iter().zip(tried) {
            keep(share, Some(state), tried, &mut out.misses);
        }
        out.choices.push(choices);
        out.codes.push(codes);
        out.masks.push((masks, 0));
    }
}

/// Number of states a unit has at each share.
fn all_states(unit: &Unit, steps: usize) -> Vec<u64> {
    if unit.spills_m3s.is_some() {
        return vec![1];
    }
    let open = unit.states.len() as u64 + unit.too_many.iter().map(|t| t.1).sum::<u64>();
    let mut out = vec![open; steps + 1];
    out[0] = 1;
    out
}

/// Each limit once, with its largest miss over the parts of the day.
fn worst(mut broken: Vec<Check>) -> Vec<Check> {
    let which = |c: &Check| (c.rule, c.of, c.item);
    broken.sort_by(|a, b| which(a).cmp(&which(b)).then(a.room.total_cmp(&b.room)));
    broken.dedup_by_key(|c| which(c));
    broken
}

/// Counts a broken limit, and keeps the smallest miss of each. What no mix holds is missed by none.
fn note(misses: &mut Vec<Miss>, check: Check, count: u64, open: &[(usize, f64)]) {
    if count == 0 {
        return;
    }
    match misses
        .iter_mut()
        .find(|m| m.check.rule == check.rule && m.check.of == check.of && m.check.item == check.item)
    {
        Some(miss) => {
            miss.count = miss.count.saturating_add(count);
            if check.room > miss.check.room {
                miss.check = check;
                miss.open = open.to_vec();
            }
        }
        None => misses.push(Miss { check, count, open: open.to_vec() }),
    }
}

/// Gives every choice its part of the number of a mix and of the index of ideas. `None` where there are more than
/// can be numbered: few steps among many parts make few mixes of many choices.
fn number(offers: &mut Offers) -> Option<()> {
    let (mut place, mut ideas) = (1_u64, 1_usize);
    let mut places = Vec::new();
    for codes in offers.codes.iter().rev() {
        places.push(place);
        place = place.checked_mul(codes.len().max(1) as u64)?;
    }
    places.reverse();
    for masks in &mut offers.masks {
        masks.1 = ideas;
        ideas = ideas.checked_mul(masks.0.len().max(1))?;
    }
    for (u, choices) in offers.choices.iter_mut().enumerate() {
        for choice in choices.by_share.iter_mut().flatten() {
            choice.number *= places[u];
            choice.idea *= offers.masks[u].1;
        }
    }
    offers.places = places;
    Some(())
}
