//! One step: something moved to its next place, every place between looked at.
//!
//! Methods: `docs/methods.md`, section 11.

use crate::mix::limits::{Check, Rule};

use super::Manner;
use super::Moved;
use super::axes::{Axis, between};
use super::bands::{At, crossed};
use super::rates::Rates;
use super::standing::{Put, Standing};
use super::works::{Value, Works};

/// Parts of the way between two places at whose ends every limit is held (choice).
const LOOKS: usize = 4;
/// The same of a movement without any place between (choice).
const LOOKS_AT_ONCE: usize = 8;
/// Most halvings of a movement that can halt anywhere (choice): pieces of a sixty-fourth.
const HALVINGS: u32 = 6;

/// A piece of a step without a halt.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct Piece {
    /// Where it is looked at, the last where it halts.
    pub(super) puts: Vec<Put>,
    /// What leaves the dam at each of these.
    pub(super) values: Vec<Value>,
}

/// A step from a place to a later one.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct Taken {
    /// Place it leads to.
    pub(super) to: usize,
    pub(super) pieces: Vec<Piece>,
    /// Limits of what stands still that it passes without a halt.
    pub(super) passes: Vec<Check>,
}

/// What comes of a step.
#[derive(Debug, Clone, PartialEq)]
pub(super) enum Tried {
    /// It can be taken.
    Taken(Taken),
    /// A limit stands in the way, on the way to a place.
    Blocked(Check, usize),
    /// It breaks a rate of change however it is cut, on the way to a place.
    TooFast(Check, usize),
    /// It has to wait until its water is stopped.
    Waits,
}

/// How steps are judged.
pub(super) struct Judge<'a> {
    pub(super) manner: Manner,
    /// Rates that steps keep; `None` where they are not asked.
    pub(super) rates: Option<&'a Rates>,
}

impl Judge<'_> {
    /// Tries the step of one axis from a place to its next.
    pub(super) fn tried(&self, works: &mut Works, standing: &Standing, axis: &Axis, from: usize) -> Tried {
        if let Moved::Gate(outlet) = axis.moved
            && works.site.outlets[outlet].moves_under_flow == Some(false)
            && standing.flows(works.site, outlet)
        {
            return Tried::Waits;
        }
        let mut whole = Piece { puts: Vec::new(), values: Vec::new() };
        let mut passes: Vec<Check> = Vec::new();
        let mut to = from;
        let mut last = At { put: axis.stops[from].put, state: works.state(standing) };
        loop {
            to += 1;
            let (Some(a), Some(b)) = (axis.stops.get(to - 1), axis.stops.get(to)) else {
                // it would have to halt where it may only pass
                let check = passes.last().copied();
                return check.map_or(Tried::Waits, |check| Tried::Blocked(check, to - 1));
            };
            let mut halts = true;
            let at_once = b.free && !axis.goes_on(to) && !axis.goes_on(to + 1);
            let looks = if at_once { LOOKS_AT_ONCE } else { LOOKS };
            for look in 1..=looks {
                let put = if look == looks {
                    b.put
                } else {
                    let share = look as f64 / looks as f64;
                    between(works.site, works.pool_m, axis.moved, (a.put, b.put), share)
                };
                let at = At { put, state: works.state(&standing.with(axis.moved, put)) };
                let mut broken = at.state.broken.clone();
                broken.extend(crossed(works, standing, axis.moved, &last, &at));
                if let Some(check) = broken.iter().find(|c| !self.may_pass(works, axis, c)) {
                    return Tried::Blocked(*check, to);
                }
                passes.extend(broken);
                halts = at.state.broken.is_empty();
                whole.puts.push(put);
                whole.values.push(at.state.value);
                last = at;
            }
            if halts {
                break;
            }
        }
        let ends = [axis.stops[from].put, axis.stops[to].put];
        if let Some(check) = passes.iter().find(|c| starts(c) && !ends.iter().any(|put| is_shut(axis, *put)))
        {
            return Tried::Blocked(*check, to);
        }
        self.paced(works, standing, axis, (from, to), Taken { to, pieces: vec![whole], passes })
    }

    /// A step cut so that no piece breaks a rate of change by itself.
    fn paced(
        &self,
        works: &mut Works,
        standing: &Standing,
        axis: &Axis,
        (from, to): (usize, usize),
        taken: Taken,
    ) -> Tried {
        let Some(rates) = self.rates else { return Tried::Taken(taken) };
        let before = works.state(&standing.with(axis.moved, axis.stops[from].put)).value;
        let too_fast = |start: Value, piece: &Piece| {
            let values: Vec<Value> = [start].into_iter().chain(piece.values.iter().copied()).collect();
            rates.broken(&values)
        };
        let Some(first) = taken.pieces.iter().find_map(|piece| too_fast(before, piece)) else {
            return Tried::Taken(taken);
        };
        let mut broken = first;
        if !taken.passes.is_empty() || !axis.stops[to].free {
            return Tried::TooFast(broken, to);
        }
        let (a, b) = (axis.stops[from].put, axis.stops[to].put);
        'cut: for halvings in 1..=HALVINGS {
            let count = 2_usize.pow(halvings);
            let (mut start, mut pieces) = (before, Vec::with_capacity(count));
            for piece in 0..count {
                let mut one = Piece { puts: Vec::new(), values: Vec::new() };
                for look in 1..=LOOKS {
                    let share = (piece * LOOKS + look) as f64 / (count * LOOKS) as f64;
                    let put = if share >= 1.0 {
                        b
                    } else {
                        between(works.site, works.pool_m, axis.moved, (a, b), share)
                    };
                    let state = works.state(&standing.with(axis.moved, put));
                    if let Some(check) = state.broken.first() {
                        return Tried::Blocked(*check, to);
                    }
                    one.puts.push(put);
                    one.values.push(state.value);
                }
                if let Some(check) = too_fast(start, &one) {
                    broken = check;
                    continue 'cut;
                }
                start = one.values.last().copied().unwrap_or(start);
                pieces.push(one);
            }
            return Tried::Taken(Taken { pieces, ..taken });
        }
        Tried::TooFast(broken, to)
    }

    /// Whether a limit may be passed without a halt: what starts or stops goes through less than its least flow, and
    /// bands to avoid where the manner lets them be run through.
    fn may_pass(&self, works: &Works, axis: &Axis, check: &Check) -> bool {
        let band = match check.rule {
            Rule::AvoidOpening => !matches!(axis.moved, Moved::Well(_)),
            Rule::AvoidFlow => true,
            _ => false,
        };
        (starts(check) || (band && self.manner.through_bands)) && axis.moved.owns(works.site, check.of)
    }
}

/// Whether a limit speaks of what stands open only.
fn starts(check: &Check) -> bool {
    matches!(check.rule, Rule::FlowMin | Rule::WellMinFlow)
}

fn is_shut(axis: &Axis, put: Put) -> bool {
    if matches!(axis.moved, Moved::Gate(_)) { put.opening <= 0.0 } else { put.flow_m3s <= 0.0 }
}
