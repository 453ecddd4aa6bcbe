//! Limits as data: what may not be done at this dam, by whose rule, and what a change costs.
//!
//! A limit that is absent is not checked, and every output says so.

use chrono::NaiveDate;

/// A span in which an outlet cannot be used.
#[derive(Debug, Clone, PartialEq)]
pub struct Outage {
    /// Index of the outlet.
    pub outlet: usize,
    /// First day.
    pub from: NaiveDate,
    /// Last day; open-ended when absent.
    pub to: Option<NaiveDate>,
    /// Why.
    pub reason: String,
}

impl Outage {
    /// Whether the outlet is out on a date.
    pub fn covers(&self, date: NaiveDate) -> bool {
        self.from <= date && self.to.is_none_or(|to| date <= to)
    }
}

/// What part of the release named outlets together must or may carry.
#[derive(Debug, Clone, PartialEq)]
pub struct ShareRule {
    /// Name, such as `units`.
    pub name: String,
    /// Indices of the outlets.
    pub outlets: Vec<usize>,
    /// Least share of the release, 0 to 1.
    pub min: Option<f64>,
    /// Greatest share of the release, 0 to 1.
    pub max: Option<f64>,
}

/// Flow that one outlet must always give (a hatchery, a ladder).
#[derive(Debug, Clone, PartialEq)]
pub struct Reserved {
    /// Index of the outlet.
    pub outlet: usize,
    /// Least flow, m3/s.
    pub flow_m3s: f64,
    /// What for.
    pub reason: String,
}

/// Water that may not be drawn.
#[derive(Debug, Clone, PartialEq)]
pub struct Undrawn {
    /// Which water.
    pub layer: Layer,
    /// Why: scum, iron, hydrogen sulphide.
    pub reason: String,
}

/// A layer of the pool.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Layer {
    /// Between two elevations, m.
    Elevations(f64, f64),
    /// Between two depths below the surface, m.
    Depths(f64, f64),
    /// Water with less oxygen than this, mg/L.
    OxygenBelow(f64),
}

/// A stretch of openings or flows in which a gate shakes or runs rough; its ends are allowed.
#[derive(Debug, Clone, PartialEq)]
pub struct Avoid {
    /// What is avoided.
    pub what: Avoided,
    /// Why.
    pub reason: String,
}

/// What an outlet avoids.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Avoided {
    /// Openings strictly between two, 0 to 1.
    Openings(f64, f64),
    /// Flows strictly between two, m3/s.
    Flows(f64, f64),
}

/// What a move of one gate takes.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Crew {
    /// Crew hours for each move.
    pub hours: f64,
    /// Days of notice the crew needs.
    pub lead_days: f64,
    /// Weight of a move when mixes are ordered.
    pub cost: f64,
}

impl Default for Crew {
    fn default() -> Self {
        Self { hours: 0.0, lead_days: 0.0, cost: 1.0 }
    }
}

/// Power not made by water that passes here: so much while such a flow passes, in proportion.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct GenerationLost {
    /// Flow, m3/s.
    pub flow_m3s: f64,
    /// Power lost at that flow, MW.
    pub power_mw: f64,
}

/// A part of the day with a release of its own; the parts of a day sum to 24 hours.
#[derive(Debug, Clone, PartialEq)]
pub struct Block {
    /// Name, such as `peak`.
    pub name: String,
    /// Hours of the day.
    pub hours: f64,
    /// Total release, m3/s.
    pub flow_m3s: f64,
}

/// Limits of the site as a whole.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct Limits {
    /// Outlets out of use.
    pub outages: Vec<Outage>,
    /// Shares of the release.
    pub shares: Vec<ShareRule>,
    /// Flows reserved.
    pub reserved: Vec<Reserved>,
    /// Layers not to be drawn.
    pub undrawn: Vec<Undrawn>,
    /// Most change of the total release in an hour, m3/s.
    pub flow_change_m3s_per_hour: Option<f64>,
    /// Most change of the total release in a day, m3/s.
    pub flow_change_m3s_per_day: Option<f64>,
    /// Most change of the release temperature in an hour, C.
    pub temperature_change_c_per_hour: Option<f64>,
    /// Most change of the release temperature in a day, C.
    pub temperature_change_c_per_day: Option<f64>,
    /// Hours over which a change from the setting now is made.
    pub change_hours: Option<f64>,
    /// Most fall of the pool in a day, m.
    pub drawdown_m_per_day: Option<f64>,
    /// Most solids, dissolved and suspended, in the release, mg/L.
    pub solids_max_mg_l: Option<f64>,
    /// Most moves in one change.
    pub max_moves: Option<usize>,
    /// Most crew hours in one change.
    pub max_crew_hours: Option<f64>,
}

impl Limits {
    /// First day from a date on which no outage holds an outlet; `None` where the last has no end.
    pub fn in_use_from(&self, outlet: usize, date: NaiveDate) -> Option<NaiveDate> {
        let mut day = date;
        while let Some(outage) = self.outages.iter().find(|o| o.outlet == outlet && o.covers(day)) {
            day = outage.to?.succ_opt()?;
        }
        Some(day)
    }
}

/// Differences too small to order mixes by (defaults are choice).
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Bins {
    /// Temperature, C.
    pub temperature_c: f64,
    /// Oxygen, mg/L.
    pub oxygen_mg_l: f64,
    /// Cold water, as a share of the release.
    pub cold_share: f64,
}

impl Default for Bins {
    fn default() -> Self {
        Self { temperature_c: 0.5, oxygen_mg_l: 0.5, cold_share: 0.1 }
    }
}
