//! A cast as read, in SI, before any check.

use chrono::{DateTime, FixedOffset};

/// One row as read, in SI, with the line it stands on. Absent readings are `None`.
#[derive(Debug, Clone, Copy, Default, PartialEq)]
pub struct RawRow {
    /// Line in the file, from 1.
    pub line: usize,
    /// Depth below the surface, m.
    pub depth_m: Option<f64>,
    /// Elevation, m.
    pub elevation_m: Option<f64>,
    /// Temperature, C.
    pub temperature_c: Option<f64>,
    /// Oxygen, mg/L.
    pub oxygen_mg_l: Option<f64>,
    /// Oxygen, percent of saturation.
    pub oxygen_percent: Option<f64>,
    /// Conductance at 25 C, uS/cm.
    pub specific_us_cm: Option<f64>,
    /// Conductivity at the temperature of the water, uS/cm.
    pub conductivity_us_cm: Option<f64>,
    /// Dissolved solids, mg/L.
    pub solids_mg_l: Option<f64>,
    /// Suspended solids, mg/L.
    pub suspended_mg_l: Option<f64>,
}

/// A cast as read.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct Raw {
    /// File as the user named it.
    pub file: String,
    /// When it was taken.
    pub taken: Option<DateTime<FixedOffset>>,
    /// Pool elevation then, m.
    pub pool_m: Option<f64>,
    /// Rows in the order of the file.
    pub rows: Vec<RawRow>,
}
