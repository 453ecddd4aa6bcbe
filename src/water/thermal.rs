//! Heat of water: specific heat, latent heat, viscosity; and the fixed pair that heat content is kept in.
//!
//! Methods: `docs/methods.md`, section 1.

/// Density with which heat content is kept, kg/m3 (choice: water of 15 C). It and [`CP_REF_J_KG_K`] are
/// fixed so that mixing conserves heat exactly; their product is within 1 % of the true one at 0-40 C.
pub const RHO_REF_KG_M3: f64 = 999.1;

/// Specific heat with which heat content is kept, J/(kg K) (choice: water of 15 C).
pub const CP_REF_J_KG_K: f64 = 4188.0;

/// Specific heat of pure water at 1 atm.
///
/// # Units
/// C, 0-40; J/(kg K).
///
/// # References
/// Quartic fitted to IAPWS-95 at whole degrees, largest error 0.09 J/(kg K) (derived).
pub fn specific_heat_j_kg_k(temperature_c: f64) -> f64 {
    let t = temperature_c;
    4219.352 + t * (-3.3688 + t * (0.11206 + t * (-1.8673e-3 + t * 1.37e-5)))
}

/// Kinematic viscosity of pure water at 1 atm.
///
/// # Units
/// C, 0-40; m2/s.
///
/// # References
/// Exponential of a quartic fitted to the IAPWS viscosity over IAPWS-95 density at whole degrees, largest
/// error 0.01 % (derived).
pub fn kinematic_viscosity_m2_s(temperature_c: f64) -> f64 {
    let t = temperature_c;
    1e-6 * (0.5832672 + t * (-0.034829 + t * (3.5652e-4 + t * (-3.674e-6 + t * 2.1834e-8)))).exp()
}

/// Latent heat of vaporisation.
///
/// # Units
/// C of the water surface; J/kg.
///
/// # References
/// 2.501 - 2.361e-3 T MJ/kg as in FAO-56, Allen et al. 1998 (standard); within 0.0006 MJ/kg of IAPWS-95 at
/// 0-40 C.
pub fn latent_heat_j_kg(temperature_c: f64) -> f64 {
    2.501e6 - 2.361e3 * temperature_c
}
