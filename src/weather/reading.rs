//! What a station or a forecast tells of the air, turned into the air that the budget of heat wants.
//!
//! One path for every source: rows of a file by the hour or by the day, and mean weather by month.
//!
//! Methods: `docs/methods.md`, section 6.

use super::Air;
use super::humidity::{dew_point_c, dew_point_of_humidity_c, vapour_of_wet_bulb_kpa};
use super::sun::{
    clear_share, cloud_of_share, daylight_h, declination_rad, overhead_w_m2, sunny_share, sunset_rad,
    under_cloud,
};
use super::wind::wind_at_7_m;
use crate::problem::Problem;

/// Cloud where nothing tells it (choice); it enters the long waves of the sky only.
pub const CLOUD_UNKNOWN: f64 = 0.5;

/// Driest air that is believed (choice): drier readings are a fault of the sensor.
pub const LEAST_HUMIDITY: f64 = 0.01;

/// Pascals of the standard atmosphere over a thousand, kPa (standard).
const KPA_PER_ATM: f64 = 101.325;

/// How the water in the air is told.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Damp {
    /// Relative humidity, 0 to 1.
    Humidity(f64),
    /// Dew point, C.
    DewPoint(f64),
    /// A wet bulb beside the dry one, C.
    WetBulb(f64),
}

/// How the sky is told; any of these may be absent.
#[derive(Debug, Clone, Copy, Default, PartialEq)]
pub struct Sky {
    /// Cloud, 0 to 1.
    pub cloud: Option<f64>,
    /// Sunshine of the day, h.
    pub sunshine_h: Option<f64>,
    /// Sun and sky on level ground, W/m2.
    pub solar_w_m2: Option<f64>,
}

/// One reading of the air.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Reading {
    /// Air temperature, C.
    pub temperature_c: f64,
    /// Water in the air.
    pub damp: Damp,
    /// Wind, m/s.
    pub wind_m_s: f64,
    /// Height of that wind, m.
    pub wind_height_m: f64,
    /// The sky.
    pub sky: Sky,
}

/// Where and when a reading is of: it decides what the sun can send.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Stand {
    /// Latitude, degrees north.
    pub latitude_deg: Option<f64>,
    /// Altitude above sea level, m.
    pub altitude_m: Option<f64>,
    /// Day of the year, from 1.
    pub day: u32,
    /// Hours of solar time in which the reading's hour begins and ends; `None` for a whole day.
    pub hours: Option<(f64, f64)>,
}

impl Stand {
    /// Sun above the air, W/m2; `None` without a latitude.
    fn above_air_w_m2(&self) -> Option<f64> {
        Some(overhead_w_m2(self.latitude_deg?, self.day, self.hours))
    }

    /// Sun that a clear sky would let down, W/m2; `None` without a latitude.
    pub fn clear_w_m2(&self) -> Option<f64> {
        Some(self.above_air_w_m2()? * clear_share(self.altitude_m.unwrap_or(0.0)))
    }

    /// Hours of sunshine over hours of daylight, 0 to 1; `None` without a latitude.
    fn sunny(&self, sunshine_h: f64) -> Option<f64> {
        let daylight = daylight_h(sunset_rad(self.latitude_deg?.to_radians(), declination_rad(self.day)));
        Some(if daylight > 0.0 { (sunshine_h / daylight).clamp(0.0, 1.0) } else { 0.0 })
    }
}

/// What is said where the sun must be computed and cannot.
fn no_latitude() -> Problem {
    let words = "the sun is computed from cloud or sunshine, for which the latitude is needed";
    Problem::refused("no-latitude", words, "give `place: { latitude: 44.1 }`, or radiation")
}

impl Reading {
    /// The air of a reading, and whether its cloud is only assumed.
    ///
    /// Radiation that was measured is kept; else sunshine gives it, else cloud. Cloud that was seen is kept; else
    /// sunshine gives it, else radiation over that of a clear sky, else [`CLOUD_UNKNOWN`] is assumed.
    ///
    /// # Errors
    /// `no-sky` where nothing tells the sun, `no-latitude` where it would have to be computed and the latitude is not
    /// known, `humidity` where the humidity or the wet bulb cannot be.
    pub fn air(&self, stand: &Stand) -> Result<(Air, bool), Problem> {
        let Sky { cloud, sunshine_h, solar_w_m2 } = self.sky;
        let sunny = sunshine_h.and_then(|hours| stand.sunny(hours));
        let solar = match (solar_w_m2, sunshine_h, cloud) {
            (Some(solar), ..) => Some(solar),
            (None, Some(_), _) => {
                stand.above_air_w_m2().zip(sunny).map(|(sun, sunny)| sun * sunny_share(sunny))
            }
            (None, None, Some(cloud)) => stand.clear_w_m2().map(|sun| sun * under_cloud(cloud)),
            (None, None, None) => {
                let words = "neither cloud nor sunshine nor radiation is given";
                return Err(Problem::refused("no-sky", words, "give one of the three"));
            }
        }
        .ok_or_else(no_latitude)?;
        let of_radiation = || {
            let clear = stand.clear_w_m2().filter(|clear| *clear > 0.0)?;
            Some(cloud_of_share(solar / clear))
        };
        let told = cloud.or_else(|| Some(1.0 - sunny?)).or_else(of_radiation);
        let air = Air {
            temperature_c: self.temperature_c,
            dew_point_c: self.dew_point_c(stand.altitude_m)?,
            wind_m_s: wind_at_7_m(self.wind_m_s, self.wind_height_m),
            cloud: told.unwrap_or(CLOUD_UNKNOWN),
            solar_w_m2: solar,
        };
        Ok((air, told.is_none()))
    }

    fn dew_point_c(&self, altitude_m: Option<f64>) -> Result<f64, Problem> {
        match self.damp {
            Damp::DewPoint(dew) => Ok(dew),
            Damp::Humidity(share) if share >= LEAST_HUMIDITY => {
                Ok(dew_point_of_humidity_c(self.temperature_c, share))
            }
            Damp::Humidity(_) => {
                let words = "a humidity below 1 % is a fault of the sensor";
                Err(Problem::refused("humidity", words, "leave the cell blank where the sensor failed"))
            }
            Damp::WetBulb(wet) => {
                let pressure = KPA_PER_ATM * altitude_m.map_or(1.0, crate::water::pressure_atm);
                let vapour = vapour_of_wet_bulb_kpa(self.temperature_c, wet, pressure);
                let least = LEAST_HUMIDITY * super::humidity::saturation_kpa(self.temperature_c);
                if vapour < least {
                    let words = "the wet bulb is too cold for the dry one";
                    return Err(Problem::refused("humidity", words, "check both temperatures"));
                }
                Ok(dew_point_c(vapour))
            }
        }
    }
}
