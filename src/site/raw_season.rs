//! What a site file said of the season ahead, in SI, before any check.

use super::RawMonthly;

/// How the season is looked at, as read.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct RawSeason {
    /// Strategy, by name.
    pub strategy: Option<String>,
    /// Days between decisions.
    pub decide_days: Option<usize>,
    /// Thickness of a layer, m.
    pub layer_m: Option<f64>,
    /// Depth at which a white disk is lost from sight, m.
    pub secchi_m: Option<f64>,
    /// Extinction of light, per m.
    pub light_per_m: Option<f64>,
    /// Share of the work of the wind that deepens the surface layer, 0 to 1.
    pub wind: Option<f64>,
    /// Factor on the eddy diffusion.
    pub diffusion: Option<f64>,
    /// Oxygen taken by the water at 20 C, mg/L per day.
    pub water_demand_mg_l_day: Option<f64>,
    /// Oxygen taken by the bed at 20 C, g/m2 per day.
    pub bed_demand_g_m2_day: Option<f64>,
    /// Oxygen transfer through the surface, m/day.
    pub transfer_m_day: Option<f64>,
    /// Surface water that inflow takes in, as a share of its own flow.
    pub inflow_takes_in: Option<f64>,
    /// Whether evaporation leaves the pool.
    pub evaporates: Option<bool>,
    /// File of the weather over the pool.
    pub weather: Option<String>,
    /// Mean weather of the months.
    pub monthly: Option<RawMonthly>,
    /// File of the weather of several years.
    pub years: Option<String>,
    /// Cases; `None` where the usual three hold.
    pub cases: Option<Vec<RawCase>>,
    /// Reserves.
    pub reserves: Vec<RawReserve>,
    /// Stages.
    pub stages: Vec<RawStages>,
}

/// Case as read.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct RawCase {
    /// Name.
    pub name: Option<String>,
    /// Added to the air, C.
    pub air_c: Option<f64>,
    /// Factor on the wind.
    pub wind: Option<f64>,
    /// Factor on the inflow.
    pub inflow: Option<f64>,
    /// Added to the temperature of the inflow, C.
    pub inflow_c: Option<f64>,
}

/// Reserve as read.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct RawReserve {
    /// First day, `MM-DD`.
    pub from: Option<String>,
    /// Threshold, C.
    pub colder_c: Option<f64>,
    /// Volume, m3.
    pub volume_m3: Option<f64>,
}

/// Stages as read.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct RawStages {
    /// Name.
    pub name: Option<String>,
    /// Point.
    pub point: Option<String>,
    /// The day counting begins, `MM-DD`.
    pub from: Option<String>,
    /// Base, C.
    pub base_c: Option<f64>,
    /// Stages with their degree-days, C days, in the order of the file.
    pub at: Vec<(String, f64)>,
}
