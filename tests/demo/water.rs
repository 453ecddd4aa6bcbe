//! Density and oxygen saturation, written a second time and on purpose without the program's own:
//! demonstration data made with the code they demonstrate could hide a slip of that code.

/// Density of water, kg/m3, at `temperature_c` (0-40 C) with `conductance_us_cm` (specific, at 25 C).
///
/// # References
/// Tanaka et al. 2001, Metrologia 38:301-309 (standard). Solids: 0.65 mg/L per uS/cm (from memory) and
/// 0.80 kg/m3 per g/kg, the middle of Chen & Millero 1986 between 0 and 15 C, rounded (choice).
pub(crate) fn density_kg_m3(temperature_c: f64, conductance_us_cm: f64) -> f64 {
    let t = temperature_c;
    let pure = 999.974950 * (1.0 - (t - 3.983035).powi(2) * (t + 301.797) / (522528.9 * (t + 69.34881)));
    pure + 0.80 * 0.65e-3 * conductance_us_cm
}

/// Dissolved oxygen in balance with moist air, mg/L, in fresh water at `altitude_m` above sea level.
///
/// # References
/// Benson & Krause 1984 as in APHA Standard Methods 4500-O (standard), its correction for pressure in the
/// short form Cs (P - p_w)/(1 - p_w): the term left out is below 0.01 % at 500 m (derived). Pressure of the
/// standard atmosphere; vapour pressure by Magnus, 6.112 hPa exp(17.62 t/(243.12 + t)) (from memory).
pub(crate) fn oxygen_saturation_mg_l(temperature_c: f64, altitude_m: f64) -> f64 {
    let k = temperature_c + 273.15;
    let at_sea_level = (-139.34411 + 1.575701e5 / k - 6.642308e7 / k.powi(2) + 1.243800e10 / k.powi(3)
        - 8.621949e11 / k.powi(4))
    .exp();
    let pressure_atm = (1.0 - 2.25577e-5 * altitude_m).powf(5.25588);
    let vapour_atm = 6.112 / 1013.25 * (17.62 * temperature_c / (243.12 + temperature_c)).exp();
    at_sea_level * (pressure_atm - vapour_atm) / (1.0 - vapour_atm)
}
