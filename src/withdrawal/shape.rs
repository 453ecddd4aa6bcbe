//! The velocity across a zone and the water it blends.
//!
//! Methods: `docs/methods.md`, section 3.

use crate::profile::Column;

use super::zone::{Side, Zone};

/// Density differences below this do not shape the velocity, kg/m3 (choice: noise must not decide). From
/// here to twice this they come in by degrees (choice): a bare switch would be a jump in flow, since the
/// peak moves with it.
pub const NOISE_KG_M3: f64 = 1e-3;
/// A draw takes oxygen as missing when more of it than this comes from where no reading reaches (choice).
const MISSING_SHARE: f64 = 0.05;
/// Five-point Gauss-Legendre rule on -1..1 (Abramowitz & Stegun 1964, table 25.4; from memory, exactness
/// for ninth-degree polynomials is tested), for the slices that a limit or the peak cuts.
const GAUSS: [(f64, f64); 5] = [
    (-0.906_179_845_938_664, 0.236_926_885_056_189_08),
    (-0.538_469_310_105_683_1, 0.478_628_670_499_366_47),
    (0.0, 0.568_888_888_888_888_9),
    (0.538_469_310_105_683_1, 0.478_628_670_499_366_47),
    (0.906_179_845_938_664, 0.236_926_885_056_189_08),
];

/// The flow-weighted water of a zone.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Draw {
    /// Temperature, C.
    pub temperature_c: f64,
    /// Oxygen, mg/L; `None` when none was measured or too much comes from where no reading reaches.
    pub oxygen_mg_l: Option<f64>,
    /// Dissolved solids, g/kg.
    pub salt_g_per_kg: f64,
    /// Suspended solids, mg/L.
    pub suspended_mg_l: f64,
    /// Share of the flow from where no oxygen reading reaches.
    pub oxygen_missing_share: f64,
    /// Share of the flow from water with less than 1 mg/L of oxygen.
    pub oxygen_low_share: f64,
}

/// Velocity on one side of the peak, relative to the greatest: v = w (1 - x)^2 + (1 - w)(1 - x^2),
/// x = y drho/(Y drho_m), or y/Y where drho_m is noise.
///
/// The two end forms: Bohan & Grace 1973 (recalled). The weight w is ours (choice).
struct HalfShape {
    peak_m: f64,
    peak_density: f64,
    /// x = (z - peak) (by_distance + by_density (rho - peak density)); both signed so that x is not negative.
    by_distance: f64,
    by_density: f64,
    /// 1 - 2 w: the two forms share 1 - x, which leaves 1 + (1 - 2 w) x.
    skew: f64,
}

impl HalfShape {
    fn new(column: &Column, zone: &Zone, side: &Side) -> Self {
        let peak_density = column.density_kg_m3(zone.peak_m);
        let span = side.limit_m - zone.peak_m;
        let difference = column.density_kg_m3(side.limit_m) - peak_density;
        let told = (difference.abs() / NOISE_KG_M3 - 1.0).clamp(0.0, 1.0);
        let over = |whole: f64| if whole == 0.0 { 0.0 } else { 1.0 / whole };
        Self {
            peak_m: zone.peak_m,
            peak_density,
            by_distance: (1.0 - told) * over(span),
            by_density: told * over(span * difference),
            skew: 1.0 - 2.0 * side.free_weight,
        }
    }

    #[inline]
    fn velocity(&self, z: f64, density: f64) -> f64 {
        let x = (z - self.peak_m) * (self.by_distance + self.by_density * (density - self.peak_density));
        // the limit itself is found to round-off
        let x = if x < 1.0 { x } else { 1.0 };
        (1.0 - x) * (1.0 + self.skew * x)
    }
}

/// Sums over a zone: flow and flow times what it carries.
#[derive(Default)]
struct Sums {
    flow: f64,
    temperature: f64,
    oxygen: f64,
    salt: f64,
    suspended: f64,
    missing: f64,
    low: f64,
}

impl Zone {
    /// Velocity at an elevation relative to the greatest, 0 outside the zone.
    pub fn velocity(&self, column: &Column, z: f64) -> f64 {
        if z < self.lower.limit_m || z > self.upper.limit_m {
            return 0.0;
        }
        let side = if z < self.peak_m { &self.lower } else { &self.upper };
        HalfShape::new(column, self, side).velocity(z, column.density_kg_m3(z))
    }

