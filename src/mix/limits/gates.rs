//! Limits of single outlets, wells and levels.

use chrono::NaiveDate;

use crate::intake;
use crate::profile::{Column, Stretch};
use crate::site::{Avoided, Layer, Site};
use crate::withdrawal::Zone;

use super::{Check, Of, Rule};

/// Limits of one open gate that do not depend on its flow: outage, dry, pool window, submergence, openings to avoid.
/// `outlet` is an index of the site's, `opening` a share of the full height above 0.
pub fn still(site: &Site, outlet: usize, opening: f64, pool_m: f64, date: NaiveDate, out: &mut Vec<Check>) {
    let Some(o) = site.outlets.get(outlet) else { return };
    let of = Of::Outlet(outlet);
    for (item, outage) in site.limits.outages.iter().enumerate().filter(|(_, r)| r.outlet == outlet) {
        let days = |to: NaiveDate| (to - date).num_days() as f64;
        let ends = outage.to.map_or(f64::INFINITY, |to| days(to) + 1.0);
        let out_now = if outage.covers(date) { ends } else { 0.0 };
        let room = if outage.covers(date) { -ends } else { days(outage.from) };
        // one that is over is no limit any more
        if ends > 0.0 {
            out.push(Check { rule: Rule::Outage, of, item, found: out_now, bound: 0.0, room });
        }
    }
    let part = o.open_part(opening);
    out.push(Check::least(Rule::Dry, of, pool_m, part.centre_m));
    if let Some((low, high)) = o.pool_window_m {
        let least = Check::least(Rule::PoolWindow, of, pool_m, low);
        let most = Check::most(Rule::PoolWindow, of, pool_m, high);
        out.push(if least.room < most.room { least } else { most });
    }
    if let Some(least) = o.min_submergence_m {
        let depth = intake::submergence_m(o, opening, pool_m);
        out.push(Check::least(Rule::MinSubmergence, of, depth, least));
    }
    for (item, avoid) in o.avoid.iter().enumerate() {
        if let Avoided::Openings(from, to) = avoid.what {
            out.push(Check::outside(Rule::AvoidOpening, of, opening, (from, to)).item(item));
        }
    }
}

/// Limits of one outlet at a flow (m3/s): flow.min, flow.max or capacity, entrance velocity, flows to avoid, and
/// what is reserved. Shut, at opening 0, only the last applies.
pub fn passing(site: &Site, outlet: usize, opening: f64, flow_m3s: f64, pool_m: f64, out: &mut Vec<Check>) {
    let Some(o) = site.outlets.get(outlet) else { return };
    let of = Of::Outlet(outlet);
    for (item, r) in site.limits.reserved.iter().enumerate().filter(|(_, r)| r.outlet == outlet) {
        out.push(Check::least(Rule::Reserved, of, flow_m3s, r.flow_m3s).item(item));
    }
    if opening <= 0.0 {
        return;
    }
    if o.flow_min_m3s > 0.0 {
        out.push(Check::least(Rule::FlowMin, of, flow_m3s, o.flow_min_m3s));
    }
    if let Some(most) = o.flow_max_m3s {
        out.push(Check::most(Rule::FlowMax, of, flow_m3s, most));
    }
    let computed = if o.is_crest() {
        intake::crest_flow_m3s(o, opening, pool_m)
    } else if o.flow_max_m3s.is_none() {
        intake::capacity_m3s(site, o, opening, pool_m)
    } else {
        None
    };
    out.extend(computed.map(|most| Check::most(Rule::Capacity, of, flow_m3s, most)));
    if let Some(most) = o.max_entrance_m_s
        && let Some(velocity) = intake::entrance_velocity_m_s(flow_m3s, o.open_part(opening).area_m2)
    {
        out.push(Check::most(Rule::EntranceVelocity, of, velocity, most));
    }
    for (item, avoid) in o.avoid.iter().enumerate() {
        if let Avoided::Flows(from, to) = avoid.what {
            out.push(Check::outside(Rule::AvoidFlow, of, flow_m3s, (from, to)).item(item));
        }
    }
}

