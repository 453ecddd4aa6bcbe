//! Dissolved solids, measured or from electrical conductance.
//!
//! Methods: `docs/methods.md`, section 1.

use super::density::pure_water_kg_m3;

/// Dissolved solids per specific conductance at 25 C, mg/L per uS/cm (recalled: textbook range 0.55-0.9 by
/// the make-up of the salts, from memory). A default, for the site to replace.
pub const SOLIDS_PER_CONDUCTANCE: f64 = 0.65;

/// Rise of conductivity per C, as a share of its value at 25 C (recalled: 1.91 %, common to field
/// instruments, from memory). A default.
pub const CONDUCTIVITY_PER_C: f64 = 0.0191;

/// Salt as density and oxygen need it: dissolved solids per mass of water.
///
/// # Units
/// mg/L, C; g/kg.
///
/// # References
/// mg/L over the density of pure water (choice; the salt's own mass changes it by under 0.2 % at 1500 mg/L).
#[inline]
pub fn dissolved_g_per_kg(dissolved_mg_l: f64, temperature_c: f64) -> f64 {
    dissolved_mg_l / pure_water_kg_m3(temperature_c)
}

/// Dissolved solids from specific conductance.
///
/// # Units
/// uS/cm at 25 C, mg/L per uS/cm ([`SOLIDS_PER_CONDUCTANCE`]); mg/L.
#[inline]
pub fn dissolved_from_conductance_mg_l(specific_us_cm: f64, solids_per_conductance: f64) -> f64 {
    specific_us_cm * solids_per_conductance
}

/// Conductance at 25 C from the raw reading at the water's own temperature.
///
/// # Units
/// uS/cm, C, share per C ([`CONDUCTIVITY_PER_C`]); uS/cm at 25 C.
///
/// # References
/// Linear compensation (recalled, from memory).
#[inline]
pub fn specific_conductance_us_cm(raw_us_cm: f64, temperature_c: f64, per_c: f64) -> f64 {
    raw_us_cm / (1.0 + per_c * (temperature_c - 25.0))
}
