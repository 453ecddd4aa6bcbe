//! The knobs that casts can tell, and what is published of each.
//!
//! Methods: `docs/methods.md`, section 8.

use crate::site::Knobs;

/// Range of the share of the wind's work (recalled: 0.05 to 1.3 in the literature).
pub const WIND: [f64; 2] = [0.05, 1.3];
/// Range of the extinction of light, 1/m (recalled: from clear mountain water to turbid pools).
pub const LIGHT_PER_M: [f64; 2] = [0.1, 2.5];
/// Range of the factor on the diffusion (recalled: fits to lakes spread about threefold either way).
pub const DIFFUSION: [f64; 2] = [0.3, 3.0];
/// Range of the demand of the water, mg/L per day at 20 C (recalled: 0.01 to 0.3 by deep waters).
pub const WATER_DEMAND_MG_L_DAY: [f64; 2] = [0.01, 0.3];

/// A knob that is fitted.
pub(super) struct Knob {
    pub(super) name: &'static str,
    pub(super) range: [f64; 2],
    pub(super) of: fn(&mut Knobs) -> &mut f64,
}

/// Those of the temperature.
pub(super) const WARMTH: [Knob; 3] = [
    Knob { name: "wind", range: WIND, of: |k| &mut k.wind },
    Knob { name: "light", range: LIGHT_PER_M, of: |k| &mut k.light_per_m },
    Knob { name: "diffusion", range: DIFFUSION, of: |k| &mut k.diffusion },
];
/// That of the oxygen.
pub(super) const BREATH: [Knob; 1] =
    [Knob { name: "oxygen demand", range: WATER_DEMAND_MG_L_DAY, of: |k| &mut k.water_demand_mg_l_day }];

/// One knob of what was learned.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Fitted {
    /// What it is called.
    pub name: &'static str,
    /// Its value before.
    pub before: f64,
    /// Its value found.
    pub after: f64,
    /// The published range it was sought in.
    pub range: [f64; 2],
    /// How far it can go while, the others following, the pool comes about as near; all of the range where it is not
    /// told.
    pub near: [f64; 2],
    /// Whether it ended at an end of its range.
    pub at_end: bool,
    /// Whether the casts tell it; it stays as it was where they do not.
    pub told: bool,
}
