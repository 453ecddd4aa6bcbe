//! stub
#![allow(missing_docs)]
use super::levels::Setting;
use crate::intake;
use crate::profile::Column;
use crate::site::Site;
use crate::withdrawal::Zone;
use chrono::NaiveDate;
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum Rule { Outage, Dry, MinSubmergence, FlowMin, FlowMax, Capacity, MaxOpen, WellMaxFlow, MaxHeadLoss, Undrawn, MovesUnderFlow, ReleaseMin, ReleaseMax, SolidsMax, ShareMin, ShareMax, TemperatureChangePerHour, TemperatureChangePerDay, MaxMoves, MaxCrewHours }
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum Of { Outlet(usize), Well(usize), Share(usize), Whole }
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Check { pub rule: Rule, pub of: Of, pub found: f64, pub bound: f64, pub room: f64 }
impl Check { pub fn broken(&self) -> bool { self.room < -1e-9 * (1.0 + self.bound.abs()) } pub fn words(&self, _s: &Site) -> String { format!("{self:?}") } }
pub fn still(site: &Site, outlet: usize, opening: f64, pool_m: f64, _date: NaiveDate, out: &mut Vec<Check>) {
    let o = &site.outlets[outlet];
    let centre = o.open_part(opening).centre_m;
    out.push(Check { rule: Rule::Dry, of: Of::Outlet(outlet), found: pool_m, bound: centre, room: pool_m - centre });
    if let Some(least) = o.min_submergence_m { let s = intake::submergence_m(o, opening, pool_m); out.push(Check { rule: Rule::MinSubmergence, of: Of::Outlet(outlet), found: s, bound: least, room: s - least }); }
}
pub fn passing(site: &Site, outlet: usize, opening: f64, flow: f64, pool_m: f64, out: &mut Vec<Check>) {
    let o = &site.outlets[outlet];
    if opening <= 0.0 { return; }
    out.push(Check { rule: Rule::FlowMin, of: Of::Outlet(outlet), found: flow, bound: o.flow_min_m3s, room: flow - o.flow_min_m3s });
    if let Some(most) = intake::capacity_m3s(site, o, opening, pool_m) { out.push(Check { rule: Rule::FlowMax, of: Of::Outlet(outlet), found: flow, bound: most, room: most - flow }); }
}
pub fn well(site: &Site, well: usize, open: usize, flow: f64, head_m: Option<f64>, out: &mut Vec<Check>) {
    let w = &site.wells[well];
    if let Some(m) = w.max_open { out.push(Check { rule: Rule::MaxOpen, of: Of::Well(well), found: open as f64, bound: m as f64, room: m as f64 - open as f64 }); }
    if let Some(m) = w.max_flow_m3s { out.push(Check { rule: Rule::WellMaxFlow, of: Of::Well(well), found: flow, bound: m, room: m - flow }); }
    if let (Some(m), Some(h)) = (w.max_head_loss_m, head_m) { out.push(Check { rule: Rule::MaxHeadLoss, of: Of::Well(well), found: h, bound: m, room: m - h }); }
}
pub fn level(_site: &Site, _c: &Column, _z: &Zone, _of: Of, _out: &mut Vec<Check>) {}
#[derive(Debug, Clone, Copy, Default, PartialEq)]
pub struct Moves { pub count: usize, pub cost: f64, pub crew_hours: f64, pub lead_days: f64 }
pub fn moves(site: &Site, now: &Setting, to: &Setting, _out: &mut Vec<Check>) -> Moves {
    let at = |s: &Setting, o: usize| s.gates.iter().find(|g| g.outlet == o).map_or((0.0, 0.0), |g| (g.opening, g.flow_m3s));
    let mut m = Moves::default();
    for o in 0..site.outlets.len() {
        let (a, b) = (at(now, o), at(to, o));
        if (a.0 - b.0).abs() > 1e-6 || (site.outlets[o].positions.is_empty() && (a.1 - b.1).abs() > 0.005 * a.1.max(b.1)) { m.count += 1; m.cost += site.outlets[o].crew.cost; m.crew_hours += site.outlets[o].crew.hours; }
    }
    m
}
