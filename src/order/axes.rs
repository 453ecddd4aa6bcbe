//! What has to be moved, each through its places one after the other, alone or with its water stopped.
//!
//! Methods: `docs/methods.md`, section 11.

use crate::intake;
use crate::site::{Outlet, SAME_OPENING, Site};

use super::Moved;
use super::standing::{Put, Standing};

/// Flows nearer than this share of the larger are one (choice: round-off of sums).
const SAME_FLOW: f64 = 1e-9;
/// A flow this near to what an opening lets through, as a share, is set by that opening (choice).
const BY_OPENING: f64 = 1e-6;
/// Most pieces that an hourly rate cuts a flow into before the search begins (choice); what is left over is cut later.
const MOST_CUTS: f64 = 16.0;

/// One place on the way of something moved.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Stop {
    pub(super) put: Put,
    /// Which leg leads here: a leg is one movement where nothing forbids.
    pub(super) leg: usize,
    /// Whether it can halt anywhere between the place before and here.
    pub(super) free: bool,
    /// Whether the leg that leads here stops the water so that something can move.
    pub(super) stopping: bool,
}

/// Something moved, with its places in their order; the first is where it stands now.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct Axis {
    pub(super) moved: Moved,
    pub(super) stops: Vec<Stop>,
}

impl Axis {
    fn from(moved: Moved, put: Put) -> Self {
        Self { moved, stops: vec![Stop { put, leg: 0, free: false, stopping: false }] }
    }

    fn last(&self) -> Put {
        self.stops.last().map_or_else(Put::default, |s| s.put)
    }

    /// Adds a leg through these places.
    fn leg(&mut self, puts: impl IntoIterator<Item = Put>, free: bool, stopping: bool) {
        let leg = self.stops.last().map_or(0, |s| s.leg) + 1;
        self.stops.extend(puts.into_iter().map(|put| Stop { put, leg, free, stopping }));
    }

    /// Adds a leg of flow alone, in even parts; from or to nothing it also halts at the least flow.
    fn flow_leg(&mut self, to_m3s: f64, parts: usize, least_m3s: f64, stopping: bool) {
        let from = self.last();
        if same_flow(from.flow_m3s, to_m3s) {
            return;
        }
        let share = |k: usize| k as f64 / parts as f64;
        let mut flows: Vec<f64> =
            (1..parts).map(|k| from.flow_m3s + share(k) * (to_m3s - from.flow_m3s)).collect();
        let (low, high) = (from.flow_m3s.min(to_m3s), from.flow_m3s.max(to_m3s));
        if low <= 0.0 && least_m3s > 0.0 && least_m3s < high && !flows.contains(&least_m3s) {
            flows.push(least_m3s);
        }
        flows.sort_by(f64::total_cmp);
        if to_m3s < from.flow_m3s {
            flows.reverse();
        }
        flows.push(to_m3s);
        self.leg(flows.into_iter().map(|flow| Put::new(from.opening, flow)), true, stopping);
    }

    /// Whether the way into a place goes on with the movement that leads to the one before.
    pub(super) fn goes_on(&self, to: usize) -> bool {
        let before = to.checked_sub(1).and_then(|at| self.stops.get(at));
        before.zip(self.stops.get(to)).is_some_and(|(a, b)| b.free && a.leg == b.leg)
    }

    /// At how many places beyond one it still has to open, or to shut.
    pub(super) fn still(&self, at: usize, opens: bool) -> usize {
        (at + 1..self.stops.len()).filter(|to| self.opens(*to) == Some(opens)).count()
    }

    /// Whether the way into a place opens or shuts; `None` for one that does neither.
    pub(super) fn opens(&self, to: usize) -> Option<bool> {
        let (a, b) = (self.stops.get(to.checked_sub(1)?)?.put, self.stops.get(to)?.put);
        let by_flow = b.flow_m3s.total_cmp(&a.flow_m3s);
        let way = if by_flow.is_eq() { b.opening.total_cmp(&a.opening) } else { by_flow };
        way.is_ne().then(|| way.is_gt())
    }
}

/// Something whose water can be stopped while gates move.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Stoppable {
    pub(super) moved: Moved,
    /// Whether it has to be: a gate of it is not to be moved under flow.
    pub(super) must: bool,
    /// Whether water passes before and after, so that stopping it is an interruption.
    pub(super) interrupts: bool,
}

/// The change from one standing to another.
pub(super) struct Change<'a> {
    pub(super) site: &'a Site,
    pub(super) pool_m: f64,
    pub(super) from: &'a Standing,
    pub(super) to: &'a Standing,
}

