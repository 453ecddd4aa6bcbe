//! The shape of the answer of `season`: keys in the order they are written.

use serde::Serialize;

use super::shape::{Head, SettingJson, WarningJson};

#[derive(Serialize)]
pub(super) struct SeasonJson {
    #[serde(flatten)]
    pub(super) head: Head,
    pub(super) begins: String,
    pub(super) decides: String,
    pub(super) decide_days: u32,
    pub(super) order: Vec<&'static str>,
    #[serde(flatten)]
    pub(super) run: RunJson,
    pub(super) runs: Vec<RunJson>,
    /// The season spoken of with nothing learned; null where nothing is.
    pub(super) plain: Option<PlainSeasonJson>,
    pub(super) warnings: Vec<WarningJson>,
    pub(super) caution: &'static str,
}

#[derive(Serialize)]
pub(super) struct PlainSeasonJson {
    pub(super) exhausted_on: Option<String>,
    pub(super) score: ScoreJson,
    pub(super) days: Vec<PlainDayJson>,
}

#[derive(Serialize)]
pub(super) struct PlainDayJson {
    pub(super) date: String,
    pub(super) temperature_c: Option<f64>,
    pub(super) oxygen_below_mg_l: Option<f64>,
}

#[derive(Serialize)]
pub(super) struct RunJson {
    pub(super) plan: String,
    pub(super) plan_file: String,
    pub(super) case: String,
    pub(super) year: Option<i32>,
    pub(super) weather: String,
    pub(super) strategy: String,
    /// Solved with this very case in view: no evidence.
    pub(super) foresight: bool,
    /// Solved with this weather in view, under this plan or another.
    pub(super) weather_seen: bool,
    /// What `cold_water_m3` of the days is colder than: the first threshold of the site.
    pub(super) cold_water_below_c: Option<f64>,
    pub(super) days: Vec<DayJson>,
    pub(super) gates: Vec<GateJson>,
    /// Null where it does not run out by the end of the season; see `exhausted_unknown`.
    pub(super) exhausted_on: Option<String>,
    /// First day of decision after it on which an allowed mix comes down to the high again.
    pub(super) exhausted_until: Option<String>,
    /// Every stretch of days of decision on which none does.
    pub(super) exhausted: Vec<SpellJson>,
    /// Least room under the high on a day of decision, below zero above it.
    pub(super) nearest_c: Option<f64>,
    pub(super) nearest_on: Option<String>,
    pub(super) exhausted_unknown: Option<String>,
    pub(super) under_reserve_on: Option<String>,
    pub(super) targets: Vec<TargetJson>,
    pub(super) score: ScoreJson,
    pub(super) cold_water: Vec<ColdJson>,
    pub(super) reserves: Vec<ReserveJson>,
    pub(super) left: Vec<LeftJson>,
    pub(super) decisions: Vec<DecisionJson>,
    pub(super) moves: usize,
    pub(super) crew_hours: f64,
    pub(super) stages: Vec<StageJson>,
    pub(super) turnover_on: Option<String>,
    pub(super) oxygen_min_mg_l: Option<f64>,
    pub(super) oxygen_min_on: Option<String>,
    pub(super) generation_lost_mwh: Option<f64>,
    pub(super) fall_max_m_per_day: Option<f64>,
    pub(super) fall_max_on: Option<String>,
    pub(super) stage_falls: Vec<StageFallJson>,
    pub(super) beware: Vec<BewareJson>,
    pub(super) balance_water_relative: f64,
    pub(super) balance_heat_relative: f64,
    pub(super) stops_on: Option<String>,
    pub(super) stops_because: Option<String>,
}

#[derive(Serialize)]
pub(super) struct DayJson {
    pub(super) date: String,
    pub(super) pool_m: f64,
    pub(super) inflow_m3s: f64,
    #[serde(flatten)]
    pub(super) setting: SettingJson,
    /// Null where nothing leaves the dam.
    pub(super) release: Option<ReleaseJson>,
    pub(super) points: Option<Vec<PointJson>>,
    /// Usable water below the first threshold of the site.
    pub(super) cold_water_m3: Option<f64>,
    /// On days of decision.
    pub(super) attainable_c: Option<[f64; 2]>,
    /// Names of the hard targets it lies outside of.
    pub(super) outside: Vec<String>,
    pub(super) balance_water_m3: f64,
    pub(super) balance_heat_j: f64,
}

#[derive(Serialize)]
pub(super) struct ReleaseJson {
    pub(super) flow_m3s: f64,
    pub(super) temperature_c: f64,
    pub(super) oxygen_mg_l: Option<f64>,
    pub(super) oxygen_below_mg_l: Option<f64>,
}

