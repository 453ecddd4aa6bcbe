//! A parcel of the river, how it warms and how its oxygen changes on a piece of its way.
//!
//! Methods: `docs/methods.md`, section 6.

use crate::site::{Decay, Reach};
use crate::water::{Sag, deficit_mg_l, reaeration_at_per_day, reaeration_per_day, saturation_mg_l};

use super::sky::Sky;

/// Heat that a cubic metre takes up with each degree, J/(m3 C) (choice: water of 20 C, 998.2 x 4182).
pub const HEAT_J_M3_C: f64 = 998.2 * 4182.0;

/// How the decay of demand rises with each degree (recalled: Streeter & Phelps 1925 as textbooks give it).
pub(super) const DECAY_PER_C: f64 = 1.047;

/// Longest piece of the way, h (choice; the weather changes by the hour).
const PIECE_H: f64 = 1.0;
/// Greatest share of the way to equilibrium in a piece, and greatest warming, C (choice: halving all pieces moves
/// nothing by 0.001 C).
const RELAXED: f64 = 0.5;
const WARMED_C: f64 = 0.5;
/// Greatest growth of the flow by seepage in a piece (choice).
const GROWTH: f64 = 0.02;
/// Shortest piece, h, and most pieces of a stretch (choice): in less water than a river has, or slower, the pieces get
/// coarse rather than endless.
const LEAST_H: f64 = 1e-3;
const MOST_PIECES: f64 = 5000.0;

/// Seconds of an hour (standard).
const HOUR_S: f64 = 3600.0;
/// Hours of a day (standard).
const DAY_H: f64 = 24.0;

/// A parcel of water on its way.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Water {
    pub(super) flow_m3s: f64,
    pub(super) temperature_c: f64,
    pub(super) oxygen_mg_l: Option<f64>,
    /// Oxygen it will still use up, mg/L.
    pub(super) demand_mg_l: f64,
}

impl Water {
    /// With other water: heat, oxygen and demand by flow. Oxygen is unknown where that of either is.
    ///
    /// # References
    /// Balance of heat and mass (derived).
    pub(super) fn with(self, other: Self) -> Self {
        let flow = self.flow_m3s + other.flow_m3s;
        if other.flow_m3s <= 0.0 || flow <= 0.0 {
            return self;
        }
        let mixed = |a: f64, b: f64| (self.flow_m3s * a + other.flow_m3s * b) / flow;
        Self {
            flow_m3s: flow,
            temperature_c: mixed(self.temperature_c, other.temperature_c),
            oxygen_mg_l: self.oxygen_mg_l.zip(other.oxygen_mg_l).map(|(a, b)| mixed(a, b)),
            demand_mg_l: mixed(self.demand_mg_l, other.demand_mg_l),
        }
    }
}

/// What enters all along a stretch: its whole flow there and its water.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Seeping {
    pub(super) per_m_m3s: f64,
    pub(super) water: Water,
}

/// A stretch of a reach and what holds on it.
#[derive(Debug, Clone, Copy)]
pub(super) struct Stretch<'a> {
    pub(super) reach: &'a Reach,
    pub(super) length_m: f64,
    pub(super) sky: &'a Sky,
    pub(super) seeping: Option<Seeping>,
    pub(super) decay: Decay,
    pub(super) pressure_atm: f64,
    /// Pieces over their usual length.
    pub(super) stride: f64,
}

/// What to tell of a stretch that was gone.
#[derive(Debug, Clone, Copy, Default, PartialEq)]
pub(super) struct Told {
    /// The table of hours was held at an end.
    pub(super) held: bool,
    /// Reaeration was computed outside its measured range.
    pub(super) beyond: bool,
    /// Water came to freezing and was held there.
    pub(super) ice: bool,
}

