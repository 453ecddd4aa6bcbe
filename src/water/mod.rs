//! Water of a fresh reservoir: density, dissolved oxygen, heat.
//!
//! Plain functions of temperature in C, salt in g/kg and solids in mg/L, at the pressure of the surface.

mod aeration;
mod density;
mod light;
mod oxygen;
mod reaeration;
mod solids;
mod thermal;

#[cfg(test)]
mod tests;

pub use aeration::{Aeration, GREATEST_FALL_M, deficit_ratio_of_fall, efficiency_of_ratio};
pub use density::{
    SEDIMENT_DENSITY_KG_M3, density_kg_m3, pure_water_kg_m3, salt_slope, suspended_gain_kg_m3,
    temperature_of_greatest_density_c,
};
pub use light::{LIGHT_AT_SURFACE, extinction_per_m, light_left};
pub use oxygen::{
    oxygen_from_percent_mg_l, oxygen_percent, pressure_atm, pressure_factor, saturation_1atm_mg_l,
    saturation_mg_l, vapour_pressure_atm,
};
pub use reaeration::{
    Sag, churchill_per_day, critical_sag, deficit_mg_l, o_connor_dobbins_per_day, owens_gibbs_per_day,
    reaeration_at_per_day, reaeration_per_day,
};
pub use solids::{
    CONDUCTIVITY_PER_C, SOLIDS_PER_CONDUCTANCE, dissolved_from_conductance_mg_l, dissolved_g_per_kg,
    specific_conductance_us_cm,
};
pub use thermal::{
    CP_REF_J_KG_K, RHO_REF_KG_M3, kinematic_viscosity_m2_s, latent_heat_j_kg, specific_heat_j_kg_k,
};

/// Standard acceleration of gravity, m/s2 (standard; exact by convention, 3rd CGPM 1901).
pub const G_M_S2: f64 = 9.80665;
