//! One state of a unit tried at one share of the release: its flows, the water they bring, what the crew has to do,
//! and which limits of its own stand in the way.
//!
//! Methods: `docs/methods.md`, section 10.

use crate::intake::{self, ASSUMED_LOSS, Entering, Port, Shaft};
use crate::mix::limits::{self, Check, Of};
use crate::mix::{Gate, Setting, WellState, port, seat};
use crate::site::Site;
use crate::withdrawal::{CrestForm, Sink, zone};

use super::Question;
use super::choices::{Choice, Levels, MOST_BLOCKS, Part};
use super::curve::Curves;
use super::gain::Conduit;
use super::goal::Efforts;
use super::seats::{Level, Member};
use super::units::{State, Unit, openings};

/// What the offers are made from.
pub(super) struct Kitchen<'a> {
    pub(super) question: &'a Question<'a>,
    pub(super) units: &'a [Unit],
    pub(super) seats: &'a [Level],
    /// Level of each outlet.
    pub(super) level_of: &'a [usize],
    pub(super) levels: &'a Levels<'a>,
    /// Curve of each outlet alone, by state of opening: asked as `(outlet, opening)`.
    pub(super) alone: &'a (dyn Fn(usize, f64) -> Option<usize> + Sync),
    /// Release shared out in each block, m3/s.
    pub(super) flows_m3s: [f64; MOST_BLOCKS],
    pub(super) efforts: Efforts,
}

/// One state of a unit at one share, tried.
pub(super) struct Tried {
    pub(super) choice: Option<Choice>,
    pub(super) broken: Vec<Check>,
}

