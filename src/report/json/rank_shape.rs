//! The shape of the answer of `rank`: keys in the order they are written.

use std::collections::BTreeMap;

use serde::Serialize;

use super::applied::PlainJson;
use super::shape::{CheckJson, Head, MovedJson, ReleaseJson, SettingJson, WarningJson, WellJson};
use super::targets::{ConflictJson, PointJson, TargetJson};

#[derive(Serialize)]
pub(super) struct RankJson {
    #[serde(flatten)]
    pub(super) head: Head,
    pub(super) release_asked: AskedJson,
    pub(super) step: f64,
    pub(super) order: Vec<&'static str>,
    pub(super) bins: BinsJson,
    pub(super) without: Vec<String>,
    pub(super) mixes: Vec<RankedJson>,
    pub(super) now: Option<RankedJson>,
    pub(super) rejected: Vec<RejectedJson>,
    pub(super) examined: u64,
    pub(super) judged: u64,
    pub(super) skipped: u64,
    pub(super) allowed: u64,
    pub(super) attainable_c: Option<[f64; 2]>,
    pub(super) attainable_oxygen_mg_l: Option<[f64; 2]>,
    pub(super) largest_difference_c: Option<f64>,
    pub(super) largest_difference_mg_l: Option<f64>,
    pub(super) trade: Vec<MixedJson>,
    pub(super) lost: Vec<LostJson>,
    pub(super) preferred_split: Option<SplitJson>,
    pub(super) least_release: Option<LeastJson>,
    pub(super) pocket: Option<PocketJson>,
    pub(super) nothing_fits: Option<NothingFitsJson>,
    pub(super) notes: Vec<WarningJson>,
    pub(super) caution: &'static str,
}

/// A steady flow, or the blocks of the day.
#[derive(Serialize)]
pub(super) struct AskedJson {
    #[serde(skip_serializing_if = "Option::is_none")]
    pub(super) flow_m3s: Option<f64>,
    #[serde(skip_serializing_if = "Option::is_none")]
    pub(super) blocks: Option<Vec<BlockAskedJson>>,
    pub(super) from: &'static str,
}

#[derive(Serialize)]
pub(super) struct BlockAskedJson {
    pub(super) share: f64,
    pub(super) flow_m3s: f64,
}

#[derive(Serialize)]
pub(super) struct BinsJson {
    pub(super) temperature_c: f64,
    pub(super) oxygen_mg_l: f64,
    pub(super) cold_share: f64,
}

#[derive(Serialize)]
pub(super) struct RankedJson {
    #[serde(flatten)]
    pub(super) setting: SettingJson,
    #[serde(skip_serializing_if = "Option::is_none")]
    pub(super) blocks: Option<Vec<BlockJson>>,
    pub(super) release: WholeDayJson,
    pub(super) targets: Vec<TargetJson>,
    pub(super) conflicts: Vec<ConflictJson>,
    pub(super) points: Vec<PointJson>,
    pub(super) cold_water_m3_per_day: Option<f64>,
    pub(super) moves: Option<usize>,
    pub(super) moved: Option<Vec<MovedJson>>,
    pub(super) crew_hours: Option<f64>,
    pub(super) move_cost: Option<f64>,
    pub(super) lead_days: Option<f64>,
    pub(super) earliest: Option<String>,
    pub(super) generation_lost_mw: Option<f64>,
    pub(super) share_inside_both: Option<f64>,
    pub(super) governs: Option<String>,
    pub(super) limits: Vec<CheckJson>,
    pub(super) warnings: Vec<WarningJson>,
    pub(super) not_checked: Vec<String>,
    pub(super) unsure: Vec<UnsureJson>,
    pub(super) reasons: Vec<String>,
    pub(super) alike: usize,
    pub(super) wells: Vec<WellJson>,
}

#[derive(Serialize)]
pub(super) struct BlockJson {
    pub(super) share: f64,
    #[serde(flatten)]
    pub(super) setting: SettingJson,
    pub(super) release: ReleaseJson,
    pub(super) wells: Vec<WellJson>,
}

/// The release over a day; temperature and oxygen are time means.
#[derive(Serialize)]
pub(super) struct WholeDayJson {
    pub(super) flow_m3s: f64,
    pub(super) temperature_c: f64,
    pub(super) oxygen_mg_l: Option<f64>,
    pub(super) oxygen_below_mg_l: Option<f64>,
    pub(super) band_c: Option<[f64; 2]>,
    pub(super) band_oxygen_mg_l: Option<[f64; 2]>,
    pub(super) time_mean_c: f64,
    pub(super) by_flow_c: f64,
    /// With nothing learned, as time means; null where nothing is.
    pub(super) plain: Option<PlainJson>,
}

