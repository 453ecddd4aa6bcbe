//! What changes the layers where they lie: heat, wind, diffusion and oxygen.

use super::super::water::oxygen_saturation_mg_l;
use super::{Column, Forcing, Layer, Water};

const GRAVITY_M_S2: f64 = 9.80665;
const HEAT_CAPACITY_J_M3_C: f64 = 4.19e6;
const DAY_S: f64 = 86400.0;
/// Heat exchanged with the air per degree of departure from the equilibrium temperature, W/m2/C.
const EXCHANGE_W_M2_C: f64 = 26.0;
/// Share of the sun's heat that passes the first centimetres.
const LIGHT_SHARE: f64 = 0.5;
/// Water-side friction velocity per wind speed: sqrt(1.2/1000 x 0.0013), air density and drag coefficient.
const FRICTION_PER_WIND: f64 = 1.25e-3;
/// Work of the wind that deepens the mixed layer, in units of rho u*^3; the literature spreads tenfold.
const WIND_FACTOR: f64 = 1.5;
/// Diffusion `c / N` between the bounds, m2/s: weaker where the water is stiffer.
const DIFFUSION_M2_S2: f64 = 6.0e-8;
const DIFFUSION_BOUNDS_M2_S: (f64, f64) = (1.4e-7, 5.0e-6);
/// Gas transfer at the surface, m/day.
const GAS_TRANSFER_M_DAY: f64 = 1.2;
/// Oxygen made by algae in full light, mg/L/day.
const PRODUCTION_MG_L_DAY: f64 = 0.18;
/// The sun's heat that counts as full light, W/m2.
const FULL_SUN_W_M2: f64 = 300.0;
/// Oxygen used at 20 C by the water, mg/L/day, by the bed, g/m2/day, and more for each C/m of gradient.
const WATER_DEMAND_MG_L_DAY: f64 = 0.055;
const BED_DEMAND_G_M2_DAY: f64 = 0.35;
const GRADIENT_DEMAND_MG_L_DAY: f64 = 0.10;
/// Demand grows by this for each degree; it falls away below this much oxygen, mg/L.
const DEMAND_PER_DEGREE: f64 = 1.065;
const HALF_DEMAND_MG_L: f64 = 0.5;

