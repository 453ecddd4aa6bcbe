//! The sun: where it stands, what it sends above the air, and how much of that comes down.
//!
//! The declination is Spencer's: the shorter form of FAO-56 makes the sun of October up to 5 % low at 45 N.
//!
//! Methods: `docs/methods.md`, section 6.

use std::f64::consts::{PI, TAU};

/// Solar constant, W/m2: 0.0820 MJ/m2/min (standard; FAO-56, Allen et al. 1998, equation 21).
pub const SOLAR_CONSTANT_W_M2: f64 = 0.0820e6 / 60.0;
/// Share of the sun above the air that comes down under full cloud (standard; FAO-56, equation 35).
const OVERCAST: f64 = 0.25;
/// Share that a clear sky adds (standard; FAO-56, equation 35).
const CLEAR: f64 = 0.50;
/// Gain of a clear sky with altitude, 1/m (standard; FAO-56, equation 37).
const PER_M: f64 = 2e-5;
/// Share of a clear sky's sun that full cloud takes (recalled; Tennessee Valley Authority 1972).
const TAKEN_BY_CLOUD: f64 = 0.65;

/// Day of the year as an angle from its first day.
fn year_angle(day: u32) -> f64 {
    TAU * (f64::from(day) - 1.0) / 365.0
}

/// Declination of the sun.
///
/// # Units
/// Day of the year from 1; radians, north positive.
///
/// # References
/// Spencer 1971, Fourier series representation of the position of the sun, Search 2(5):172 (standard).
pub fn declination_rad(day: u32) -> f64 {
    let b = year_angle(day);
    0.006918 - 0.399912 * b.cos() + 0.070257 * b.sin() - 0.006758 * (2.0 * b).cos()
        + 0.000907 * (2.0 * b).sin()
        - 0.002697 * (3.0 * b).cos()
        + 0.00148 * (3.0 * b).sin()
}

/// Square of mean distance over distance of the sun.
///
/// # Units
/// Day of the year from 1; ratio.
///
/// # References
/// Spencer 1971 (standard).
pub fn nearness(day: u32) -> f64 {
    let b = year_angle(day);
    1.000110
        + 0.034221 * b.cos()
        + 0.001280 * b.sin()
        + 0.000719 * (2.0 * b).cos()
        + 0.000077 * (2.0 * b).sin()
}

/// Hour angle at which the sun sets; 0 where it does not rise, pi where it does not set.
///
/// # Units
/// Latitude and declination, radians; radians.
///
/// # References
/// FAO-56, equation 25 (standard).
pub fn sunset_rad(latitude_rad: f64, declination_rad: f64) -> f64 {
    (-latitude_rad.tan() * declination_rad.tan()).clamp(-1.0, 1.0).acos()
}

/// Hours from sunrise to sunset.
///
/// # Units
/// Hour angle of sunset, radians; h.
///
/// # References
/// FAO-56, equation 34 (standard).
pub fn daylight_h(sunset_rad: f64) -> f64 {
    24.0 / PI * sunset_rad
}

/// Sun above the air, on level ground, as the mean of a day.
///
/// # Units
/// Latitude and declination, radians; [`nearness`]; W/m2.
///
/// # References
/// FAO-56, equation 21 (standard).
pub fn above_air_w_m2(latitude_rad: f64, declination_rad: f64, nearness: f64) -> f64 {
    let sunset = sunset_rad(latitude_rad, declination_rad);
    between_w_m2(latitude_rad, declination_rad, nearness, (-sunset, sunset)) * sunset / PI
}

/// Sun above the air as the mean between two hour angles; what lies beyond sunrise or sunset counts as none.
///
/// # Units
/// Latitude, declination and hour angles within a half turn of noon, radians; W/m2.
///
/// # References
/// FAO-56, equation 28 (standard).
pub fn between_w_m2(latitude_rad: f64, declination_rad: f64, nearness: f64, hours_rad: (f64, f64)) -> f64 {
    let sunset = sunset_rad(latitude_rad, declination_rad);
    let (from, to) = (hours_rad.0.clamp(-sunset, sunset), hours_rad.1.clamp(-sunset, sunset));
    let whole = hours_rad.1 - hours_rad.0;
    if whole <= 0.0 {
        return 0.0;
    }
    let standing = latitude_rad.sin() * declination_rad.sin() * (to - from);
    let turning = latitude_rad.cos() * declination_rad.cos() * (to.sin() - from.sin());
    (SOLAR_CONSTANT_W_M2 * nearness * (standing + turning) / whole).max(0.0)
}

/// Sun above the air at a latitude: mean of a day of the year, or of one of its hours.
///
/// # Units
/// Degrees north; day of the year from 1; hours of solar time in which the hour begins and ends, `None` for the
/// whole day; W/m2.
///
/// # References
/// [`above_air_w_m2`] and [`between_w_m2`] with Spencer's declination.
pub fn overhead_w_m2(latitude_deg: f64, day: u32, hours: Option<(f64, f64)>) -> f64 {
    let (latitude, declination, near) = (latitude_deg.to_radians(), declination_rad(day), nearness(day));
    match hours {
        None => above_air_w_m2(latitude, declination, near),
        Some((from, to)) => {
            let angle = |hour: f64| (hour - 12.0) * PI / 12.0;
            between_w_m2(latitude, declination, near, (angle(from), angle(to)))
        }
    }
}

/// Share of the sun above the air that a clear sky lets down.
///
/// # Units
/// Altitude above sea level, m; share.
///
/// # References
/// 0.75 + 2e-5 z, FAO-56, equation 37 (standard).
pub fn clear_share(altitude_m: f64) -> f64 {
    OVERCAST + CLEAR + PER_M * altitude_m.max(0.0)
}

/// Share of the sun above the air that comes down on a day of so much sunshine.
///
/// # Units
/// Hours of sunshine over hours of daylight, 0 to 1; share.
///
/// # References
/// 0.25 + 0.50 n/N, Angstrom as in FAO-56, equation 35 (standard).
pub fn sunny_share(sunshine: f64) -> f64 {
    OVERCAST + CLEAR * sunshine.clamp(0.0, 1.0)
}

/// Share of a clear sky's sun that comes down under cloud.
///
/// # Units
/// Cloud, 0 to 1; share.
///
/// # References
/// 1 - 0.65 C^2, Tennessee Valley Authority 1972 (recalled).
pub fn under_cloud(cloud: f64) -> f64 {
    let cloud = cloud.clamp(0.0, 1.0);
    1.0 - TAKEN_BY_CLOUD * cloud * cloud
}

/// Cloud that lets so much of a clear sky's sun down.
///
/// # Units
/// Share of a clear sky's sun; cloud, 0 to 1.
///
/// # References
/// Inverse of [`under_cloud`] (derived).
pub fn cloud_of_share(share: f64) -> f64 {
    ((1.0 - share) / TAKEN_BY_CLOUD).clamp(0.0, 1.0).sqrt()
}