#[derive(Serialize)]
pub(super) struct UnsureJson {
    pub(super) outlet: String,
    pub(super) taken: &'static str,
    pub(super) temperature_c: Option<f64>,
    pub(super) oxygen_mg_l: Option<f64>,
    pub(super) text: String,
}

#[derive(Serialize)]
pub(super) struct RejectedJson {
    pub(super) rule: &'static str,
    pub(super) group: &'static str,
    pub(super) outlet: Option<String>,
    pub(super) well: Option<String>,
    pub(super) share: Option<String>,
    pub(super) margin: f64,
    pub(super) unit: &'static str,
    pub(super) count: u64,
    pub(super) open: BTreeMap<String, f64>,
    pub(super) text: String,
    pub(super) possible_from: Option<String>,
}

/// A mix in short.
#[derive(Serialize)]
pub(super) struct MixedJson {
    #[serde(flatten)]
    pub(super) setting: SettingJson,
    pub(super) temperature_c: f64,
    pub(super) oxygen_mg_l: Option<f64>,
}

#[derive(Serialize)]
pub(super) struct LostJson {
    pub(super) outlet: String,
    pub(super) fallback: Option<MixedJson>,
}

#[derive(Serialize)]
pub(super) struct SplitJson {
    pub(super) between: [String; 2],
    pub(super) open: BTreeMap<String, f64>,
    pub(super) preferred_c: f64,
    pub(super) roots: Vec<RootJson>,
    pub(super) bracket_c: [f64; 2],
}

#[derive(Serialize)]
pub(super) struct RootJson {
    pub(super) share: f64,
    pub(super) flows_m3s: [f64; 2],
    pub(super) temperature_c: f64,
    pub(super) oxygen_mg_l: Option<f64>,
    pub(super) breaks: Vec<&'static str>,
}

#[derive(Serialize)]
pub(super) struct LeastJson {
    pub(super) flow_m3s: Option<f64>,
    pub(super) tried_m3s: [f64; 2],
    #[serde(flatten)]
    pub(super) setting: Option<SettingJson>,
}

#[derive(Serialize)]
#[expect(clippy::struct_field_names, reason = "keys with their units")]
pub(super) struct PocketJson {
    pub(super) c_per_m3s: f64,
    pub(super) from_m3s: f64,
    pub(super) to_m3s: f64,
}

#[derive(Serialize)]
pub(super) struct NothingFitsJson {
    pub(super) why: &'static str,
    pub(super) limits: BTreeMap<&'static str, Vec<RejectedJson>>,
    pub(super) nearest: Option<NearestJson>,
}

#[derive(Serialize)]
pub(super) struct NearestJson {
    #[serde(flatten)]
    pub(super) setting: SettingJson,
    pub(super) temperature_c: f64,
    pub(super) oxygen_mg_l: Option<f64>,
    pub(super) by_c: Option<f64>,
    pub(super) by_mg_l: Option<f64>,
}

/// A ranking with what its mixes cost by the end of the season.
#[derive(Serialize)]
pub(super) struct PricedJson {
    #[serde(flatten)]
    pub(super) rank: RankJson,
    pub(super) season: PricesJson,
}

#[derive(Serialize)]
pub(super) struct PricesJson {
    pub(super) plan: String,
    pub(super) case: String,
    pub(super) held_from: String,
    pub(super) held_until: String,
    pub(super) against: &'static str,
    pub(super) members: usize,
    pub(super) mixes: Vec<PriceJson>,
    pub(super) warnings: Vec<WarningJson>,
}

/// Days later that it runs out, and days more outside; below zero sooner and fewer.
#[derive(Serialize)]
pub(super) struct PriceJson {
    pub(super) exhausted_later: Option<ChangeJson>,
    /// Null where a season stops before its plan, so that they cannot be counted.
    pub(super) days_outside_more: Option<ChangeJson>,
    /// Whether cold water lasts to the end of the season.
    pub(super) lasts: bool,
    /// Casts in which it runs out, the one taken among them; with what it is priced against; and how many there are.
    pub(super) runs_out_in: usize,
    pub(super) runs_out_in_against: usize,
    pub(super) casts: usize,
    /// The same changes against the first mix of the list, cast by cast.
    pub(super) than_first: ThanFirstJson,
}

#[derive(Serialize)]
pub(super) struct ThanFirstJson {
    pub(super) exhausted_later: Option<ChangeJson>,
    pub(super) days_outside_more: Option<ChangeJson>,
}

#[derive(Serialize)]
pub(super) struct ChangeJson {
    pub(super) days: i64,
    pub(super) range: [i64; 2],
    pub(super) told: bool,
}