impl Column<'_> {
    pub(super) fn heat(&mut self, forcing: &Forcing, seconds: f64) {
        let edges = self.edges_m();
        let surface_m = edges[self.layers.len()];
        let through_w_m2 = LIGHT_SHARE * forcing.sun_w_m2;
        // light that meets the bed warms the layer lying there, so all that enters is taken up
        let light_w = |z_m: f64| {
            through_w_m2 * self.basin.area_m2(z_m) * (-self.nature.light_loss_1_m * (surface_m - z_m)).exp()
        };
        let mut gains_w: Vec<f64> = edges.windows(2).map(|e| light_w(e[1]) - light_w(e[0])).collect();
        gains_w[0] += light_w(edges[0]);
        if let (Some(gain_w), Some(top)) = (gains_w.last_mut(), self.layers.last()) {
            let net_w_m2 = EXCHANGE_W_M2_C * (forcing.equilibrium_c - top.water.temperature_c);
            *gain_w += (net_w_m2 - through_w_m2) * self.basin.area_m2(surface_m);
        }
        for (layer, gain_w) in self.layers.iter_mut().zip(gains_w) {
            layer.water.temperature_c += gain_w * seconds / (HEAT_CAPACITY_J_M3_C * layer.volume_m3);
        }
    }

    /// Mixes whatever lies on lighter water with it.
    pub(super) fn overturn(&mut self) {
        let mut blocks: Vec<(Layer, usize)> = Vec::new();
        for &layer in &self.layers {
            let mut block = (layer, 1);
            while let Some(&(below, count)) = blocks.last()
                && below.water.density_kg_m3() < block.0.water.density_kg_m3()
            {
                block = (below.with(block.0), block.1 + count);
                blocks.pop();
            }
            blocks.push(block);
        }
        let waters = blocks.iter().flat_map(|&(block, count)| std::iter::repeat_n(block.water, count));
        for (layer, water) in self.layers.iter_mut().zip(waters) {
            layer.water = water;
        }
    }

    /// Wind deepens the mixed layer while its work covers the potential energy of mixing in the next layer:
    /// g (difference in density) x (thickness of both) / 2 for a unit of area.
    pub(super) fn stir(&mut self, wind_m_s: f64, seconds: f64) {
        let edges = self.edges_m();
        let mut work_j_m2 = WIND_FACTOR * 1000.0 * (FRICTION_PER_WIND * wind_m_s).powi(3) * seconds;
        let top = self.layers.len() - 1;
        let mut mixed = self.layers[top];
        for i in (0..top).rev() {
            let heavier = self.layers[i].water.density_kg_m3() - mixed.water.density_kg_m3();
            let thicknesses = (edges[top + 1] - edges[i + 1]) * (edges[i + 1] - edges[i]);
            let need_j_m2 = 0.5 * GRAVITY_M_S2 * heavier.max(0.0) * thicknesses;
            let share = if need_j_m2 > work_j_m2 { work_j_m2 / need_j_m2 } else { 1.0 };
            let both = mixed.with(self.layers[i]);
            self.layers[i].water = self.layers[i].water.blended(both.water, share);
            let above = mixed.water.blended(both.water, share);
            for layer in &mut self.layers[i + 1..] {
                layer.water = above;
            }
            if share < 1.0 {
                return;
            }
            work_j_m2 -= need_j_m2;
            mixed = both;
        }
    }

    pub(super) fn diffuse(&mut self, seconds: f64) {
        let edges = self.edges_m();
        let before = self.layers.clone();
        for i in 0..before.len() - 1 {
            let apart_m = 0.5 * (edges[i + 2] - edges[i]);
            let (low, high) = (before[i].water, before[i + 1].water);
            let steepness = (low.density_kg_m3() - high.density_kg_m3()).max(0.0) / apart_m;
            let buoyancy_1_s = (GRAVITY_M_S2 * steepness / 1000.0).sqrt().max(1e-6);
            let (least, most) = DIFFUSION_BOUNDS_M2_S;
            let diffusion_m2_s = (DIFFUSION_M2_S2 / buoyancy_1_s).clamp(least, most);
            let exchanged_m3 = diffusion_m2_s * self.basin.area_m2(edges[i + 1]) / apart_m * seconds;
            for (to, from, other) in [(i, low, high), (i + 1, high, low)] {
                let share = exchanged_m3 / self.layers[to].volume_m3;
                let (after, gained) = (self.layers[to].water, from.blended(other, share));
                self.layers[to].water = Water {
                    temperature_c: after.temperature_c + gained.temperature_c - from.temperature_c,
                    oxygen_mg_l: after.oxygen_mg_l + gained.oxygen_mg_l - from.oxygen_mg_l,
                    conductance_us_cm: after.conductance_us_cm + gained.conductance_us_cm
                        - from.conductance_us_cm,
                };
            }
        }
    }

    pub(super) fn breathe(&mut self, sun_w_m2: f64, seconds: f64) {
        let days = seconds / DAY_S;
        let edges = self.edges_m();
        let top = self.layers.len() - 1;
        let surface_m = edges[top + 1];
        let before = self.layers.clone();
        let nature = self.nature;
        for (i, layer) in self.layers.iter_mut().enumerate() {
            let water = layer.water;
            let (below, above) = (i.saturating_sub(1), (i + 1).min(top));
            let gradient_c_m = (before[above].water.temperature_c - before[below].water.temperature_c)
                / (0.5 * (edges[above + 1] + edges[above] - edges[below + 1] - edges[below]));
            let bed_m2 = self.basin.area_m2(edges[i + 1]) - self.basin.area_m2(edges[i]);
            let demand_mg_l_day = nature.demand
                * (WATER_DEMAND_MG_L_DAY
                    + BED_DEMAND_G_M2_DAY * bed_m2 / layer.volume_m3
                    + GRADIENT_DEMAND_MG_L_DAY * gradient_c_m.max(0.0))
                * DEMAND_PER_DEGREE.powf(water.temperature_c - 20.0)
                * water.oxygen_mg_l
                / (water.oxygen_mg_l + HALF_DEMAND_MG_L);
            let depth_m = surface_m - f64::midpoint(edges[i], edges[i + 1]);
            let made_mg_l_day =
                PRODUCTION_MG_L_DAY * sun_w_m2 / FULL_SUN_W_M2 * (-nature.light_loss_1_m * depth_m).exp();
            layer.water.oxygen_mg_l += (made_mg_l_day - demand_mg_l_day) * days;
        }
        let area_m2 = self.basin.area_m2(surface_m);
        let skin = &mut self.layers[top];
        let saturation = oxygen_saturation_mg_l(skin.water.temperature_c, self.altitude_m + surface_m);
        skin.water.oxygen_mg_l +=
            GAS_TRANSFER_M_DAY * days * area_m2 / skin.volume_m3 * (saturation - skin.water.oxygen_mg_l);
    }
}
