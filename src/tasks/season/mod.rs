//! The season ahead: a plan, its cases and strategies, and what comes of them.

use std::ops::ControlFlow;
use std::sync::Arc;

use crate::problem::Problem;
use crate::season::{Outcome, Plan, Run, Skies};

use super::{Context, Failure};

/// What a season is asked, as typed.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct SeasonAsked {
    /// Plan: a file of `plans/`, its name, or a path; the first by name when absent.
    pub plan: Option<String>,
    /// Case, by name; the middle one when absent.
    pub case: Option<String>,
    /// Strategy, by name; the site's own when absent.
    pub strategy: Option<String>,
    /// File of a gate schedule, instead of a strategy.
    pub schedule: Option<String>,
    /// Days between decisions; the site's own when absent.
    pub every: Option<String>,
    /// The setting now, gate by gate; empty for the site's own.
    pub now: Vec<String>,
}

/// One season of the answer.
#[derive(Debug, Clone)]
pub struct SeasonRun {
    /// Its plan.
    pub plan: Arc<Plan>,
    /// Its case.
    pub skies: Arc<Skies>,
    /// The season.
    pub run: Run,
    /// What comes of it.
    pub outcome: Outcome,
    /// Whether its schedule was solved on this very case: foresight, and no evidence.
    pub foresight: bool,
}

/// The answer of `season`.
#[derive(Debug, Clone)]
pub struct SeasonAnswer {
    /// The one spoken of.
    pub main: SeasonRun,
    /// The others: the same plan in the other cases, then the other plans in the same case.
    pub others: Vec<SeasonRun>,
    /// Plans that were refused, and what was assumed.
    pub notes: Vec<Problem>,
}

/// Looks a season ahead. `progress` is told how much is done and may stop it.
///
/// # Errors
/// Words that cannot be understood; no plan, or a plan that is refused; a caller who stops it.
pub fn season(
    context: &Context,
    asked: &SeasonAsked,
    progress: &(dyn Fn(f64) -> ControlFlow<()> + Sync),
) -> Result<SeasonAnswer, Failure> {
    let _ = (context, asked, progress);
    Err(Failure::Stopped)
}
