//! Openings and totals into flows: each well shares its total among its gates, each gate taking in what its level
//! then draws.
//!
//! Methods: `docs/methods.md`, section 4.

use crate::intake::{self, ASSUMED_LOSS, Entering, Port, Shaft};
use crate::profile::Column;
use crate::site::Site;
use crate::withdrawal::{CrestForm, LEAST_FLOW_M3S, Opening, Sink, zone};

use super::band::{GREATEST_LOSS, LEAST_LOSS};
use super::levels::{Gate, Seat, Setting, seat};

/// Flows have settled when none moves by more than this share of its well's total (choice).
const SETTLED: f64 = 1e-9;
/// Most rounds over the wells (choice); one well settles in one.
const ROUNDS: usize = 60;

/// What is set, before the wells have shared out their totals. Each well has either flows of its gates or a total
/// and openings.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct Asked {
    /// Outlets whose flow is given, with their opening.
    pub direct: Vec<Gate>,
    /// Open gates of wells with a total: outlet and opening, 0 to 1.
    pub open: Vec<(usize, f64)>,
    /// Totals of wells: well and flow, m3/s.
    pub totals: Vec<(usize, f64)>,
}

/// What a well does.
#[derive(Debug, Clone, PartialEq)]
pub struct WellState {
    /// Index of the well.
    pub well: usize,
    /// Flow of its conduit, leaks included, m3/s.
    pub flow_m3s: f64,
    /// Largest head of the pool over the well, m.
    pub head_m: f64,
    /// Whether the split settled.
    pub settled: bool,
    /// Its gates give no loss, so one is assumed.
    pub assumed_loss: bool,
    /// The flows of its gates were given: this is what it would do with their total.
    pub given: bool,
    /// How it shares its flow among what is open, leaks at opening 0 included; from the lowest up.
    pub split: Vec<Gate>,
}

/// One port of a well under way.
struct Gated {
    outlet: usize,
    opening: f64,
    group: usize,
    port: Port,
    flow_m3s: f64,
}

/// A well under way.
struct Filling {
    state: WellState,
    gates: Vec<Gated>,
}

/// Flows of what is asked, with the state of each well that carries any. Flows that are given stay; the state of
/// their well is what it would do with their total.
///
/// The water a gate takes in is that of its whole level, whichever wells and outlets draw there, so the wells are
/// gone through in turn until no flow moves by more than 1e-9 of its well's total. Where a loss is assumed the same
/// setting at its least and greatest goes along, for the band.
pub fn resolve(site: &Site, column: &Column, groups: &[Vec<usize>], asked: &Asked, pool_m: f64) -> Setting {
    let at = |asked: &Asked, loss: f64| at_loss(site, column, groups, asked, pool_m, loss);
    let mut setting = at(asked, ASSUMED_LOSS);
    if setting.wells.iter().any(|w| w.assumed_loss) {
        setting.at_losses = [LEAST_LOSS, GREATEST_LOSS].map(|loss| at(asked, loss)).into();
    }
    let totalled = asked.with_totals(site);
    if totalled.totals.len() > asked.totals.len() {
        let opened: Vec<usize> = asked.totals.iter().map(|t| t.0).collect();
        let given = at(&totalled, ASSUMED_LOSS).wells.into_iter().filter(|w| !opened.contains(&w.well));
        setting.wells.extend(given.map(|w| WellState { given: true, ..w }));
        setting.wells.sort_by_key(|w| &site.wells[w.well].name);
    }
    setting
}

impl Asked {
    /// The same with flows given to gates of a well as its total, those gates open as they are.
    fn with_totals(&self, site: &Site) -> Self {
        let (gates, direct): (Vec<Gate>, Vec<Gate>) =
            self.direct.iter().partition(|g| site.outlets[g.outlet].well.is_some());
        let mut out = Self { direct, ..self.clone() };
        out.open.extend(gates.iter().filter(|g| g.flow_m3s > 0.0).map(|g| (g.outlet, g.opening)));
        for well in 0..site.wells.len() {
            let mut flows: Vec<f64> = gates
                .iter()
                .filter(|g| site.outlets[g.outlet].well == Some(well))
                .map(|g| g.flow_m3s)
                .collect();
            // so that the order in which they were given changes no digit
            flows.sort_by(f64::total_cmp);
            let total: f64 = flows.iter().sum();
            if total > 0.0 {
                out.totals.push((well, total));
            }
        }
        out
    }
}