#[derive(Serialize)]
pub(super) struct PointJson {
    pub(super) name: String,
    pub(super) temperature_c: f64,
    pub(super) temperature_max_c: Option<f64>,
    pub(super) oxygen_mg_l: Option<f64>,
}

#[derive(Serialize)]
pub(super) struct GateJson {
    pub(super) outlet: String,
    pub(super) first_day: Option<String>,
    pub(super) last_day: Option<String>,
    pub(super) reason: Option<&'static str>,
    pub(super) text: Option<String>,
    pub(super) book_by: Option<String>,
    /// First and last day on which it can be opened as wide as it goes; the last null to the end.
    pub(super) fully_from: Option<String>,
    pub(super) fully_to: Option<String>,
}

#[derive(Serialize)]
pub(super) struct SpellJson {
    pub(super) from: String,
    pub(super) to: String,
    pub(super) until: Option<String>,
    pub(super) above_c: f64,
}

#[derive(Serialize)]
pub(super) struct TargetJson {
    pub(super) name: String,
    pub(super) point: String,
    pub(super) case: String,
    /// What it asks, in the unit of its statistic, and its floor of oxygen.
    pub(super) low: Option<f64>,
    pub(super) preferred: Option<f64>,
    pub(super) high: Option<f64>,
    pub(super) oxygen_min_mg_l: Option<f64>,
    pub(super) days_outside: u32,
    pub(super) degree_days_outside: Option<f64>,
    pub(super) longest_run: u32,
    pub(super) days: u32,
    pub(super) days_unknown: u32,
    pub(super) days_above: u32,
    pub(super) days_below: u32,
    pub(super) worst_by: Option<f64>,
    pub(super) worst_on: Option<String>,
    pub(super) unit: &'static str,
    pub(super) oxygen_days_below: Option<u32>,
    pub(super) soft: bool,
}

#[derive(Serialize)]
pub(super) struct ScoreJson {
    /// Days of the plan after the season stops: nothing is counted of them.
    pub(super) days_not_reached: u32,
    pub(super) worst_c: f64,
    pub(super) days_outside: u32,
    pub(super) degree_days_outside: f64,
    pub(super) moves: usize,
}

#[derive(Serialize)]
pub(super) struct ColdJson {
    pub(super) threshold_c: f64,
    pub(super) days: Vec<ColdDayJson>,
}

#[derive(Serialize)]
pub(super) struct ColdDayJson {
    pub(super) date: String,
    pub(super) usable_m3: Option<f64>,
    pub(super) total_m3: f64,
    pub(super) unreachable_m3: f64,
}

#[derive(Serialize)]
pub(super) struct ReserveJson {
    pub(super) from: String,
    pub(super) colder_than_c: f64,
    pub(super) volume_m3: f64,
    pub(super) under_on: Option<String>,
    pub(super) unknown: Option<String>,
}

#[derive(Serialize)]
pub(super) struct LeftJson {
    pub(super) date: String,
    pub(super) usable_m3: Option<f64>,
    pub(super) days_outside_after: u32,
}

#[derive(Serialize)]
pub(super) struct DecisionJson {
    pub(super) date: String,
    pub(super) why: &'static str,
    pub(super) limit: Option<String>,
    /// What called for it where it was neither due nor forced.
    pub(super) because: Option<String>,
    pub(super) attainable_c: Option<[f64; 2]>,
    pub(super) asked_c: [Option<f64>; 2],
    pub(super) moves: usize,
    pub(super) crew_hours: f64,
    pub(super) moved: Vec<super::shape::MovedJson>,
    /// Limits of the change that it breaks, since no mix keeps them.
    pub(super) past: Vec<String>,
    pub(super) book_by: Option<String>,
}

#[derive(Serialize)]
pub(super) struct StageJson {
    pub(super) name: String,
    pub(super) stage: String,
    pub(super) point: String,
    pub(super) on: Option<String>,
    pub(super) unknown: Option<String>,
}

#[derive(Serialize)]
pub(super) struct StageFallJson {
    pub(super) point: String,
    pub(super) fall_m_per_hour: f64,
    /// Most that is allowed; null where no limit is given.
    pub(super) allowed_m_per_hour: Option<f64>,
    pub(super) on: String,
}

#[derive(Serialize)]
pub(super) struct BewareJson {
    pub(super) date: String,
    pub(super) kind: &'static str,
    pub(super) text: String,
}
