//! A pool in one dimension: layers that carry their water up and down as the pool fills and falls.
//!
//! Heat comes through the surface and as light below it, wind and cooling mix from the top, the deep
//! water only diffuses. Inflow goes to the layer of its own density, release comes from around the outlet.
//! Oxygen enters at the surface and is used in the water, on the bed, and most of all where sinking matter
//! is held up by the thermocline. Plain relations with round coefficients, each a choice within what deep
//! temperate reservoirs show: the aim is a believable pool, not a model of one.

mod exchange;

use super::basin::Basin;
use super::water::density_kg_m3;

/// Layers thinner than this join a neighbour, those thicker than three times it are cut in two, m.
const THINNEST_M: f64 = 0.6;
/// Surface water an inflow takes along on its way down, as a share of itself.
const ENTRAINED_SHARE: f64 = 0.4;

/// In what pools differ, beside their shape.
#[derive(Clone, Copy)]
pub(crate) struct Nature {
    /// Half thickness of the zone an outlet draws from, as a standard deviation, m.
    pub(crate) zone_m: f64,
    /// Loss of light with depth, 1/m.
    pub(crate) light_loss_1_m: f64,
    /// Demand for oxygen, in units of what a deep clear pool has.
    pub(crate) demand: f64,
}

impl Nature {
    /// A deep clear pool.
    const DEEP: Self = Self { zone_m: 5.0, light_loss_1_m: 0.35, demand: 1.0 };
}

/// What a piece of water carries.
#[derive(Clone, Copy)]
pub(crate) struct Water {
    pub(crate) temperature_c: f64,
    pub(crate) oxygen_mg_l: f64,
    pub(crate) conductance_us_cm: f64,
}

impl Water {
    fn density_kg_m3(self) -> f64 {
        density_kg_m3(self.temperature_c, self.conductance_us_cm)
    }

    /// This water with the given share (0-1) of `other` in it.
    pub(crate) fn blended(self, other: Self, share: f64) -> Self {
        let blend = |a: f64, b: f64| a + share * (b - a);
        Self {
            temperature_c: blend(self.temperature_c, other.temperature_c),
            oxygen_mg_l: blend(self.oxygen_mg_l, other.oxygen_mg_l),
            conductance_us_cm: blend(self.conductance_us_cm, other.conductance_us_cm),
        }
    }
}

/// What acts on the pool for a while.
pub(crate) struct Forcing {
    pub(crate) inflow_m3s: f64,
    pub(crate) inflow: Water,
    /// Elevation and flow of each outlet, m, m3/s.
    pub(crate) releases: [(f64, f64); 2],
    /// Water temperature at which the surface would neither gain nor lose heat, C.
    pub(crate) equilibrium_c: f64,
    pub(crate) sun_w_m2: f64,
    pub(crate) wind_m_s: f64,
}

#[derive(Clone, Copy)]
struct Layer {
    volume_m3: f64,
    water: Water,
}

impl Layer {
    fn with(self, other: Self) -> Self {
        let volume_m3 = self.volume_m3 + other.volume_m3;
        Self { volume_m3, water: self.water.blended(other.water, other.volume_m3 / volume_m3) }
    }
}

/// The pool: its layers from the bed up.
pub(crate) struct Column<'a> {
    basin: &'a Basin,
    altitude_m: f64,
    nature: Nature,
    layers: Vec<Layer>,
}

impl<'a> Column<'a> {
    /// One mixed water up to an elevation, m; `altitude_m` of elevation 0.
    pub(crate) fn mixed(basin: &'a Basin, altitude_m: f64, pool_m: f64, water: Water) -> Self {
        let layers = vec![Layer { volume_m3: basin.volume_m3(pool_m), water }];
        let mut column = Self { basin, altitude_m, nature: Nature::DEEP, layers };
        column.even_out();
        column
    }

    /// The same pool with another nature.
    pub(crate) fn with(self, nature: Nature) -> Self {
        Self { nature, ..self }
    }

    /// Water in the pool, m3.
    pub(crate) fn volume_m3(&self) -> f64 {
        self.layers.iter().map(|layer| layer.volume_m3).sum()
    }

    /// Water surface, m.
    pub(crate) fn pool_m(&self) -> f64 {
        self.basin.elevation_m(self.volume_m3())
    }