impl Kitchen<'_> {
    pub(super) fn site(&self) -> &Site {
        self.question.site
    }

    pub(super) fn steps(&self) -> usize {
        self.question.steps
    }

    /// The unit with nothing open, or spilling by itself.
    pub(super) fn shut(&self, unit: &Unit) -> Tried {
        let site = self.site();
        let pool_m = self.question.profile.pool_m;
        let mut checks = Vec::new();
        let flows: Vec<(usize, f64, [f64; MOST_BLOCKS])> = unit
            .outlets
            .iter()
            .filter_map(|&o| {
                let flow = match unit.spills_m3s {
                    Some(spill) => spill,
                    None if unit.well.is_none() => {
                        intake::leak_m3s(&site.outlets[o], pool_m - site.outlets[o].centre_m, 0.5)
                    }
                    None => 0.0,
                };
                // what spills by itself is no choice, so it breaks nothing; a leak is no reserved flow
                if unit.spills_m3s.is_none() {
                    limits::passing(site, o, 0.0, 0.0, pool_m, &mut checks);
                }
                (flow > 0.0).then_some((
                    o,
                    if unit.spills_m3s.is_some() { 1.0 } else { 0.0 },
                    [flow; MOST_BLOCKS],
                ))
            })
            .collect();
        checks.retain(Check::broken);
        self.tried(unit, &flows, checks)
    }

    /// Limits that a state breaks whatever flows.
    pub(super) fn still(&self, unit: &Unit, state: &State) -> Vec<Check> {
        let mut checks = Vec::new();
        for (outlet, opening) in state.open(unit) {
            limits::still(
                self.site(),
                outlet,
                opening,
                self.question.profile.pool_m,
                self.question.day.date,
                &mut checks,
            );
        }
        checks.retain(Check::broken);
        checks
    }

    /// A state of the unit at a share of the release.
    pub(super) fn flowing(&self, unit: &Unit, state: &State, share: usize) -> Tried {
        let site = self.site();
        let pool_m = self.question.profile.pool_m;
        let blocks = self.levels.lanes.blocks;
        let part = share as f64 / self.steps() as f64;
        let mut checks = Vec::new();
        let mut flows: Vec<(usize, f64, [f64; MOST_BLOCKS])> = Vec::new();
        for block in 0..blocks {
            let total = part * self.flows_m3s[block];
            let mut give = |outlet: usize, opening: f64, flow: f64| {
                if let Some(found) = flows.iter_mut().find(|f| f.0 == outlet) {
                    found.2[block] = flow;
                } else {
                    let mut by_block = [0.0; MOST_BLOCKS];
                    by_block[block] = flow;
                    flows.push((outlet, opening, by_block));
                }
            };
            match unit.well {
                None => {
                    for (outlet, opening) in state.open(unit) {
                        limits::passing(site, outlet, opening, total, pool_m, &mut checks);
                        give(outlet, opening, total);
                    }
                }
                Some(well) => {
                    let (gates, head_m) = self.split(unit, state, well, total);
                    let open = gates.iter().filter(|g| g.opening > 0.0).count();
                    limits::well(site, well, open, total, head_m, &mut checks);
                    for gate in gates {
                        let Gate { outlet, opening, flow_m3s } = gate;
                        let given = if opening > 0.0 { flow_m3s } else { 0.0 };
                        limits::passing(site, outlet, opening, given, pool_m, &mut checks);
                        give(outlet, opening, flow_m3s);
                    }
                    for &outlet in unit.outlets.iter().filter(|o| !flows.iter().any(|f| f.0 == **o)) {
                        limits::passing(site, outlet, 0.0, 0.0, pool_m, &mut checks);
                    }
                }
            }
        }
        checks.retain(Check::broken);
        self.tried(unit, &flows, checks)
    }

    /// How a well shares a total among its gates while each takes in what it would draw alone, and the head of the
    /// pool over it; no head where the loss is assumed.
    fn split(&self, unit: &Unit, state: &State, well: usize, total_m3s: f64) -> (Vec<Gate>, Option<f64>) {
        let site = self.site();
        let Question { profile, .. } = *self.question;
        let gates: Vec<(usize, f64, Port)> = unit
            .outlets
            .iter()
            .zip(&state.openings)
            .filter(|&(&o, &opening)| {
                intake::is_wet(&site.outlets[o], if opening > 0.0 { opening } else { 1.0 }, profile.pool_m)
            })
            .map(|(&o, &opening)| (o, opening, port(site, o, opening, ASSUMED_LOSS)))
            .collect();
        let ports: Vec<Port> = gates.iter().map(|g| g.2).collect();
        let shaft = Shaft {
            column: &profile.column,
            conduit_m: site.wells[well].conduit_m,
            solids_kg_m3: site.water.solids_kg_m3,
        };
        let supply = |k: usize, flow: f64| {
            let curve = (self.alone)(gates[k].0, gates[k].1).and_then(|c| self.levels.curves.get(c));
            curve.map_or(Entering { temperature_c: 0.0, salt_g_per_kg: 0.0, suspended_mg_l: 0.0 }, |curve| {
                let water = curve.at(flow);
                Entering {
                    temperature_c: water.temperature_c,
                    salt_g_per_kg: water.salt_g_per_kg,
                    suspended_mg_l: water.suspended_mg_l,
                }
            })
        };
        let Some(split) = shaft.split(&ports, total_m3s, supply) else { return (Vec::new(), None) };
        let assumed = gates.iter().any(|g| site.outlets[g.0].loss.is_none());
        let out = gates
            .iter()
            .zip(&split.flows_m3s)
            .filter(|(g, _)| g.1 > 0.0 || g.2.area_m2 > 0.0)
            .map(|(g, flow)| Gate { outlet: g.0, opening: g.1, flow_m3s: *flow })
            .collect();
        (out, (!assumed).then_some(split.head_m))
    }

    /// The choice that some flows make; none where a limit is broken.
    fn tried(
        &self,
        unit: &Unit,
        flows: &[(usize, f64, [f64; MOST_BLOCKS])],
        mut broken: Vec<Check>,
    ) -> Tried {
        let lanes = self.levels.lanes;
        let mut choice = Choice {
            lanes: vec![0.0; lanes.count()],
            unknown: false,
            idea: 0,
            number: 0,
            parts: Vec::new(),
            slots: 0,
        };
        let mut conduit = Conduit::of(self.site(), &unit.outlets);
        let mut touched: Vec<usize> = flows.iter().map(|f| self.level_of[f.0]).collect();
        touched.sort_unstable();
        touched.dedup();
        for level in touched {
            let seat = &self.seats[level];
            let mine = || flows.iter().filter(|f| self.level_of[f.0] == level);
            // what nobody sets draws what it draws
            let set = mine().find(|f| f.1 > 0.0 && unit.spills_m3s.is_none()).map(|f| f.0);
            let code: usize = mine()
                .map(|f| seat.code(f.0, if f.1 > 0.0 { Member::Open(f.1) } else { Member::Leak }))
                .sum();
            let mut by_block = [0.0; MOST_BLOCKS];
            for flow in mine() {
                for (sum, q) in by_block.iter_mut().zip(flow.2) {
                    *sum += q;
                }
            }
            if let Some(conduit) = &mut conduit {
                conduit.add(self.levels, seat.curves[code], &by_block);
            }
            match seat.slot {
                None => {
                    choice.unknown |= self.levels.add(seat.curves[code], &by_block, &mut choice.lanes);
                    self.undrawn(set, seat.curves[code], &by_block, &mut broken);
                }
                Some(slot) => {
                    let mut alone = vec![0.0; lanes.count()];
                    let alone_unknown = self.levels.add(seat.curves[code], &by_block, &mut alone);
                    for (lane, add) in choice.lanes.iter_mut().zip(&alone) {
                        *lane += add;
                    }
                    choice.slots |= 1 << slot;
                    let set = set.is_some();
                    choice.parts.push(Part {
                        slot,
                        code,
                        set,
                        flows_m3s: by_block,
                        alone,
                        alone_unknown,
                        conduit: None,
                    });
                }
            }
        }
        if let Some(conduit) = conduit {
            let added = conduit.added(self.site());
            for (block, gain) in added.into_iter().enumerate().take(lanes.blocks) {
                choice.lanes[3 * block + 2] += gain;
            }
            choice.parts.iter_mut().for_each(|part| part.conduit = Some(conduit));
        }
        for (rule, share) in self.site().limits.shares.iter().enumerate() {
            for flow in flows.iter().filter(|f| f.1 > 0.0 && share.outlets.contains(&f.0)) {
                for block in 0..lanes.blocks {
                    choice.lanes[lanes.share(rule, block)] += flow.2[block];
                }
            }
        }
        self.moves(unit, flows, &mut choice.lanes, &mut broken);
        let choice = broken.is_empty().then_some(choice);
        Tried { choice, broken }
    }

    /// Layers not to be drawn that one level draws.
    fn undrawn(
        &self,
        outlet: Option<usize>,
        curve: Option<usize>,
        flows: &[f64; MOST_BLOCKS],
        broken: &mut Vec<Check>,
    ) {
        let site = self.site();
        let (Some(outlet), Some((centre_m, opening))) =
            (outlet, curve.and_then(|c| self.levels.curves.sink(c)))
        else {
            return;
        };
        if site.limits.undrawn.is_empty() {
            return;
        }
        let column = &self.question.profile.column;
        let mut checks = Vec::new();
        for &flow_m3s in &flows[..self.levels.lanes.blocks] {
            if let Some(zone) = zone(column, &Sink { centre_m, flow_m3s, opening }, site.zone_factor()) {
                limits::level(site, column, &zone, Of::Outlet(outlet), &mut checks);
            }
        }
        broken.extend(checks.into_iter().filter(Check::broken));
    }

    /// What the crew has to do from the setting now, and gates that may not be moved as they would have to be.
    fn moves(
        &self,
        unit: &Unit,
        flows: &[(usize, f64, [f64; MOST_BLOCKS])],
        lanes: &mut [f64],
        broken: &mut Vec<Check>,
    ) {
        let Some(now) = self.question.now else { return };
        if unit.spills_m3s.is_some() {
            return;
        }
        // a gate that its well leaves without water stands open all the same
        let flow_m3s = flows.iter().map(|f| f.2[0]).sum();
        let split = |well| WellState {
            well,
            flow_m3s,
            head_m: 0.0,
            settled: true,
            assumed_loss: false,
            given: false,
            split: Vec::new(),
        };
        let weights = self.levels.weights;
        let open = flows.iter().filter(|f| f.1 > 0.0).map(|f| Gate {
            outlet: f.0,
            opening: f.1,
            flow_m3s: weights.iter().zip(f.2).map(|(w, q)| w * q).sum(),
        });
        let to = Setting { wells: unit.well.map(split).into_iter().collect(), ..Setting::of(open.collect()) };
        let gates = now.gates.iter().filter(|g| unit.outlets.contains(&g.outlet)).copied().collect();
        let from = Setting { wells: now.wells.clone(), ..Setting::of(gates) };
        let mut checks = Vec::new();
        let moves = limits::moves(self.site(), &from, &to, &mut checks);
        let at = self.levels.lanes;
        lanes[at.effort()] += self.efforts.effort(moves.cost, moves.crew_hours);
        lanes[at.hours()] += moves.crew_hours;
        lanes[at.moves()] += moves.count as f64;
        broken.extend(checks.into_iter().filter(Check::broken));
    }
}

/// Curve of an outlet that draws alone, for every opening it can have and for its leak.
pub(super) fn alone(site: &Site, units: &[Unit], curves: &mut Curves) -> Vec<Vec<(f64, usize)>> {
    let mut out = vec![Vec::new(); site.outlets.len()];
    for &outlet in units.iter().filter(|u| u.well.is_some()).flat_map(|u| &u.outlets) {
        for opening in [0.0].into_iter().chain(openings(site, outlet)) {
            let o = &site.outlets[outlet];
            if opening <= 0.0 && o.leakage.is_none() {
                continue;
            }
            if let Some(seat) = seat(site, &[(outlet, opening)], 0.5, CrestForm::default()) {
                out[outlet].push((
                    opening,
                    curves.ask(seat.centre_m, seat.opening, site.bias_c(outlet).unwrap_or(0.0)),
                ));
            }
        }
    }
    out
}
