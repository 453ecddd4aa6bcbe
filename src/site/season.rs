//! How the season ahead is looked at: what of the pool nobody measures, the cases of weather, reserves, stages.
//!
//! Methods: `docs/methods.md`, section 8.

use crate::target::YearDay;
use crate::weather::Air;

/// How the mixes of a season are chosen.
#[derive(Debug, Clone, Copy, Default, PartialEq, Eq)]
pub enum Strategy {
    /// The setting stays as long as it can.
    Hold,
    /// The best mix of the day, decided again and again.
    #[default]
    Best,
    /// Release targets inside the allowed ranges that spare cold water early for what is needed late.
    Thrift,
}

impl Strategy {
    /// Every strategy with its name.
    pub const NAMES: [(&'static str, Self); 3] =
        [("hold", Self::Hold), ("best", Self::Best), ("thrift", Self::Thrift)];

    /// The name used on the command line and in files.
    pub fn name(self) -> &'static str {
        Self::NAMES.iter().find(|(_, s)| *s == self).map_or("", |(n, _)| n)
    }

    /// The strategy of a name.
    pub fn parse(name: &str) -> Option<Self> {
        Self::NAMES.iter().find(|(n, _)| *n == name).map(|(_, s)| *s)
    }
}

/// What of the pool's own making is not measured, and can be learned from two casts.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Knobs {
    /// Share of the work of the wind that deepens the surface layer (tenfold spread in the literature).
    pub wind: f64,
    /// Extinction of light, per m.
    pub light_per_m: f64,
    /// Factor on the eddy diffusion.
    pub diffusion: f64,
    /// Oxygen taken by the water at 20 C, mg/L per day.
    pub water_demand_mg_l_day: f64,
    /// Oxygen taken by the bed at 20 C, g/m2 per day.
    pub bed_demand_g_m2_day: f64,
}

impl Default for Knobs {
    /// Choices within the published ranges (recalled: `docs/methods.md`, section 8).
    fn default() -> Self {
        Self {
            wind: 0.2,
            light_per_m: 0.5,
            diffusion: 1.0,
            water_demand_mg_l_day: 0.05,
            bed_demand_g_m2_day: 0.5,
        }
    }
}

/// A case of weather and inflow, made from what is given by stated shifts.
#[derive(Debug, Clone, PartialEq)]
pub struct Case {
    /// Name, unique.
    pub name: String,
    /// Added to the air, the dew point and a given equilibrium temperature, C.
    pub air_c: f64,
    /// Factor on the wind.
    pub wind: f64,
    /// Factor on the inflow.
    pub inflow: f64,
    /// Added to the temperature of the inflow, C.
    pub inflow_c: f64,
}

/// Cold water to be kept for later.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Reserve {
    /// From this day of the year on.
    pub from: YearDay,
    /// Colder than this, C.
    pub colder_c: f64,
    /// Volume, m3.
    pub volume_m3: f64,
}

/// Stages of eggs or young by degree-days.
#[derive(Debug, Clone, PartialEq)]
pub struct Stages {
    /// Name, such as `eggs of the autumn run`.
    pub name: String,
    /// Point of the river, or `dam`.
    pub point: String,
    /// The day of the year counting begins.
    pub since: YearDay,
    /// Base of the degree-days, C.
    pub base_c: f64,
    /// Stages with their degree-days, C days, rising.
    pub at: Vec<(String, f64)>,
}

/// How the season is looked at.
#[derive(Debug, Clone, PartialEq)]
pub struct SeasonInputs {
    /// What nobody measures.
    pub knobs: Knobs,
    /// Thickness of a layer, m.
    pub layer_m: f64,
    /// Longest step of the pool, s; no key sets it: it is halved to see what that changes.
    pub step_s: f64,
    /// Days between decisions.
    pub decide_days: u32,
    /// How mixes are chosen.
    pub strategy: Strategy,
    /// Surface water that inflow takes in, as a share of its own flow.
    pub inflow_takes_in: f64,
    /// Whether evaporation leaves the pool.
    pub evaporates: bool,
    /// Oxygen transfer through the surface, m/day.
    pub transfer_m_day: f64,
    /// Mean weather over the pool by month, where the weather file does not tell: its own, else that of the river.
    pub monthly: Option<Box<[Air; 12]>>,
    /// File of the weather over the pool, where the river names none.
    pub weather: Option<String>,
    /// Daily weather of several years.
    pub years: Option<String>,
    /// Cases; the middle one of them is the one spoken of.
    pub cases: Vec<Case>,
    /// Reserves.
    pub reserves: Vec<Reserve>,
    /// Stages.
    pub stages: Vec<Stages>,
}

impl Default for SeasonInputs {
    fn default() -> Self {
        let case = |name: &str, air_c: f64, inflow_c: f64| Case {
            name: name.into(),
            air_c,
            wind: 1.0,
            inflow: 1.0,
            inflow_c,
        };
        Self {
            knobs: Knobs::default(),
            layer_m: 1.0,
            // choice: a day of mean air
            step_s: 86_400.0,
            decide_days: 7,
            strategy: Strategy::default(),
            inflow_takes_in: 0.2,
            evaporates: true,
            transfer_m_day: 0.5,
            monthly: None,
            weather: None,
            years: None,
            // choice: two degrees of the air either way, and half as much in the inflow
            cases: vec![case("warm", 2.0, 1.0), case("middling", 0.0, 0.0), case("cool", -2.0, -1.0)],
            reserves: Vec::new(),
            stages: Vec::new(),
        }
    }
}
