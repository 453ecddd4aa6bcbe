//! What enters: it takes in surface water and finds the layer of its own density.
//!
//! Methods: `docs/methods.md`, section 8.

use crate::site::Site;
use crate::water;

use super::layers::{Layer, Layers};
use super::step::Inflow;

/// Most of the surface layer that the inflow takes in at once (choice).
const MOST_OF_SURFACE: f64 = 0.5;

/// Where a water lies among layers, from the bed up.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Neutral {
    /// It is denser than all.
    Bed,
    /// Above this layer, at this share of the way to the next, by density.
    Above(usize, f64),
    /// It is no denser than the surface layer.
    Surface,
}

/// Where a water of a density lies among layers whose density falls upward, kg/m3; linear in density between their
/// middles.
pub fn neutral(layers_kg_m3: &[f64], water_kg_m3: f64) -> Neutral {
    let denser = layers_kg_m3.partition_point(|&layer| layer > water_kg_m3);
    match (denser.checked_sub(1).map(|i| (i, layers_kg_m3[i])), layers_kg_m3.get(denser)) {
        (None, _) if layers_kg_m3.len() > 1 || layers_kg_m3.first().is_some_and(|&l| l < water_kg_m3) => {
            Neutral::Bed
        }
        (Some((i, below)), Some(above)) => Neutral::Above(i, (below - water_kg_m3) / (below - above)),
        _ => Neutral::Surface,
    }
}

/// What the inflow brought, m3 and J, and at which place a layer of its own began.
#[derive(Debug, Clone, Copy, Default)]
pub(super) struct Entered {
    pub(super) volume_m3: f64,
    pub(super) heat_j: f64,
    pub(super) own: Option<usize>,
}

/// Lets the inflow of a time (s) in.
pub(super) fn enter(
    layers: &mut Layers,
    site: &Site,
    inflow: &Inflow,
    surface_m: f64,
    seconds: f64,
) -> Entered {
    let volume_m3 = inflow.flow_m3s * seconds;
    if volume_m3 <= 0.0 {
        return Entered::default();
    }
    let grain = site.water.solids_kg_m3;
    let saturated = || {
        let pressure = site.surface_pressure_atm(surface_m);
        water::saturation_mg_l(inflow.temperature_c, inflow.salt_g_per_kg, pressure)
    };
    let river = Layer {
        volume_m3,
        temperature_c: inflow.temperature_c,
        oxygen_mg_l: inflow.oxygen_mg_l.unwrap_or_else(saturated),
        salt_g_per_kg: inflow.salt_g_per_kg,
        suspended_mg_l: inflow.suspended_mg_l,
    };
    let mut entered = Entered { volume_m3, heat_j: river.heat_j(), own: None };
    let Some(top) = layers.layers.last_mut() else {
        layers.layers.push(river);
        return Entered { own: Some(0), ..entered };
    };
    let taken = (site.season.inflow_takes_in * volume_m3).min(MOST_OF_SURFACE * top.volume_m3);
    let mixed = river.joined(&top.part(taken));
    top.volume_m3 -= taken;
    let densities: Vec<f64> = layers.layers.iter().map(|l| l.density_kg_m3(grain)).collect();
    let count = densities.len();
    // between which layers it would lie, and which of them is nearer
    let (place, nearest) = match neutral(&densities, mixed.density_kg_m3(grain)) {
        Neutral::Bed => (0, 0),
        Neutral::Above(below, share) => (below + 1, if share < 0.5 { below } else { below + 1 }),
        Neutral::Surface => (count, count - 1),
    };
    let at_m = layers.edges_m(&site.pool).get(place).copied().unwrap_or(surface_m);
    let thickness_m = mixed.volume_m3 / site.pool.effective_area_m2(at_m);
    if thickness_m >= 0.5 * layers.thickness_m {
        layers.layers.insert(place, mixed);
        entered.own = Some(place);
    } else if let Some(layer) = layers.layers.get_mut(nearest) {
        *layer = layer.joined(&mixed);
    }
    entered
}
