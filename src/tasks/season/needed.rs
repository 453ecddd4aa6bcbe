//! The cold water needed on a date, case by case.

use std::sync::Arc;

use chrono::{Datelike, NaiveDate};
use rayon::prelude::*;

use crate::problem::Problem;
use crate::rank::Progress;
use crate::season::{self, Choosing, Needed, Plan, Skies, run};
use crate::site::Strategy;
use crate::tasks::{Context, Failure};

use super::asked::{SeasonAsked, Understood, understood};
use super::table::{Beside, Table, left_out};
use super::{holds_water, notes};

/// Share of the work that solving thrift is (choice: it is solved over some forty seasons, and each case goes through
/// some fifteen that begin on the date).
const SOLVED: f64 = 0.4;

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
    /// Days between decisions.
    pub decide_days: u32,
    /// The case spoken of first, then the others; one that was solved last.
    pub cases: Vec<CaseNeeded>,
    /// What was assumed.
    pub notes: Vec<Problem>,
    /// Fingerprint of the inputs, plans and all.
    pub fingerprint: String,
}

/// The cold water that is needed on a date, in every case under the plan and the strategy asked: the date as typed, without
/// it the first of the first month that begins inside the season. `progress` is told how much is done and may stop it.
///
/// # Errors
/// As [`season`](super::season); a date that cannot be read (usage) or lies outside the season, a site without a
/// threshold of cold water (refused).
pub fn needed(
    context: &Context,
    asked: &SeasonAsked,
    typed: Option<&str>,
    progress: Progress,
) -> Result<NeededAnswer, Failure> {
    holds_water(context)?;
    let mut notes = Vec::new();
    let now = crate::tasks::rank::now(context, &asked.now, &mut notes)?;
    let of = understood(context, asked)?;
    let table = Table { context, understood: &of, now: now.as_ref() };
    let date = date_of(context, &of, typed)?;
    let threshold_c = context.site().cold_water_c.first().copied();
    let threshold_c = threshold_c.ok_or_else(|| table.refused(no_threshold()))?;
    notes.extend(notes::notes(context, &of));
    let skies = every_sky(&table, &mut notes)?;

    let foresight = matches!(of.choosing, Choosing::By(Strategy::Thrift));
    let (choosing, part) = match skies.first() {
        Some(spoken) if foresight => {
            let setup = table.setup(&of.plan, spoken, of.choosing.clone());
            let solved = run(&setup, &|done| progress(SOLVED * done)).ok_or(Failure::Stopped)?;
            (solved.again(&of.choosing), SOLVED)
        }
        _ => (of.choosing.clone(), 0.0),
    };
    let beside = Beside::new(skies.len(), part, progress);
    let one = |(i, sky): (usize, &Arc<Skies>)| {
        let setup = table.setup(&of.plan, sky, choosing.clone());
        let needed = season::needed(&setup, date, &|done| beside.tell(i, done)).ok_or(Failure::Stopped)?;
        Ok(CaseNeeded { case: sky.case.name.clone(), needed, foresight: foresight && i == 0 })
    };
    let cases: Result<Vec<CaseNeeded>, Failure> = skies.par_iter().enumerate().map(one).collect();
    let mut cases = cases?;
    cases.sort_by_key(|case| case.foresight);
    if progress(1.0).is_break() {
        return Err(Failure::Stopped);
    }
    Ok(NeededAnswer {
        date,
        threshold_c,
        strategy: of.choosing.name(),
        begins: of.begins,
        decide_days: of.decide_days,
        cases,
        notes,
        fingerprint: of.fingerprint.clone(),
        plan: of.plan,
    })
}

/// The air of the case spoken of, then of the others; a case without air for all the days is left out with a flag.
fn every_sky(table: &Table, notes: &mut Vec<Problem>) -> Result<Vec<Arc<Skies>>, Failure> {
    let of = table.understood;
    let mut out = vec![table.skies(&of.plan, &of.case).map_err(|problem| table.refused(problem))?];
    for case in of.cases.iter().filter(|case| !case.is(&of.case)) {
        match table.skies(&of.plan, case) {
            Ok(sky) => out.push(sky),
            Err(problem) => notes.push(left_out(problem)),
        }
    }
    Ok(out)
}

/// The date of the words, a day of the season with days to come; without words the first of a month.
fn date_of(context: &Context, of: &Understood, typed: Option<&str>) -> Result<NaiveDate, Failure> {
    let last = of.plan.span().map_or(of.begins, |(_, last)| last);
    let refused = |words: String| {
        let cure = format!("give a day from {} on and before {last}", of.begins);
        Failure::Refused(vec![Problem::refused("date-outside", words, cure)], context.system)
    };
    let Some(text) = typed else {
        let mut days = of.begins.iter_days().take_while(|date| *date < last);
        return days
            .find(|date| date.day() == 1)
            .ok_or_else(|| refused("no month begins inside the season".to_owned()));
    };
    let date: NaiveDate = text
        .trim()
        .parse()
        .map_err(|_| Failure::Usage(format!("--left {text}: give a date such as {}", of.begins)))?;
    if date < of.begins || date >= last {
        let words =
            format!("{date} is no day of the season, {} to {last}, with days to come after it", of.begins);
        return Err(refused(words));
    }
    Ok(date)
}

fn no_threshold() -> Problem {
    let words = "the site file does not say what counts as cold water";
    Problem::refused("no-threshold", words, "give `cold_water` in the site file, such as [10]")
}
