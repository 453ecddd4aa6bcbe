//! What a site file said, in SI, before any check.

use crate::units::Folder;

use super::{
    BandInputs, CastChecks, Chemistry, Leakage, ListedCast, Opens, Position, RawRow, SetNow, WidthSource,
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
    /// Most flow, m3/s.
    pub max_flow_m3s: Option<f64>,
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
    /// Low, C.
    pub low_c: Option<f64>,
    /// Preferred, C.
    pub preferred_c: Option<f64>,
    /// High, C.
    pub high_c: Option<f64>,
    /// Buffer, C.
    pub buffer_c: Option<f64>,
    /// Least oxygen, mg/L.
    pub oxygen_min_mg_l: Option<f64>,
    /// Point.
    pub point: Option<String>,
    /// Source of the rule.
    pub source: Option<String>,
}

/// Site as read. What is `None` or empty was not given.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct Raw {
    /// Name.
    pub name: Option<String>,
    /// River.
    pub river: Option<String>,
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
    /// What is set now.
    pub now: Vec<(String, SetNow)>,
    /// Targets.
    pub targets: Vec<RawTarget>,
    /// Cold-water thresholds, C.
    pub cold_water_c: Vec<f64>,
    /// Water chemistry.
    pub water: Chemistry,
    /// Cast checks.
    pub checks: CastChecks,
    /// Band.
    pub band: BandInputs,
    /// Header mapping.
    pub columns: Vec<(String, String)>,
    /// Listed casts.
    pub casts: Vec<ListedCast>,
    /// Invented data.
    pub demonstration: bool,
}
