//! How the water is layered: thermocline, stability, mixed layer, oxygen minimum, heat.
//!
//! Methods: `docs/methods.md`, section 2.

use crate::site::Pool;
use crate::water::{CP_REF_J_KG_K, G_M_S2, RHO_REF_KG_M3};

use super::cast::Profile;
use super::column::Column;
use super::samples::{OxygenSample, Sample};

/// Gradients are taken over at least this height, m: closer samples would make noise the thermocline (choice).
const GRADIENT_M: f64 = 1.0;
/// No thermocline where top and bottom differ by less, C (common practice, no source).
pub const LAYERED_C: f64 = 1.0;
/// Steepness of the thermocline band, C per m (Birge's rule, recalled).
const BAND_C_M: f64 = 1.0;
/// The surface mixed layer ends where density exceeds the surface's by this, kg/m3 (choice).
const MIXED_KG_M3: f64 = 0.1;
/// Three-point Gauss-Legendre rule on -1..1, exact for quintics.
const GAUSS_THREE: [(f64, f64); 3] =
    [(-0.774_596_669_241_483_4, 5.0 / 9.0), (0.0, 8.0 / 9.0), (0.774_596_669_241_483_4, 5.0 / 9.0)];

/// The steepest part of the temperature profile.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Thermocline {
    /// Middle of the steepest interval, m.
    pub elevation_m: f64,
    /// Temperature gained per metre upward there, C/m.
    pub gradient_c_m: f64,
    /// Lower and upper edge of the stretch about it steeper than 1 C/m, m.
    pub band_m: Option<(f64, f64)>,
}

/// How the water is layered.
#[derive(Debug, Clone, PartialEq)]
pub struct Layering {
    /// Temperature at the surface, C.
    pub surface_c: f64,
    /// Temperature at the bed, C.
    pub bed_c: f64,
    /// Thermocline; `None` when top and bottom differ by less than about 1 C.
    pub thermocline: Option<Thermocline>,
    /// Base of the surface mixed layer, m.
    pub mixed_base_m: f64,
    /// Greatest squared buoyancy frequency and its elevation, 1/s2 and m.
    pub buoyancy_s2: Option<(f64, f64)>,
    /// Lowest oxygen and its elevation, wherever it lies.
    pub oxygen_min: Option<OxygenSample>,
    /// Water below the surface, m3.
    pub volume_m3: f64,
    /// Heat above 0 C, J, with fixed reference density and specific heat.
    pub heat_j: f64,
    /// Volume-mean temperature, C.
    pub mean_c: f64,
    /// Schmidt stability, J/m2 of surface.
    pub schmidt_j_m2: f64,
}

impl Layering {
    /// The layering of a profile in its pool.
    pub fn of(profile: &Profile, pool: &Pool) -> Self {
        let column = &profile.column;
        let (surface_c, bed_c) =
            (column.reading(column.surface_m()).temperature_c, column.reading(column.bed_m()).temperature_c);
        let volume_m3 = pool.volume_m3(column.surface_m()) - pool.volume_m3(column.bed_m());
        let temperature_volume = integral(column, pool, |_, z| column.reading(z).temperature_c);
        let mean_c = if volume_m3 > 0.0 { temperature_volume / volume_m3 } else { surface_c };
        Self {
            surface_c,
            bed_c,
            thermocline: thermocline(&profile.samples),
            mixed_base_m: mixed_base_m(column),
            buoyancy_s2: greatest_buoyancy(column),
            oxygen_min: profile.oxygen.iter().copied().min_by(|a, b| a.oxygen_mg_l.total_cmp(&b.oxygen_mg_l)),
            volume_m3,
            heat_j: RHO_REF_KG_M3 * CP_REF_J_KG_K * temperature_volume,
            mean_c,
            schmidt_j_m2: schmidt_stability_j_m2(column, pool),
        }
    }
}

/// Middle of the steepest interval of at least 1 m, and the stretch about it steeper than 1 C/m (Birge).
///
/// # Units
/// Samples rising, m and C. `None` when top and bottom differ by less than about 1 C.
pub fn thermocline(samples: &[Sample]) -> Option<Thermocline> {
    let (bottom, top) = (samples.first()?, samples.last()?);
    if (top.temperature_c - bottom.temperature_c).abs() < LAYERED_C {
        return None;
    }
    let intervals: Vec<(f64, f64, f64)> = samples
        .iter()
        .enumerate()
        .filter_map(|(i, low)| {
            let high = samples[i + 1..].iter().find(|s| s.elevation_m - low.elevation_m >= GRADIENT_M)?;
            let gradient = (high.temperature_c - low.temperature_c) / (high.elevation_m - low.elevation_m);
            Some((low.elevation_m, high.elevation_m, gradient))
        })
        .collect();
    let steepest = intervals
        .iter()
        .enumerate()
        .max_by(|a, b| a.1.2.abs().total_cmp(&b.1.2.abs()).then(b.0.cmp(&a.0)))
        .map(|(i, _)| i)?;
    let (low, high, gradient_c_m) = intervals[steepest];
    let steep = |i: &(f64, f64, f64)| i.2.abs() >= BAND_C_M;
    let band_m = steep(&intervals[steepest]).then(|| {
        let first = intervals[..steepest].iter().rposition(|i| !steep(i)).map_or(0, |k| k + 1);
        let last =
            intervals[steepest..].iter().position(|i| !steep(i)).map_or(intervals.len(), |k| steepest + k);
        (intervals[first].0, intervals[last - 1].1)
    });
    Some(Thermocline { elevation_m: 0.5 * (low + high), gradient_c_m, band_m })
}

