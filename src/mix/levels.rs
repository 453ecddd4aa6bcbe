//! Outlets at one elevation act as one sink: the levels of a site, and what a setting makes of them.
//!
//! Methods: `docs/methods.md`, section 4.

use std::f64::consts::PI;

use crate::intake;
use crate::site::{Kind, Outlet, Site, level_groups};
use crate::water::G_M_S2;
use crate::withdrawal::{CrestForm, Opening, Sink};

use super::wells::WellState;

/// One gate of a setting.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Gate {
    /// Index of the outlet.
    pub outlet: usize,
    /// Opening, 0 to 1.
    pub opening: f64,
    /// Flow, m3/s.
    pub flow_m3s: f64,
}

/// What is open, and how much passes.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct Setting {
    /// Open gates in any order; the order changes nothing.
    pub gates: Vec<Gate>,
    /// What shut gates of wells leak, at opening 0, where a split has told it.
    pub leaks: Vec<Gate>,
    /// The same setting with an assumed loss at its least and at its greatest; empty where no loss is assumed.
    pub at_losses: Vec<Setting>,
    /// What each well does that carries any, by name, where a split has told it.
    pub wells: Vec<WellState>,
}

impl Setting {
    /// Gates with given flows, nothing told of leaks.
    pub fn of(gates: Vec<Gate>) -> Self {
        Self { gates, ..Self::default() }
    }

    /// Whether a gate of it stands open: one that is given no flow is as good as shut, one that its well leaves
    /// without is not.
    pub fn stands_open(&self, site: &Site, gate: &Gate) -> bool {
        let well = site.outlets.get(gate.outlet).and_then(|o| o.well);
        gate.flow_m3s > 0.0 || self.wells.iter().any(|w| Some(w.well) == well && !w.given)
    }

    /// Head over the structure of a well, m; `None` where no split has told it, or with a loss that is assumed.
    pub fn head_m(&self, well: usize) -> Option<f64> {
        self.wells.iter().find(|w| w.well == well && !w.assumed_loss).map(|w| w.head_m)
    }
}

/// A level under a setting.
#[derive(Debug, Clone, PartialEq)]
pub struct Level {
    /// Outlets that are open or leak, by elevation and name.
    pub outlets: Vec<usize>,
    /// Flow of each of them, m3/s.
    pub flows_m3s: Vec<f64>,
    /// Where it draws.
    pub sink: Sink,
    /// Tallest opening of the level, m.
    pub height_m: f64,
}

/// Groups of linked outlets, from the lowest up, whatever is open: [`level_groups`].
pub fn groups(site: &Site) -> Vec<Vec<usize>> {
    level_groups(&site.outlets)
}

/// Levels of a setting under a pool, from the lowest up, leaks included. `leak_place` as in
/// [`intake::leak_m3s`]; `form` is the relation crests use.
///
/// A level's elevation is the area-weighted mean of its open parts. A leak of a direct outlet leaves the dam
/// beside the set flows; a leak into a well is part of what its conduit carries.
pub fn levels(
    site: &Site,
    groups: &[Vec<usize>],
    setting: &Setting,
    pool_m: f64,
    leak_place: f64,
    form: CrestForm,
) -> Vec<Level> {
    let flows = passing(site, groups, setting, pool_m, leak_place);
    groups
        .iter()
        .filter_map(|group| {
            let members: Vec<(usize, f64)> =
                group.iter().filter_map(|&i| Some((i, flows[i].as_ref()?.0))).collect();
            let seat = seat(site, &members, leak_place, form)?;
            let flows_m3s: Vec<f64> = members.iter().filter_map(|&(i, _)| Some(flows[i]?.1)).collect();
            let flow_m3s = flows_m3s.iter().sum();
            let sink = Sink { centre_m: seat.centre_m, flow_m3s, opening: seat.opening };
            let outlets = members.into_iter().map(|m| m.0).collect();
            Some(Level { outlets, flows_m3s, sink, height_m: seat.height_m })
        })
        .collect()
}

/// Where a level draws, whatever its flow.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Seat {
    /// Area-weighted mean of its open parts, m.
    pub centre_m: f64,
    /// Kind and angle.
    pub opening: Opening,
    /// Tallest opening, m.
    pub height_m: f64,
}

/// Where linked outlets draw as one, each with its opening, 0 for one that leaks; in the order of their group.
/// `None` without outlets.
pub fn seat(site: &Site, members: &[(usize, f64)], leak_place: f64, form: CrestForm) -> Option<Seat> {
    let mut first_m = None; // so that equal centre-lines have that one as their mean, to the last digit
    let mut sums = [0.0_f64; 2]; // area, area x elevation above the first
    let mut lengths_m = [0.0_f64; 2]; // of open and of leaking crests
    let mut height_m = 0.0_f64;
    for &(index, opening) in members {
        let outlet = &site.outlets[index];
        let leaking = opening <= 0.0;
        let part = outlet.open_part(if leaking { 1.0 } else { opening });
        let area = if leaking { intake::leak_area_m2(outlet, leak_place) } else { part.area_m2 };
        sums[0] += area;
        sums[1] += area * (part.centre_m - *first_m.get_or_insert(part.centre_m));
        if let Kind::Crest { length_m, .. } = outlet.kind {
            lengths_m[usize::from(leaking)] += length_m;
        }
        height_m = height_m.max(part.height_m);
    }
    let first = members.first()?.0;
    let opening = if site.outlets[first].is_crest() {
        // a leak beside an open crest does not make that crest longer
        let [open, leaking] = lengths_m;
        Opening::Crest { length_m: if open > 0.0 { open } else { leaking }, form }
    } else {
        Opening::Port { angle_rad: site.outlets[first].angle_rad }
    };
    Some(Seat { centre_m: first_m? + sums[1] / sums[0], opening, height_m })
}

