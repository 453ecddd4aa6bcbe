//! The column of water: temperature, solids and oxygen linear in elevation between samples, density
//! computed from them where it is asked for, and levelled so that it never falls with depth.
//!
//! Everything that needs a limit or a shape asks the column; what is blended is taken from it as measured.
//!
//! Methods: `docs/methods.md`, section 2.

use super::levelled::levelled;
use super::samples::{
    OxygenSample, Sample, crossing_m, density_turn_m, interpolate, oxygen_at, oxygen_reach, sample_at,
};
use super::slices::Slices;
use super::stretch::{Law, Stretch};

/// Oxygen below this makes sulphide, iron and manganese likely, mg/L (common practice, no source).
pub const OXYGEN_LOW_MG_L: f64 = 1.0;
/// Nodes closer than this are one, m.
const SAME_M: f64 = 1e-9;

/// Width of the pool as a function of elevation: the elevations where it bends, and the function.
pub struct Widths<'a> {
    /// Where the width bends, rising, m.
    pub nodes_m: Vec<f64>,
    /// Width at an elevation, any constant factor.
    pub at: &'a dyn Fn(f64) -> f64,
}

/// What a column is made of.
pub struct Source<'a> {
    /// Bed at the dam, m.
    pub bed_m: f64,
    /// Water surface, m.
    pub surface_m: f64,
    /// Samples, rising, no two at one elevation, at least one.
    pub samples: &'a [Sample],
    /// Oxygen samples, rising; empty where none was measured.
    pub oxygen: &'a [OxygenSample],
    /// Density of suspended solids, kg/m3.
    pub solids_kg_m3: f64,
    /// Widths, where the site gives them.
    pub widths: Option<Widths<'a>>,
}

/// The column, ready to be asked.
#[derive(Debug, Clone)]
pub struct Column {
    bed_m: f64,
    surface_m: f64,
    nodes_m: Vec<f64>,
    density: Vec<f64>,
    stretches: Vec<Stretch>,
    slices: Slices,
    has_oxygen: bool,
    has_width: bool,
}

/// A reading of the column at one elevation, as measured.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Reading {
    /// Temperature, C.
    pub temperature_c: f64,
    /// Dissolved solids, g/kg.
    pub salt_g_per_kg: f64,
    /// Suspended solids, mg/L.
    pub suspended_mg_l: f64,
    /// Dissolved oxygen, mg/L; `None` where no reading reaches.
    pub oxygen_mg_l: Option<f64>,
}

impl Column {
    /// Builds the column. `None` when there is no sample or no water between bed and surface.
    pub fn new(source: &Source) -> Option<Self> {
        Self::build(source, None)
    }

    /// A column whose density is given at the samples and linear between them, kg/m3; temperature and
    /// oxygen are then mere tracers. For worked cases and for members of a group computed as given.
    pub fn given(source: &Source, density_kg_m3: &[f64]) -> Option<Self> {
        Self::build(source, Some(density_kg_m3))
    }

    fn build(source: &Source, given: Option<&[f64]>) -> Option<Self> {
        let &Source { bed_m, surface_m, samples, oxygen, solids_kg_m3, .. } = source;
        if samples.is_empty() || surface_m <= bed_m || given.is_some_and(|g| g.len() != samples.len()) {
            return None;
        }
        // stage one: the nodes density needs
        let mut nodes = vec![bed_m, surface_m];
        nodes.extend(samples.iter().map(|s| s.elevation_m));
        if given.is_none() {
            nodes.extend(samples.windows(2).filter_map(|w| density_turn_m(&w[0], &w[1], solids_kg_m3)));
        }
        tidy(&mut nodes, bed_m, surface_m);
        let measured: Vec<f64> = nodes
            .iter()
            .map(|&z| {
                if let Some(given) = given {
                    return interpolate(samples, z, |i| given[i]);
                }
                sample_at(samples, z).density_kg_m3(solids_kg_m3)
            })
            .collect();
        let level = levelled(&nodes, &measured);
        // stage two: the nodes where a tracer or the width bends
        let mut all = nodes.clone();
        let reach = oxygen_reach(oxygen);
        all.extend(oxygen.iter().map(|o| o.elevation_m));
        all.extend(oxygen.windows(2).filter_map(|w| crossing_m(w, OXYGEN_LOW_MG_L)));
        if let Some((low, high)) = reach {
            all.extend([low, high]);
        }
        if let Some(widths) = &source.widths {
            all.extend_from_slice(&widths.nodes_m);
        }
        tidy(&mut all, bed_m, surface_m);
        let mut stretches = Vec::with_capacity(all.len() - 1);
        let mut k = 0;
        for ends in all.windows(2) {
            let middle = 0.5 * (ends[0] + ends[1]);
            while k + 2 < nodes.len() && nodes[k + 1] <= middle {
                k += 1;
            }
            let (measured, level) = ([measured[k], measured[k + 1]], [level[k], level[k + 1]]);
            let [low, high] = [sample_at(samples, ends[0]), sample_at(samples, ends[1])];
            let fresh = [low, high].iter().all(|s| s.salt_g_per_kg == 0.0 && s.suspended_mg_l == 0.0);
            let law = match given {
                Some(g) => Law::Given([ends[0], ends[1]].map(|z| interpolate(samples, z, |i| g[i]))),
                None if fresh => Law::Fresh,
                None => Law::Solids(solids_kg_m3),
            };
            let (law, shift, scale) = levelled_law(law, measured, level);
            stretches.push(Stretch {
                z_m: [ends[0], ends[1]],
                per_m: 1.0 / (ends[1] - ends[0]),
                temperature_c: [low.temperature_c, high.temperature_c],
                salt_g_per_kg: [low.salt_g_per_kg, high.salt_g_per_kg],
                suspended_mg_l: [low.suspended_mg_l, high.suspended_mg_l],
                oxygen_mg_l: [oxygen_at(oxygen, ends[0]), oxygen_at(oxygen, ends[1])],
                width: source.widths.as_ref().map_or([1.0, 1.0], |w| [(w.at)(ends[0]), (w.at)(ends[1])]),
                oxygen_missing: reach.is_none_or(|(low, high)| middle < low || middle > high),
                law,
                shift,
                scale,
            });
        }
        let mut density: Vec<f64> = stretches.iter().map(|s| s.density_kg_m3(s.z_m[0])).collect();
        density.push(stretches.last().map(|s| s.density_kg_m3(s.z_m[1]))?);
        // round-off of the map must not undo the levelling
        for i in 1..density.len() {
            density[i] = density[i].min(density[i - 1]);
        }
        let slices = Slices::new(&stretches, surface_m - bed_m);
        Some(Self {
            bed_m,
            surface_m,
            nodes_m: all,
            density,
            stretches,
            slices,
            has_oxygen: !oxygen.is_empty(),
            has_width: source.widths.is_some(),
        })
    }

