//! The columns of a weather file, with their units and what can be believed in each.

use std::ops::RangeInclusive;

use crate::units::Unit;
use crate::weather::believed::{AIR_C, SOLAR_W_M2, SUNSHINE_H, WIND_M_S};
use crate::weather::{Damp, Reading, Sky};

/// Mile an hour, m/s (standard; exact by the international mile, from memory).
const MPH_M_S: f64 = 0.44704;
/// A megajoule a day, W (standard; exact).
const MJ_PER_DAY_W: f64 = 1e6 / 86_400.0;

/// A column that a weather file can have.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Column {
    /// Moment, of hourly weather.
    Time,
    /// Day, of daily weather.
    Date,
    /// Air temperature, C.
    AirC,
    /// Air temperature, F.
    AirF,
    /// Relative humidity, percent.
    Humidity,
    /// Dew point, C.
    DewPointC,
    /// Dew point, F.
    DewPointF,
    /// Wet bulb, C.
    WetBulbC,
    /// Wet bulb, F.
    WetBulbF,
    /// Wind, m/s.
    WindMs,
    /// Wind, miles an hour.
    WindMph,
    /// Wind, ft/s.
    WindFts,
    /// Cloud, percent.
    CloudPercent,
    /// Cloud, tenths.
    CloudTenths,
    /// Sunshine of the day, h.
    Sunshine,
    /// Sun and sky, W/m2.
    RadiationW,
    /// Sun and sky of the day, MJ/m2.
    RadiationMj,
}

/// What a column tells, whatever its unit.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum Told {
    When,
    Air,
    Humidity,
    DewPoint,
    WetBulb,
    Wind,
    Cloud,
    Sunshine,
    Radiation,
}

impl Column {
    /// Every column.
    pub const ALL: [Self; 17] = [
        Self::Time,
        Self::Date,
        Self::AirC,
        Self::AirF,
        Self::Humidity,
        Self::DewPointC,
        Self::DewPointF,
        Self::WetBulbC,
        Self::WetBulbF,
        Self::WindMs,
        Self::WindMph,
        Self::WindFts,
        Self::CloudPercent,
        Self::CloudTenths,
        Self::Sunshine,
        Self::RadiationW,
        Self::RadiationMj,
    ];

    /// Its name in a header; any case is read.
    pub fn name(self) -> &'static str {
        match self {
            Self::Time => "time",
            Self::Date => "date",
            Self::AirC => "air_C",
            Self::AirF => "air_F",
            Self::Humidity => "humidity_percent",
            Self::DewPointC => "dew_point_C",
            Self::DewPointF => "dew_point_F",
            Self::WetBulbC => "wet_bulb_C",
            Self::WetBulbF => "wet_bulb_F",
            Self::WindMs => "wind_m_s",
            Self::WindMph => "wind_mph",
            Self::WindFts => "wind_ft_s",
            Self::CloudPercent => "cloud_percent",
            Self::CloudTenths => "cloud_tenths",
            Self::Sunshine => "sunshine_h",
            Self::RadiationW => "radiation_w_m2",
            Self::RadiationMj => "radiation_mj_m2",
        }
    }

    /// The column of a name, in any case.
    pub fn parse(name: &str) -> Option<Self> {
        Self::ALL.into_iter().find(|c| c.name().eq_ignore_ascii_case(name.trim()))
    }

    pub(super) fn told(self) -> Told {
        match self {
            Self::Time | Self::Date => Told::When,
            Self::AirC | Self::AirF => Told::Air,
            Self::Humidity => Told::Humidity,
            Self::DewPointC | Self::DewPointF => Told::DewPoint,
            Self::WetBulbC | Self::WetBulbF => Told::WetBulb,
            Self::WindMs | Self::WindMph | Self::WindFts => Told::Wind,
            Self::CloudPercent | Self::CloudTenths => Told::Cloud,
            Self::Sunshine => Told::Sunshine,
            Self::RadiationW | Self::RadiationMj => Told::Radiation,
        }
    }

    /// A figure of the column in SI; shares from 0 to 1.
    pub(super) fn to_si(self, value: f64) -> f64 {
        match self {
            Self::AirF | Self::DewPointF | Self::WetBulbF => Unit::Fahrenheit.to_si(value),
            Self::WindMph => MPH_M_S * value,
            Self::WindFts => Unit::Foot.to_si(value),
            Self::Humidity | Self::CloudPercent => 0.01 * value,
            Self::CloudTenths => 0.1 * value,
            Self::RadiationMj => MJ_PER_DAY_W * value,
            _ => value,
        }
    }
}

