//! A way found, as steps with their times, waters and the limits they come nearest to.
//!
//! Methods: `docs/methods.md`, section 11.

use crate::mix::limits::{Check, Measure};

use super::axes::Axis;
use super::rates::Rates;
use super::search::{Block, Leg};
use super::standing::{Put, Standing};
use super::step::Piece;
use super::works::{Full, Value, Works, is_hard, key, room_share};
use super::{Moved, Stand, Step, Stuck};

/// Limits told with each step (choice).
const NEAREST: usize = 3;

/// Pieces of one movement that begin at one time.
struct Run<'a> {
    axis: &'a Axis,
    from: Put,
    pieces: Vec<&'a Piece>,
    leg: usize,
    stopping: bool,
    passes: Vec<Check>,
    at_min: f64,
}

/// Steps of a way, each as early as the rates let it.
pub(super) fn steps(
    works: &mut Works,
    rates: &Rates,
    from: &Standing,
    axes: &[Axis],
    way: &[Leg],
) -> Vec<Step> {
    let now = works.full(from);
    let before = works.value(&now);
    let values: Vec<Vec<Value>> =
        way.iter().flat_map(|leg| leg.taken.pieces.iter().map(|p| p.values.clone())).collect();
    let mut times = rates.earliest_min(before, &values).into_iter();
    let mut runs: Vec<Run> = Vec::new();
    for leg in way {
        let axis = &axes[leg.axis];
        let (begun, to) = (&axis.stops[leg.from], &axis.stops[leg.taken.to]);
        let mut at = begun.put;
        for (k, (piece, at_min)) in leg.taken.pieces.iter().zip(&mut times).enumerate() {
            let same = |run: &&mut Run| {
                let one = run.axis.moved == axis.moved && run.leg == to.leg;
                one && to.free && run.at_min.total_cmp(&at_min).is_eq()
            };
            let passes = if k == 0 { leg.taken.passes.clone() } else { Vec::new() };
            match runs.last_mut().filter(same) {
                Some(run) => {
                    run.pieces.push(piece);
                    run.passes.extend(passes);
                }
                None => runs.push(Run {
                    axis,
                    from: at,
                    pieces: vec![piece],
                    leg: to.leg,
                    stopping: to.stopping,
                    passes,
                    at_min,
                }),
            }
            at = piece.puts.last().copied().unwrap_or(at);
        }
    }
    let mut standing = from.clone();
    let mut full = now;
    let mut out = Vec::with_capacity(runs.len());
    for run in runs {
        let step;
        (step, full) = told(works, &mut standing, &full, run);
        out.push(step);
    }
    out
}

/// One run as a step; the standing goes along.
fn told(works: &mut Works, standing: &mut Standing, before: &Full, run: Run) -> (Step, Full) {
    let moved = run.axis.moved;
    let mut nearest: Vec<Check> = Vec::new();
    let mut after = before.clone();
    let puts = run.pieces.iter().flat_map(|piece| &piece.puts);
    let mut to = run.from;
    for &put in puts {
        standing.put(moved, put);
        to = put;
        after = works.full(standing);
        for check in after.checks.iter().filter(|c| is_hard(c)) {
            keep_worst(&mut nearest, *check);
        }
    }
    let mut passes: Vec<Check> = Vec::new();
    run.passes.into_iter().for_each(|check| keep_worst(&mut passes, check));
    // gates counted are never near a count: they keep it or they do not
    let near = |c: &Check| c.room.is_finite() && c.rule.unit() != Measure::Count;
    nearest.retain(|c| near(c) && !passes.iter().any(|p| key(p) == key(c)));
    nearest.sort_by(|a, b| room_share(a).total_cmp(&room_share(b)));
    nearest.truncate(NEAREST);
    let step = Step {
        moved,
        from: stand(moved, run.from, before),
        to: stand(moved, to, &after),
        at_min: run.at_min,
        stop: run.stopping,
        heads_m: heads_m(&after),
        before: before.release,
        after: after.release,
        setting: after.setting.clone(),
        nearest,
        passes,
    };
    (step, after)
}

/// A step that cannot be taken, with the way to it.
pub(super) fn stuck(
    works: &mut Works,
    rates: &Rates,
    from: &Standing,
    axes: &[Axis],
    block: &Block,
) -> Stuck {
    let mut steps = steps(works, rates, from, axes, &block.way);
    let mut standing = from.clone();
    for leg in &block.way {
        let axis = &axes[leg.axis];
        standing.put(axis.moved, axis.stops[leg.taken.to].put);
    }
    let axis = &axes[block.axis];
    let before = works.full(&standing);
    let to = axis.stops[block.to].put;
    let after = works.full(&standing.with(axis.moved, to));
    let mut begun = stand(axis.moved, axis.stops[block.from].put, &before);
    // a movement that gets part of the way is told as one
    let goes_on = axis.goes_on(block.to) && block.way.last().is_some_and(|leg| leg.axis == block.axis);
    if let Some(last) = steps.pop_if(|last| goes_on && last.moved == axis.moved) {
        begun = last.from;
    }
    Stuck { steps, moved: axis.moved, from: begun, to: stand(axis.moved, to, &after), check: block.check }
}

/// Heads on the wells, where every loss is known.
fn heads_m(full: &Full) -> Vec<(usize, f64)> {
    full.setting.wells.iter().filter(|w| !w.assumed_loss).map(|w| (w.well, w.head_m)).collect()
}

/// How something stands, its flow as its well shares out.
fn stand(moved: Moved, put: Put, full: &Full) -> Stand {
    match moved {
        Moved::Well(_) => Stand { opening: None, flow_m3s: put.flow_m3s },
        Moved::Outlet(_) => Stand { opening: Some(put.opening), flow_m3s: put.flow_m3s },
        Moved::Gate(outlet) => {
            let gate = full.setting.gates.iter().find(|g| g.outlet == outlet);
            Stand { opening: Some(put.opening), flow_m3s: gate.map_or(0.0, |g| g.flow_m3s) }
        }
    }
}

/// Takes a check into a list that holds each limit once, at its worst.
fn keep_worst(list: &mut Vec<Check>, check: Check) {
    match list.iter_mut().find(|known| key(known) == key(&check)) {
        Some(known) if known.room <= check.room => {}
        Some(known) => *known = check,
        None => list.push(check),
    }
}
