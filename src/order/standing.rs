//! How everything that can be moved stands: a setting as the crew sets it, before the wells share out.

use crate::intake;
use crate::mix::{Asked, Gate, Setting};
use crate::site::Site;

use super::Moved;

/// Opening and flow at which something is put.
#[derive(Debug, Clone, Copy, Default, PartialEq)]
pub(super) struct Put {
    /// Opening, 0 to 1; of a well nothing.
    pub(super) opening: f64,
    /// Flow, m3/s; of a gate on a well nothing, since its well shares out.
    pub(super) flow_m3s: f64,
}

impl Put {
    pub(super) fn new(opening: f64, flow_m3s: f64) -> Self {
        Self { opening, flow_m3s }
    }
}

/// Openings and flows of every outlet, and totals of every well, in the order of the site.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct Standing {
    /// Of gates on wells the opening alone; of the others both, nothing where no water passes.
    outlets: Vec<Put>,
    /// Total of each well, m3/s.
    wells: Vec<f64>,
}

impl Standing {
    /// How a setting stands; the order of its gates changes no digit.
    pub(super) fn of(site: &Site, setting: &Setting) -> Self {
        let mut sorted = setting.clone();
        sorted.gates.sort_by_key(|g| g.outlet);
        sorted.leaks.sort_by_key(|g| g.outlet);
        let asked = Asked::of(site, &sorted);
        let mut out =
            Self { outlets: vec![Put::default(); site.outlets.len()], wells: vec![0.0; site.wells.len()] };
        for gate in asked.direct.iter().filter(|g| g.flow_m3s > 0.0) {
            if let Some(put) = out.outlets.get_mut(gate.outlet) {
                *put = Put::new(gate.opening, gate.flow_m3s);
            }
        }
        for &(outlet, opening) in &asked.open {
            if let Some(put) = out.outlets.get_mut(outlet) {
                put.opening = opening;
            }
        }
        for &(well, flow_m3s) in &asked.totals {
            out.put(Moved::Well(well), Put::new(0.0, flow_m3s));
        }
        out
    }

    /// The same where what spills by itself passes what it passes in another.
    pub(super) fn spilling_as(mut self, site: &Site, other: &Self) -> Self {
        for (index, outlet) in site.outlets.iter().enumerate() {
            if intake::spills_by_itself(outlet) {
                self.put(Moved::Outlet(index), other.get(Moved::Outlet(index)));
            }
        }
        self
    }

    pub(super) fn get(&self, moved: Moved) -> Put {
        match moved {
            Moved::Gate(outlet) | Moved::Outlet(outlet) => {
                self.outlets.get(outlet).copied().unwrap_or_default()
            }
            Moved::Well(well) => Put::new(0.0, self.wells.get(well).copied().unwrap_or(0.0)),
        }
    }

    pub(super) fn put(&mut self, moved: Moved, put: Put) {
        match moved {
            Moved::Gate(outlet) | Moved::Outlet(outlet) => {
                if let Some(slot) = self.outlets.get_mut(outlet) {
                    *slot = put;
                }
            }
            Moved::Well(well) => {
                if let Some(slot) = self.wells.get_mut(well) {
                    *slot = put.flow_m3s;
                }
            }
        }
    }

    /// The same with one thing put elsewhere.
    #[must_use]
    pub(super) fn with(&self, moved: Moved, put: Put) -> Self {
        let mut out = self.clone();
        out.put(moved, put);
        out
    }

    /// Whether water passes a gate's well, or an outlet.
    pub(super) fn flows(&self, site: &Site, outlet: usize) -> bool {
        match site.outlets.get(outlet).and_then(|o| o.well) {
            Some(well) => self.get(Moved::Well(well)).flow_m3s > 0.0,
            None => self.get(Moved::Outlet(outlet)).flow_m3s > 0.0,
        }
    }

    /// What is asked of the outlets that `is_in` takes, and of their wells. Where no water passes everything is as good
    /// as shut.
    pub(super) fn asked(&self, site: &Site, is_in: impl Fn(usize) -> bool) -> Asked {
        let mut out = Asked::default();
        for (index, (outlet, put)) in site.outlets.iter().zip(&self.outlets).enumerate() {
            if !is_in(index) || !self.flows(site, index) {
                continue;
            }
            match outlet.well {
                None => out.direct.push(Gate { outlet: index, opening: put.opening, flow_m3s: put.flow_m3s }),
                Some(well) => {
                    if put.opening > 0.0 {
                        out.open.push((index, put.opening));
                    }
                    if out.totals.iter().all(|t| t.0 != well) {
                        out.totals.push((well, self.get(Moved::Well(well)).flow_m3s));
                    }
                }
            }
        }
        out
    }

    /// The bits that tell one standing from another as far as its water goes.
    pub(super) fn key(&self, site: &Site) -> Vec<u64> {
        let outlets = self.outlets.iter().enumerate().flat_map(|(index, put)| {
            let put = if self.flows(site, index) { *put } else { Put::default() };
            [put.opening.to_bits(), put.flow_m3s.to_bits()]
        });
        outlets.chain(self.wells.iter().map(|total| total.to_bits())).collect()
    }
}
