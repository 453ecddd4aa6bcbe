//! Density at surface pressure: rho(T, S, C) = rho_T(T) + b(T) S + 1e-3 C (1 - rho_T/rho_s).
//!
//! Density in place must never be differenced over depth: compression alone adds about 0.9 kg/m3 in 200 m
//! and would pass for stratification. Hence no pressure term here.
//!
//! Methods: `docs/methods.md`, section 1.

/// Density of the grains of suspended sediment unless the site says otherwise, kg/m3 (that of quartz; choice).
pub const SEDIMENT_DENSITY_KG_M3: f64 = 2650.0;

/// Tanaka et al. 2001, Metrologia 38:301-309, the CIPM formula (standard), 0-40 C; there within
/// 0.0012 kg/m3 of IAPWS-95.
const A1: f64 = -3.983035;
const A2: f64 = 301.797;
const A3: f64 = 522528.9;
const A4: f64 = 69.34881;
const A5: f64 = 999.974950;

/// Salt slope of Chen & Millero 1986, Limnol. Oceanogr. 31:657-662 (standard).
const B0: f64 = 0.8181;
const B1: f64 = -3.85e-3;
const B2: f64 = 4.96e-5;

/// Density of air-free pure water at 1 atm.
///
/// # Units
/// C; kg/m3.
///
/// # References
/// Tanaka et al. 2001, Metrologia 38:301-309; 0-40 C (standard).
#[inline]
pub fn pure_water_kg_m3(temperature_c: f64) -> f64 {
    let u = temperature_c + A1;
    A5 * (1.0 - u * u * (temperature_c + A2) / (A3 * (temperature_c + A4)))
}

/// How density rises with dissolved salt.
///
/// # Units
/// C; kg/m3 per g/kg.
///
/// # References
/// Chen & Millero 1986, Limnol. Oceanogr. 31:657-662 (standard).
#[inline]
pub fn salt_slope(temperature_c: f64) -> f64 {
    B0 + temperature_c * (B1 + temperature_c * B2)
}

/// What suspended grains add: their weight less that of the water they push aside.
///
/// # Units
/// `water_kg_m3` density of the water between the grains, `suspended_mg_l` mg per litre of mixture,
/// `grain_kg_m3` density of the grains; kg/m3.
///
/// # References
/// Volumes add up (derived).
#[inline]
pub fn suspended_gain_kg_m3(water_kg_m3: f64, suspended_mg_l: f64, grain_kg_m3: f64) -> f64 {
    1e-3 * suspended_mg_l * (1.0 - water_kg_m3 / grain_kg_m3)
}

/// Density of reservoir water at surface pressure; within 0.0053 kg/m3 of TEOS-10 over 0-35 C and
/// 0-1500 mg/L of salt.
///
/// # Units
/// C, dissolved solids g/kg, suspended solids mg/L, density of the grains kg/m3
/// ([`SEDIMENT_DENSITY_KG_M3`]); kg/m3.
///
/// # References
/// Tanaka et al. 2001 and Chen & Millero 1986 (standard), buoyancy of grains (derived).
#[inline]
pub fn density_kg_m3(temperature_c: f64, salt_g_per_kg: f64, suspended_mg_l: f64, grain_kg_m3: f64) -> f64 {
    let pure = pure_water_kg_m3(temperature_c);
    pure + salt_slope(temperature_c) * salt_g_per_kg + suspended_gain_kg_m3(pure, suspended_mg_l, grain_kg_m3)
}

/// Temperature at which water of a given salt content is densest: 3.983 C for pure water, lower by about
/// 0.2 C per g/kg.
///
/// # Units
/// g/kg, 0 to 35; C.
///
/// # References
/// Root of the slope of [`density_kg_m3`] (derived).
pub fn temperature_of_greatest_density_c(salt_g_per_kg: f64) -> f64 {
    // the slope falls through zero inside this bracket for any salt content up to that of the sea
    let (mut low, mut high) = (-5.0, 5.0);
    for _ in 0..HALVINGS {
        let middle = 0.5 * (low + high);
        if slope_kg_m3_k(middle, salt_g_per_kg) > 0.0 {
            low = middle;
        } else {
            high = middle;
        }
    }
    0.5 * (low + high)
}

/// Halvings of a 10 C bracket that bring it to 1e-14 C.
const HALVINGS: usize = 50;

/// d rho / dT of clean water of a given salt content.
fn slope_kg_m3_k(temperature_c: f64, salt_g_per_kg: f64) -> f64 {
    let (u, v, w) = (temperature_c + A1, temperature_c + A2, temperature_c + A4);
    let pure = -A5 / A3 * u * (2.0 * v * w + u * w - u * v) / (w * w);
    pure + salt_g_per_kg * (B1 + 2.0 * B2 * temperature_c)
}
