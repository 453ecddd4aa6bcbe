//! The velocity across a zone and the water it blends.
//!
//! Methods: `docs/methods.md`, section 3.

use std::ops::Range;

use crate::profile::{Column, Slices};

use super::zone::{Side, Zone};

/// Density differences below this do not shape the velocity, kg/m3 (choice: noise must not decide). From
/// here to twice this they come in by degrees (choice): a bare switch would be a jump in flow, since the
/// peak moves with it.
pub const NOISE_KG_M3: f64 = 1e-3;
/// A side thinner than this has no shape, m (choice).
const THIN_M: f64 = 1e-9;
/// A draw takes oxygen as missing when more of it than this comes from where no reading reaches (choice).
const MISSING_SHARE: f64 = 0.05;
/// Three-point Gauss-Legendre rule on -1..1 (Abramowitz & Stegun 1964, table 25.4; from memory: sqrt(3/5),
/// 5/9, 8/9) for the slices that a limit or the peak cuts: exact for the velocity of a linear density times
/// a linear tracer, so that a zone within one slice loses nothing.
const GAUSS: [(f64, f64); 3] = [
    (-0.774_596_669_241_483_4, 0.555_555_555_555_555_6),
    (0.0, 0.888_888_888_888_888_8),
    (0.774_596_669_241_483_4, 0.555_555_555_555_555_6),
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

/// An elevation, the slice that holds it, and the density there.
#[derive(Clone, Copy)]
struct Place {
    z: f64,
    slice: usize,
    density: f64,
}

impl Place {
    fn new(column: &Column, z: f64) -> Self {
        let slice = column.slices().holding(z);
        Self { z, slice, density: column.stretch(column.slices().stretch[slice]).density_kg_m3(z) }
    }
}

/// Velocity on one side of the peak, relative to the greatest: v = w (1 - x)^2 + (1 - w)(1 - x^2),
/// x = y drho/(Y drho_m), or y/Y where drho_m is noise.
///
/// The two end forms: Bohan & Grace 1973 (recalled). The weight w is ours (choice).
struct HalfShape {
    peak_m: f64,
    /// x = (z - peak) (by_distance + by_density rho).
    by_distance: f64,
    by_density: f64,
    /// 1 - 2 w: the two forms share 1 - x, which leaves 1 + (1 - 2 w) x.
    skew: f64,
}

impl HalfShape {
    /// The side that ends at `limit`, of a zone with its peak at `peak`.
    fn new(side: &Side, limit: &Place, peak: &Place) -> Self {
        let span = limit.z - peak.z;
        let difference = limit.density - peak.density;
        let told = (difference.abs() / NOISE_KG_M3 - 1.0).clamp(0.0, 1.0);
        // a side without thickness is all peak
        let over_span = if span.abs() < THIN_M { 0.0 } else { 1.0 / span };
        let by_density = if told > 0.0 { told * over_span / difference } else { 0.0 };
        Self {
            peak_m: peak.z,
            by_distance: (1.0 - told) * over_span - by_density * peak.density,
            by_density,
            skew: 1.0 - 2.0 * side.free_weight,
        }
    }

    #[inline]
    fn velocity(&self, z: f64, density: f64) -> f64 {
        let x = (z - self.peak_m) * (self.by_distance + self.by_density * density);
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
    /// Both sides of the peak: from where to where, and the shape between.
    fn sides(&self, column: &Column) -> [(Place, Place, HalfShape); 2] {
        let place = |z: f64| Place::new(column, z);
        let [low, peak, high] = [self.lower.limit_m, self.peak_m, self.upper.limit_m].map(place);
        let below = HalfShape::new(&self.lower, &low, &peak);
        let above = HalfShape::new(&self.upper, &high, &peak);
        [(low, peak, below), (peak, high, above)]
    }

    /// Velocity at an elevation relative to the greatest, 0 outside the zone.
    pub fn velocity(&self, column: &Column, z: f64) -> f64 {
        if z < self.lower.limit_m || z > self.upper.limit_m {
            return 0.0;
        }
        let [(.., below), (.., above)] = self.sides(column);
        let shape = if z < self.peak_m { below } else { above };
        shape.velocity(z, column.density_kg_m3(z))
    }

    /// Shares of the zone's flow by slice: lower edge, upper edge (m) and share; they sum to 1.
    pub fn shares(&self, column: &Column) -> Vec<(f64, f64, f64)> {
        let edges = &column.slices().edges_m;
        let mut out = Vec::new();
        let mut total = 0.0;
        for (from, to, shape) in self.sides(column) {
            for slice in from.slice..=to.slice {
                let (low, high) = (edges[slice].max(from.z), edges[slice + 1].min(to.z));
                if high > low {
                    let mut sums = Sums::default();
                    shape.part(column, slice, [low, high], &mut sums);
                    total += sums.flow;
                    out.push((low, high, sums.flow));
                }
            }
        }
        for share in &mut out {
            share.2 /= total;
        }
        out
    }

    /// Share of the zone's flow from water colder than a temperature (C), 0 to 1.
    pub fn colder_share(&self, column: &Column, threshold_c: f64) -> f64 {
        let edges = &column.slices().edges_m;
        let (mut cold, mut all) = (0.0, 0.0);
        for (from, to, shape) in self.sides(column) {
            for slice in from.slice..=to.slice {
                let (low, high) = (edges[slice].max(from.z), edges[slice + 1].min(to.z));
                if high <= low {
                    continue;
                }
                let flow = |ends: [f64; 2]| {
                    let mut sums = Sums::default();
                    if ends[1] > ends[0] {
                        shape.part(column, slice, ends, &mut sums);
                    }
                    sums.flow
                };
                all += flow([low, high]);
                // temperature is linear in the slice, so what is colder ends where it crosses the threshold
                let stretch = column.stretch(column.slices().stretch[slice]);
                let [below, above] = stretch.temperature_c;
                let crossing = stretch.z_m[0]
                    + (threshold_c - below) / (above - below) * (stretch.z_m[1] - stretch.z_m[0]);
                cold += match (below < threshold_c, above < threshold_c) {
                    (true, true) => flow([low, high]),
                    (false, false) => 0.0,
                    (true, false) => flow([low, high.min(crossing)]),
                    (false, true) => flow([low.max(crossing), high]),
                };
            }
        }
        if all > 0.0 { cold / all } else { 0.0 }
    }

    /// The flow-weighted water of the zone. `None` for a zone without thickness.
    pub fn draw(&self, column: &Column) -> Option<Draw> {
        let mut sums = Sums::default();
        for (from, to, shape) in self.sides(column) {
            shape.sum(column, &from, &to, &mut sums);
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

impl HalfShape {
    /// Adds the side between two elevations: whole slices from their prepared points, the slices that the
    /// ends cut by the three-point rule.
    fn sum(&self, column: &Column, from: &Place, to: &Place, sums: &mut Sums) {
        let edges = &column.slices().edges_m;
        if from.slice == to.slice {
            return self.part(column, from.slice, [from.z, to.z], sums);
        }
        self.part(column, from.slice, [from.z, edges[from.slice + 1]], sums);
        self.part(column, to.slice, [edges[to.slice], to.z], sums);
        let whole = from.slice + 1..to.slice;
        if column.slices().plain {
            self.whole::<true>(column.slices(), whole, sums);
        } else {
            self.whole::<false>(column.slices(), whole, sums);
        }
    }

    /// Adds whole slices; in `PLAIN` water only flow, temperature and oxygen. The two points of a slice are two
    /// lanes that need not wait for each other.
    fn whole<const PLAIN: bool>(&self, slices: &Slices, range: Range<usize>, sums: &mut Sums) {
        let mut lanes = [[0.0; 2]; 5];
        let n = range.len();
        let z = &slices.z_m[range.clone()][..n];
        let density = &slices.density_kg_m3[range.clone()][..n];
        let weight = &slices.weight[range.clone()][..n];
        let temperature = &slices.temperature_c[range.clone()][..n];
        let oxygen = &slices.oxygen_mg_l[range.clone()][..n];
        let salt = &slices.salt_g_per_kg[range.clone()][..n];
        let suspended = &slices.suspended_mg_l[range.clone()][..n];
        let missing = &slices.oxygen_missing[range.clone()][..n];
        let low = &slices.oxygen_low[range][..n];
        for k in 0..n {
            let flow = [0, 1].map(|i| self.velocity(z[k][i], density[k][i]) * weight[k][i]);
            add(&mut lanes[0], flow);
            add(&mut lanes[1], times(flow, temperature[k]));
            add(&mut lanes[2], times(flow, oxygen[k]));
            if !PLAIN {
                add(&mut lanes[3], times(flow, salt[k]));
                add(&mut lanes[4], times(flow, suspended[k]));
                let flow = flow[0] + flow[1];
                sums.missing += if missing[k] { flow } else { 0.0 };
                sums.low += if low[k] { flow } else { 0.0 };
            }
        }
        let [flow, temperature, oxygen, salt, suspended] = lanes.map(|[a, b]| a + b);
        sums.flow += flow;
        sums.temperature += temperature;
        sums.oxygen += oxygen;
        sums.salt += salt;
        sums.suspended += suspended;
    }

    /// Adds a part of one slice. All that a stretch carries is linear in it, so the flow and its moment about
    /// the lower end do for every tracer.
    fn part(&self, column: &Column, slice: usize, [from, to]: [f64; 2], sums: &mut Sums) {
        let half = 0.5 * (to - from);
        let stretch = column.stretch(column.slices().stretch[slice]);
        let (mut flow, mut moment) = (0.0, 0.0);
        for (at, share) in GAUSS {
            let z = from + half * (1.0 + at);
            let here = self.velocity(z, stretch.density_kg_m3(z)) * stretch.width(z) * share;
            flow += here;
            moment += here * stretch.share(z);
        }
        (flow, moment) = (half * flow, half * moment);
        let carried = |ends: [f64; 2]| ends[0] * (flow - moment) + ends[1] * moment;
        sums.flow += flow;
        sums.temperature += carried(stretch.temperature_c);
        sums.salt += carried(stretch.salt_g_per_kg);
        sums.suspended += carried(stretch.suspended_mg_l);
        if stretch.oxygen_missing {
            sums.missing += flow;
        } else {
            sums.oxygen += carried(stretch.oxygen_mg_l);
            sums.low += if stretch.oxygen_low() { flow } else { 0.0 };
        }
    }
}

#[inline]
fn add(sum: &mut [f64; 2], more: [f64; 2]) {
    *sum = [sum[0] + more[0], sum[1] + more[1]];
}

#[inline]
fn times(a: [f64; 2], b: [f64; 2]) -> [f64; 2] {
    [a[0] * b[0], a[1] * b[1]]
}
