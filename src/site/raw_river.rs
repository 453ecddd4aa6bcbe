//! What a site file said of the river, in SI, before any check.

use super::Yearly;

/// River as read.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct RawRiver {
    /// Equilibrium temperature, C.
    pub equilibrium_c: Option<Yearly>,
    /// Exchange, W/m2/C.
    pub exchange_w_m2_c: Option<Yearly>,
    /// File of its weather.
    pub weather: Option<String>,
    /// Mean weather of the months.
    pub monthly: Option<RawMonthly>,
    /// Reaches, from the dam down.
    pub reaches: Vec<RawReach>,
    /// The regulating pool below the dam.
    pub afterbay: Option<RawAfterbay>,
    /// Points.
    pub points: Vec<RawPoint>,
    /// Ultimate oxygen demand, mg/L, and its decay per day.
    pub decay: Option<(Option<f64>, Option<f64>)>,
}

/// Weather of the months as read.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct RawMonthly {
    /// Air temperature, C.
    pub air_c: Option<Yearly>,
    /// Relative humidity, 0 to 1.
    pub humidity: Option<Yearly>,
    /// Dew point, C.
    pub dew_point_c: Option<Yearly>,
    /// Wind, m/s.
    pub wind_m_s: Option<Yearly>,
    /// Height of the wind above ground, m.
    pub wind_height_m: Option<f64>,
    /// Cloud, 0 to 1.
    pub cloud: Option<Yearly>,
    /// Sun and sky on level ground, W/m2.
    pub radiation_w_m2: Option<Yearly>,
    /// Hours of sunshine a day.
    pub sunshine_h: Option<Yearly>,
}

/// Reach as read.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct RawReach {
    /// Name.
    pub name: Option<String>,
    /// Length, m.
    pub length_m: Option<f64>,
    /// Width, m.
    pub width_m: Option<f64>,
    /// Depth, m.
    pub depth_m: Option<f64>,
    /// Slope.
    pub slope: Option<f64>,
    /// Roughness after Manning.
    pub roughness: Option<f64>,
    /// Flow and hours of the water.
    pub travel_h: Vec<(f64, f64)>,
    /// Flow and hours of a rise.
    pub rise_h: Vec<(f64, f64)>,
    /// Share of the sun kept off, 0 to 1.
    pub shade: Option<f64>,
    /// Streams that join.
    pub inflows: Vec<RawInflow>,
    /// Water that enters all along.
    pub seepage: Option<RawSeepage>,
    /// Reaeration at 20 C, per day.
    pub reaeration_per_day: Option<f64>,
}

/// Side stream as read.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct RawInflow {
    /// Name.
    pub name: Option<String>,
    /// Distance from the dam, m.
    pub at_m: Option<f64>,
    /// Flow, m3/s.
    pub flow_m3s: Option<Yearly>,
    /// Temperature, C.
    pub temperature_c: Option<Yearly>,
    /// Oxygen, mg/L.
    pub oxygen_mg_l: Option<Yearly>,
    /// File of its series.
    pub series: Option<String>,
    /// Water of another release.
    pub release: bool,
}

/// Seepage as read.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct RawSeepage {
    /// Flow over the whole reach, m3/s.
    pub flow_m3s: Option<Yearly>,
    /// Temperature, C.
    pub temperature_c: Option<Yearly>,
    /// Oxygen, mg/L.
    pub oxygen_mg_l: Option<Yearly>,
}

/// Afterbay as read.
#[derive(Debug, Clone, Copy, Default, PartialEq)]
pub struct RawAfterbay {
    /// Volume, m3.
    pub volume_m3: Option<f64>,
    /// Surface, m2.
    pub area_m2: Option<f64>,
    /// Share that mixes, 0 to 1.
    pub mixed: Option<f64>,
}

/// Point as read.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct RawPoint {
    /// Name.
    pub name: Option<String>,
    /// Distance from the dam, m.
    pub at_m: Option<f64>,
    /// File of what its station recorded.
    pub observed: Option<String>,
    /// Flow and stage.
    pub rating: Vec<(f64, f64)>,
    /// Most that the stage may fall, m per hour.
    pub stage_fall_m_per_hour: Option<f64>,
    /// Warning time, hours.
    pub warning_h: Option<f64>,
}