/// Flows of what is asked alone, for callers who try many settings: losses as assumed, and nothing told of wells whose
/// flows are given.
pub fn shared_out(
    site: &Site,
    column: &Column,
    groups: &[Vec<usize>],
    asked: &Asked,
    pool_m: f64,
) -> Setting {
    at_loss(site, column, groups, asked, pool_m, ASSUMED_LOSS)
}

/// The same with `loss` for losses the site does not give.
fn at_loss(
    site: &Site,
    column: &Column,
    groups: &[Vec<usize>],
    asked: &Asked,
    pool_m: f64,
    loss: f64,
) -> Setting {
    let mut wells = fillings(site, groups, asked, pool_m, loss);
    let seats = seats(site, groups, asked, &wells, pool_m);
    let direct_m3s: Vec<f64> = groups
        .iter()
        .map(|group| {
            let set = group.iter().filter_map(|i| asked.direct.iter().find(|g| g.outlet == *i));
            let leaks = group.iter().filter(|&&i| leaks_directly(site, asked, i, pool_m));
            let leak =
                |&i: &usize| intake::leak_m3s(&site.outlets[i], pool_m - site.outlets[i].centre_m, 0.5);
            set.map(|g| g.flow_m3s).sum::<f64>() + leaks.map(leak).sum::<f64>()
        })
        .collect();
    for round in 0..ROUNDS {
        let mut moved = 0.0_f64;
        for w in 0..wells.len() {
            moved = moved.max(share_out(site, column, &mut wells, w, &seats, &direct_m3s));
        }
        if moved < SETTLED {
            break;
        }
        if round + 1 == ROUNDS {
            for well in &mut wells {
                well.state.settled = false;
            }
        }
    }
    let mut setting = Setting::of(asked.direct.clone());
    for Filling { mut state, gates } in wells {
        let passes = gates.iter().filter(|g| g.port.area_m2 > 0.0);
        state.split =
            passes.map(|g| Gate { outlet: g.outlet, opening: g.opening, flow_m3s: g.flow_m3s }).collect();
        let (open, leaks): (Vec<Gate>, Vec<Gate>) = state.split.iter().partition(|g| g.opening > 0.0);
        setting.gates.extend(open);
        setting.leaks.extend(leaks);
        setting.wells.push(state);
    }
    setting
}

/// Every well that is to carry something, by name, with all its ports: open, leaking, and shut tight.
fn fillings(site: &Site, groups: &[Vec<usize>], asked: &Asked, pool_m: f64, loss: f64) -> Vec<Filling> {
    let mut totals: Vec<(usize, f64)> = asked.totals.iter().copied().filter(|t| t.1 > 0.0).collect();
    totals.sort_by_key(|t| &site.wells[t.0].name);
    totals
        .into_iter()
        .map(|(well, flow_m3s)| {
            let gates: Vec<Gated> = groups
                .iter()
                .enumerate()
                .flat_map(|(group, members)| members.iter().map(move |&outlet| (group, outlet)))
                .filter(|&(_, outlet)| site.outlets[outlet].well == Some(well))
                .filter(|&(_, outlet)| {
                    // a port above the water is none
                    let opening = opening_of(asked, outlet);
                    intake::is_wet(&site.outlets[outlet], if opening > 0.0 { opening } else { 1.0 }, pool_m)
                })
                .map(|(group, outlet)| {
                    let opening = opening_of(asked, outlet);
                    let port = port(site, outlet, opening, loss);
                    Gated { outlet, opening, group, port, flow_m3s: 0.0 }
                })
                .collect();
            let assumed_loss = gates.iter().any(|g| site.outlets[g.outlet].loss.is_none());
            let state = WellState {
                well,
                flow_m3s,
                head_m: 0.0,
                settled: true,
                assumed_loss,
                given: false,
                split: Vec::new(),
            };
            Filling { state, gates }
        })
        .collect()
}

/// The port a gate of a well is: its open part, its leak, or nothing.
pub fn port(site: &Site, outlet: usize, opening: f64, loss: f64) -> Port {
    let o = &site.outlets[outlet];
    let part = o.open_part(if opening > 0.0 { opening } else { 1.0 });
    let area_m2 = if opening > 0.0 { part.area_m2 } else { intake::leak_area_m2(o, 0.5) };
    // the area of a leak already holds the loss it was told with
    let given = if opening > 0.0 { loss } else { ASSUMED_LOSS };
    Port { centre_m: part.centre_m, area_m2, loss: o.loss.unwrap_or(given) }
}

