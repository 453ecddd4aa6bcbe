//! Changing a setting one gate, well or total at a time.
//!
//! A well is set in one of two ways: by openings and a total that it shares out itself, or by flows of its gates. A
//! change of an opening or a total makes it the first, a change of a gate's flow the second; what it did before is
//! kept as far as the other way can say it.

use crate::intake;
use crate::mix::Setting;
use crate::site::{SAME_OPENING, Site};
use crate::tasks::rank::Shown as Mix;
use crate::tasks::{ByFlow, Given};

/// How far one key turns.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Nudge {
    /// A step less.
    Less,
    /// A step more.
    More,
    /// A large step less.
    MuchLess,
    /// A large step more.
    MuchMore,
}

impl Nudge {
    /// Whether it is a large one.
    pub fn is_large(self) -> bool {
        matches!(self, Self::MuchLess | Self::MuchMore)
    }

    /// 1 or -1.
    pub fn sign(self) -> f64 {
        if matches!(self, Self::More | Self::MuchMore) { 1.0 } else { -1.0 }
    }

    /// The next multiple of a step beyond a value, so that what is shown stays round.
    pub fn from(self, value: f64, step: f64) -> f64 {
        let places = value / step + self.sign();
        let whole = if self.sign() > 0.0 { (places + 1e-9).floor() } else { (places - 1e-9).ceil() };
        whole * step
    }
}

/// What is asked of the tasks: a total of a well whose gates are all shut is left out.
pub fn asked(site: &Site, given: &Given) -> Given {
    let is_open = |well: usize| given.open.iter().any(|g| g.1 > 0.0 && site.outlets[g.0].well == Some(well));
    let mut out = given.clone();
    out.totals.retain(|t| t.1 > 0.0 && is_open(t.0));
    // an open gate of a well that is to carry nothing stands open and passes nothing
    out.totals.extend(given.totals.iter().filter(|t| t.1 <= 0.0 && is_open(t.0)));
    out.by_name(site)
}

/// The setting of a mix from the ranking, as it is typed: wells by openings and total, the rest by flow. Of a day of
/// several parts the longest.
pub fn taken(site: &Site, mix: &Mix) -> Given {
    let longest = mix.parts.iter().rev().max_by(|a, b| a.share.total_cmp(&b.share));
    longest.map_or_else(Given::default, |part| of_setting(site, &part.setting))
}

fn of_setting(site: &Site, setting: &Setting) -> Given {
    let mut out = Given::default();
    for gate in &setting.gates {
        let outlet = &site.outlets[gate.outlet];
        let shared = setting.wells.iter().any(|w| Some(w.well) == outlet.well && !w.given);
        if shared {
            out.open.push((gate.outlet, gate.opening));
        } else if !intake::spills_by_itself(outlet) {
            let opening = Some(gate.opening).filter(|_| outlet.has_opening());
            out.flows.push(ByFlow { outlet: gate.outlet, flow_m3s: gate.flow_m3s, opening });
        }
    }
    for well in setting.wells.iter().filter(|w| !w.given) {
        out.totals.push((well.well, well.flow_m3s));
    }
    out.by_name(site)
}

/// Opening of an outlet in a setting, 0 to 1.
pub fn opening_of(given: &Given, outlet: usize) -> f64 {
    let by_flow = given.flows.iter().find(|g| g.outlet == outlet).map(|g| g.opening.unwrap_or(1.0));
    by_flow.or_else(|| given.open.iter().find(|g| g.0 == outlet).map(|g| g.1)).unwrap_or(0.0)
}

/// Sets an opening, 0 to 1.
pub fn set_opening(site: &Site, given: &mut Given, outlet: usize, opening: f64) {
    let shut = opening < SAME_OPENING;
    let Some(well) = site.outlets[outlet].well else {
        let by_flow = given.flows.iter_mut().find(|g| g.outlet == outlet);
        match by_flow {
            Some(_) if shut => given.flows.retain(|g| g.outlet != outlet),
            Some(flow) => flow.opening = Some(opening),
            None => put(&mut given.open, outlet, opening, shut),
        }
        return;
    };
    by_openings(site, given, well);
    put(&mut given.open, outlet, opening, shut);
    // openings alone are answered by the blocks of the day, where the site has any
    if !shut && site.blocks.is_empty() && !given.totals.iter().any(|t| t.0 == well) {
        given.totals.push((well, 0.0));
    }
}

