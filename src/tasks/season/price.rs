//! The price of the mixes of a ranking by the end of the season.

use std::ops::ControlFlow;

use chrono::{Days, NaiveDate};

use crate::mix::{Perturbed, Setting};
use crate::problem::Problem;
use crate::season::{self, PRICE_MEMBERS, Price, Pricing};
use crate::tasks::rank::RankAnswer;
use crate::tasks::{Context, Failure};

use super::asked::{SeasonAsked, understood};
use super::holds_water;
use super::notes::of_plans;

/// What the mixes of a ranking cost by the end of the season.
#[derive(Debug, Clone, PartialEq)]
pub struct Prices {
    /// The plan.
    pub plan: String,
    /// The case.
    pub case: String,
    /// Until when a mix is held: the day of the next decision.
    pub until: NaiveDate,
    /// The day decided for, from which on a mix is held.
    pub from: NaiveDate,
    /// Prices are told against the setting now; where it is not known, against the first mix.
    pub against_now: bool,
    /// Perturbed cases behind the ranges.
    pub members: usize,
    /// Price of every mix shown, in the order of the ranking.
    pub mixes: Vec<Price>,
    /// What the plan assumes, and what was assumed of the days before the day decided for.
    pub notes: Vec<Problem>,
    /// Fingerprint of the inputs, plans and all.
    pub fingerprint: String,
}

/// Prices the mixes of a ranking. `progress` is told how much is done and may stop it.
///
/// # Errors
/// As [`season`](super::season).
pub fn prices(
    context: &Context,
    answer: &RankAnswer,
    asked: &SeasonAsked,
    progress: &(dyn Fn(f64) -> ControlFlow<()> + Sync),
) -> Result<Prices, Failure> {
    holds_water(context)?;
    let of = understood(context, asked)?;
    let skies = of
        .case
        .skies(context, of.begins, &of.plan)
        .map_err(|problem| Failure::Refused(vec![problem], context.system))?;
    let now = answer.now.as_ref().map(|now| &now.day);
    let mixes: Vec<&Setting> = now.into_iter().chain(answer.mixes.iter().map(|mix| &mix.day)).collect();
    let perturbed = Perturbed::new(context.site(), &context.profile, context.age_days);
    let pricing = Pricing {
        start: &context.profile,
        perturbed: &perturbed,
        begins: of.begins,
        on: of.decides,
        now,
        plan: &of.plan,
        skies: &skies,
        decide_days: of.decide_days,
        // what counts first in the list counts first later
        order: &answer.order,
    };
    let mut mixes = season::prices(&pricing, &mixes, progress).ok_or(Failure::Stopped)?;
    if now.is_some() && !mixes.is_empty() {
        mixes.remove(0);
    }
    let mut notes = of_plans(&of);
    if now.is_none() && of.begins < of.decides {
        let words = format!(
            "what is set now is not known: from the cast of {} to {} no. 1 is held",
            of.begins, of.decides
        );
        notes.push(Problem::note("now-unknown", words));
    }
    Ok(Prices {
        plan: of.plan.name.clone(),
        case: of.case.name().to_owned(),
        from: of.decides,
        until: of.decides.checked_add_days(Days::new(of.decide_days.into())).unwrap_or(of.decides),
        against_now: now.is_some(),
        members: PRICE_MEMBERS.min(context.site().band.members),
        mixes,
        notes,
        fingerprint: of.fingerprint,
    })
}