fn opening_of(asked: &Asked, outlet: usize) -> f64 {
    asked.open.iter().find(|(o, _)| *o == outlet).map_or(0.0, |(_, opening)| *opening)
}

fn leaks_directly(site: &Site, asked: &Asked, outlet: usize, pool_m: f64) -> bool {
    let o = &site.outlets[outlet];
    let set = asked.direct.iter().any(|g| g.outlet == outlet);
    o.well.is_none() && !set && o.leakage.is_some() && o.centre_m < pool_m
}

/// Where each group draws, whatever flows.
fn seats(
    site: &Site,
    groups: &[Vec<usize>],
    asked: &Asked,
    wells: &[Filling],
    pool_m: f64,
) -> Vec<Option<Seat>> {
    let gates = || wells.iter().flat_map(|w| &w.gates);
    let opening = |i: usize| {
        let direct = asked.direct.iter().find(|g| g.outlet == i).map(|g| g.opening);
        let leak = leaks_directly(site, asked, i, pool_m).then_some(0.0);
        let well = gates().find(|g| g.outlet == i && g.port.area_m2 > 0.0).map(|g| g.opening);
        direct.or(leak).or(well)
    };
    groups
        .iter()
        .map(|group| {
            let members: Vec<(usize, f64)> = group.iter().filter_map(|&i| Some((i, opening(i)?))).collect();
            seat(site, &members, 0.5, CrestForm::default())
        })
        .collect()
}

/// Shares out one well, the others held; how far its flows moved, as a share of its total.
fn share_out(
    site: &Site,
    column: &Column,
    wells: &mut [Filling],
    w: usize,
    seats: &[Option<Seat>],
    direct_m3s: &[f64],
) -> f64 {
    // what else each gate's level draws
    let beside = |group: usize, outlet: usize| {
        let others = wells.iter().flat_map(|w| &w.gates).filter(|g| g.group == group && g.outlet != outlet);
        direct_m3s[group] + others.map(|g| g.flow_m3s).sum::<f64>()
    };
    let gates = &wells[w].gates;
    let besides: Vec<f64> = gates.iter().map(|g| beside(g.group, g.outlet)).collect();
    let ports: Vec<Port> = gates.iter().map(|g| g.port).collect();
    let supply =
        |k: usize, flow: f64| entering(column, seats[gates[k].group], besides[k] + flow, site.zone_factor());
    let (well, total_m3s) = (wells[w].state.well, wells[w].state.flow_m3s);
    let shaft =
        Shaft { column, conduit_m: site.wells[well].conduit_m, solids_kg_m3: site.water.solids_kg_m3 };
    let Some(split) = shaft.split(&ports, total_m3s, supply) else {
        wells[w].state.flow_m3s = 0.0;
        return 0.0;
    };
    let mut moved = 0.0_f64;
    for (gate, flow) in wells[w].gates.iter_mut().zip(&split.flows_m3s) {
        moved = moved.max((gate.flow_m3s - flow).abs() / total_m3s);
        gate.flow_m3s = *flow;
    }
    wells[w].state.head_m = split.head_m;
    wells[w].state.settled = split.settled;
    moved
}

/// Water a level takes in at a flow; at none, the water before it.
fn entering(column: &Column, seat: Option<Seat>, flow_m3s: f64, zone_factor: f64) -> Entering {
    let Some(seat) = seat else {
        return still(column, column.surface_m());
    };
    // the zone over an edge reaches up to the surface however little passes, so the water before it begins there
    let least_m3s = if matches!(seat.opening, Opening::Crest { .. }) { LEAST_FLOW_M3S } else { 0.0 };
    let sink = Sink { centre_m: seat.centre_m, flow_m3s: flow_m3s.max(least_m3s), opening: seat.opening };
    match zone(column, &sink, zone_factor).and_then(|z| z.draw(column)) {
        Some(draw) => Entering {
            temperature_c: draw.temperature_c,
            salt_g_per_kg: draw.salt_g_per_kg,
            suspended_mg_l: draw.suspended_mg_l,
        },
        None => still(column, seat.centre_m),
    }
}

fn still(column: &Column, z_m: f64) -> Entering {
    let reading = column.reading(z_m);
    Entering {
        temperature_c: reading.temperature_c,
        salt_g_per_kg: reading.salt_g_per_kg,
        suspended_mg_l: reading.suspended_mg_l,
    }
}
