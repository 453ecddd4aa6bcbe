//! What can be set on its own: each well or outlet in each of its states, at each share of the release, tried alone.

use std::cell::RefCell;
use std::collections::HashMap;
use std::rc::Rc;

use super::afar::Afar;
use gatemix::intake::{
    ASSUMED_LOSS, Entering, Port, Shaft, crest_flow_m3s, is_wet, leak_m3s, spills_by_itself,
};
use gatemix::mix::limits::{self, Check, Of, Rule};
use gatemix::mix::{Gate, Level, Setting, WellState, groups, levels, port, seat};
use gatemix::rank::{Curve, Question};
use gatemix::site::Site;
use gatemix::withdrawal::{CrestForm, Opening, Sink, zone};

/// A well with its gates, or an outlet on none.
pub(super) struct Part {
    pub(super) well: Option<usize>,
    pub(super) outlets: Vec<usize>,
    /// What spills by itself, m3/s.
    pub(super) spills_m3s: Option<f64>,
    /// Opening of each outlet; the first state has all shut.
    pub(super) states: Vec<Vec<f64>>,
}

/// A state of a part at a share of the release.
pub(super) struct Trial {
    /// Outlets open, with their openings.
    pub(super) open: Vec<(usize, f64)>,
    /// What passes each outlet in each part of the day, m3/s, with its opening; 0 for a leak of a well.
    pub(super) flows: Vec<(usize, f64, Vec<f64>)>,
    /// What the conduit carries in each part of the day, m3/s.
    pub(super) totals_m3s: Vec<f64>,
    /// Limits that the part breaks on its own: each once, at its worst.
    pub(super) broken: Vec<Check>,
}

/// Where a sink draws.
type Place = (u64, bool, u64);
/// Layers that sinks draw, by place and flow.
type Reaches = HashMap<(Place, u64), Rc<Vec<Check>>>;

/// What is asked, with everything taken apart.
pub(super) struct Works<'a> {
    pub(super) question: &'a Question<'a>,
    pub(super) afar: Afar,
    /// Steps of the release; none where what spills by itself is all of it.
    pub(super) steps: usize,
    pub(super) groups: Vec<Vec<usize>>,
    pub(super) parts: Vec<Part>,
    /// What is shared out in each part of the day, m3/s.
    pub(super) shared_out_m3s: Vec<f64>,
    most_m3s: f64,
    curves: RefCell<HashMap<Place, Rc<Curve>>>,
    trials: RefCell<HashMap<(usize, usize, usize), Rc<Trial>>>,
    reaches: RefCell<Reaches>,
    kept: RefCell<HashMap<(Place, usize), f64>>,
}

impl<'a> Works<'a> {
    pub(super) fn new(question: &'a Question<'a>) -> Self {
        let site = question.site;
        let groups = groups(site);
        let parts = parts(question, &groups);
        let spilt: f64 = parts.iter().filter_map(|p| p.spills_m3s).sum();
        let pool_m = question.profile.pool_m;
        let direct = site.outlets.iter().filter(|o| o.well.is_none());
        let leaks: f64 = direct.map(|o| leak_m3s(o, pool_m - o.centre_m, 0.5)).sum();
        let blocks = question.blocks.iter().map(|b| b.1);
        let shared_out_m3s: Vec<f64> = blocks.clone().map(|flow| (flow - spilt).max(0.0)).collect();
        let nothing = shared_out_m3s.iter().all(|flow| *flow <= 0.0);
        Self {
            question,
            afar: Afar::of(question),
            groups,
            parts,
            shared_out_m3s,
            steps: if nothing { 0 } else { question.steps },
            most_m3s: blocks.fold(spilt, f64::max) + leaks,
            curves: RefCell::default(),
            trials: RefCell::default(),
            reaches: RefCell::default(),
            kept: RefCell::default(),
        }
    }

