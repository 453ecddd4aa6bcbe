//! Water vapour in the air: pressure at saturation, dew point, and what humidity or a wet bulb tell of them.
//!
//! The budget of heat has its own form of the pressure at saturation, in mmHg, with which its wind function was
//! fitted; it is the form of FAO-56 to within half a percent.
//!
//! Methods: `docs/methods.md`, section 6.

/// Shape of the Tetens form (standard; FAO-56, equation 11).
const SLOPE: f64 = 17.27;
/// Offset of the Tetens form, C (standard; FAO-56, equation 11).
const OFFSET_C: f64 = 237.3;
/// Pressure at saturation at 0 C, kPa (standard; FAO-56, equation 11).
const AT_ZERO_KPA: f64 = 0.6108;
/// The same as the budget of heat has it, mmHg (recalled; Edinger, Brady & Geyer 1974).
const AT_ZERO_MMHG: f64 = 4.596;
/// Psychrometric coefficient of a wet bulb with a fan, 1/C (standard; FAO-56, equation 16).
const WET_BULB_PER_C: f64 = 0.000662;

fn shape(temperature_c: f64) -> f64 {
    (SLOPE * temperature_c / (temperature_c + OFFSET_C)).exp()
}

/// Pressure of water vapour at saturation.
///
/// # Units
/// C, above -60; kPa.
///
/// # References
/// 0.6108 exp(17.27 T/(T + 237.3)), Tetens as in FAO-56, Allen et al. 1998, equation 11 (standard).
pub fn saturation_kpa(temperature_c: f64) -> f64 {
    AT_ZERO_KPA * shape(temperature_c)
}

/// The same as the budget of heat takes it.
///
/// # Units
/// C, above -60; mmHg.
///
/// # References
/// 4.596 exp(17.27 T/(T + 237.3)), Edinger, Brady & Geyer 1974 (recalled).
pub fn saturation_mmhg(temperature_c: f64) -> f64 {
    AT_ZERO_MMHG * shape(temperature_c)
}

/// The temperature at which a pressure of vapour is that at saturation.
///
/// # Units
/// kPa, above 0; C.
///
/// # References
/// Inverse of [`saturation_kpa`] (derived).
pub fn dew_point_c(vapour_kpa: f64) -> f64 {
    let log = (vapour_kpa / AT_ZERO_KPA).ln();
    OFFSET_C * log / (SLOPE - log)
}

/// Dew point of air of a relative humidity.
///
/// # Units
/// C, share from above 0 to 1; C.
///
/// # References
/// Humidity is vapour over vapour at saturation (standard; FAO-56, equation 10).
pub fn dew_point_of_humidity_c(temperature_c: f64, humidity: f64) -> f64 {
    dew_point_c(humidity * saturation_kpa(temperature_c))
}

/// Pressure of vapour by a wet and a dry bulb; below zero where the two cannot belong together.
///
/// # Units
/// C, C, air pressure kPa; kPa.
///
/// # References
/// ea = es(wet) - 0.000662 P (dry - wet), FAO-56, equations 15 and 16, a bulb with a fan (standard).
pub fn vapour_of_wet_bulb_kpa(dry_c: f64, wet_c: f64, pressure_kpa: f64) -> f64 {
    saturation_kpa(wet_c) - WET_BULB_PER_C * pressure_kpa * (dry_c - wet_c)
}
