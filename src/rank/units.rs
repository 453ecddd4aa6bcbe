//! The parts of the dam that can be set on their own, a well with its gates or an outlet on no well, and every
//! state the crew can put them in.
//!
//! Methods: `docs/methods.md`, section 10.

use crate::intake;
use crate::problem::Problem;
use crate::site::{SAME_OPENING, Site};

/// Most states of one well (choice): beyond this a ranking is no longer instant.
const MOST_STATES: usize = 20_000;

/// A part of the dam that can be set on its own.
#[derive(Debug, Clone)]
pub(super) struct Unit {
    /// Its well, for gates on one.
    pub(super) well: Option<usize>,
    /// Its outlets, by elevation and name.
    pub(super) outlets: Vec<usize>,
    /// Its states with something open and no more than the well allows.
    pub(super) states: Vec<State>,
    /// Number of states with more open than the well allows, by how many are open.
    pub(super) too_many: Vec<(usize, u64)>,
    /// It spills by itself and takes no share: its flow, m3/s.
    pub(super) spills_m3s: Option<f64>,
}

/// One way a unit can stand.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct State {
    /// Opening of each outlet of the unit, 0 to 1.
    pub(super) openings: Vec<f64>,
}

impl State {
    /// Outlets that are open, with their openings.
    pub(super) fn open<'a>(&'a self, unit: &'a Unit) -> impl Iterator<Item = (usize, f64)> + 'a {
        unit.outlets.iter().copied().zip(self.openings.iter().copied()).filter(|(_, opening)| *opening > 0.0)
    }
}

/// Openings the crew can set at an outlet besides shut, from the smallest; fully open where any flow can be set. None
/// where it can only stand shut.
pub(super) fn openings(site: &Site, outlet: usize) -> Vec<f64> {
    let positions = &site.outlets[outlet].positions;
    if positions.is_empty() {
        return vec![1.0];
    }
    let mut out: Vec<f64> = positions.iter().map(|p| p.opening).filter(|o| *o > 0.0).collect();
    out.sort_by(f64::total_cmp);
    out.dedup_by(|a, b| (*a - *b).abs() < SAME_OPENING);
    out
}

/// The units of a site in the fixed order: by the elevation and name of the lowest outlet. Outlets left out are
/// taken as shut.
///
/// # Errors
/// A well with more states than can be ranked.
pub(super) fn units(
    site: &Site,
    groups: &[Vec<usize>],
    pool_m: f64,
    without: &[usize],
) -> Result<Vec<Unit>, Problem> {
    let mut units: Vec<Unit> = Vec::new();
    for &outlet in groups.iter().flatten() {
        let o = &site.outlets[outlet];
        let spills = intake::spills_by_itself(o);
        let spills_m3s = spills.then(|| intake::crest_flow_m3s(o, 1.0, pool_m).unwrap_or(0.0));
        if spills_m3s.is_some_and(|flow| flow <= 0.0) {
            continue;
        }
        match units.iter_mut().find(|u| u.well.is_some() && u.well == o.well) {
            Some(unit) => unit.outlets.push(outlet),
            None => units.push(Unit {
                well: o.well,
                outlets: vec![outlet],
                states: Vec::new(),
                too_many: Vec::new(),
                spills_m3s,
            }),
        }
    }
    for unit in &mut units {
        if unit.spills_m3s.is_some() {
            continue;
        }
        let choices: Vec<Vec<f64>> = unit
            .outlets
            .iter()
            .map(|&o| if without.contains(&o) { Vec::new() } else { openings(site, o) })
            .collect();
        let most = unit.well.and_then(|w| site.wells[w].max_open).unwrap_or(unit.outlets.len());
        let by_open = by_number_open(&choices);
        let within: u64 = by_open.iter().take(most + 1).skip(1).sum();
        if within > MOST_STATES as u64 {
            let name = unit.well.map_or(&site.outlets[unit.outlets[0]].name, |w| &site.wells[w].name);
            return Err(Problem::refused(
                "too-many",
                format!("the gates of `{name}` can stand in {within} ways"),
                "give max_open of the well, or fewer positions",
            ));
        }
        unit.too_many =
            by_open.iter().copied().enumerate().skip(most + 1).filter(|(_, count)| *count > 0).collect();
        let mut state = vec![0.0; choices.len()];
        states(&choices, 0, most, &mut state, &mut unit.states);
    }
    Ok(units)
}

/// How many states have a number of gates open, by that number.
fn by_number_open(choices: &[Vec<f64>]) -> Vec<u64> {
    let mut out = vec![1_u64];
    for openings in choices {
        out.push(0);
        for open in (1..out.len()).rev() {
            out[open] = out[open].saturating_add(out[open - 1].saturating_mul(openings.len() as u64));
        }
    }
    out
}

/// Every state with at most `left` more gates open, shut before open and the lowest outlet slowest.
fn states(choices: &[Vec<f64>], at: usize, left: usize, state: &mut Vec<f64>, out: &mut Vec<State>) {
    let Some(openings) = choices.get(at) else {
        if state.iter().any(|o| *o > 0.0) {
            out.push(State { openings: state.clone() });
        }
        return;
    };
    state[at] = 0.0;
    states(choices, at + 1, left, state, out);
    if left > 0 {
        for &opening in openings {
            state[at] = opening;
            states(choices, at + 1, left - 1, state, out);
        }
        state[at] = 0.0;
    }
}
