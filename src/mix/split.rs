//! What of a setting can be varied: its parts, an outlet on no well or a whole well, and the same with other flows.

use crate::intake;
use crate::site::Site;

use super::levels::{Gate, Setting};
use super::wells::Asked;

/// A part of the dam between which and another the release is split.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Part {
    /// An outlet on no well.
    Outlet(usize),
    /// A well, its gates as they are.
    Well(usize),
}

impl Asked {
    /// What a setting asks: its wells by their totals and openings, so that they share out anew under another pool.
    pub fn of(site: &Site, setting: &Setting) -> Self {
        let well_of = |gate: &Gate| site.outlets.get(gate.outlet).and_then(|o| o.well);
        let mut out = Self::default();
        let mut totals = vec![0.0_f64; site.wells.len()];
        for gate in &setting.gates {
            match well_of(gate) {
                None => out.direct.push(*gate),
                Some(well) => {
                    totals[well] += gate.flow_m3s;
                    if setting.stands_open(site, gate) {
                        out.open.push((gate.outlet, gate.opening));
                    }
                }
            }
        }
        for leak in &setting.leaks {
            if let Some(well) = well_of(leak) {
                totals[well] += leak.flow_m3s;
            }
        }
        out.totals = totals.into_iter().enumerate().filter(|t| t.1 > 0.0).collect();
        out
    }

    /// Parts with their flows, m3/s: outlets on no well, and wells.
    pub fn parts(&self) -> Vec<(Part, f64)> {
        let direct = self.direct.iter().map(|g| (Part::Outlet(g.outlet), g.flow_m3s));
        direct.chain(self.totals.iter().map(|t| (Part::Well(t.0), t.1))).collect()
    }

    /// The same with other flows of two parts.
    #[must_use]
    pub fn with(&self, parts: [Part; 2], flows_m3s: [f64; 2]) -> Self {
        let mut out = self.clone();
        for (part, flow) in parts.into_iter().zip(flows_m3s) {
            match part {
                Part::Outlet(outlet) => {
                    out.direct.iter_mut().filter(|g| g.outlet == outlet).for_each(|g| g.flow_m3s = flow);
                }
                Part::Well(well) => out.totals.iter_mut().filter(|t| t.0 == well).for_each(|t| t.1 = flow),
            }
        }
        out
    }

    /// Everything so many times.
    #[must_use]
    pub fn scaled(&self, times: f64) -> Self {
        let mut out = self.clone();
        out.direct.iter_mut().for_each(|g| g.flow_m3s *= times);
        out.totals.iter_mut().for_each(|t| t.1 *= times);
        out
    }

    /// The same for another release (m3/s) under another pool: what spills by itself passes what it passes there, and
    /// everything else keeps its share of the rest.
    #[must_use]
    pub fn at_release(&self, site: &Site, release_m3s: f64, pool_m: f64) -> Self {
        let spills = |g: &Gate| site.outlets.get(g.outlet).is_some_and(intake::spills_by_itself);
        let set: f64 = self.parts().iter().map(|p| p.1).sum();
        let spilt: f64 = self.direct.iter().filter(|g| spills(g)).map(|g| g.flow_m3s).sum();
        let free = |index: usize| {
            let flow_m3s = intake::crest_flow_m3s(&site.outlets[index], 1.0, pool_m)?;
            (flow_m3s > 0.0).then_some(Gate { outlet: index, opening: 1.0, flow_m3s })
        };
        let crests = (0..site.outlets.len()).filter(|&i| intake::spills_by_itself(&site.outlets[i]));
        let spilling: Vec<Gate> = crests.filter_map(free).collect();
        let left = (release_m3s - spilling.iter().map(|g| g.flow_m3s).sum::<f64>()).max(0.0);
        let mut out = self.scaled(if set > spilt { left / (set - spilt) } else { 0.0 });
        out.direct.retain(|g| !spills(g));
        out.direct.extend(spilling);
        out
    }
}
