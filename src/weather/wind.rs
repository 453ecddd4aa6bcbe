//! Wind brought to the height at which the budget of heat wants it.
//!
//! Methods: `docs/methods.md`, section 6.

/// Height of the wind in the budget of heat, m (recalled; Brady, Graves & Geyer 1969).
pub const WIND_HEIGHT_M: f64 = 7.0;

/// Height of a station's wind where it gives none, m (choice: that of the weather services).
pub const STATION_HEIGHT_M: f64 = 10.0;

/// Wind at 7 m from wind at another height.
///
/// # Units
/// m/s, m above 0; m/s.
///
/// # References
/// The 1/7-power law (recalled; common in engineering meteorology).
pub fn wind_at_7_m(wind_m_s: f64, height_m: f64) -> f64 {
    wind_m_s * (WIND_HEIGHT_M / height_m).powf(1.0 / 7.0)
}