    pub(super) fn site(&self) -> &'a Site {
        self.question.site
    }

    /// Whether more than one part can draw through a group.
    pub(super) fn is_shared(&self, group: &[usize]) -> bool {
        self.parts.iter().filter(|p| p.outlets.iter().any(|o| group.contains(o))).count() > 1
    }

    /// A state of a part at so many steps, tried once.
    pub(super) fn trial(&self, part: usize, state: usize, share: usize) -> Rc<Trial> {
        let at = (part, state, share);
        if let Some(known) = self.trials.borrow().get(&at) {
            return Rc::clone(known);
        }
        let trial = Rc::new(self.tried(&self.parts[part], &self.parts[part].states[state], share));
        self.trials.borrow_mut().insert(at, Rc::clone(&trial));
        trial
    }

    /// The curve of a sink.
    pub(super) fn curve(&self, centre_m: f64, opening: Opening) -> Rc<Curve> {
        let mut curves = self.curves.borrow_mut();
        let solve = || {
            let Question { site, profile, .. } = *self.question;
            let cold_c = site.cold_water_c.first().copied();
            Rc::new(
                Curve::new((&profile.column, site.zone_factor()), centre_m, opening, self.most_m3s, cold_c)
                    .unwrap(),
            )
        };
        Rc::clone(curves.entry(place(centre_m, opening)).or_insert_with(solve))
    }

    /// Layers not to be drawn that a level draws, each with how far; of the whole.
    pub(super) fn reached(&self, sink: &Sink) -> Rc<Vec<Check>> {
        let at = (place(sink.centre_m, sink.opening), sink.flow_m3s.to_bits());
        Rc::clone(self.reaches.borrow_mut().entry(at).or_insert_with(|| Rc::new(self.reaching(sink))))
    }

    fn reaching(&self, sink: &Sink) -> Vec<Check> {
        let Question { site, profile, .. } = *self.question;
        let mut checks = Vec::new();
        if let Some(zone) = zone(&profile.column, sink, site.zone_factor()) {
            limits::level(site, &profile.column, &zone, Of::Whole, &mut checks);
        }
        checks.retain(Check::broken);
        checks
    }

    /// Flow up to which a sink keeps out of a layer that it draws at its own, m3/s.
    pub(super) fn kept_m3s(&self, sink: &Sink, layer: usize) -> f64 {
        let solve = || {
            let (mut low, mut high) = (0.0, sink.flow_m3s);
            for _ in 0..60 {
                let flow_m3s = 0.5 * (low + high);
                let draws = self.reaching(&Sink { flow_m3s, ..*sink }).iter().any(|c| c.item == layer);
                (low, high) = if draws { (low, flow_m3s) } else { (flow_m3s, high) };
            }
            low
        };
        *self.kept.borrow_mut().entry((place(sink.centre_m, sink.opening), layer)).or_insert_with(solve)
    }

    /// Levels of a setting.
    pub(super) fn levels(&self, setting: &Setting) -> Vec<Level> {
        let pool_m = self.question.profile.pool_m;
        levels(self.site(), &self.groups, setting, pool_m, 0.5, CrestForm::default())
    }

    fn tried(&self, part: &Part, openings: &[f64], share: usize) -> Trial {
        let Question { site, profile, day, blocks, .. } = *self.question;
        let date = day.date;
        let pool_m = profile.pool_m;
        let open: Vec<(usize, f64)> =
            part.outlets.iter().copied().zip(openings.iter().copied()).filter(|o| o.1 > 0.0).collect();
        let part_of_it = share as f64 / self.steps.max(1) as f64;
        let totals_m3s: Vec<f64> = self.shared_out_m3s.iter().map(|flow| part_of_it * flow).collect();
        let mut trial = Trial { open, flows: Vec::new(), totals_m3s, broken: Vec::new() };
        let mut checks = Vec::new();
        if let Some(spill) = part.spills_m3s {
            trial.flows.push((part.outlets[0], 1.0, vec![spill; blocks.len()]));
            return trial;
        }
        // what no flow can mend is told alone
        if let Some(well) = part.well {
            limits::well(site, well, trial.open.len(), 0.0, None, &mut checks);
            checks.retain(|c| c.rule == Rule::MaxOpen && c.broken());
        }
        if checks.is_empty() {
            trial.open.iter().for_each(|o| limits::still(site, o.0, o.1, pool_m, date, &mut checks));
            checks.retain(Check::broken);
        }
        if !checks.is_empty() {
            trial.broken = worst(checks);
            return trial;
        }
        for block in 0..blocks.len() {
            self.pass(part, openings, block, &mut trial, &mut checks);
        }
        self.undrawn(part, &trial, &mut checks);
        self.moved(part, &trial, &mut checks);
        checks.retain(Check::broken);
        trial.broken = worst(checks);
        trial
    }

    /// Lets the water of one part of the day through.
    fn pass(&self, part: &Part, openings: &[f64], block: usize, trial: &mut Trial, checks: &mut Vec<Check>) {
        let Question { site, profile, blocks, .. } = *self.question;
        let total = trial.totals_m3s[block];
        let gates: Vec<Gate> = match part.well {
            None => {
                let flow_m3s = total;
                trial.open.iter().map(|&(outlet, opening)| Gate { outlet, opening, flow_m3s }).collect()
            }
            Some(_) if trial.open.is_empty() => Vec::new(),
            Some(well) => {
                let (gates, head_m) = self.split(part, openings, well, total);
                limits::well(site, well, trial.open.len(), total, head_m, checks);
                gates
            }
        };
        for &outlet in &part.outlets {
            match gates.iter().find(|g| g.outlet == outlet && g.opening > 0.0) {
                Some(g) => limits::passing(site, outlet, g.opening, g.flow_m3s, profile.pool_m, checks),
                None => limits::passing(site, outlet, 0.0, 0.0, profile.pool_m, checks),
            }
        }
        for gate in gates {
            if block == 0 {
                trial.flows.push((gate.outlet, gate.opening, vec![0.0; blocks.len()]));
            }
            trial.flows.iter_mut().find(|f| f.0 == gate.outlet).unwrap().2[block] = gate.flow_m3s;
        }
    }

    /// A well's gates and leaks with their flows, and its head where every loss is given.
    fn split(&self, part: &Part, openings: &[f64], well: usize, total_m3s: f64) -> (Vec<Gate>, Option<f64>) {
        let Question { site, profile, .. } = *self.question;
        let wet = |&(&o, &opening): &(&usize, &f64)| {
            is_wet(&site.outlets[o], if opening > 0.0 { opening } else { 1.0 }, profile.pool_m)
        };
        let gates: Vec<(usize, f64)> =
            part.outlets.iter().zip(openings).filter(wet).map(|(o, opening)| (*o, *opening)).collect();
        let ports: Vec<Port> = gates.iter().map(|g| port(site, g.0, g.1, ASSUMED_LOSS)).collect();
        let own: Vec<Option<Rc<Curve>>> = gates
            .iter()
            .zip(&ports)
            .map(|(g, p)| {
                let seat = seat(site, &[*g], 0.5, CrestForm::default())?;
                (p.area_m2 > 0.0).then(|| self.curve(seat.centre_m, seat.opening))
            })
            .collect();
        let supply = |k: usize, flow: f64| {
            let water = own[k].as_ref().unwrap().at(flow);
            Entering {
                temperature_c: water.temperature_c,
                salt_g_per_kg: water.salt_g_per_kg,
                suspended_mg_l: water.suspended_mg_l,
            }
        };
        let (conduit_m, solids_kg_m3) = (site.wells[well].conduit_m, site.water.solids_kg_m3);
        let shaft = Shaft { column: &profile.column, conduit_m, solids_kg_m3 };
        let split = shaft.split(&ports, total_m3s, supply).unwrap();
        let told = gates.iter().all(|g| site.outlets[g.0].loss.is_some());
        let passing = gates.iter().zip(&ports).zip(&split.flows_m3s).filter(|((_, p), _)| p.area_m2 > 0.0);
        let gates = passing.map(|((g, _), q)| Gate { outlet: g.0, opening: g.1, flow_m3s: *q }).collect();
        (gates, told.then_some(split.head_m))
    }

    /// Levels of this part alone against the layers not to be drawn.
    fn undrawn(&self, part: &Part, trial: &Trial, checks: &mut Vec<Check>) {
        for block in 0..self.question.blocks.len() {
            let levels = self.levels(&setting(&[trial], block));
            for level in levels.iter().filter(|l| l.outlets.iter().all(|o| part.outlets.contains(o))) {
                let group = self.groups.iter().find(|g| g.contains(&level.outlets[0])).unwrap();
                let first = level.outlets.iter().find(|o| trial.open.iter().any(|open| open.0 == **o));
                let Some(&first) = first.filter(|_| !self.is_shared(group)) else { continue };
                let reached = self.reached(&level.sink);
                checks.extend(reached.iter().map(|c| Check { of: Of::Outlet(first), ..*c }));
            }
        }
    }

    /// Gates of this part that would be moved while water passes, as they may not be.
    fn moved(&self, part: &Part, trial: &Trial, checks: &mut Vec<Check>) {
        let Some(now) = self.question.now else { return };
        let mut all = Vec::new();
        limits::moves(self.site(), now, &self.over_the_day(&[trial], &[part]), &mut all);
        checks.extend(all.into_iter().filter(|c| part.outlets.iter().any(|o| c.of == Of::Outlet(*o))));
    }

    /// What is open over the day, at the mean of its flows; wells with a gate open are open.
    pub(super) fn over_the_day(&self, trials: &[&Trial], parts: &[&Part]) -> Setting {
        let blocks = self.question.blocks;
        let mean = |flows: &[f64]| flows.iter().zip(blocks).map(|(q, b)| q * b.0).sum();
        let open = trials.iter().flat_map(|t| &t.flows).filter(|f| f.1 > 0.0);
        let gates = open.map(|(outlet, opening, flows)| Gate {
            outlet: *outlet,
            opening: *opening,
            flow_m3s: mean(flows),
        });
        let mut out = Setting::of(gates.collect());
        for (part, trial) in parts.iter().zip(trials) {
            let state = |well| WellState {
                well,
                flow_m3s: mean(&trial.totals_m3s),
                head_m: 0.0,
                settled: true,
                assumed_loss: false,
                given: false,
                split: Vec::new(),
            };
            out.wells.extend(part.well.filter(|_| !trial.open.is_empty()).map(state));
        }
        out
    }
}

