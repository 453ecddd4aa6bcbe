//! The shape of the answers: keys in the order they are written.

use std::collections::BTreeMap;

use serde::Serialize;

use super::applied::{LearnedJson, PlainJson};
use super::targets::{ConflictJson, PointJson, TargetJson};

#[derive(Serialize)]
pub(super) struct Head {
    pub(super) site: String,
    pub(super) demonstration: bool,
    pub(super) on: String,
    pub(super) on_from: &'static str,
    pub(super) datum: String,
    pub(super) version: &'static str,
    pub(super) method: &'static str,
    pub(super) fingerprint: String,
    /// What was learned and is applied.
    pub(super) learned: Option<LearnedJson>,
    pub(super) profile: ProfileJson,
}

#[derive(Serialize)]
pub(super) struct ProfileJson {
    pub(super) file: String,
    pub(super) taken: Option<String>,
    pub(super) age_days: Option<f64>,
    pub(super) pool_m: f64,
    pub(super) samples: usize,
    pub(super) flags: Vec<FlagJson>,
    pub(super) notes: Vec<FlagJson>,
}

#[derive(Serialize)]
pub(super) struct FlagJson {
    pub(super) row: Option<usize>,
    pub(super) kind: &'static str,
    pub(super) text: String,
}

#[derive(Serialize)]
pub(super) struct MixJson {
    #[serde(flatten)]
    pub(super) head: Head,
    #[serde(flatten)]
    pub(super) setting: SettingJson,
    pub(super) wells: Vec<WellJson>,
    pub(super) levels: Vec<LevelJson>,
    pub(super) release: ReleaseJson,
    pub(super) targets: Vec<TargetJson>,
    pub(super) conflicts: Vec<ConflictJson>,
    pub(super) points: Vec<PointJson>,
    pub(super) day: Option<DayJson>,
    pub(super) now: Option<NowJson>,
    pub(super) moves: Option<usize>,
    pub(super) moved: Option<Vec<MovedJson>>,
    pub(super) crew_hours: Option<f64>,
    pub(super) move_cost: Option<f64>,
    pub(super) lead_days: Option<f64>,
    pub(super) earliest: Option<String>,
    pub(super) limits: Vec<CheckJson>,
    pub(super) not_checked: Vec<String>,
    pub(super) warnings: Vec<WarningJson>,
    pub(super) caution: &'static str,
}

#[derive(Serialize)]
pub(super) struct DayJson {
    pub(super) blocks: Vec<BlockJson>,
    pub(super) time_mean_c: f64,
    pub(super) least_c: f64,
    pub(super) greatest_c: f64,
    pub(super) by_flow_c: f64,
    pub(super) time_mean_mg_l: Option<f64>,
}

#[derive(Serialize)]
pub(super) struct BlockJson {
    pub(super) name: String,
    pub(super) share: f64,
    #[serde(flatten)]
    pub(super) setting: SettingJson,
    pub(super) release: ReleaseJson,
}

#[derive(Serialize)]
pub(super) struct NowJson {
    #[serde(flatten)]
    pub(super) setting: SettingJson,
    pub(super) release: ReleaseJson,
    pub(super) targets: Vec<TargetJson>,
}

/// Flow, m3/s, and opening, %, of each gate.
#[derive(Serialize)]
pub(super) struct SettingJson {
    pub(super) set: BTreeMap<String, f64>,
    pub(super) open: BTreeMap<String, f64>,
}

#[derive(Serialize)]
pub(super) struct WellJson {
    pub(super) name: String,
    pub(super) flow_m3s: f64,
    pub(super) head_m: Option<f64>,
    pub(super) max_head_loss_m: Option<f64>,
    pub(super) settled: bool,
    pub(super) assumed_loss: bool,
    pub(super) split: BTreeMap<String, f64>,
}

#[derive(Serialize)]
pub(super) struct LevelJson {
    pub(super) elevation_m: f64,
    pub(super) outlets: Vec<String>,
    pub(super) flow_m3s: f64,
    pub(super) angle_deg: Option<f64>,
    pub(super) zone: Option<ZoneJson>,
    pub(super) temperature_c: Option<f64>,
    pub(super) oxygen_mg_l: Option<f64>,
}

#[derive(Serialize)]
pub(super) struct ZoneJson {
    pub(super) lower_m: f64,
    pub(super) upper_m: f64,
    pub(super) thickness_m: f64,
    pub(super) peak_m: f64,
    pub(super) lower_end: &'static str,
    pub(super) upper_end: &'static str,
    pub(super) boundary_flow_lower_m3s: Option<f64>,
    pub(super) boundary_flow_upper_m3s: Option<f64>,
}

