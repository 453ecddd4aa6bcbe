//! One season from the cast to the end of the plan.
//!
//! Methods: `docs/methods.md`, section 8.

use std::sync::Arc;

use chrono::NaiveDate;

use crate::mix::limits::Check;
use crate::mix::{Asked, Blend, Drawn, Gate, Setting};
use crate::profile::Profile;
use crate::rank::{Criterion, Progress};
use crate::river::Figures;
use crate::site::Strategy;

use super::balance::Balance;
use super::decide::Decision;
use super::going::Going;
use super::layers::Layers;
use super::plan::{Plan, Schedule};
use super::skies::Skies;
use super::thrift::thrift;

/// How the gates of a run are chosen.
#[derive(Debug, Clone)]
pub enum Choosing {
    /// A strategy.
    By(Strategy),
    /// A gate schedule.
    Schedule(Arc<Schedule>),
    /// The shares of the allowed range that thrift found on another case, one for each decision: re-scored here.
    Aims(Arc<Vec<f64>>),
    /// The gates that thrift found on another case where it could try every one: followed here.
    Found(Arc<Schedule>),
    /// This is set on the first day of decisions and held until a date as long as no limit stands against it; from then
    /// on the best mix of the day.
    Held(Asked, NaiveDate),
}

/// What a run is made from.
#[derive(Debug, Clone)]
pub struct Setup<'a> {
    /// The cast, with its moment.
    pub start: &'a Profile,
    /// The first day: that of the cast.
    pub begins: NaiveDate,
    /// The first day on which gates may be moved: that of the decision; until then what is set now stays.
    pub decides: NaiveDate,
    /// What is set now.
    pub now: Option<&'a Setting>,
    /// The plan.
    pub plan: &'a Plan,
    /// The case, with the site under its air.
    pub skies: &'a Skies,
    /// How gates are chosen.
    pub choosing: Choosing,
    /// Days between decisions.
    pub decide_days: u32,
    /// What counts first where the mix of a day is chosen.
    pub order: &'a [Criterion],
}

/// Why a season ended before its plan.
#[derive(Debug, Clone, PartialEq)]
pub struct Ended {
    /// The first day without an answer.
    pub date: NaiveDate,
    /// Why.
    pub words: String,
    /// The limit that stands in the way, where one does.
    pub check: Option<Check>,
}

/// One day of a season.
#[derive(Debug, Clone)]
pub struct SeasonDay {
    /// The date.
    pub date: NaiveDate,
    /// Pool at its end, m.
    pub pool_m: f64,
    /// Inflow, m3/s.
    pub inflow_m3s: f64,
    /// What is set, with the flows of the day.
    pub gates: Vec<Gate>,
    /// Levels that drew, with their zones.
    pub drawn: Vec<Drawn>,
    /// The release, oxygen below the dam counted in; `None` where nothing leaves the dam.
    pub release: Option<Blend>,
    /// What arrives at the points of the river, in its order; `None` where the way is not known, or nothing leaves the
    /// dam.
    pub points: Option<Vec<Figures>>,
    /// The pool at its end.
    pub layers: Layers,
    /// Water and heat of the day.
    pub balance: Balance,
    /// Whether the pool overturned.
    pub overturned: bool,
}

/// A season.
#[derive(Debug, Clone)]
pub struct Run {
    /// Name of the plan.
    pub plan: String,
    /// Name of the case.
    pub case: String,
    /// Name of the strategy.
    pub strategy: String,
    /// The pool at its start.
    pub start: Layers,
    /// Its days.
    pub days: Vec<SeasonDay>,
    /// What was decided.
    pub decisions: Vec<Decision>,
    /// Why it ended early; `None` where it reached the end of the plan.
    pub ended: Option<Ended>,
    /// Aims that thrift found, by decision.
    pub aims: Option<Arc<Vec<f64>>>,
}

/// Runs a season. `progress` is told the share of its days done and may stop it: `None` then, and where the cast shows
/// no water.
pub fn run(setup: &Setup, progress: Progress) -> Option<Run> {
    match setup.choosing {
        Choosing::By(Strategy::Thrift) => thrift(setup, progress),
        _ => Going::new(setup)?.finished(progress),
    }
}

/// Goes through days that have passed: gates as the schedule of the setup tells, else as they stand now, whatever limit
/// stood against it. Stopped as [`run`] is.
pub fn passed(setup: &Setup, progress: Progress) -> Option<Run> {
    Going::new(setup)?.through_what_was(progress)
}

impl SeasonDay {
    /// What leaves the dam, m3/s.
    pub fn release_m3s(&self) -> f64 {
        self.release.map_or(0.0, |release| release.flow_m3s)
    }
}

impl Run {
    /// How its gates are chosen again in another case: what thrift found here is followed there, everything else is
    /// chosen anew.
    pub fn again(&self, choosing: &Choosing) -> Choosing {
        match (&self.aims, choosing) {
            (Some(aims), _) => Choosing::Aims(aims.clone()),
            (None, Choosing::By(Strategy::Thrift)) => Choosing::Found(Arc::new(self.schedule())),
            (None, other) => other.clone(),
        }
    }

    /// What was set, as a schedule.
    pub fn schedule(&self) -> Schedule {
        let of = |decision: &Decision| {
            let day = self.days.iter().find(|day| day.date == decision.date)?;
            Some((decision.date, day.gates.clone()))
        };
        Schedule { file: String::new(), changes: self.decisions.iter().filter_map(of).collect() }
    }
}