/// Opening and flow of every outlet that gives or could give water: set or leaking.
///
/// Leaks that a split has told follow their place in their range, the well's total kept. Where none is told, all
/// ports of a well share its total in proportion to what they would pass at the head of the set flows; for one open
/// gate that is the split by area and loss. Sums run in the order of the groups, never of the file.
pub(super) fn passing(
    site: &Site,
    groups: &[Vec<usize>],
    setting: &Setting,
    pool_m: f64,
    leak_place: f64,
) -> Vec<Option<(f64, f64)>> {
    let mut flows: Vec<Option<(f64, f64)>> = vec![None; site.outlets.len()];
    for gate in &setting.gates {
        if let Some(slot) = flows.get_mut(gate.outlet) {
            *slot = Some((gate.opening, gate.flow_m3s));
        }
    }
    let order: Vec<(usize, &Outlet)> = groups.iter().flatten().map(|&i| (i, &site.outlets[i])).collect();
    // the head across a well's gates, from the loss of the hardest driven open one
    let mut wells = vec![Drained::default(); site.wells.len()];
    for &(i, outlet) in &order {
        if let (Some(well), Some((opening, flow))) = (outlet.well, flows[i]) {
            let area = outlet.open_part(opening).area_m2;
            let loss = outlet.loss.unwrap_or(intake::ASSUMED_LOSS);
            let head = loss * (flow / area).powi(2) / (2.0 * G_M_S2);
            wells[well].head_m = wells[well].head_m.max(head);
            wells[well].total_m3s += flow;
            wells[well].drawn_m3s += flow;
        }
    }
    for gate in &setting.leaks {
        let Some((outlet, well)) = site.outlets.get(gate.outlet).and_then(|o| Some((o, o.well?))) else {
            continue;
        };
        let grown = intake::leak_area_m2(outlet, leak_place) / intake::leak_area_m2(outlet, 0.5);
        flows[gate.outlet] = Some((0.0, gate.flow_m3s * grown));
        wells[well].told = true;
    }
    for &(i, outlet) in &order {
        let leaks = flows[i].is_some_and(|(opening, _)| opening <= 0.0);
        if let (true, Some(well), Some((_, flow))) = (leaks, outlet.well, flows[i]) {
            let told = setting.leaks.iter().find(|g| g.outlet == i).map_or(0.0, |g| g.flow_m3s);
            wells[well].total_m3s += told;
            wells[well].drawn_m3s += flow;
        }
        if flows[i].is_some() || outlet.centre_m >= pool_m || outlet.well.is_some_and(|w| wells[w].told) {
            continue;
        }
        let head = outlet.well.map_or(pool_m - outlet.centre_m, |w| wells[w].head_m);
        let leak = intake::leak_m3s(outlet, head, leak_place);
        if leak > 0.0 {
            flows[i] = Some((0.0, leak));
            if let Some(well) = outlet.well {
                wells[well].drawn_m3s += leak;
            }
        }
    }
    for &(i, outlet) in &order {
        if let (Some(well), Some(slot)) = (outlet.well.map(|w| wells[w]), flows[i].as_mut())
            && (well.drawn_m3s - well.total_m3s).abs() > 0.0
        {
            slot.1 *= well.total_m3s / well.drawn_m3s;
        }
    }
    flows
}

/// What a well carries, and what its ports would draw at the head the set flows need.
#[derive(Clone, Copy, Default)]
struct Drained {
    head_m: f64,
    total_m3s: f64,
    drawn_m3s: f64,
    told: bool,
}

/// Several levels as one sink at their flow-weighted elevation; a crest among them draws as a port in a face.
pub fn as_one(levels: &[&Level]) -> Option<Sink> {
    let flow_m3s: f64 = levels.iter().map(|l| l.sink.flow_m3s).sum();
    if flow_m3s <= 0.0 {
        return None;
    }
    let weighted = |value: &dyn Fn(&Level) -> f64| {
        levels.iter().map(|l| l.sink.flow_m3s * value(l)).sum::<f64>() / flow_m3s
    };
    let angle = |l: &Level| match l.sink.opening {
        Opening::Port { angle_rad } => angle_rad,
        Opening::Crest { .. } => PI,
    };
    Some(Sink {
        centre_m: weighted(&|l| l.sink.centre_m),
        flow_m3s,
        opening: Opening::Port { angle_rad: weighted(&angle) },
    })
}