/// Base of the surface mixed layer: the first elevation from above whose density exceeds the surface's by
/// 0.1 kg/m3, m; the bed where none does.
pub fn mixed_base_m(column: &Column) -> f64 {
    let surface = column.density_kg_m3(column.surface_m());
    let nodes = column.nodes_m();
    let density = column.node_density_kg_m3();
    // density falls upward, so the nodes denser than the limit come first
    let denser = density.partition_point(|&rho| rho > surface + MIXED_KG_M3);
    if denser == 0 {
        return column.bed_m();
    }
    let (mut low, mut high) = (nodes[denser - 1], nodes[denser.min(nodes.len() - 1)]);
    while high - low > 1e-6 {
        let middle = 0.5 * (low + high);
        if column.density_in(denser - 1, middle) > surface + MIXED_KG_M3 {
            low = middle;
        } else {
            high = middle;
        }
    }
    0.5 * (low + high)
}

/// Squared buoyancy frequency of a stretch, N2 = -(g/rho) d rho/dz, 1/s2, from density and never temperature
/// (below 4 C colder water is lighter).
pub fn buoyancy_s2(lower: (f64, f64), upper: (f64, f64)) -> f64 {
    let mean = 0.5 * (lower.1 + upper.1);
    G_M_S2 / mean * (lower.1 - upper.1) / (upper.0 - lower.0)
}

/// Greatest squared buoyancy frequency over at least 1 m and its elevation, 1/s2 and m.
pub fn greatest_buoyancy(column: &Column) -> Option<(f64, f64)> {
    let points: Vec<(f64, f64)> =
        column.nodes_m().iter().copied().zip(column.node_density_kg_m3().iter().copied()).collect();
    points
        .iter()
        .enumerate()
        .filter_map(|(i, &low)| {
            let high = *points[i + 1..].iter().find(|p| p.0 - low.0 >= GRADIENT_M)?;
            Some((buoyancy_s2(low, high), 0.5 * (low.0 + high.0)))
        })
        .max_by(|a, b| a.0.total_cmp(&b.0))
}

/// Integral of a quantity over the water, m3 times its unit: three Gauss points in every stretch between nodes
/// of column and pool table, exact for a quantity linear in elevation.
fn integral(column: &Column, pool: &Pool, quantity: impl Fn(usize, f64) -> f64) -> f64 {
    let mut edges: Vec<f64> = column.nodes_m().to_vec();
    edges.extend(pool.nodes_m().filter(|z| (column.bed_m()..column.surface_m()).contains(z)));
    edges.sort_by(f64::total_cmp);
    let mut sum = 0.0;
    let mut stretch = 0;
    for pair in edges.windows(2) {
        let half = 0.5 * (pair[1] - pair[0]);
        if half <= 0.0 {
            continue;
        }
        while stretch + 2 < column.nodes_m().len() && column.nodes_m()[stretch + 1] <= pair[0] {
            stretch += 1;
        }
        for (at, weight) in GAUSS_THREE {
            let z = pair[0] + half * (1.0 + at);
            sum += half * weight * pool.effective_area_m2(z) * quantity(stretch, z);
        }
    }
    sum
}

/// Schmidt stability, S = (g/A0) sum (z - zv)(rho - rho_mean) A dz, J/m2; z is depth, zv that of the centre of
/// volume, rho_mean the volume mean.
///
/// # References
/// Idso 1973, Limnol. Oceanogr. 18:681-683 (recalled).
pub fn schmidt_stability_j_m2(column: &Column, pool: &Pool) -> f64 {
    let surface = column.surface_m();
    let volume = integral(column, pool, |_, _| 1.0);
    let area = pool.area_m2(surface);
    if volume <= 0.0 || area <= 0.0 {
        return 0.0;
    }
    let centre = integral(column, pool, |_, z| surface - z) / volume;
    let mean = integral(column, pool, |i, z| column.density_in(i, z)) / volume;
    G_M_S2 / area * integral(column, pool, |i, z| (surface - z - centre) * (column.density_in(i, z) - mean))
}

/// Volume of water colder than `threshold_c` between two elevations, m3. Exact for temperature linear between
/// samples.
pub fn colder_m3(column: &Column, pool: &Pool, threshold_c: f64, from_m: f64, to_m: f64) -> f64 {
    let (from, to) = (from_m.max(column.bed_m()), to_m.min(column.surface_m()));
    let mut edges: Vec<f64> = vec![from];
    edges.extend(column.nodes_m().iter().copied().filter(|z| from < *z && *z < to));
    edges.push(to);
    let mut sum = 0.0;
    for pair in edges.windows(2) {
        if pair[1] <= pair[0] {
            continue;
        }
        let below = |z: f64| column.reading(z).temperature_c - threshold_c;
        let (a, b) = (below(pair[0]), below(pair[1]));
        let volume = |low: f64, high: f64| pool.volume_m3(high) - pool.volume_m3(low);
        sum += match (a < 0.0, b < 0.0) {
            (true, true) => volume(pair[0], pair[1]),
            (false, false) => 0.0,
            (cold_below, _) => {
                let cross = pair[0] + (pair[1] - pair[0]) * a / (a - b);
                if cold_below { volume(pair[0], cross) } else { volume(cross, pair[1]) }
            }
        };
    }
    sum
}