impl Change<'_> {
    fn ends(&self, moved: Moved) -> (Put, Put) {
        (self.from.get(moved), self.to.get(moved))
    }

    /// What can or must be stopped, in the order of the site.
    pub(super) fn stoppable(&self) -> Vec<Stoppable> {
        let outlets = self.site.outlets.iter().enumerate().filter(|(_, o)| o.well.is_none());
        let direct = outlets.filter_map(|(index, outlet)| {
            let moved = Moved::Outlet(index);
            let (from, to) = self.ends(moved);
            let interrupts = from.flow_m3s > 0.0 && to.flow_m3s > 0.0;
            let must = outlet.moves_under_flow == Some(false);
            let by_opening = self.by_opening(outlet, from, to);
            // what has no positions is moved by every change of its flow
            let by_flow =
                must && interrupts && outlet.positions.is_empty() && !same_flow(from.flow_m3s, to.flow_m3s);
            let by_gate = travels(outlet, from, to, by_opening) && (must || !by_opening);
            (by_gate || by_flow).then_some(Stoppable { moved, must, interrupts })
        });
        let wells = (0..self.site.wells.len()).filter_map(|well| {
            let moved = Moved::Well(well);
            let (from, to) = self.ends(moved);
            let both = from.flow_m3s > 0.0 && to.flow_m3s > 0.0;
            let mut gates = self.gates(well).peekable();
            (both && gates.peek().is_some()).then(|| {
                let must = gates.any(|g| self.site.outlets[g].moves_under_flow == Some(false));
                Stoppable { moved, must, interrupts: true }
            })
        });
        direct.chain(wells).collect()
    }

    /// Gates of a well whose opening changes.
    fn gates(&self, well: usize) -> impl Iterator<Item = usize> {
        let on = move |&i: &usize| self.site.outlets[i].well == Some(well);
        (0..self.site.outlets.len()).filter(on).filter(|&i| {
            let (from, to) = self.ends(Moved::Gate(i));
            !same_opening(from.opening, to.opening)
        })
    }

    /// Everything that moves, outlets before wells, each in the order of the site. `stopped` names what stops on the
    /// way, `parts` into how many even parts free movements are cut.
    pub(super) fn axes(&self, stopped: &[Moved], parts: usize) -> Vec<Axis> {
        let outlets = self.site.outlets.iter().enumerate().filter_map(|(index, outlet)| {
            let axis = match outlet.well {
                Some(_) => self.gate(index, outlet, parts),
                None if intake::spills_by_itself(outlet) => return None,
                None => self.outlet(index, outlet, stopped, parts),
            };
            Some(axis)
        });
        let wells = (0..self.site.wells.len()).map(|well| {
            let moved = Moved::Well(well);
            let (from, to) = self.ends(moved);
            let least = self.site.wells[well].min_flow_m3s;
            let mut axis = Axis::from(moved, from);
            if stopped.contains(&moved) {
                axis.flow_leg(0.0, self.parts(from.flow_m3s, parts), least, true);
                axis.flow_leg(to.flow_m3s, self.parts(to.flow_m3s, parts), least, false);
            } else {
                axis.flow_leg(to.flow_m3s, self.parts(to.flow_m3s - from.flow_m3s, parts), least, false);
            }
            axis
        });
        outlets.chain(wells).filter(|axis| axis.stops.len() > 1).collect()
    }

    fn gate(&self, index: usize, outlet: &Outlet, parts: usize) -> Axis {
        let (from, to) = self.ends(Moved::Gate(index));
        let mut axis = Axis::from(Moved::Gate(index), from);
        if !same_opening(from.opening, to.opening) {
            let free = outlet.positions.is_empty();
            let openings = openings(outlet, from.opening, to.opening, parts);
            axis.leg(openings.into_iter().map(|opening| Put::new(opening, 0.0)), free, false);
        }
        axis
    }

    fn outlet(&self, index: usize, outlet: &Outlet, stopped: &[Moved], parts: usize) -> Axis {
        let moved = Moved::Outlet(index);
        let (from, to) = self.ends(moved);
        let by_opening = self.by_opening(outlet, from, to);
        let cut = |change: f64| self.parts(change, parts);
        let least = outlet.flow_min_m3s;
        if !travels(outlet, from, to, by_opening) {
            // it stands as it does, and something else holds its flow
            let opening = if from.flow_m3s > 0.0 { from.opening } else { to.opening };
            let mut axis = Axis::from(moved, Put::new(opening, from.flow_m3s));
            if stopped.contains(&moved) {
                axis.flow_leg(0.0, cut(from.flow_m3s), least, true);
            }
            let change = to.flow_m3s - axis.last().flow_m3s;
            axis.flow_leg(to.flow_m3s, cut(change), least, false);
            return axis;
        }
        let free = outlet.positions.is_empty();
        let mut axis = Axis::from(moved, from);
        if stopped.contains(&moved) {
            axis.flow_leg(0.0, cut(from.flow_m3s), least, to.flow_m3s > 0.0);
            let openings = openings(outlet, from.opening, to.opening, 1);
            axis.leg(openings.into_iter().map(|opening| Put::new(opening, 0.0)), free, false);
            axis.flow_leg(to.flow_m3s, cut(to.flow_m3s), least, false);
        } else {
            let parts = cut(to.flow_m3s - from.flow_m3s);
            let share = |opening: f64| (opening - from.opening) / (to.opening - from.opening);
            let openings = openings(outlet, from.opening, to.opening, parts);
            let put = |opening: f64| {
                if same_opening(opening, to.opening) {
                    to
                } else {
                    between(self.site, self.pool_m, moved, (from, to), share(opening))
                }
            };
            axis.leg(openings.into_iter().map(put), free, false);
        }
        axis
    }

    /// Whether an outlet passes what its opening lets through, wherever it stands open.
    fn by_opening(&self, outlet: &Outlet, from: Put, to: Put) -> bool {
        [from, to].iter().filter(|put| put.flow_m3s > 0.0).all(|put| {
            let free = intake::opening_flow_m3s(outlet, put.opening, self.pool_m);
            free.is_some_and(|free| (put.flow_m3s - free).abs() <= BY_OPENING * free)
        })
    }

    /// Even parts of a change of flow, so many at least, and so that whole ones fill an hour.
    #[expect(
        clippy::cast_possible_truncation,
        clippy::cast_sign_loss,
        reason = "a whole number, held in bounds"
    )]
    fn parts(&self, change_m3s: f64, least: usize) -> usize {
        let limits = &self.site.limits;
        let rates = [limits.flow_change_m3s_per_hour, limits.flow_change_m3s_per_day];
        let rate = rates.into_iter().flatten().filter(|r| *r > 0.0).fold(f64::INFINITY, f64::min);
        let cuts = (change_m3s.abs() / rate - SAME_FLOW).ceil().clamp(1.0, MOST_CUTS) as usize;
        cuts * least.div_ceil(cuts)
    }
}