    /// The water at an elevation, m: straight between the middles of the layers, held beyond them.
    pub(crate) fn at(&self, z_m: f64) -> Water {
        let edges = self.edges_m();
        let middle = |i: usize| f64::midpoint(edges[i], edges[i + 1]);
        let last = self.layers.len() - 1;
        let above = (0..=last).find(|&i| middle(i) >= z_m).unwrap_or(last);
        let below = above.saturating_sub(1);
        let span_m = middle(above) - middle(below);
        let share = if span_m > 0.0 { ((z_m - middle(below)) / span_m).clamp(0.0, 1.0) } else { 0.0 };
        self.layers[below].water.blended(self.layers[above].water, share)
    }

    /// Lets the forcing act for some hours, few enough that no layer changes much.
    pub(crate) fn step(&mut self, forcing: &Forcing, seconds: f64) {
        self.take_in(forcing.inflow_m3s * seconds, forcing.inflow);
        for (outlet_m, flow_m3s) in forcing.releases {
            self.release(flow_m3s * seconds, outlet_m);
        }
        self.even_out();
        self.heat(forcing, seconds);
        self.overturn();
        self.stir(forcing.wind_m_s, seconds);
        self.diffuse(seconds);
        self.breathe(forcing.sun_w_m2, seconds);
    }

    /// Elevations of bed, surface and all borders between layers, m.
    fn edges_m(&self) -> Vec<f64> {
        let mut below_m3 = 0.0;
        let mut edges = vec![self.basin.bed_m()];
        for layer in &self.layers {
            below_m3 += layer.volume_m3;
            edges.push(self.basin.elevation_m(below_m3));
        }
        edges
    }

    fn take_in(&mut self, volume_m3: f64, water: Water) {
        let top = self.layers.len() - 1;
        let taken_m3 = (ENTRAINED_SHARE * volume_m3).min(0.5 * self.layers[top].volume_m3);
        self.layers[top].volume_m3 -= taken_m3;
        let arriving = Layer { volume_m3, water }.with(Layer { volume_m3: taken_m3, ..self.layers[top] });
        let density = arriving.water.density_kg_m3();
        let home = self.layers.iter().position(|l| l.water.density_kg_m3() <= density).unwrap_or(top);
        self.layers[home] = self.layers[home].with(arriving);
    }

    /// The water an outlet at an elevation (m) gives.
    pub(crate) fn drawn(&self, outlet_m: f64) -> Water {
        let weights = self.weights(outlet_m);
        let mut total = weights[0];
        let mut water = self.layers[0].water;
        for (layer, weight) in self.layers.iter().zip(weights).skip(1) {
            total += weight;
            water = water.blended(layer.water, weight / total);
        }
        water
    }

    /// What each layer gives to an outlet at an elevation (m), unscaled.
    fn weights(&self, outlet_m: f64) -> Vec<f64> {
        let edges = self.edges_m();
        let weight = |(i, layer): (usize, &Layer)| {
            let away = (f64::midpoint(edges[i], edges[i + 1]) - outlet_m) / self.nature.zone_m;
            layer.volume_m3 * (-0.5 * away * away).exp()
        };
        self.layers.iter().enumerate().map(weight).collect()
    }

    fn release(&mut self, volume_m3: f64, outlet_m: f64) {
        let weights = self.weights(outlet_m);
        let total: f64 = weights.iter().sum();
        for (layer, weight) in self.layers.iter_mut().zip(weights) {
            layer.volume_m3 -= volume_m3 * weight / total;
        }
    }

    /// Joins thin layers to the neighbour nearer in density and cuts thick ones.
    fn even_out(&mut self) {
        let mut i = 0;
        while i < self.layers.len() {
            let below_m3: f64 = self.layers[..i].iter().map(|layer| layer.volume_m3).sum();
            let layer = self.layers[i];
            let thickness_m =
                self.basin.elevation_m(below_m3 + layer.volume_m3) - self.basin.elevation_m(below_m3);
            if thickness_m < THINNEST_M && self.layers.len() > 1 {
                let apart =
                    |j: usize| (self.layers[j].water.density_kg_m3() - layer.water.density_kg_m3()).abs();
                let down = i > 0 && (i + 1 == self.layers.len() || apart(i - 1) <= apart(i + 1));
                let low = if down { i - 1 } else { i };
                self.layers[low] = self.layers[low].with(self.layers[low + 1]);
                self.layers.remove(low + 1);
                i = low;
            } else if thickness_m > 3.0 * THINNEST_M {
                self.layers[i].volume_m3 *= 0.5;
                self.layers.insert(i, self.layers[i]);
            } else {
                i += 1;
            }
        }
    }
}