/// What is open in one part of the day, with the leaks that a split has told.
pub(super) fn setting(trials: &[&Trial], block: usize) -> Setting {
    let gate = |f: &(usize, f64, Vec<f64>)| Gate { outlet: f.0, opening: f.1, flow_m3s: f.2[block] };
    let gates = trials.iter().flat_map(|t| &t.flows).map(gate);
    let (gates, leaks) = gates.partition(|g| g.opening > 0.0);
    Setting { leaks, ..Setting::of(gates) }
}

/// Each limit once, with its least room.
pub(super) fn worst(checks: Vec<Check>) -> Vec<Check> {
    let mut out: Vec<Check> = Vec::new();
    for check in checks {
        let same = |c: &Check| (c.rule, c.of, c.item) == (check.rule, check.of, check.item);
        match out.iter_mut().find(|c| same(c)) {
            Some(known) if known.room <= check.room => {}
            Some(known) => *known = check,
            None => out.push(check),
        }
    }
    out
}

fn place(centre_m: f64, opening: Opening) -> Place {
    match opening {
        Opening::Port { angle_rad } => (centre_m.to_bits(), false, angle_rad.to_bits()),
        Opening::Crest { length_m, .. } => (centre_m.to_bits(), true, length_m.to_bits()),
    }
}

