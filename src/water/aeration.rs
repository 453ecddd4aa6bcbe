//! Oxygen gained where water leaves the dam.
//!
//! Aeration moves oxygen towards saturation from either side and never across it.
//!
//! Methods: `docs/methods.md`, section 5.

/// Fall at which the gain is held, m (derived: the form peaks at 4.55 m and falls beyond; held a little below).
pub const GREATEST_FALL_M: f64 = 4.5;

/// What an outlet, or the conduit of a well, does to oxygen.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Aeration {
    /// It falls freely or over a weir.
    Fall {
        /// Height of the fall, m.
        height_m: f64,
        /// Water quality factor: 1.8 clean, 1 slightly, 0.65 grossly polluted (recalled).
        quality: f64,
        /// Form of the fall: 1 free fall, 0.8 broad step, 0.05 sluice (recalled).
        weir: f64,
    },
    /// Share of the deficit, or of what is above saturation, that it makes up; 0 to 1.
    Efficiency(f64),
    /// Oxygen given to water below saturation, mg/L.
    Gain(f64),
}

impl Aeration {
    /// Oxygen of water after it.
    ///
    /// # Units
    /// mg/L, C; mg/L.
    ///
    /// # References
    /// Cd = Cs - (Cs - Cu)/r, r the deficit ratio (derived); a plain gain ends at saturation (choice).
    pub fn below_mg_l(self, oxygen_mg_l: f64, saturation_mg_l: f64, temperature_c: f64) -> f64 {
        let left = |share: f64| saturation_mg_l - (saturation_mg_l - oxygen_mg_l) * share;
        match self {
            Self::Fall { height_m, quality, weir } => {
                left(deficit_ratio_of_fall(height_m, quality, weir, temperature_c).recip())
            }
            Self::Efficiency(efficiency) => left(1.0 - efficiency),
            Self::Gain(gain_mg_l) => oxygen_mg_l.max((oxygen_mg_l + gain_mg_l).min(saturation_mg_l)),
        }
    }
}

/// Deficit above over deficit below a weir or a free fall; the height is held at [`GREATEST_FALL_M`].
///
/// # Units
/// m, factors of quality and form, C; ratio, 1 or more.
///
/// # References
/// r = 1 + 0.38 a b h (1 - 0.11 h)(1 + 0.046 T), Water Pollution Research Laboratory 1973, Notes on Water Pollution
/// 61 (recalled).
pub fn deficit_ratio_of_fall(height_m: f64, quality: f64, weir: f64, temperature_c: f64) -> f64 {
    let h = height_m.clamp(0.0, GREATEST_FALL_M);
    1.0 + (0.38 * quality * weir * h * (1.0 - 0.11 * h) * (1.0 + 0.046 * temperature_c)).max(0.0)
}

/// Share of the deficit that a deficit ratio makes up.
///
/// # Units
/// Ratio, 1 or more; share.
///
/// # References
/// E = 1 - 1/r (derived).
pub fn efficiency_of_ratio(ratio: f64) -> f64 {
    1.0 - ratio.recip()
}