/// Limits of one well with `open` gates open that carries a flow (m3/s) at a head (m), where that is known.
pub fn well(site: &Site, well: usize, open: usize, flow_m3s: f64, head_m: Option<f64>, out: &mut Vec<Check>) {
    let Some(w) = site.wells.get(well) else { return };
    let of = Of::Well(well);
    out.extend(w.max_open.map(|most| Check::most(Rule::MaxOpen, of, open as f64, most as f64)));
    if w.min_flow_m3s > 0.0 && flow_m3s > 0.0 {
        out.push(Check::least(Rule::WellMinFlow, of, flow_m3s, w.min_flow_m3s));
    }
    out.extend(w.max_flow_m3s.map(|most| Check::most(Rule::WellMaxFlow, of, flow_m3s, most)));
    if let Some(head_m) = head_m {
        head(site, well, head_m, out);
    }
}

/// The head of the pool over a well (m) alone, for callers who learn it later.
pub fn head(site: &Site, well: usize, head_m: f64, out: &mut Vec<Check>) {
    let most = site.wells.get(well).and_then(|w| w.max_head_loss_m);
    out.extend(most.map(|most| Check::most(Rule::MaxHeadLoss, Of::Well(well), head_m, most)));
}

/// How far a zone reaches into water not to be drawn, m: one check for each layer of the site, in their order. Kept,
/// its room is the distance to the layer. Where no oxygen is measured a layer of little oxygen is not seen;
/// [`not_checked`](super::not_checked) tells it.
pub fn level(site: &Site, column: &Column, zone: &Zone, of: Of, out: &mut Vec<Check>) {
    let drawn = (zone.lower.limit_m, zone.upper.limit_m);
    let surface_m = column.surface_m();
    for (item, undrawn) in site.limits.undrawn.iter().enumerate() {
        let (found, apart) = match undrawn.layer {
            Layer::Elevations(from, to) => meeting(drawn, (from, to)),
            Layer::Depths(from, to) => meeting(drawn, (surface_m - to, surface_m - from)),
            Layer::OxygenBelow(least) => stretches(column)
                .filter_map(|s| Some(meeting(drawn, below(s, least)?)))
                .fold((0.0, f64::INFINITY), |all, one| (all.0 + one.0, all.1.min(one.1))),
        };
        let room = if found > 0.0 { -found } else { apart };
        out.push(Check { rule: Rule::Undrawn, of, item, found, bound: 0.0, room });
    }
}

/// Whether a zone reaches water whose oxygen is not measured while the site has a layer told by oxygen.
pub(super) fn unread(site: &Site, column: &Column, zone: &Zone) -> bool {
    let told = site.limits.undrawn.iter().any(|u| matches!(u.layer, Layer::OxygenBelow(_)));
    let drawn = (zone.lower.limit_m, zone.upper.limit_m);
    told && stretches(column).any(|s| s.oxygen_missing && meeting(drawn, (s.z_m[0], s.z_m[1])).0 > 0.0)
}

fn stretches(column: &Column) -> impl Iterator<Item = &Stretch> {
    (0..column.nodes_m().len() - 1).map(|i| column.stretch(i))
}

/// Common length of two spans and the gap between them, m.
fn meeting(a: (f64, f64), b: (f64, f64)) -> (f64, f64) {
    let common = a.1.min(b.1) - a.0.max(b.0);
    (common.max(0.0), (-common).max(0.0))
}

/// The part of a stretch with less oxygen than this; oxygen is linear in it.
fn below(stretch: &Stretch, least: f64) -> Option<(f64, f64)> {
    let ([low, high], [z0, z1]) = (stretch.oxygen_mg_l, stretch.z_m);
    if stretch.oxygen_missing || (low >= least && high >= least) {
        return None;
    }
    let crossing = || z0 + (z1 - z0) * (least - low) / (high - low);
    Some(match (low < least, high < least) {
        (true, false) => (z0, crossing()),
        (false, true) => (crossing(), z1),
        _ => (z0, z1),
    })
}
