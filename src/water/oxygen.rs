//! Dissolved oxygen at saturation, and percent of it.
//!
//! Measured oxygen above saturation is real water; nothing here clamps it.
//!
//! Methods: `docs/methods.md`, section 1.

/// Kelvin at 0 C (standard; exact by definition).
const KELVIN: f64 = 273.15;

/// Air pressure of the standard atmosphere.
///
/// # Units
/// `altitude_m` above sea level, not a local elevation; atm, nothing left above 44.3 km.
///
/// # References
/// P = (1 - 2.25577e-5 z)^5.25588: International Standard Atmosphere as in ASHRAE Fundamentals 2017,
/// chapter 1 (standard).
pub fn pressure_atm(altitude_m: f64) -> f64 {
    (1.0 - 2.25577e-5 * altitude_m).max(0.0).powf(5.25588)
}

/// Oxygen in water at equilibrium with moist air at 1 atm.
///
/// # Units
/// C, salt g/kg; mg/L.
///
/// # References
/// Benson & Krause 1984 as in APHA Standard Methods 4500-O (standard), 0-40 C.
pub fn saturation_1atm_mg_l(temperature_c: f64, salt_g_per_kg: f64) -> f64 {
    let x = (temperature_c + KELVIN).recip();
    let fresh = -139.34411 + x * (1.575701e5 + x * (-6.642308e7 + x * (1.243800e10 - x * 8.621949e11)));
    let salt = 1.7674e-2 + x * (-10.754 + x * 2140.7);
    (fresh - salt_g_per_kg * salt).exp()
}

/// Pressure of water vapour over water, as the oxygen formula uses it.
///
/// # Units
/// C; atm.
///
/// # References
/// ln Pwv = 11.8571 - 3840.70/T - 216961/T^2, Benson & Krause 1984 in APHA 4500-O (standard).
pub fn vapour_pressure_atm(temperature_c: f64) -> f64 {
    let x = (temperature_c + KELVIN).recip();
    (11.8571 - x * (3840.70 + x * 216961.0)).exp()
}

/// Saturation at a pressure over saturation at 1 atm; not below zero, where water would boil.
///
/// # Units
/// C, atm; ratio.
///
/// # References
/// P [(1 - Pwv/P)(1 - th P)] / [(1 - Pwv)(1 - th)], th = 0.000975 - 1.426e-5 t + 6.436e-8 t^2, Benson &
/// Krause 1984 in APHA 4500-O (standard).
pub fn pressure_factor(temperature_c: f64, pressure_atm: f64) -> f64 {
    let vapour = vapour_pressure_atm(temperature_c);
    let theta = 0.000975 + temperature_c * (-1.426e-5 + temperature_c * 6.436e-8);
    let at = |pressure: f64| (pressure - vapour) * (1.0 - theta * pressure);
    (at(pressure_atm) / at(1.0)).max(0.0)
}

/// Oxygen at saturation under a given air pressure ([`pressure_atm`] from the altitude of the water).
///
/// # Units
/// C, salt g/kg, atm; mg/L.
///
/// # References
/// [`saturation_1atm_mg_l`] times [`pressure_factor`].
pub fn saturation_mg_l(temperature_c: f64, salt_g_per_kg: f64, pressure_atm: f64) -> f64 {
    saturation_1atm_mg_l(temperature_c, salt_g_per_kg) * pressure_factor(temperature_c, pressure_atm)
}

/// Percent of saturation of an oxygen content.
///
/// # Units
/// mg/L both; percent.
pub fn oxygen_percent(oxygen_mg_l: f64, saturation_mg_l: f64) -> f64 {
    100.0 * oxygen_mg_l / saturation_mg_l
}

/// Oxygen content of a percent of saturation.
///
/// # Units
/// Percent, mg/L; mg/L.
pub fn oxygen_from_percent_mg_l(percent: f64, saturation_mg_l: f64) -> f64 {
    0.01 * percent * saturation_mg_l
}
