//! Slices of the column, prepared once for every integral over a zone.

use super::column::{OXYGEN_LOW_MG_L, Segment};

/// The column is cut at every node, and no slice is thicker than this share of the water depth (choice).
const THICKEST: f64 = 1.0 / 100.0;
/// Abscissa of the two-point Gauss rule on -1..1 (1/sqrt 3; exact for cubics).
pub(super) const GAUSS_TWO: f64 = 0.577_350_269_189_625_8;

/// Two Gauss points in each slice, as columns of numbers so that sums over a zone run through memory.
///
/// Slice `k` lies between `edges_m[k]` and `edges_m[k + 1]` and owns points `2 k` and `2 k + 1`.
#[derive(Debug, Clone, Default)]
pub struct Slices {
    /// Edges of the slices, rising, m.
    pub edges_m: Vec<f64>,
    /// Elevation of each point, m.
    pub z_m: Vec<f64>,
    /// Levelled density, kg/m3.
    pub density_kg_m3: Vec<f64>,
    /// Thickness the point stands for times width.
    pub weight: Vec<f64>,
    /// Temperature, C.
    pub temperature_c: Vec<f64>,
    /// Oxygen, mg/L; 0 where no reading reaches, so that sums hold only what was measured.
    pub oxygen_mg_l: Vec<f64>,
    /// Dissolved solids, g/kg.
    pub salt_g_per_kg: Vec<f64>,
    /// Suspended solids, mg/L.
    pub suspended_mg_l: Vec<f64>,
    /// 1 where no oxygen reading reaches, else 0.
    pub oxygen_missing: Vec<f64>,
    /// 1 where oxygen is below [`OXYGEN_LOW_MG_L`], else 0.
    pub oxygen_low: Vec<f64>,
}

impl Slices {
    pub(super) fn new(segments: &[Segment], depth_m: f64, density: impl Fn(&Segment, f64) -> f64) -> Self {
        let mut out = Self::default();
        if let Some(first) = segments.first() {
            out.edges_m.push(first.z[0]);
        }
        for s in segments {
            let height = s.z[1] - s.z[0];
            // a count of slices: at least one, at most a hundred and one per stretch
            let count = (height / (depth_m * THICKEST)).ceil().clamp(1.0, 101.0);
            let step = height / count;
            let mut k = 0.0;
            while k < count {
                let low = s.z[0] + k * step;
                k += 1.0;
                out.edges_m.push(if k < count { low + step } else { s.z[1] });
                for side in [-GAUSS_TWO, GAUSS_TWO] {
                    let z = low + 0.5 * step * (1.0 + side);
                    out.push(s, z, 0.5 * step, density(s, z));
                }
            }
        }
        out
    }

    fn push(&mut self, s: &Segment, z: f64, thickness: f64, density: f64) {
        let t = (z - s.z[0]) / (s.z[1] - s.z[0]);
        let at = |ends: [f64; 2]| ends[0] + t * (ends[1] - ends[0]);
        let oxygen = at(s.oxygen);
        self.z_m.push(z);
        self.density_kg_m3.push(density);
        self.weight.push(thickness * at(s.width));
        self.temperature_c.push(at(s.temperature));
        self.oxygen_mg_l.push(if s.oxygen_missing { 0.0 } else { oxygen });
        self.salt_g_per_kg.push(at(s.salt));
        self.suspended_mg_l.push(at(s.suspended));
        self.oxygen_missing.push(if s.oxygen_missing { 1.0 } else { 0.0 });
        let low = !s.oxygen_missing && oxygen < OXYGEN_LOW_MG_L;
        self.oxygen_low.push(if low { 1.0 } else { 0.0 });
    }
}