impl Told {
    /// What it is called in a sentence.
    pub(super) fn words(self) -> &'static str {
        match self {
            Self::When => "a time or a date",
            Self::Air => "the air temperature",
            Self::Humidity => "the humidity",
            Self::DewPoint => "the dew point",
            Self::WetBulb => "the wet bulb",
            Self::Wind => "the wind",
            Self::Cloud => "the cloud",
            Self::Sunshine => "the sunshine",
            Self::Radiation => "the radiation",
        }
    }

    /// What is believed, in SI, as it stands in the sentence of a refusal (choice: records of the Earth and a little
    /// beyond). A humidity of up to 105 % and radiation of -20 W/m2 are the slips of sound sensors.
    pub(super) fn range(self) -> (f64, f64, &'static str) {
        let of = |range: &RangeInclusive<f64>, words| (*range.start(), *range.end(), words);
        match self {
            Self::When => (f64::NEG_INFINITY, f64::INFINITY, ""),
            Self::Air | Self::DewPoint | Self::WetBulb => of(&AIR_C, "-60 to 60 C"),
            Self::Humidity => (0.0, 1.05, "0 to 105 %"),
            Self::Wind => of(&WIND_M_S, "0 to 75 m/s"),
            Self::Cloud => (0.0, 1.0, "0 to 100 %, or 10 tenths"),
            Self::Sunshine => of(&SUNSHINE_H, "0 to 24 h"),
            Self::Radiation => of(&SOLAR_W_M2, "-20 to 1500 W/m2"),
        }
    }
}

/// The figures of one row, in SI.
#[derive(Debug, Clone, Copy, Default, PartialEq)]
pub(super) struct Row {
    air_c: Option<f64>,
    humidity: Option<f64>,
    dew_point_c: Option<f64>,
    wet_bulb_c: Option<f64>,
    wind_m_s: Option<f64>,
    pub(super) sky: Sky,
}

impl Row {
    pub(super) fn put(&mut self, told: Told, value: f64) {
        match told {
            Told::When => {}
            Told::Air => self.air_c = Some(value),
            Told::Humidity => self.humidity = Some(value.min(1.0)),
            Told::DewPoint => self.dew_point_c = Some(value),
            Told::WetBulb => self.wet_bulb_c = Some(value),
            Told::Wind => self.wind_m_s = Some(value),
            Told::Cloud => self.sky.cloud = Some(value),
            Told::Sunshine => self.sky.sunshine_h = Some(value),
            Told::Radiation => self.sky.solar_w_m2 = Some(value.max(0.0)),
        }
    }

    /// The reading of the row; `None` where it lacks the air, its water, the wind or the sky. The dew point rules
    /// over humidity, and both over a wet bulb.
    pub(super) fn reading(&self, wind_height_m: f64) -> Option<Reading> {
        let damp = self
            .dew_point_c
            .map(Damp::DewPoint)
            .or(self.humidity.map(Damp::Humidity))
            .or(self.wet_bulb_c.map(Damp::WetBulb))?;
        let Sky { cloud, sunshine_h, solar_w_m2 } = self.sky;
        cloud.or(sunshine_h).or(solar_w_m2)?;
        let (temperature_c, wind_m_s) = (self.air_c?, self.wind_m_s?);
        Some(Reading { temperature_c, damp, wind_m_s, wind_height_m, sky: self.sky })
    }

    /// Whether the row says anything at all.
    pub(super) fn is_blank(&self) -> bool {
        *self == Self::default()
    }

    /// By how much the dew point stands above the air, C.
    pub(super) fn dew_above_air_c(&self) -> Option<f64> {
        Some(self.dew_point_c? - self.air_c?)
    }
}
