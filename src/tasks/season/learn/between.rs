//! Which three casts, and which plan tells the days between them.

use std::path::Path;
use std::sync::Arc;

use chrono::NaiveDate;

use crate::files::folder::ListedPlan;
use crate::problem::{Problem, Weight};
use crate::season::{LEAST_DAYS, Plan};
use crate::tasks::season::asked::usage;
use crate::tasks::{Context, Failure};

use super::{Dated, LearnAsked};

/// Three casts in order of time, and the plan of the days between.
pub(super) struct Between {
    pub(super) casts: [Dated; 3],
    pub(super) listed: ListedPlan,
    pub(super) plan: Arc<Plan>,
}

/// What is asked for, found.
pub(super) fn between(context: &Context, asked: &LearnAsked) -> Result<Between, Failure> {
    let refused = |problem: Problem| Failure::Refused(vec![problem], context.system);
    let dated = dated(context);
    let named = asked.casts.as_deref().map(|typed| named(&dated, typed)).transpose()?;
    if named.is_none() && dated.len() < 3 {
        let words = format!("three casts with their dates are needed, and the folder has {}", dated.len());
        let cure = format!("cast again: the three lie at least {LEAST_DAYS} days apart");
        return Err(refused(Problem::refused("not-told", words, cure)));
    }
    let (plans, unsound) = plans(context, asked.plan.as_deref())?;
    let of = |(listed, plan): &(ListedPlan, Arc<Plan>)| {
        let told = |casts: &[Dated; 3]| tells(plan, casts);
        let inside = || latest(dated.iter().filter(|cast| is_inside(plan, cast.date)));
        let casts = named.clone().or_else(inside).filter(told)?;
        Some(Between { casts, listed: listed.clone(), plan: plan.clone() })
    };
    // of plans that tell as much the first by name
    let found = plans.iter().rev().filter_map(of).max_by_key(|found| found.casts[2].date);
    let wanted = || named.clone().or_else(|| latest(dated.iter()));
    match (found, wanted()) {
        (Some(found), _) => Ok(found),
        (None, Some(casts)) => {
            let given = plans.first().filter(|_| asked.plan.is_some()).map(|plan| &*plan.1);
            Err(Failure::Refused([unsound, vec![not_told(&casts, given)]].concat(), context.system))
        }
        (None, None) => {
            let words = format!("no three casts of the folder lie {LEAST_DAYS} days apart");
            let cure = "cast again later: what lies between casts that are near tells too little";
            Err(refused(Problem::refused("not-told", words, cure)))
        }
    }
}

/// The sound casts of the folder that tell their time, in its order.
fn dated(context: &Context) -> Vec<Dated> {
    let one = |listed| {
        let profile = context.folder.profile_of(listed).0?;
        let date = profile.taken?.with_timezone(&context.site().offset).date_naive();
        Some(Dated { profile, date, source: listed.source.clone() })
    };
    context.folder.casts().iter().filter_map(one).collect()
}

/// The three casts that were typed.
fn named(dated: &[Dated], typed: &str) -> Result<[Dated; 3], Failure> {
    let wrong = |words: String| Failure::Usage(format!("--learn {typed}: {words}"));
    let one = |word: &str| {
        let found = dated.iter().rfind(|cast| is_named(cast, word));
        found.cloned().ok_or_else(|| {
            let known: Vec<String> = dated.iter().map(|cast| cast.date.to_string()).collect();
            wrong(format!("there is no sound cast `{word}`; there are those of {}", known.join(", ")))
        })
    };
    let words: Vec<&str> = typed.split(',').map(str::trim).collect();
    let [from, to, test] = words[..] else {
        return Err(wrong("give three casts, comma between: from, to, and the one of the test".into()));
    };
    let casts = [one(from)?, one(to)?, one(test)?];
    if casts[0].date >= casts[1].date || casts[1].date >= casts[2].date {
        return Err(wrong("give the three casts in the order of time".into()));
    }
    Ok(casts)
}

/// Whether a cast goes by a word: its date, or its file with or without its ending.
fn is_named(cast: &Dated, word: &str) -> bool {
    let file = Path::new(&cast.profile.file);
    let parts =
        [file.to_str(), file.file_name().and_then(|n| n.to_str()), file.file_stem().and_then(|n| n.to_str())];
    cast.date.to_string() == word || parts.contains(&Some(word))
}

/// Plans of the folder that can be used, or the one that is named; and what is wrong with the others.
type Plans = (Vec<(ListedPlan, Arc<Plan>)>, Vec<Problem>);

fn plans(context: &Context, typed: Option<&str>) -> Result<Plans, Failure> {
    let listed = match typed {
        Some(name) => vec![context.folder.plan(name).map_err(|problem| usage("--plan", &problem))?],
        None => context.folder.plans().to_vec(),
    };
    let unsound: Vec<Problem> =
        listed.iter().filter(|l| l.plan.is_none()).flat_map(|l| l.problems.clone()).collect();
    let unsound: Vec<Problem> = unsound.into_iter().filter(|p| p.weight == Weight::Refused).collect();
    let sound = listed.into_iter().filter_map(|l| Some((l.clone(), l.plan?))).collect();
    Ok((sound, unsound))
}

/// The last three casts with enough days between them.
fn latest<'a>(casts: impl DoubleEndedIterator<Item = &'a Dated>) -> Option<[Dated; 3]> {
    let mut found: Vec<&Dated> = Vec::new();
    for cast in casts.rev() {
        if found.last().is_none_or(|later| (later.date - cast.date).num_days() >= LEAST_DAYS) {
            found.push(cast);
        }
    }
    let [third, second, first, ..] = found[..] else { return None };
    Some([first.clone(), second.clone(), third.clone()])
}

/// Whether a cast of a date lies inside the days of a plan, or on the morning after them.
fn is_inside(plan: &Plan, date: NaiveDate) -> bool {
    plan.span().is_some_and(|(first, last)| (first..=last).contains(&date) || last.succ_opt() == Some(date))
}

/// Whether a plan tells every day from the first cast to the one before the third.
fn tells(plan: &Plan, [first, _, third]: &[Dated; 3]) -> bool {
    is_inside(plan, first.date) && is_inside(plan, third.date)
}

/// The days that no plan tells, and what to write.
fn not_told([first, _, third]: &[Dated; 3], given: Option<&Plan>) -> Problem {
    let (from, to) = (first.date, third.date.pred_opt().unwrap_or(third.date));
    let (words, file) = match given.and_then(|plan| Some((plan.span()?, plan))) {
        Some(((begins, ends), plan)) => {
            let words =
                format!("the plan tells {begins} to {ends}, and the days from {from} to {to} are needed");
            (words, Some(plan.file.clone()))
        }
        None => (format!("no plan tells the days from {from} to {to}, between the casts"), None),
    };
    let cure = format!(
        "write plans/past.csv, a row a day or a week from {from} to {to}: date, the pool or the release, the inflow and its \
         temperature; and schedules/past.csv, a row for each change of gates: date, the flow of each outlet"
    );
    let problem = Problem::refused("not-told", words, cure);
    match file {
        Some(file) => problem.in_file(file),
        None => problem,
    }
}
