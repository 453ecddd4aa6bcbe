//! Slices of the column, prepared once for every integral over a zone.

use super::finder::Finder;
use super::stretch::Stretch;

/// The column is cut at every node, and no slice is thicker than this share of the water depth (choice: thin
/// zones, of three or four slices, are then blended to about 0.001 C; a hundredth left 0.003 C).
const THICKEST: f64 = 1.0 / 180.0;
/// Abscissa of the two-point Gauss rule on -1..1 (1/sqrt 3; exact for cubics).
pub(super) const GAUSS_TWO: f64 = 0.577_350_269_189_625_8;

/// Two Gauss points in each slice, as columns of numbers so that sums over a zone run through memory, two
/// lanes at a time.
///
/// Slice `k` lies between `edges_m[k]` and `edges_m[k + 1]`.
#[derive(Debug, Clone, Default)]
pub struct Slices {
    /// Edges of the slices, rising, m.
    pub edges_m: Vec<f64>,
    /// Stretch of the column in which a slice lies.
    pub stretch: Vec<usize>,
    /// Elevation of each point, m.
    pub z_m: Vec<[f64; 2]>,
    /// Levelled density, kg/m3.
    pub density_kg_m3: Vec<[f64; 2]>,
    /// Thickness the point stands for times width.
    pub weight: Vec<[f64; 2]>,
    /// Mass of the water from the bed to each edge above that of as much water of the bed's density, kg/m2.
    pub excess_kg_m2: Vec<f64>,
    /// Temperature, C.
    pub temperature_c: Vec<[f64; 2]>,
    /// Oxygen, mg/L; 0 where no reading reaches, so that sums hold only what was measured.
    pub oxygen_mg_l: Vec<[f64; 2]>,
    /// Dissolved solids, g/kg.
    pub salt_g_per_kg: Vec<[f64; 2]>,
    /// Suspended solids, mg/L.
    pub suspended_mg_l: Vec<[f64; 2]>,
    /// No oxygen reading reaches the slice.
    pub oxygen_missing: Vec<bool>,
    /// Oxygen is known and below [`OXYGEN_LOW_MG_L`](super::OXYGEN_LOW_MG_L).
    pub oxygen_low: Vec<bool>,
    /// No solids anywhere, and oxygen known and not low everywhere: sums need not look at the last four.
    pub plain: bool,
    finder: Finder,
}

impl Slices {
    pub(super) fn new(stretches: &[Stretch], depth_m: f64) -> Self {
        let mut out = Self::default();
        if let Some(first) = stretches.first() {
            out.edges_m.push(first.z_m[0]);
        }
        for (i, s) in stretches.iter().enumerate() {
            let height = s.z_m[1] - s.z_m[0];
            // a count of slices: at least one, and no more than a stretch of the whole depth has
            // the last digit of a converted unit must not add one
            let count = (height / (depth_m * THICKEST) - 1e-9).ceil().clamp(1.0, 1.0 / THICKEST + 1.0);
            let step = height / count;
            let mut k = 0.0;
            while k < count {
                let low = s.z_m[0] + k * step;
                k += 1.0;
                out.edges_m.push(if k < count { low + step } else { s.z_m[1] });
                out.stretch.push(i);
                out.push(s, [-GAUSS_TWO, GAUSS_TWO].map(|at| low + 0.5 * step * (1.0 + at)), 0.5 * step);
            }
        }
        out.finder = Finder::new(&out.edges_m);
        out.excess_kg_m2 = excess_kg_m2(&out.edges_m, &out.density_kg_m3, stretches);
        let none = |values: &[[f64; 2]]| values.iter().flatten().all(|&value| value == 0.0);
        let never = |flags: &[bool]| !flags.contains(&true);
        out.plain = none(&out.salt_g_per_kg)
            && none(&out.suspended_mg_l)
            && never(&out.oxygen_missing)
            && never(&out.oxygen_low);
        out
    }

    fn push(&mut self, s: &Stretch, z: [f64; 2], thickness: f64) {
        let readings = z.map(|z| s.reading(z));
        self.z_m.push(z);
        self.density_kg_m3.push(z.map(|z| s.density_kg_m3(z)));
        self.weight.push(z.map(|z| thickness * s.width(z)));
        self.temperature_c.push(readings.map(|r| r.temperature_c));
        self.oxygen_mg_l.push(readings.map(|r| r.oxygen_mg_l.unwrap_or(0.0)));
        self.salt_g_per_kg.push(readings.map(|r| r.salt_g_per_kg));
        self.suspended_mg_l.push(readings.map(|r| r.suspended_mg_l));
        self.oxygen_missing.push(s.oxygen_missing);
        self.oxygen_low.push(s.oxygen_low());
    }

    /// The slice that holds an elevation; the nearest beyond bed and surface.
    #[inline]
    pub fn holding(&self, z: f64) -> usize {
        self.finder.find(&self.edges_m, z)
    }
}

/// Sums of the slices' excess mass over water of the bed's density, from the bed to each edge, kg/m2.
fn excess_kg_m2(edges_m: &[f64], density_kg_m3: &[[f64; 2]], stretches: &[Stretch]) -> Vec<f64> {
    let bed_kg_m3 = stretches.first().map_or(0.0, |s| s.density_kg_m3(s.z_m[0]));
    let mut sum = 0.0;
    let slices = edges_m.windows(2).zip(density_kg_m3).map(|(ends, [a, b])| {
        sum += 0.5 * (ends[1] - ends[0]) * ((a - bed_kg_m3) + (b - bed_kg_m3));
        sum
    });
    std::iter::once(0.0).chain(slices).collect()
}
