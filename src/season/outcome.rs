//! What people decide by: cold water by date, exhaustion, gates lost, days outside, stages, moves.
//!
//! Methods: `docs/methods.md`, section 8.

use chrono::NaiveDate;

use super::run::{Run, Setup};
use super::tally::TargetTally;

/// Cold water on a day.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct ColdDay {
    /// The day, at its end.
    pub date: NaiveDate,
    /// All of it, m3.
    pub total_m3: f64,
    /// What the outlets usable on that date can draw, m3; `None` where none is usable.
    pub usable_m3: Option<f64>,
}

/// Cold water below one threshold, day by day.
#[derive(Debug, Clone, PartialEq)]
pub struct ColdWater {
    /// Threshold, C.
    pub threshold_c: f64,
    /// By day.
    pub days: Vec<ColdDay>,
}

/// When something runs out.
#[derive(Debug, Clone, PartialEq)]
pub enum Exhausted {
    /// On this day.
    On(NaiveDate),
    /// Not by the end of the season, this day.
    NotBy(NaiveDate),
    /// It cannot be said.
    Unknown(String),
}

/// First and last usable day of a gate.
#[derive(Debug, Clone, PartialEq)]
pub struct GateLife {
    /// Index of the outlet.
    pub outlet: usize,
    /// First day it can be used, of those of the season.
    pub first_day: Option<NaiveDate>,
    /// Last day in a row from then; `None` while it can be used to the end.
    pub last_day: Option<NaiveDate>,
    /// Why not before the first, or not after the last, by the name of the limit and in words.
    pub reason: Option<(&'static str, String)>,
    /// The day by which its crew must be told, where it moves on a date and its lead is given.
    pub book_by: Option<NaiveDate>,
}

/// A stage of eggs or young.
#[derive(Debug, Clone, PartialEq)]
pub struct StageDate {
    /// Index in the stages of the site, and of the stage.
    pub stages: usize,
    /// See `stages`.
    pub stage: usize,
    /// When it is reached.
    pub on: Exhausted,
}

/// What stops or hampers a season.
#[derive(Debug, Clone, PartialEq)]
pub struct Stopping {
    /// First day.
    pub date: NaiveDate,
    /// What.
    pub words: String,
}

/// What comes of a season.
#[derive(Debug, Clone, PartialEq)]
pub struct Outcome {
    /// Cold water below each threshold of the site, by day.
    pub cold: Vec<ColdWater>,
    /// First day from which no allowed mix reaches the high of the target at the required release.
    pub exhausted: Exhausted,
    /// First day under a reserve of the site.
    pub under_reserve: Option<Exhausted>,
    /// First and last usable day of every gate.
    pub gates: Vec<GateLife>,
    /// Every target.
    pub targets: Vec<TargetTally>,
    /// Stages.
    pub stages: Vec<StageDate>,
    /// Gates moved.
    pub moves: usize,
    /// Crew hours.
    pub crew_hours: f64,
    /// The day the pool overturns.
    pub turnover: Option<NaiveDate>,
    /// Least oxygen below the dam, mg/L, and when.
    pub least_oxygen: Option<(f64, NaiveDate)>,
    /// Energy not generated, MWh.
    pub generation_lost_mwh: Option<f64>,
    /// Deep water newly drawn, drawdown and stage beyond limits.
    pub warnings: Vec<Stopping>,
}

/// What comes of a run.
pub fn outcome(setup: &Setup, run: &Run) -> Outcome {
    let _ = (setup, run);
    Outcome {
        cold: Vec::new(),
        exhausted: Exhausted::Unknown(String::new()),
        under_reserve: None,
        gates: Vec::new(),
        targets: Vec::new(),
        stages: Vec::new(),
        moves: 0,
        crew_hours: 0.0,
        turnover: None,
        least_oxygen: None,
        generation_lost_mwh: None,
        warnings: Vec::new(),
    }
}