fn parts(question: &Question, groups: &[Vec<usize>]) -> Vec<Part> {
    let site = question.site;
    let mut parts: Vec<Part> = Vec::new();
    for &outlet in groups.iter().flatten() {
        let o = &site.outlets[outlet];
        let spills_m3s =
            spills_by_itself(o).then(|| crest_flow_m3s(o, 1.0, question.profile.pool_m).unwrap());
        if spills_m3s == Some(0.0) {
            continue;
        }
        let mut openings: Vec<f64> = o.positions.iter().map(|p| p.opening).filter(|o| *o > 0.0).collect();
        openings.sort_by(f64::total_cmp);
        if o.positions.is_empty() {
            openings.push(1.0);
        }
        if spills_m3s.is_some() || question.without.contains(&outlet) {
            openings.clear();
        }
        openings.insert(0, 0.0);
        let known = parts.iter().position(|p| p.well.is_some() && p.well == o.well);
        let at = known.unwrap_or_else(|| {
            parts.push(Part { well: o.well, outlets: Vec::new(), spills_m3s, states: vec![Vec::new()] });
            parts.len() - 1
        });
        parts[at].outlets.push(outlet);
        // the outlets before turn slowest
        let with = |state: &Vec<f64>| -> Vec<Vec<f64>> {
            openings.iter().map(|&o| state.iter().copied().chain([o]).collect()).collect()
        };
        parts[at].states = parts[at].states.iter().flat_map(with).collect();
    }
    parts
}
