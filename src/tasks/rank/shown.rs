//! A mix as it is shown: everything computed in full, with what it takes and why it stands where it does.

use crate::mix::limits::Check;
use crate::mix::{Conflict, Mix, Setting, Spread, TargetStanding};
use crate::problem::Problem;
use crate::river::AtPoint;
use crate::site::Site;
use crate::tasks::change::Change;
use crate::tasks::learned::Without;

/// A part of the day.
#[derive(Debug, Clone)]
pub struct ShownPart {
    /// Its share of the day.
    pub share: f64,
    /// What is set.
    pub setting: Setting,
    /// What comes out.
    pub mix: Mix,
}

/// What comes out if a gate whose position is not confirmed stands otherwise.
#[derive(Debug, Clone, PartialEq)]
pub struct Unsure {
    /// Index of the outlet.
    pub outlet: usize,
    /// Whether it is taken as open.
    pub open: bool,
    /// Temperature (C) and oxygen (mg/L) if it is not; `None` where nothing would flow.
    pub otherwise: Option<(f64, Option<f64>)>,
}

/// A mix as it is shown.
#[derive(Debug, Clone)]
pub struct Shown {
    /// The parts of the day; one for a steady day.
    pub parts: Vec<ShownPart>,
    /// What is set, flows as their time means.
    pub day: Setting,
    /// Time mean of the flow, m3/s.
    pub flow_m3s: f64,
    /// Time mean of the temperature, C: what a gauge sees.
    pub temperature_c: f64,
    /// Time mean of the oxygen below the dam, mg/L; without a gain at the site that leaving the pool.
    pub oxygen_mg_l: Option<f64>,
    /// Time mean of the oxygen leaving the pool, mg/L.
    pub oxygen_pool_mg_l: Option<f64>,
    /// Temperature weighted with the flow, C: what heat balances use.
    pub by_flow_c: f64,
    /// Time means of the perturbed cases.
    pub spread: Spread,
    /// The release with nothing learned, where something is.
    pub without: Option<Without>,
    /// Standing against every target valid on the date, over the day.
    pub targets: Vec<TargetStanding>,
    /// Hard targets that leave nothing in common.
    pub conflicts: Vec<Conflict>,
    /// What arrives at the points of the river that targets speak of.
    pub points: Vec<AtPoint>,
    /// Water colder than the site's first threshold that it takes in a day, m3; `None` without a threshold.
    pub cold_m3_per_day: Option<f64>,
    /// What the change from the setting now takes; `None` where that is not known.
    pub change: Option<Change>,
    /// Power not made, MW, over the day; `None` where no outlet gives it.
    pub generation_lost_mw: Option<f64>,
    /// Every limit that applies, kept or broken, each with its least room over the day.
    pub limits: Vec<Check>,
    /// Limits that nobody gave or that what is known does not reach.
    pub not_checked: Vec<String>,
    /// What to beware of, limits broken included.
    pub warnings: Vec<Problem>,
    /// Gates not confirmed in position.
    pub unsure: Vec<Unsure>,
    /// Number of other sets of outlets that draw through the same levels.
    pub alike: usize,
    /// Why it stands where it does, in words; quantities as [`say`](crate::units::say) marks them.
    pub reasons: Vec<String>,
}

impl Shown {
    /// The target with the least room.
    pub fn governing(&self) -> Option<&TargetStanding> {
        self.targets.iter().find(|s| s.governs)
    }

    /// Whether every target valid on the date is known to be kept.
    pub fn keeps_all(&self, site: &Site) -> bool {
        self.targets.iter().all(|s| !s.missed() && !s.unknown(site))
    }
}