#[derive(Serialize)]
pub(super) struct ReleaseJson {
    pub(super) flow_m3s: f64,
    pub(super) temperature_c: f64,
    pub(super) oxygen_mg_l: Option<f64>,
    pub(super) oxygen_below_mg_l: Option<f64>,
    pub(super) band_c: Option<[f64; 2]>,
    pub(super) band_oxygen_mg_l: Option<[f64; 2]>,
    /// With nothing learned; null where nothing is.
    pub(super) plain: Option<PlainJson>,
}

#[derive(Serialize)]
pub(super) struct MovedJson {
    pub(super) outlet: String,
    pub(super) from_open: f64,
    pub(super) to_open: f64,
    pub(super) from_m3s: f64,
    pub(super) to_m3s: f64,
}

/// A limit held against a setting; `room` is below zero where it is missed, null where nothing bounds it.
#[derive(Serialize)]
pub(super) struct CheckJson {
    pub(super) rule: &'static str,
    pub(super) group: &'static str,
    pub(super) of: Option<String>,
    pub(super) found: f64,
    pub(super) bound: f64,
    pub(super) room: f64,
    pub(super) unit: &'static str,
}

#[derive(Serialize)]
pub(super) struct WarningJson {
    pub(super) kind: &'static str,
    pub(super) text: String,
}

#[derive(Serialize)]
pub(super) struct PoolJson {
    #[serde(flatten)]
    pub(super) head: Head,
    pub(super) layering: LayeringJson,
    pub(super) cold_water: Vec<ColdJson>,
    pub(super) cold_water_above_m: Option<f64>,
    pub(super) outlets: Vec<OutletJson>,
    pub(super) since: Option<SinceJson>,
    pub(super) caution: &'static str,
}

/// The sound cast before: changes are above zero where there is more now.
#[derive(Serialize)]
pub(super) struct SinceJson {
    pub(super) file: String,
    pub(super) taken: String,
    pub(super) days: f64,
    pub(super) surface_change_c: f64,
    pub(super) bed_change_c: f64,
    pub(super) mean_change_c: f64,
    pub(super) pool_change_m: f64,
    pub(super) thermocline_then_m: Option<f64>,
    pub(super) thermocline_now_m: Option<f64>,
    pub(super) oxygen_min_then_mg_l: Option<f64>,
    pub(super) oxygen_min_now_mg_l: Option<f64>,
    pub(super) heat_w_m2: Option<f64>,
    pub(super) cold_water: Vec<ColdChangeJson>,
}

#[derive(Serialize)]
pub(super) struct ColdChangeJson {
    pub(super) threshold_c: f64,
    pub(super) usable_change_m3: Option<f64>,
    pub(super) total_change_m3: f64,
}

#[derive(Serialize)]
pub(super) struct LayeringJson {
    pub(super) surface_c: f64,
    pub(super) bed_c: f64,
    pub(super) difference_c: f64,
    pub(super) thermocline_m: Option<f64>,
    pub(super) thermocline_c_per_m: Option<f64>,
    pub(super) steeper_than_1_c_per_m: Option<[f64; 2]>,
    pub(super) mixed_base_m: f64,
    pub(super) buoyancy_s2: Option<f64>,
    pub(super) buoyancy_m: Option<f64>,
    pub(super) oxygen_min_mg_l: Option<f64>,
    pub(super) oxygen_min_m: Option<f64>,
    pub(super) volume_m3: f64,
    pub(super) mean_c: f64,
    pub(super) heat_j: f64,
    pub(super) schmidt_stability_j_m2: f64,
}

#[derive(Serialize)]
pub(super) struct ColdJson {
    pub(super) threshold_c: f64,
    pub(super) usable_m3: Option<f64>,
    pub(super) total_m3: f64,
    pub(super) unreachable_m3: Option<f64>,
}

#[derive(Serialize)]
pub(super) struct OutletJson {
    pub(super) name: String,
    pub(super) centre_m: f64,
    pub(super) submergence_m: f64,
    pub(super) min_submergence_m: Option<f64>,
    pub(super) wet: bool,
}

#[derive(Serialize)]
pub(super) struct ProblemJson {
    pub(super) weight: &'static str,
    pub(super) kind: &'static str,
    pub(super) file: Option<String>,
    pub(super) line: Option<usize>,
    pub(super) path: Option<String>,
    pub(super) text: String,
    pub(super) cure: String,
}
