//! Heat through the surface of a river or a pool.
//!
//! Methods: `docs/methods.md`, section 6.

use super::Air;

/// The parts of the heat through a square metre of surface, W/m2, each counted as it warms the water.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Budget {
    /// Sun and sky that get in.
    pub solar: f64,
    /// Long waves from the air.
    pub air: f64,
    /// Long waves sent back; negative.
    pub back: f64,
    /// Evaporation; negative where water leaves.
    pub evaporation: f64,
    /// Warmth from the air by contact.
    pub contact: f64,
}

impl Budget {
    /// All parts together, W/m2.
    pub fn net_w_m2(&self) -> f64 {
        self.solar + self.air + self.back + self.evaporation + self.contact
    }
}

/// The heat that comes in through the surface of water at a temperature (C) under a share of shade (0 to 1).
pub fn budget(air: &Air, water_c: f64, shade: f64) -> Budget {
    let _ = (air, water_c, shade);
    Budget { solar: 0.0, air: 0.0, back: 0.0, evaporation: 0.0, contact: 0.0 }
}

/// The temperature (C) at which no heat passes; `None` where water would freeze.
pub fn equilibrium_c(air: &Air, shade: f64) -> Option<f64> {
    let _ = (air, shade);
    None
}

/// Heat that passes for each degree from equilibrium, W/m2/C, of water at a temperature (C).
pub fn exchange_w_m2_c(air: &Air, water_c: f64) -> f64 {
    let _ = (air, water_c);
    0.0
}
