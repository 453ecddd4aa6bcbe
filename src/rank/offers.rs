//! What each unit offers at each share of the release: its flows, the water they bring, and which limits of its own
//! stand in the way.
//!
//! A limit that a unit breaks on its own is broken in every mix that holds the unit so: those mixes are counted and
//! passed over, and that is the proof.
//!
//! Methods: `docs/methods.md`, section 10.

use rayon::prelude::*;

use crate::intake::{self, ASSUMED_LOSS, Entering, Port, Shaft};
use crate::mix::limits::{self, Check, Of, Rule};
use crate::mix::{Gate, Setting, WellState, port};
use crate::site::Site;
use crate::withdrawal::{Sink, zone};

use super::Question;
use super::arrange::ways;
use super::choices::{Choice, Choices, Levels, MOST_BLOCKS, Part};
use super::curve::Curves;
use super::goal::effort;
use super::seats::{Level, Member};
use super::units::{State, Unit};

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
}

/// One state of a unit at one share, tried.
struct Tried {
    choice: Option<Choice>,
    broken: Vec<Check>,
}

impl Kitchen<'_> {
    fn site(&self) -> &Site {
        self.question.site
    }

    fn steps(&self) -> usize {
        self.question.steps
    }

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

    /// The unit with nothing open, or spilling by itself.
    fn shut(&self, unit: &Unit) -> Tried {
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
    fn still(&self, unit: &Unit, state: &State) -> Vec<Check> {
        let mut checks = Vec::new();
        for (outlet, opening) in state.open(unit) {
            limits::still(
                self.site(),
                outlet,
                opening,
                self.question.profile.pool_m,
                self.question.date,
                &mut checks,
            );
        }
        checks.retain(Check::broken);
        checks
    }

    /// A state of the unit at a share of the release.
    fn flowing(&self, unit: &Unit, state: &State, share: usize) -> Tried {
        let site = self.site();
        let pool_m = self.question.profile.pool_m;
        let blocks = self.levels.lanes.blocks;
        let part = share as f64 / self.steps() as f64;
        let mut checks = Vec::new();
        let mut flows: Vec<(usize, f64, [f64; MOST_BLOCKS])> = Vec::new();
        for block in 0..blocks {
            let total = part * self.flows_m3s[block];
            let mut give =
                |outlet: usize, opening: f64, flow: f64| match flows.iter_mut().find(|f| f.0 == outlet) {
                    Some(found) => found.2[block] = flow,
                    None => {
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
                    choice.parts.push(Part { slot, code, set, flows_m3s: by_block, alone, alone_unknown });
                }
            }
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
            if let Some(zone) = zone(column, &Sink { centre_m, flow_m3s, opening }, 1.0) {
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
        lanes[at.effort()] += effort(moves.cost, moves.crew_hours, self.units.len());
        lanes[at.hours()] += moves.crew_hours;
        lanes[at.moves()] += moves.count as f64;
        broken.extend(checks.into_iter().filter(Check::broken));
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

/// Curve of an outlet that draws alone, for every opening it can have and for its leak.
pub(super) fn alone(site: &Site, units: &[Unit], curves: &mut Curves) -> Vec<Vec<(f64, usize)>> {
    use crate::mix::seat;
    use crate::withdrawal::CrestForm;
    let mut out = vec![Vec::new(); site.outlets.len()];
    for &outlet in units.iter().filter(|u| u.well.is_some()).flat_map(|u| &u.outlets) {
        for opening in [0.0].into_iter().chain(super::units::openings(site, outlet)) {
            let o = &site.outlets[outlet];
            if opening <= 0.0 && o.leakage.is_none() {
                continue;
            }
            if let Some(seat) = seat(site, &[(outlet, opening)], 0.5, CrestForm::default()) {
                out[outlet].push((opening, curves.ask(seat.centre_m, seat.opening)));
            }
        }
    }
    out
}