    /// Bed, m.
    pub fn bed_m(&self) -> f64 {
        self.bed_m
    }

    /// Water surface, m.
    pub fn surface_m(&self) -> f64 {
        self.surface_m
    }

    /// Elevations between which everything is smooth, rising from bed to surface, m.
    pub fn nodes_m(&self) -> &[f64] {
        &self.nodes_m
    }

    /// Levelled density at the nodes, kg/m3; never rises upward.
    pub fn node_density_kg_m3(&self) -> &[f64] {
        &self.density
    }

    /// Whether any oxygen was measured.
    pub fn has_oxygen(&self) -> bool {
        self.has_oxygen
    }

    /// Whether the site gives widths.
    pub fn has_width(&self) -> bool {
        self.has_width
    }

    /// Slices for integrals.
    pub fn slices(&self) -> &Slices {
        &self.slices
    }

    /// Index of the stretch that holds an elevation, the nearest beyond bed and surface.
    pub fn holding(&self, z: f64) -> usize {
        self.slices.stretch[self.slices.holding(z)]
    }

    /// The stretch between node `i` and node `i + 1`.
    #[inline]
    pub fn stretch(&self, i: usize) -> &Stretch {
        &self.stretches[i]
    }

    /// Levelled density at an elevation, kg/m3; held beyond bed and surface.
    pub fn density_kg_m3(&self, z: f64) -> f64 {
        let z = z.clamp(self.bed_m, self.surface_m);
        self.stretch(self.holding(z)).density_kg_m3(z)
    }

    /// Levelled density inside stretch `i`, kg/m3.
    #[inline]
    pub fn density_in(&self, i: usize, z: f64) -> f64 {
        self.stretches[i].density_kg_m3(z)
    }

    /// What was measured at an elevation.
    pub fn reading(&self, z: f64) -> Reading {
        let z = z.clamp(self.bed_m, self.surface_m);
        self.stretch(self.holding(z)).reading(z)
    }
}

/// Law, shift and scale that carry measured density of a stretch onto the levelled one. A stretch whose ends
/// were pooled together is flat; one whose ends were pooled apart still falls upward, so the scale exists.
fn levelled_law(law: Law, measured: [f64; 2], level: [f64; 2]) -> (Law, f64, f64) {
    let (fall, kept) = (measured[0] - measured[1], level[0] - level[1]);
    if kept <= 0.0 || fall <= 0.0 {
        (Law::Flat(level[0]), 0.0, 1.0)
    } else {
        let scale = kept / fall;
        (law, level[0] - scale * measured[0], scale)
    }
}

fn tidy(nodes: &mut Vec<f64>, bed_m: f64, surface_m: f64) {
    nodes.retain(|z| (bed_m..=surface_m).contains(z));
    nodes.sort_by(f64::total_cmp);
    nodes.dedup_by(|a, b| (*a - *b).abs() < SAME_M);
    // the surface itself must survive a sample just below it
    if let Some(last) = nodes.last_mut() {
        *last = surface_m;
    }
}
