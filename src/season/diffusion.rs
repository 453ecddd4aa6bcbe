//! What creeps from layer to layer: eddy diffusion, implicit in time.
//!
//! Methods: `docs/methods.md`, section 8.

use crate::profile::buoyancy_s2;
use crate::site::Site;

use super::layers::Layer;

/// Coefficient of the diffusivity, cm2/s (recalled; Hondzo & Stefan 1993).
const COEFFICIENT_CM2_S: f64 = 8.17e-4;
/// Power of the area of the pool, km2 (recalled; Hondzo & Stefan 1993).
const AREA_POWER: f64 = 0.56;
/// Power of the squared buoyancy frequency, 1/s2 (recalled; Hondzo & Stefan 1993).
const BUOYANCY_POWER: f64 = -0.43;
/// Least squared buoyancy frequency that it is taken at, 1/s2 (recalled; Hondzo & Stefan 1993): in less layered water
/// it would grow without bound.
const LEAST_BUOYANCY_S2: f64 = 7.5e-5;
/// Molecular diffusion of heat, m2/s (recalled): no water diffuses less.
const MOLECULAR_M2_S: f64 = 1.4e-7;

/// Vertical eddy diffusivity in a layered pool.
///
/// # Units
/// Area of the surface m2, squared buoyancy frequency 1/s2; m2/s.
///
/// # References
/// K = 8.17e-4 A^0.56 (N2)^-0.43 cm2/s, A in km2, N2 at least 7.5e-5: Hondzo & Stefan 1993, J. Hydraul. Eng. 119:1251
/// (recalled); at least 1.4e-7 m2/s.
pub fn diffusivity_m2_s(area_m2: f64, buoyancy_s2: f64) -> f64 {
    let per_cm2 = 1e-4;
    let eddy = COEFFICIENT_CM2_S
        * (area_m2 * 1e-6).powf(AREA_POWER)
        * buoyancy_s2.max(LEAST_BUOYANCY_S2).powf(BUOYANCY_POWER);
    (eddy * per_cm2).max(MOLECULAR_M2_S)
}

/// Volumes that neighbouring layers trade over a time, m3: diffusivity times the area between them over the distance of
/// their middles, one for each inner edge from the bed up.
pub(super) fn traded_m3(layers: &[Layer], site: &Site, edges_m: &[f64], seconds: f64) -> Vec<f64> {
    let factor = site.season.knobs.diffusion;
    let Some(&surface_m) = edges_m.last() else {
        return Vec::new();
    };
    let surface_m2 = site.pool.area_m2(surface_m);
    let at =
        |i: usize| (0.5 * (edges_m[i] + edges_m[i + 1]), layers[i].density_kg_m3(site.water.solids_kg_m3));
    let between = |i: usize| {
        let (lower, upper) = (at(i - 1), at(i));
        let k = factor * diffusivity_m2_s(surface_m2, buoyancy_s2(lower, upper));
        k * site.pool.area_m2(edges_m[i]) * seconds / (upper.0 - lower.0)
    };
    (1..layers.len()).map(between).collect()
}

/// Lets neighbouring layers trade volumes (m3, one for each inner edge from the bed up), all at once and by the waters
/// that come of it: backward Euler, which keeps every sum and makes no new extremes.
pub fn diffuse(layers: &mut [Layer], traded_m3: &[f64]) {
    let count = layers.len();
    if count < 2 || traded_m3.len() + 1 != count {
        return;
    }
    let carried = |l: &Layer| [l.temperature_c, l.oxygen_mg_l, l.salt_g_per_kg, l.suspended_mg_l];
    let below = |i: usize| if i > 0 { traded_m3[i - 1] } else { 0.0 };
    let above = |i: usize| traded_m3.get(i).copied().unwrap_or(0.0);
    // the change is solved for, not the value: equal waters stay so to the last digit
    let mut solved: Vec<(f64, [f64; 4])> = Vec::with_capacity(count);
    for i in 0..count {
        let here = carried(&layers[i]);
        let mut right = [0.0; 4];
        if i > 0 {
            let other = carried(&layers[i - 1]);
            for ((r, h), o) in right.iter_mut().zip(here).zip(other) {
                *r += below(i) * (o - h);
            }
        }
        if i + 1 < count {
            let other = carried(&layers[i + 1]);
            for ((r, h), o) in right.iter_mut().zip(here).zip(other) {
                *r += above(i) * (o - h);
            }
        }
        let mut pivot = layers[i].volume_m3 + below(i) + above(i);
        if let Some((share, change)) = solved.last() {
            pivot -= below(i) * share;
            for (r, c) in right.iter_mut().zip(change) {
                *r += below(i) * c;
            }
        }
        solved.push((above(i) / pivot, right.map(|r| r / pivot)));
    }
    let mut next = [0.0; 4];
    for (layer, (share, change)) in layers.iter_mut().zip(&solved).rev() {
        for (n, c) in next.iter_mut().zip(change) {
            *n = c + share * *n;
        }
        layer.temperature_c += next[0];
        layer.oxygen_mg_l += next[1];
        layer.salt_g_per_kg += next[2];
        layer.suspended_mg_l += next[3];
    }
}
