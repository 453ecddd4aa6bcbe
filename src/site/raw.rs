//! What a site file said, in SI, before any check.

use crate::series::Coverage;
use crate::units::Folder;

use super::{
    BandInputs, Bins, Block, CastChecks, Chemistry, Crew, GenerationLost, Leakage, ListedCast, Opens,
    Position, RawLearned, RawOrder, RawRiver, RawRow, RawSeason, WidthSource,
};

/// Pool as read.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct RawPool {
    /// Bed at the dam, m.
    pub bed_m: Option<f64>,
    /// Full pool, m.
    pub full_m: Option<f64>,
    /// Rows of the table.
    pub table: Vec<RawRow>,
    /// Where widths come from.
    pub width: WidthSource,
}

/// Well as read.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct RawWell {
    /// Name.
    pub name: Option<String>,
    /// Conduit elevation, m.
    pub conduit_m: Option<f64>,
    /// Most gates open at once.
    pub max_open: Option<f64>,
    /// Most head across the structure, m.
    pub max_head_loss_m: Option<f64>,
    /// Least flow when it flows, m3/s.
    pub min_flow_m3s: Option<f64>,
    /// Most flow, m3/s.
    pub max_flow_m3s: Option<f64>,
    /// Area of the shaft in plan, m2.
    pub plan_area_m2: Option<f64>,
    /// What its conduit does to oxygen.
    pub aeration: Option<RawAeration>,
}

/// Outlet as read.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct RawOutlet {
    /// Name.
    pub name: Option<String>,
    /// Well it stands on.
    pub well: Option<String>,
    /// `orifice` (default) or `crest`.
    pub kind: Option<String>,
    /// Centre-line of the fully open outlet, or the crest, m.
    pub centre_m: Option<f64>,
    /// Height, m.
    pub height_m: Option<f64>,
    /// Width, or crest length, m.
    pub width_m: Option<f64>,
    /// Diameter of a circular outlet, m.
    pub diameter_m: Option<f64>,
    /// Withdrawal angle, degrees.
    pub angle_deg: Option<f64>,
    /// Loss coefficient.
    pub loss: Option<f64>,
    /// Discharge coefficient.
    pub discharge: Option<f64>,
    /// From which edge it opens.
    pub opens: Opens,
    /// Whether gates hold a crest's flow.
    pub gated: Option<bool>,
    /// Rating of a crest, head (m) and flow (m3/s).
    pub rating: Vec<(f64, f64)>,
    /// Positions.
    pub positions: Vec<Position>,
    /// Least submergence, m.
    pub min_submergence_m: Option<f64>,
    /// Least flow, m3/s.
    pub flow_min_m3s: Option<f64>,
    /// Most flow, m3/s.
    pub flow_max_m3s: Option<f64>,
    /// Leak when shut.
    pub leakage: Option<Leakage>,
    /// What its conduit does to oxygen.
    pub aeration: Option<RawAeration>,
    /// Pool elevations at which it may be used, m.
    pub pool_window_m: Option<(f64, f64)>,
    /// Openings and flows to avoid.
    pub avoid: Vec<RawAvoid>,
    /// Most velocity through the open part, m/s.
    pub max_entrance_m_s: Option<f64>,
    /// Whether it may be moved while water passes.
    pub moves_under_flow: Option<bool>,
    /// What a move takes.
    pub crew: Crew,
    /// Power not made by water that passes here.
    pub generation_lost: Option<GenerationLost>,
    /// Its position is not confirmed.
    pub uncertain: bool,
}

/// What a conduit does to oxygen as read; one of fall, efficiency and gain is to be given.
#[derive(Debug, Clone, Copy, Default, PartialEq)]
pub struct RawAeration {
    /// Height of a fall, m.
    pub fall_m: Option<f64>,
    /// Factor of water quality.
    pub quality: Option<f64>,
    /// Factor of the form of the fall.
    pub form: Option<f64>,
    /// Efficiency, 0 to 1.
    pub efficiency: Option<f64>,
    /// Gain, mg/L.
    pub gain_mg_l: Option<f64>,
    /// Least and greatest efficiency or gain.
    pub range: Option<(f64, f64)>,
}

/// A stretch to avoid as read; one of the two is to be given.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct RawAvoid {
    /// Openings, 0 to 1.
    pub openings: Option<(f64, f64)>,
    /// Flows, m3/s.
    pub flows_m3s: Option<(f64, f64)>,
    /// Why.
    pub reason: String,
}

/// Outage as read.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct RawOutage {
    /// Outlet.
    pub outlet: Option<String>,
    /// First day, `YYYY-MM-DD`.
    pub from: Option<String>,
    /// Last day, `YYYY-MM-DD`.
    pub to: Option<String>,
    /// Why.
    pub reason: String,
}

/// Share rule as read.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct RawShare {
    /// Name.
    pub name: Option<String>,
    /// Outlets.
    pub outlets: Vec<String>,
    /// Least share of the release, 0 to 1.
    pub min: Option<f64>,
    /// Greatest share of the release, 0 to 1.
    pub max: Option<f64>,
}

/// Reserved flow as read.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct RawReserved {
    /// Outlet.
    pub outlet: Option<String>,
    /// Flow, m3/s.
    pub flow_m3s: Option<f64>,
    /// What for.
    pub reason: String,
}

/// Layer not to be drawn as read; one of the three forms is to be given.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct RawUndrawn {
    /// Lower elevation, m.
    pub from_m: Option<f64>,
    /// Upper elevation, m.
    pub to_m: Option<f64>,
    /// Two depths, m.
    pub depths_m: Option<(f64, f64)>,
    /// Oxygen, mg/L.
    pub oxygen_below_mg_l: Option<f64>,
    /// Why.
    pub reason: String,
}

