//! The season ahead: a plan, its cases and strategies, and what comes of them.

mod asked;
mod learn;
mod needed;
mod notes;
mod price;
mod table;

use std::ops::ControlFlow;
use std::sync::Arc;

use chrono::NaiveDate;

use crate::problem::Problem;
use crate::rank::Criterion;
use crate::season::{Layers, Outcome, Plan, Run, Skies};

use super::{Context, Failure};

pub use asked::SeasonAsked;
pub use learn::{Dated, LearnAnswer, LearnAsked, learn};
pub use needed::{CaseNeeded, NeededAnswer, needed};
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
    /// What counts first where the mix of a day is chosen; empty where a schedule or the setting now tells the gates.
    pub order: Vec<Criterion>,
}

impl SeasonRun {
    /// Whether a day lies outside a hard target, or the season stops before its plan.
    pub fn missed(&self) -> bool {
        self.outcome.score.days_outside > 0 || self.run.ended.is_some()
    }
}

/// What was in view when the gates of a season were chosen.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub enum Seen {
    /// Nothing of it.
    Nothing,
    /// Its weather, under another plan.
    Weather,
    /// All of it: foresight, and no evidence.
    All,
}

/// The answer of `season`.
#[derive(Debug, Clone)]
pub struct SeasonAnswer {
    /// The one spoken of.
    pub main: SeasonRun,
    /// The others: the same plan in the other cases, then the other plans in the same case (and each in the other cases
    /// where that was asked), then the other strategies with the same plan in the same case.
    pub others: Vec<SeasonRun>,
    /// The one spoken of with nothing learned, where something is.
    pub without: Option<SeasonRun>,
    /// Whether the other plans were run in every case.
    pub every_case: bool,
    /// The first day.
    pub begins: NaiveDate,
    /// The first day on which gates may be moved: that of the cast where nobody knows what is set now.
    pub decides: NaiveDate,
    /// Days between decisions.
    pub decide_days: u32,
    /// What counts first where the mix of a day is chosen.
    pub order: Vec<Criterion>,
    /// Files of the gate schedules of the folder.
    pub schedules: Vec<String>,
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
        let mut out: Vec<&SeasonRun> = self
            .runs()
            .filter(|r| r.plan.file == self.main.plan.file && r.run.strategy == of.strategy)
            .collect();
        out.sort_by_key(|r| r.foresight);
        out
    }

    /// How much its gates were chosen in view of.
    pub fn seen(&self, of: &SeasonRun) -> Seen {
        let main = &self.main.run;
        match (of.foresight, self.main.foresight) {
            (true, _) => Seen::All,
            (_, true) if of.run.strategy == main.strategy && of.run.case == main.case => Seen::Weather,
            _ => Seen::Nothing,
        }
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
    holds_water(context)?;
    let mut notes = Vec::new();
    let now = super::rank::now(context, &asked.now, &mut notes)?;
    let understood = asked::understood(context, asked)?;
    notes.extend(notes::notes(context, &understood));
    let table = table::Table { context, understood: &understood, now: now.as_ref() };
    let main = table.main(progress)?;
    let (others, without) = table.others(&main, progress, &mut notes)?;
    notes.extend(notes::turned(context, &main));
    notes.extend(notes::nearer(&main, &others, &understood.order));
    notes.extend(notes::spares(&main, &others));
    if progress(1.0).is_break() {
        return Err(Failure::Stopped);
    }
    Ok(SeasonAnswer {
        main,
        others,
        without,
        every_case: understood.every_case,
        begins: understood.begins,
        decides: if now.is_some() { understood.decides } else { understood.begins },
        decide_days: understood.decide_days,
        order: understood.order.clone(),
        schedules: context.folder.schedules(),
        notes,
        fingerprint: understood.fingerprint.clone(),
    })
}

/// Refuses a cast that shows no water: no season can begin with it.
fn holds_water(context: &Context) -> Result<(), Failure> {
    let site = context.site();
    if Layers::of_profile(site, &context.profile, site.season.layer_m).is_some() {
        return Ok(());
    }
    let words = "the cast shows no water for a season to begin with";
    let cure = "give a cast under a pool above the bed of the volume table";
    Err(Failure::Refused(vec![Problem::refused("no-water", words, cure)], context.system))
}
