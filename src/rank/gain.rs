//! What a conduit adds to the oxygen of the water that one part of the dam sends through it. A unit of the ranking is
//! one conduit: a well with its gates, or an outlet on no well.
//!
//! Methods: `docs/methods.md`, sections 5 and 10.

use crate::mix::learned_mg_l;
use crate::site::Site;
use crate::water::Aeration;

use super::choices::{Levels, MOST_BLOCKS, Part};

/// Flow, and flow times temperature, oxygen and salt.
type Sums = [f64; 4];

/// The conduit of a choice, and what would pass it if nothing else drew through the same levels.
#[derive(Debug, Clone, Copy)]
pub(super) struct Conduit {
    /// First outlet of its unit: each unit has one that no other has.
    unit: usize,
    aeration: Option<Aeration>,
    /// Gain that was learned, mg/L.
    learned: Option<f64>,
    alone: [Sums; MOST_BLOCKS],
}

impl Conduit {
    /// The conduit of some outlets, before any water; `None` where it adds nothing.
    pub(super) fn of(site: &Site, outlets: &[usize]) -> Option<Self> {
        let unit = *outlets.first()?;
        let aeration = site.aeration(unit).map(|aeration| aeration.at(0.5));
        let learned = site.learned_gain_mg_l();
        if aeration.is_none() && learned.is_none() {
            return None;
        }
        Some(Self { unit, aeration, learned, alone: [[0.0; 4]; MOST_BLOCKS] })
    }

    /// Adds the water of one curve at the flow of each block.
    pub(super) fn add(&mut self, levels: &Levels, curve: Option<usize>, flows: &[f64; MOST_BLOCKS]) {
        for (sums, &flow) in self.alone.iter_mut().zip(flows) {
            levels.carry(curve, flow, flow, sums);
        }
    }

    /// What the conduit adds to flow times oxygen of each block.
    pub(super) fn added(&self, site: &Site) -> [f64; MOST_BLOCKS] {
        self.alone.map(|sums| self.gain(site, sums))
    }

    /// What the conduit adds to flow times oxygen.
    fn gain(&self, site: &Site, [flow, heat, oxygen, salt]: Sums) -> f64 {
        if flow <= 0.0 {
            return 0.0;
        }
        let (temperature_c, oxygen_mg_l) = (heat / flow, oxygen / flow);
        let saturation = site.saturation_below_mg_l(temperature_c, salt / flow);
        let aerated =
            self.aeration.map_or(oxygen_mg_l, |a| a.below_mg_l(oxygen_mg_l, saturation, temperature_c));
        let below = self.learned.map_or(aerated, |gain_mg_l| learned_mg_l(aerated, gain_mg_l, saturation));
        flow * (below - oxygen_mg_l)
    }
}

impl Levels<'_> {
    /// Adds what a part of a level's flow carries to sums.
    fn carry(&self, curve: Option<usize>, level_m3s: f64, flow: f64, sums: &mut Sums) {
        let Some(curve) = curve.and_then(|c| self.curves.get(c)).filter(|_| flow > 0.0) else { return };
        let water = curve.at(level_m3s);
        let oxygen = water.oxygen_mg_l.unwrap_or(0.0);
        let carried = [1.0, water.temperature_c, oxygen, water.salt_g_per_kg];
        for (sum, each) in sums.iter_mut().zip(carried) {
            *sum += flow * each;
        }
    }

    /// Makes good what conduits add where several parts draw through one level, so that each takes in other water than
    /// alone. `shared` has a bit for each slot with several parts.
    pub(super) fn gain_together(&self, parts: &[&Part], shared: u64, lanes: &mut [f64]) {
        let draws_together = |part: &Part| shared & (1 << part.slot) != 0;
        for (at, part) in parts.iter().enumerate() {
            let Some(conduit) = part.conduit else { continue };
            let same = |p: &Part| p.conduit.is_some_and(|c| c.unit == conduit.unit);
            if parts.iter().take(at).any(|p| same(p)) {
                continue;
            }
            for block in 0..self.lanes.blocks {
                let mut sums = conduit.alone[block];
                for mine in parts.iter().filter(|p| same(p) && draws_together(p)) {
                    let beside = || parts.iter().filter(|p| p.slot == mine.slot);
                    let code: usize = beside().map(|p| p.code).sum();
                    let level_m3s: f64 = beside().map(|p| p.flows_m3s[block]).sum();
                    let flow = mine.flows_m3s[block];
                    let mut alone = [0.0; 4];
                    self.carry(self.slots[mine.slot].curves[mine.code], flow, flow, &mut alone);
                    self.carry(self.slots[mine.slot].curves[code], level_m3s, flow, &mut sums);
                    for (sum, was) in sums.iter_mut().zip(alone) {
                        *sum -= was;
                    }
                }
                let gain = |sums| conduit.gain(self.site, sums);
                lanes[3 * block + 2] += gain(sums) - gain(conduit.alone[block]);
            }
        }
    }
}
