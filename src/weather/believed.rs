//! What is believed of a reading of the air, whatever file it stands in.
//!
//! All are choices: records of the Earth and a little beyond.

use std::ops::RangeInclusive;

/// Air, dew point or wet bulb, C (choice).
pub const AIR_C: RangeInclusive<f64> = -60.0..=60.0;
/// Wind, m/s (choice).
pub const WIND_M_S: RangeInclusive<f64> = 0.0..=75.0;
/// Sunshine of a day, h (choice).
pub const SUNSHINE_H: RangeInclusive<f64> = 0.0..=24.0;
/// Sun and sky, W/m2 (choice); sound sensors slip a little below none at night.
pub const SOLAR_W_M2: RangeInclusive<f64> = -20.0..=1500.0;
/// By how much a dew point may stand above its air, C (choice: two good sensors differ by less).
pub const DEW_ABOVE_C: f64 = 1.0;