impl Stretch<'_> {
    /// Carries a parcel down the stretch; the clock, in hours since midnight of the day of release, goes on.
    ///
    /// # References
    /// Heat as far as it is straight in temperature: T = T* + (T0 - T*) exp(-K t/(rho cp h)); with seepage
    /// T* = (q Tq + k Te)/(q + k) and the power -(1 + k/q) of the growth of the flow, k = K B/(rho cp) (derived),
    /// where B is the width that goes with hours, depth and flow. Given equilibrium and exchange this is exact in
    /// pieces of any length. Oxygen by Streeter & Phelps 1925 at the middle temperature of a piece.
    pub(super) fn go(&self, water: &mut Water, clock_h: &mut f64, told: &mut Told) {
        let reach = self.reach;
        let seeping = self.seeping.filter(|s| s.per_m_m3s > 0.0);
        let per_m = |flow: f64| {
            let (hours, held) = reach.water_h(flow);
            (hours / reach.length_m, held)
        };
        let (mut h_per_m, held) = per_m(water.flow_m3s);
        told.held |= held;
        let mut left_m = self.length_m;
        let least_h = LEAST_H.max(h_per_m * self.length_m / MOST_PIECES);
        // a piece may run over the end of an hour by a tenth of the shortest: seepage lets it end before its plan
        let over_h = LEAST_H.max(0.1 * least_h);
        let mut k20 = None;
        while left_m > 0.0 {
            let (net, slope) = self.sky.heat(*clock_h, water.temperature_c, reach.shade);
            let per_h = HOUR_S / (HEAT_J_M3_C * reach.depth_m);
            let piece_h = (PIECE_H.min(RELAXED / (-slope * per_h)).min(WARMED_C / (net.abs() * per_h))
                * self.stride)
                .max(least_h)
                .min(self.sky.lasts_h(*clock_h).max(over_h));
            let mut dx = if h_per_m > 0.0 { left_m.min(piece_h / h_per_m) } else { left_m };
            if let Some(s) = seeping {
                dx = dx.min(GROWTH * self.stride * water.flow_m3s.max(s.per_m_m3s) / s.per_m_m3s);
                h_per_m = per_m(water.flow_m3s + 0.5 * s.per_m_m3s * dx).0;
            }
            // what is left of a stretch by round-off is not a piece of its own
            if left_m - dx < 1e-9 * self.length_m {
                dx = left_m;
            }
            let hours = h_per_m * dx;
            let before = *water;
            water.temperature_c = self.warmed(before, net, slope, hours, dx, seeping);
            if water.temperature_c < 0.0 {
                water.temperature_c = 0.0;
                told.ice = true;
            }
            let middle_c = 0.5 * (before.temperature_c + water.temperature_c);
            if seeping.is_some() || k20.is_none() {
                k20 = Some(self.reaeration(dx, hours, told));
            }
            if let Some(k20) = k20 {
                self.aired(water, middle_c, k20, hours, seeping.map(|s| (s, dx)));
            }
            if let Some(s) = seeping {
                water.flow_m3s += s.per_m_m3s * dx;
            }
            *clock_h += hours;
            left_m -= dx;
        }
    }

    fn warmed(
        &self,
        water: Water,
        net: f64,
        slope: f64,
        hours: f64,
        dx: f64,
        seeping: Option<Seeping>,
    ) -> f64 {
        let (t, exchange) = (water.temperature_c, -slope);
        let depth = self.reach.depth_m;
        match seeping {
            None => {
                let x = exchange * hours * HOUR_S / (HEAT_J_M3_C * depth);
                // net heat over exchange, times the share of the way gone; straight where nothing resists
                let gone = if x > 0.0 { -(-x).exp_m1() / x } else { 1.0 };
                t + net * hours * HOUR_S / (HEAT_J_M3_C * depth) * gone
            }
            Some(s) => {
                let q = s.per_m_m3s;
                let middle = water.flow_m3s + 0.5 * q * dx;
                let width = middle * hours * HOUR_S / (depth * dx);
                let k = exchange * width / HEAT_J_M3_C;
                let pull = k * t + net * width / HEAT_J_M3_C;
                let end = (q * s.water.temperature_c + pull) / (q + k);
                end + (t - end) * ((water.flow_m3s + q * dx) / water.flow_m3s).powf(-(1.0 + k / q))
            }
        }
    }

    /// Reaeration at 20 C, per day.
    fn reaeration(&self, dx: f64, hours: f64, told: &mut Told) -> f64 {
        self.reach.reaeration_per_day.unwrap_or_else(|| {
            if hours <= 0.0 {
                return 0.0;
            }
            let (k20, within) = reaeration_per_day(dx / (hours * HOUR_S), self.reach.depth_m);
            told.beyond |= !within;
            k20
        })
    }

    fn aired(&self, water: &mut Water, middle_c: f64, k20: f64, hours: f64, seeping: Option<(Seeping, f64)>) {
        // half of what seeps in mixes before the air has worked, half after
        let seep = |water: &mut Water| {
            let Some((s, dx)) = seeping else { return };
            let joined = Water { flow_m3s: 0.5 * s.per_m_m3s * dx, ..s.water };
            let mixed = water.with(joined);
            water.oxygen_mg_l = mixed.oxygen_mg_l;
            water.demand_mg_l = mixed.demand_mg_l;
        };
        seep(water);
        let decay_per_day = self.decay.per_day * DECAY_PER_C.powf(middle_c - 20.0);
        let days = hours / DAY_H;
        if let Some(oxygen) = water.oxygen_mg_l {
            let saturation = saturation_mg_l(middle_c, 0.0, self.pressure_atm);
            let sag = Sag {
                deficit_mg_l: saturation - oxygen,
                demand_mg_l: water.demand_mg_l,
                decay_per_day,
                reaeration_per_day: reaeration_at_per_day(k20, middle_c),
            };
            water.oxygen_mg_l = Some((saturation - deficit_mg_l(&sag, days)).max(0.0));
        }
        water.demand_mg_l *= (-decay_per_day * days).exp();
        seep(water);
    }
}
