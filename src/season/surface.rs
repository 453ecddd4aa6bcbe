//! Heat and water through the surface, and the light that goes deeper.
//!
//! Methods: `docs/methods.md`, section 8.

use crate::site::Site;
use crate::water::{CP_REF_J_KG_K, RHO_REF_KG_M3, latent_heat_j_kg, light_left};
use crate::weather::{self, Air};

use super::layers::Layer;
use super::mixing::{self, answered};
use super::skies::Sky;

/// Heat of a cubic metre for each degree, J/m3/C, with fixed density and specific heat (derived).
pub(super) const HEAT_J_M3_C: f64 = RHO_REF_KG_M3 * CP_REF_J_KG_K;

/// What came through the surface.
#[derive(Debug, Clone, Copy, Default)]
pub(super) struct Through {
    /// Heat, with what evaporated water took along, J.
    pub(super) heat_j: f64,
    /// Water; negative where it leaves, m3.
    pub(super) water_m3: f64,
}

/// Wind over the water, m/s. A given exchange tells it, since that grows with the square of the wind; dew point and
/// water are taken as at equilibrium (choice).
pub(super) fn wind_m_s(sky: &Sky) -> f64 {
    match *sky {
        Sky::Air(air) => air.wind_m_s,
        Sky::Given { equilibrium_c, exchange_w_m2_c } => {
            let under = |wind_m_s: f64| {
                let air = Air {
                    temperature_c: equilibrium_c,
                    dew_point_c: equilibrium_c,
                    wind_m_s,
                    cloud: 0.0,
                    solar_w_m2: 0.0,
                };
                weather::exchange_w_m2_c(&air, equilibrium_c)
            };
            let (still, windy) = (under(0.0), under(1.0));
            ((exchange_w_m2_c - still) / (windy - still)).max(0.0).sqrt()
        }
    }
}

/// Takes the pool through the exchange of a time (s): light to the layers it reaches, all else to the surface layer.
pub(super) fn exchange(
    layers: &mut [Layer],
    site: &Site,
    edges_m: &[f64],
    sky: &Sky,
    seconds: f64,
) -> Through {
    let Some(&surface_m) = edges_m.last() else {
        return Through::default();
    };
    let area_m2 = site.pool.area_m2(surface_m);
    let mut through = Through::default();
    let (sun_w, flux_w_m2, exchange_w_m2_c, evaporation_w_m2) = match *sky {
        Sky::Air(air) => {
            let top_c = layers.last().map_or(0.0, |l| l.temperature_c);
            let budget = weather::budget(&air, top_c, 0.0);
            let net = |water_c: f64| weather::budget(&air, water_c, 0.0).net_w_m2();
            let below_w = lit(layers, site, edges_m, budget.solar, seconds);
            through.heat_j += below_w * seconds;
            let flux = budget.net_w_m2() - budget.solar;
            (budget.solar * area_m2 - below_w, flux, net(top_c - 0.5) - net(top_c + 0.5), budget.evaporation)
        }
        Sky::Given { equilibrium_c, exchange_w_m2_c } => {
            let top_c = layers.last().map_or(0.0, |l| l.temperature_c);
            (0.0, exchange_w_m2_c * (equilibrium_c - top_c), exchange_w_m2_c, 0.0)
        }
    };
    let grain = site.water.solids_kg_m3;
    let mixed_m3: f64 = mixing::mixed(layers, grain).iter().map(|l| l.volume_m3).sum();
    let Some(top) = layers.last_mut() else {
        return through;
    };
    let of = |volume_m3: f64| exchange_w_m2_c.max(0.0) * area_m2 * seconds / (HEAT_J_M3_C * volume_m3);
    let first_j = (sun_w + flux_w_m2 * area_m2) * seconds;
    let held = top.volume_m3 * HEAT_J_M3_C;
    // the mixed layer answers as a whole; yet where its top stays on top, that is not carried beyond the equilibrium
    let mut share = answered(of(mixed_m3));
    let moved = Layer { temperature_c: top.temperature_c + first_j / held, ..*top };
    if moved.density_kg_m3(grain) <= top.density_kg_m3(grain) {
        share = share.min(of(top.volume_m3).recip());
    }
    let heat_j = first_j * share;
    // no ice: water at 0 C gives no more heat
    let warmed_c = (top.temperature_c + heat_j / held).max(top.temperature_c.min(0.0));
    through.heat_j += held * (warmed_c - top.temperature_c);
    top.temperature_c = warmed_c;
    if site.season.evaporates {
        let gone_m3 =
            -evaporation_w_m2 * area_m2 * seconds / (RHO_REF_KG_M3 * latent_heat_j_kg(top.temperature_c));
        // what was solved stays behind
        let left_m3 = top.volume_m3 - gone_m3.min(0.5 * top.volume_m3);
        let richer = top.volume_m3 / left_m3;
        through.water_m3 = left_m3 - top.volume_m3;
        through.heat_j += HEAT_J_M3_C * through.water_m3 * top.temperature_c;
        top.volume_m3 = left_m3;
        top.salt_g_per_kg *= richer;
        top.suspended_mg_l *= richer;
    }
    through
}

/// Warms the layers below the first by the light that reaches them, the bed under it included; what it brings, W.
fn lit(layers: &mut [Layer], site: &Site, edges_m: &[f64], solar_w_m2: f64, seconds: f64) -> f64 {
    let surface_m = edges_m.last().copied().unwrap_or(0.0);
    let passing = |edge_m: f64| {
        let left = light_left(site.season.knobs.light_per_m, surface_m - edge_m);
        solar_w_m2 * left * site.pool.area_m2(edge_m)
    };
    let mut sum = 0.0;
    for (i, layer) in layers.iter_mut().enumerate().rev().skip(1) {
        let down = if i > 0 { passing(edges_m[i]) } else { 0.0 };
        let kept = passing(edges_m[i + 1]) - down;
        layer.temperature_c += kept * seconds / (HEAT_J_M3_C * layer.volume_m3);
        sum += kept;
    }
    sum
}
