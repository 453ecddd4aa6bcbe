//! Oxygen of the layers: what water and bed take, and what passes through the surface.
//!
//! Methods: `docs/methods.md`, section 8.

use crate::site::Site;
use crate::units::DAY_S;
use crate::water;

use super::layers::Layers;
use super::mixing;

/// How demand rises with each degree (recalled: 1.065 for beds; taken for the water too, choice).
const PER_C: f64 = 1.065;

/// Demand for oxygen at a temperature.
///
/// # Units
/// Demand at 20 C, any unit, C; that unit.
///
/// # References
/// d 1.065^(T - 20) (recalled).
pub fn demand_at(at_20_c: f64, temperature_c: f64) -> f64 {
    at_20_c * PER_C.powf(temperature_c - 20.0)
}

/// Oxygen after a demand over a time: it stops at zero.
///
/// # Units
/// mg/L, mg/L per day, days; mg/L.
pub fn left_mg_l(oxygen_mg_l: f64, demand_mg_l_day: f64, days: f64) -> f64 {
    (oxygen_mg_l - demand_mg_l_day * days).max(0.0)
}

/// Demand and surface transfer over a time (s).
pub(super) fn breathe(layers: &mut Layers, site: &Site, edges_m: &[f64], seconds: f64) {
    if !layers.has_oxygen {
        return;
    }
    let days = seconds / DAY_S;
    let knobs = &site.season.knobs;
    // the bed of the lowest layer is all that lies below its upper edge
    let mut below_m2 = 0.0;
    for (layer, ends) in layers.layers.iter_mut().zip(edges_m.windows(2)) {
        let area_m2 = site.pool.area_m2(ends[1]);
        let bed = knobs.bed_demand_g_m2_day * (area_m2 - below_m2) / layer.volume_m3;
        below_m2 = area_m2;
        let demand = demand_at(knobs.water_demand_mg_l_day + bed, layer.temperature_c);
        layer.oxygen_mg_l = left_mg_l(layer.oxygen_mg_l, demand, days);
    }
    let (Some(top), Some(&surface_m)) = (layers.layers.last(), edges_m.last()) else {
        return;
    };
    let pressure = site.surface_pressure_atm(surface_m);
    let saturation = water::saturation_mg_l(top.temperature_c, top.salt_g_per_kg, pressure);
    let mixed = mixing::mixed(&mut layers.layers, site.water.solids_kg_m3);
    let depth_m = mixed.iter().map(|l| l.volume_m3).sum::<f64>() / site.pool.area_m2(surface_m);
    // from either side, and never across
    let gone = site.season.transfer_m_day * days / depth_m;
    for layer in mixed {
        layer.oxygen_mg_l += (saturation - layer.oxygen_mg_l) * gone * mixing::answered(gone);
    }
}
