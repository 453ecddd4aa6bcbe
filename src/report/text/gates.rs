//! What is set, in the words of a crew.

use std::fmt::Write as _;

use crate::mix::Gate;
use crate::problem::harmless;
use crate::site::{Outlet, Site};
use crate::tasks::rank::{Shown, ShownPart};
use crate::tasks::{Change, Context, Move};
use crate::units::{Dimension, System, figure};

use super::flow;

/// Each open gate with its opening, by name; an outlet that passes any flow with its flow, or one for each part of
/// the day, in the unit of the heading.
pub fn openings(context: &Context, shown: &Shown, system: System) -> Vec<String> {
    let parts: Vec<&[Gate]> = shown.parts.iter().map(|p| p.setting.gates.as_slice()).collect();
    named(context, &parts, system)
}

/// The same of gates alone.
pub(super) fn named(context: &Context, parts: &[&[Gate]], system: System) -> Vec<String> {
    let (site, unit) = (context.site(), system.unit(Dimension::Flow));
    let mut gates: Vec<(&Outlet, &Gate)> = parts
        .first()
        .into_iter()
        .flat_map(|gates| gates.iter())
        .filter_map(|g| Some((site.outlets.get(g.outlet)?, g)))
        .collect();
    gates.sort_by(|a, b| a.0.name.cmp(&b.0.name));
    let flows = |outlet: usize| {
        let of = |part: &&[Gate]| {
            part.iter()
                .filter(|g| g.outlet == outlet)
                .map(|g| figure(g.flow_m3s, unit, u8::from(system == System::Si)))
                .collect()
        };
        let mut flows: Vec<String> = parts.iter().map(of).collect();
        flows.dedup();
        flows.join("/")
    };
    let one = |(o, g): &(&Outlet, &Gate)| {
        let mut words = o.name.clone();
        if o.well.is_some() || !o.positions.is_empty() {
            words = format!("{words} {}", opening(o, g.opening));
        }
        if o.well.is_none() {
            words = format!("{words} {}", flows(g.outlet));
        }
        harmless(&words)
    };
    gates.iter().map(one).collect()
}

fn opening(outlet: &Outlet, opening: f64) -> String {
    outlet.opening_name(opening).replace(" %", "%")
}

/// What to set in a part of the day: each well's total with its open gates, and each outlet on none.
pub fn instruction(context: &Context, part: &ShownPart, system: System) -> String {
    let site = context.site();
    let gates = &part.setting.gates;
    let mut out: Vec<String> = Vec::new();
    for state in part.setting.wells.iter().filter(|w| !w.given) {
        let on: Vec<Gate> =
            gates.iter().filter(|g| site.outlets[g.outlet].well == Some(state.well)).copied().collect();
        let open = named(context, &[&on], system).join(", ");
        let name = harmless(&site.wells[state.well].name);
        out.push(format!("{name} {} ({open})", flow(state.flow_m3s, system)));
    }
    let split = |g: &&Gate| {
        let well = site.outlets[g.outlet].well;
        !part.setting.wells.iter().any(|w| Some(w.well) == well && !w.given)
    };
    let mut direct: Vec<&Gate> = gates.iter().filter(split).collect();
    direct.sort_by(|a, b| site.outlets[a.outlet].name.cmp(&site.outlets[b.outlet].name));
    out.extend(direct.iter().map(|g| {
        let o = &site.outlets[g.outlet];
        let at =
            if o.positions.is_empty() { String::new() } else { format!(" at {}", opening(o, g.opening)) };
        format!("{} {}{at}", harmless(&o.name), flow(g.flow_m3s, system))
    }));
    out.join(", ")
}

/// Which gates move, from where to where, and from which day the crew can.
pub fn moves(context: &Context, change: &Change, system: System) -> String {
    let moved = moved(context.site(), &change.moved, system);
    let mut out =
        if moved.is_empty() { "no gate moves".into() } else { format!("move {}", moved.join(", ")) };
    if let Some(day) = change.earliest {
        _ = write!(out, "; the crew can come from {day}");
    }
    out
}

/// Every gate that moves, from where to where.
pub(super) fn moved(site: &Site, moves: &[Move], system: System) -> Vec<String> {
    let stand = |o: &Outlet, open: f64, flow_m3s: f64| {
        if open <= 0.0 {
            "shut".to_owned()
        } else if o.positions.is_empty() {
            flow(flow_m3s, system)
        } else {
            opening(o, open)
        }
    };
    let one = |m: &Move| {
        let o = &site.outlets[m.outlet];
        harmless(&format!("{} {} to {}", o.name, stand(o, m.from, m.from_m3s), stand(o, m.to, m.to_m3s)))
    };
    moves.iter().map(one).collect()
}
