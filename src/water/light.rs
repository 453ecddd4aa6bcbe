//! Light in water: how fast it is lost, and what is left at a depth.
//!
//! Methods: `docs/methods.md`, section 8.

/// Extinction of light times the depth at which a white disc is lost from sight (recalled; Poole & Atkins 1929).
const PER_SECCHI: f64 = 1.7;
/// Share of the sun that is gone within the first decimetres (recalled: 0.4 to 0.5 in fresh water).
pub const LIGHT_AT_SURFACE: f64 = 0.4;

/// Extinction of light from the depth at which a white disc is lost from sight (Secchi).
///
/// # Units
/// m; 1/m.
///
/// # References
/// 1.7 over that depth, Poole & Atkins 1929 (recalled; 1.44 and 1.45 are in use too).
pub fn extinction_per_m(secchi_m: f64) -> f64 {
    PER_SECCHI / secchi_m
}

/// Share of the sun that gets in which is left at a depth.
///
/// # Units
/// Extinction 1/m, depth m; share 0 to 1.
///
/// # References
/// (1 - beta) exp(-Kd z), beta = 0.4 (recalled); all of it at the surface itself.
pub fn light_left(extinction_per_m: f64, depth_m: f64) -> f64 {
    if depth_m > 0.0 { (1.0 - LIGHT_AT_SURFACE) * (-extinction_per_m * depth_m).exp() } else { 1.0 }
}