/// Limits of the site as a whole as read.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct RawLimits {
    /// Outlets out of use.
    pub outages: Vec<RawOutage>,
    /// Shares of the release.
    pub shares: Vec<RawShare>,
    /// Flows reserved.
    pub reserved: Vec<RawReserved>,
    /// Layers not to be drawn.
    pub undrawn: Vec<RawUndrawn>,
    /// Most change of the total release in an hour, m3/s.
    pub flow_change_m3s_per_hour: Option<f64>,
    /// Most change of the total release in a day, m3/s.
    pub flow_change_m3s_per_day: Option<f64>,
    /// Most change of the release temperature in an hour, C.
    pub temperature_change_c_per_hour: Option<f64>,
    /// Most change of the release temperature in a day, C.
    pub temperature_change_c_per_day: Option<f64>,
    /// Hours over which a change is made.
    pub change_hours: Option<f64>,
    /// Most fall of the pool in a day, m.
    pub drawdown_m_per_day: Option<f64>,
    /// Most solids in the release, mg/L.
    pub solids_max_mg_l: Option<f64>,
    /// Most moves in one change.
    pub max_moves: Option<usize>,
    /// Most crew hours in one change.
    pub max_crew_hours: Option<f64>,
}

/// What is set now at an outlet or a well, as read.
#[derive(Debug, Clone, PartialEq)]
pub enum RawNow {
    /// A flow, m3/s.
    Flow(f64),
    /// An opening, 0 to 1.
    Opening(f64),
    /// A position by its name.
    Position(String),
}

/// Target as read.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct RawTarget {
    /// Name.
    pub name: Option<String>,
    /// First day, `MM-DD`.
    pub from: Option<String>,
    /// Last day, `MM-DD`.
    pub to: Option<String>,
    /// Statistic, by name.
    pub statistic: Option<String>,
    /// Days the statistic speaks of.
    pub days: Option<usize>,
    /// Share of days it speaks of, 0 to 1.
    pub days_share: Option<f64>,
    /// Base of degree days, C.
    pub base_c: Option<f64>,
    /// First day that counts to them, `MM-DD`.
    pub since: Option<String>,
    /// Low, C; a difference or C days where the rule is of those.
    pub low_c: Option<f64>,
    /// Preferred, likewise.
    pub preferred_c: Option<f64>,
    /// High, likewise.
    pub high_c: Option<f64>,
    /// Buffer, C.
    pub buffer_c: Option<f64>,
    /// Least oxygen, mg/L.
    pub oxygen_min_mg_l: Option<f64>,
    /// Least oxygen over saturation, 0 to 1 and above.
    pub oxygen_min_share: Option<f64>,
    /// Statistic of the oxygen, by name.
    pub oxygen_statistic: Option<String>,
    /// Point.
    pub point: Option<String>,
    /// What the temperature is held against: `natural` or a name.
    pub reference: Option<String>,
    /// Types of water year.
    pub years: Vec<String>,
    /// Date or event that ends it.
    pub until: Option<String>,
    /// A wish.
    pub soft: bool,
    /// 1 comes first.
    pub priority: Option<usize>,
    /// Who set it.
    pub authority: Option<String>,
    /// Source of the rule.
    pub source: Option<String>,
    /// Its values are an example.
    pub example: Option<bool>,
}

/// Site as read. What is `None` or empty was not given.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct Raw {
    /// Name.
    pub name: Option<String>,
    /// Name of the river.
    pub river_name: Option<String>,
    /// The river.
    pub river: Option<RawRiver>,
    /// Units of bare numbers.
    pub units: Folder,
    /// Datum.
    pub datum: Option<String>,
    /// Offset of local times, `+HH:MM`.
    pub utc_offset: Option<String>,
    /// Altitude of elevation 0, m.
    pub altitude_m: Option<f64>,
    /// Latitude, degrees.
    pub latitude_deg: Option<f64>,
    /// Pool.
    pub pool: RawPool,
    /// Wells.
    pub wells: Vec<RawWell>,
    /// Outlets.
    pub outlets: Vec<RawOutlet>,
    /// Least total release, m3/s.
    pub release_min_m3s: Option<f64>,
    /// Most total release, m3/s.
    pub release_max_m3s: Option<f64>,
    /// Total release wanted now, m3/s.
    pub release_wanted_m3s: Option<f64>,
    /// Limits of the site as a whole.
    pub limits: RawLimits,
    /// Parts of the day.
    pub blocks: Vec<Block>,
    /// Inflow, m3/s.
    pub inflow_m3s: Option<f64>,
    /// Differences too small to order by.
    pub bins: Bins,
    /// What is set now, by the name of an outlet or a well.
    pub now: Vec<(String, RawNow)>,
    /// Targets.
    pub targets: Vec<RawTarget>,
    /// Type of the water year.
    pub year_type: Option<String>,
    /// Events with their dates, `YYYY-MM-DD`; without one where it has not come yet.
    pub events: Vec<(String, Option<String>)>,
    /// Cold-water thresholds, C.
    pub cold_water_c: Vec<f64>,
    /// Water chemistry.
    pub water: Chemistry,
    /// Cast checks.
    pub checks: CastChecks,
    /// Band.
    pub band: BandInputs,
    /// What was learned.
    pub learned: RawLearned,
    /// Days that learning looks back.
    pub learning_days: Option<u64>,
    /// How much of a record must be there.
    pub coverage: Coverage,
    /// Header mapping.
    pub columns: Vec<(String, String)>,
    /// Listed casts.
    pub casts: Vec<ListedCast>,
    /// How the season ahead is looked at.
    pub season: RawSeason,
    /// Texts of a change order.
    pub order: RawOrder,
    /// Invented data.
    pub demonstration: bool,
}