    /// Shares of the zone's flow by slice: lower edge, upper edge (m) and share; they sum to 1.
    pub fn shares(&self, column: &Column) -> Vec<(f64, f64, f64)> {
        let mut out = Vec::new();
        let mut total = 0.0;
        for side in [&self.lower, &self.upper] {
            let shape = HalfShape::new(column, self, side);
            let (from, to) = ordered(side.limit_m, self.peak_m);
            for (low, high) in pieces(&column.slices().edges_m, from, to) {
                let mut sums = Sums::default();
                shape.gauss(column, low, high, &mut sums);
                total += sums.flow;
                out.push((low, high, sums.flow));
            }
        }
        out.sort_by(|a, b| a.0.total_cmp(&b.0));
        for share in &mut out {
            share.2 /= total;
        }
        out
    }

    /// The flow-weighted water of the zone. `None` for a zone without thickness.
    pub fn draw(&self, column: &Column) -> Option<Draw> {
        let mut sums = Sums::default();
        for side in [&self.lower, &self.upper] {
            let shape = HalfShape::new(column, self, side);
            let (from, to) = ordered(side.limit_m, self.peak_m);
            shape.sum(column, from, to, &mut sums);
        }
        if sums.flow <= 0.0 {
            return None;
        }
        let share = 1.0 / sums.flow;
        let oxygen_missing_share = sums.missing * share;
        let known_flow = sums.flow - sums.missing;
        let known = column.has_oxygen() && oxygen_missing_share <= MISSING_SHARE;
        Some(Draw {
            temperature_c: sums.temperature * share,
            oxygen_mg_l: known.then_some(sums.oxygen / known_flow),
            salt_g_per_kg: sums.salt * share,
            suspended_mg_l: sums.suspended * share,
            oxygen_missing_share,
            oxygen_low_share: sums.low * share,
        })
    }
}

fn ordered(a: f64, b: f64) -> (f64, f64) {
    if a <= b { (a, b) } else { (b, a) }
}

/// The stretches between `from` and `to`, cut at every edge.
fn pieces(edges: &[f64], from: f64, to: f64) -> impl Iterator<Item = (f64, f64)> + '_ {
    let first = edges.partition_point(|&e| e <= from);
    let last = edges.partition_point(|&e| e < to);
    let inner = if first < last { &edges[first..last] } else { &[] };
    let starts = std::iter::once(from).chain(inner.iter().copied());
    let ends = inner.iter().copied().chain(std::iter::once(to));
    starts.zip(ends).filter(|(low, high)| high > low)
}

impl HalfShape {
    /// Adds the zone's side between two elevations: whole slices from their prepared points, the slices that
    /// `from` and `to` cut by the five-point rule.
    fn sum(&self, column: &Column, from: f64, to: f64, sums: &mut Sums) {
        let slices = column.slices();
        let edges = &slices.edges_m;
        let first = edges.partition_point(|&e| e < from);
        let last = edges.partition_point(|&e| e <= to);
        if first >= last {
            return self.gauss(column, from, to, sums);
        }
        self.gauss(column, from, edges[first], sums);
        self.gauss(column, edges[last - 1], to, sums);
        let range = 2 * first..2 * (last - 1);
        let z = &slices.z_m[range.clone()];
        let n = z.len();
        let density = &slices.density_kg_m3[range.clone()][..n];
        let weight = &slices.weight[range.clone()][..n];
        let temperature = &slices.temperature_c[range.clone()][..n];
        let oxygen = &slices.oxygen_mg_l[range.clone()][..n];
        let salt = &slices.salt_g_per_kg[range.clone()][..n];
        let suspended = &slices.suspended_mg_l[range.clone()][..n];
        let missing = &slices.oxygen_missing[range.clone()][..n];
        let low = &slices.oxygen_low[range][..n];
        for i in 0..n {
            let flow = self.velocity(z[i], density[i]) * weight[i];
            sums.flow += flow;
            sums.temperature += flow * temperature[i];
            sums.oxygen += flow * oxygen[i];
            sums.salt += flow * salt[i];
            sums.suspended += flow * suspended[i];
            sums.missing += flow * missing[i];
            sums.low += flow * low[i];
        }
    }

    fn gauss(&self, column: &Column, from: f64, to: f64, sums: &mut Sums) {
        let half = 0.5 * (to - from);
        if half <= 0.0 {
            return;
        }
        for (at, share) in GAUSS {
            let z = from + half * (1.0 + at);
            let (density, width, reading) = column.point(z);
            let flow = self.velocity(z, density) * width * half * share;
            sums.flow += flow;
            sums.temperature += flow * reading.temperature_c;
            sums.salt += flow * reading.salt_g_per_kg;
            sums.suspended += flow * reading.suspended_mg_l;
            match reading.oxygen_mg_l {
                Some(oxygen) => {
                    sums.oxygen += flow * oxygen;
                    if oxygen < crate::profile::OXYGEN_LOW_MG_L {
                        sums.low += flow;
                    }
                }
                None => sums.missing += flow,
            }
        }
    }
}