/// Sets the flow of an outlet, m3/s. `split` is what the wells make of the setting.
pub fn set_flow(site: &Site, given: &mut Given, outlet: usize, flow_m3s: f64, split: Option<&Setting>) {
    if let Some(well) = site.outlets[outlet].well {
        by_flows(site, given, well, split);
    }
    let was_open = given.open.iter().find(|g| g.0 == outlet).map(|g| g.1);
    given.open.retain(|g| g.0 != outlet);
    let opening = was_open.or_else(|| site.outlets[outlet].has_opening().then_some(1.0));
    match given.flows.iter_mut().find(|g| g.outlet == outlet) {
        _ if flow_m3s <= 0.0 => given.flows.retain(|g| g.outlet != outlet),
        Some(flow) => flow.flow_m3s = flow_m3s,
        None => given.flows.push(ByFlow { outlet, flow_m3s, opening }),
    }
}

/// Sets the total of a well, m3/s: shared out anew where it goes by openings, in proportion where by flows.
pub fn set_total(site: &Site, given: &mut Given, well: usize, flow_m3s: f64) {
    let on = |g: &ByFlow| site.outlets[g.outlet].well == Some(well);
    let sum: f64 = given.flows.iter().filter(|g| on(g)).map(|g| g.flow_m3s).sum();
    if sum > 0.0 && flow_m3s > 0.0 {
        given.flows.iter_mut().filter(|g| on(g)).for_each(|g| g.flow_m3s *= flow_m3s / sum);
    } else {
        by_openings(site, given, well);
        put(&mut given.totals, well, flow_m3s, false);
    }
}

/// Total of a well as it is set, m3/s.
pub fn total_m3s(site: &Site, given: &Given, well: usize) -> Option<f64> {
    let on = |g: &&ByFlow| site.outlets[g.outlet].well == Some(well);
    let flows: Vec<f64> = given.flows.iter().filter(on).map(|g| g.flow_m3s).collect();
    if flows.is_empty() {
        given.totals.iter().find(|t| t.0 == well).map(|t| t.1)
    } else {
        Some(flows.iter().sum())
    }
}

/// Everything set by flow, in proportion, so that with what passes beside it comes to a total, m3/s; totals of wells
/// without an open gate wait as they are. Whether that can be: something is set by flow, and no more passes beside.
pub fn set_release(site: &Site, given: &mut Given, flow_m3s: f64, beside_m3s: f64) -> bool {
    let passing = asked(site, given);
    let sum: f64 = passing.flows.iter().map(|g| g.flow_m3s).sum::<f64>()
        + passing.totals.iter().map(|t| t.1).sum::<f64>();
    if sum <= 0.0 || flow_m3s <= beside_m3s {
        return false;
    }
    let times = (flow_m3s - beside_m3s) / sum;
    given.flows.iter_mut().for_each(|g| g.flow_m3s *= times);
    let carries = |well: usize| passing.totals.iter().any(|t| t.0 == well);
    given.totals.iter_mut().filter(|t| carries(t.0)).for_each(|t| t.1 *= times);
    true
}

fn put(list: &mut Vec<(usize, f64)>, index: usize, value: f64, out: bool) {
    list.retain(|(i, _)| *i != index);
    if !out {
        list.push((index, value));
    }
}

/// A well set by flows, set by their openings and sum.
fn by_openings(site: &Site, given: &mut Given, well: usize) {
    let on = |g: &ByFlow| site.outlets[g.outlet].well == Some(well);
    let flows: Vec<ByFlow> = given.flows.iter().copied().filter(on).collect();
    if flows.is_empty() {
        return;
    }
    given.flows.retain(|g| !on(g));
    for gate in &flows {
        put(&mut given.open, gate.outlet, gate.opening.unwrap_or(1.0), false);
    }
    put(&mut given.totals, well, flows.iter().map(|g| g.flow_m3s).sum(), false);
}

/// A well set by openings, set by the flows it then shares out.
fn by_flows(site: &Site, given: &mut Given, well: usize, split: Option<&Setting>) {
    let on = |outlet: usize| site.outlets[outlet].well == Some(well);
    let open: Vec<(usize, f64)> = given.open.iter().copied().filter(|g| on(g.0) && g.1 > 0.0).collect();
    let openings: f64 = open.iter().map(|g| g.1).sum();
    let total = given.totals.iter().find(|t| t.0 == well).map_or(0.0, |t| t.1);
    given.totals.retain(|t| t.0 != well);
    given.open.retain(|g| !on(g.0));
    for (outlet, opening) in &open {
        let shared = split.and_then(|s| s.gates.iter().find(|g| g.outlet == *outlet)).map(|g| g.flow_m3s);
        let flow_m3s = shared.unwrap_or(total * opening / openings);
        given.flows.push(ByFlow { outlet: *outlet, flow_m3s, opening: Some(*opening) });
    }
}

#[cfg(test)]
mod tests;
