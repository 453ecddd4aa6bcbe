//! The season ahead: a plan, its cases and strategies, and what comes of them.

mod asked;
mod learn;
mod notes;
mod price;
mod table;

use std::ops::ControlFlow;
use std::sync::Arc;

use chrono::NaiveDate;

use crate::problem::Problem;
use crate::season::{Outcome, Plan, Run, Skies};

use super::{Context, Failure};

pub use asked::SeasonAsked;
pub use learn::{Dated, LearnAnswer, LearnAsked, learn};
pub use price::{Prices, prices};

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

impl SeasonRun {
    /// Whether a day lies outside a hard target, or the season stops before its plan.
    pub fn missed(&self) -> bool {
        self.outcome.score.days_outside > 0 || self.run.ended.is_some()
    }
}

/// The answer of `season`.
#[derive(Debug, Clone)]
pub struct SeasonAnswer {
    /// The one spoken of.
    pub main: SeasonRun,
    /// The others: the same plan in the other cases, then the other plans in the same case, then the other strategies
    /// with the same plan in the same case.
    pub others: Vec<SeasonRun>,
    /// The first day.
    pub begins: NaiveDate,
    /// The first day on which gates may be moved.
    pub decides: NaiveDate,
    /// Days between decisions.
    pub decide_days: u32,
    /// Plans that were refused, and what was assumed.
    pub notes: Vec<Problem>,
    /// Fingerprint of the inputs, plans and all.
    pub fingerprint: String,
}

impl SeasonAnswer {
    /// Every season, the one spoken of first.
    pub fn runs(&self) -> impl Iterator<Item = &SeasonRun> {
        std::iter::once(&self.main).chain(&self.others)
    }

    /// The plan and the strategy spoken of in every case, unseen ones first.
    pub fn cases(&self) -> Vec<&SeasonRun> {
        let of = &self.main.run;
        let mut out: Vec<&SeasonRun> =
            self.runs().filter(|r| r.run.plan == of.plan && r.run.strategy == of.strategy).collect();
        out.sort_by_key(|r| r.foresight);
        out
    }
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
    let mut notes = Vec::new();
    let now = super::rank::now(context, &asked.now, &mut notes)?;
    let understood = asked::understood(context, asked)?;
    notes.extend(notes::notes(context, &understood));
    let table = table::Table { context, understood: &understood, now: now.as_ref() };
    let main = table.main(progress)?;
    let others = table.others(&main, progress, &mut notes)?;
    if progress(1.0).is_break() {
        return Err(Failure::Stopped);
    }
    Ok(SeasonAnswer {
        main,
        others,
        begins: understood.begins,
        decides: understood.decides,
        decide_days: understood.decide_days,
        notes,
        fingerprint: understood.fingerprint.clone(),
    })
}