/// Whether the opening of an outlet on no well changes on the way.
fn travels(outlet: &Outlet, from: Put, to: Put, by_opening: bool) -> bool {
    let both = from.flow_m3s > 0.0 && to.flow_m3s > 0.0;
    !same_opening(from.opening, to.opening) && (!outlet.positions.is_empty() || by_opening || both)
}

/// Openings on the way from one to another: the positions between them, or even parts where there are none.
fn openings(outlet: &Outlet, from: f64, to: f64, parts: usize) -> Vec<f64> {
    let inside = |opening: f64| {
        let (low, high) = (from.min(to), from.max(to));
        opening > low + SAME_OPENING && opening < high - SAME_OPENING
    };
    let mut out: Vec<f64> = if outlet.positions.is_empty() {
        (1..parts).map(|k| from + (k as f64 / parts as f64) * (to - from)).collect()
    } else {
        outlet.positions.iter().map(|p| p.opening).filter(|o| inside(*o)).collect()
    };
    out.sort_by(f64::total_cmp);
    if to < from {
        out.reverse();
    }
    out.push(to);
    out
}

/// Where something stands part of the way between two places.
///
/// Flow goes in proportion. Where the opening of an outlet moves with it, its share of what the opening lets through
/// goes in proportion instead, so that one set by its opening passes what that lets through all the way (choice).
pub(super) fn between(site: &Site, pool_m: f64, moved: Moved, (a, b): (Put, Put), share: f64) -> Put {
    let mix = |a: f64, b: f64| a + share * (b - a);
    let put = Put::new(mix(a.opening, b.opening), mix(a.flow_m3s, b.flow_m3s));
    let Moved::Outlet(index) = moved else { return put };
    let Some(outlet) = site.outlets.get(index).filter(|_| !same_opening(a.opening, b.opening)) else {
        return put;
    };
    let lets = |opening: f64| intake::opening_flow_m3s(outlet, opening, pool_m).filter(|_| opening > 0.0);
    let part = |put: Put| lets(put.opening).filter(|free| *free > 0.0).map(|free| put.flow_m3s / free);
    let scaled = || {
        let (from, to) = (part(a).or(part(b))?, part(b).or(part(a))?);
        Some(mix(from, to) * lets(put.opening)?)
    };
    Put { flow_m3s: scaled().unwrap_or(put.flow_m3s), ..put }
}

fn same_opening(a: f64, b: f64) -> bool {
    (a - b).abs() < SAME_OPENING
}

fn same_flow(a: f64, b: f64) -> bool {
    (a - b).abs() <= SAME_FLOW * a.max(b)
}
