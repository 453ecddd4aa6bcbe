//! The pool learned from its folder: three casts, and what tells the days between them.

use std::sync::Arc;

use chrono::NaiveDate;

use crate::files::folder::ListedPlan;
use crate::files::text::Source;
use crate::mix::Setting;
use crate::problem::{Problem, Weight};
use crate::profile::Profile;
use crate::rank::{Criterion, Progress};
use crate::season::{Choosing, Learned, Plan, Setup, Skies, learn as fit, passed, past};
use crate::site::{Case, Strategy};
use crate::tasks::{Context, Failure, fingerprint};

use super::asked::usage;
use between::{Between, between};

mod between;

/// What learning is asked, as typed.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct LearnAsked {
    /// Three casts, comma between, each by its date or file; the last three that a plan tells the days of when absent.
    pub casts: Option<String>,
    /// The plan that tells the days; the one of the folder that does when absent.
    pub plan: Option<String>,
    /// File of the gate schedule that tells what was set; the one of the plan's name when absent.
    pub schedule: Option<String>,
    /// The setting now, gate by gate, which holds where no schedule tells; empty for the site's own.
    pub now: Vec<String>,
}

/// A cast with its day.
#[derive(Debug, Clone)]
pub struct Dated {
    /// The cast.
    pub profile: Profile,
    /// Its day.
    pub date: NaiveDate,
    /// The bytes it came from.
    source: Option<Source>,
}

/// What was learned, and from what.
#[derive(Debug, Clone)]
pub struct LearnAnswer {
    /// The cast begun from, the one fitted, the one of the test.
    pub casts: [Dated; 3],
    /// What tells the days between them.
    pub plan: Arc<Plan>,
    /// File of the schedule that tells what was set; `None` where what is set now stands for it.
    pub schedule: Option<String>,
    /// Where the air comes from, in words.
    pub air: String,
    /// What was learned.
    pub learned: Learned,
    /// What was assumed.
    pub notes: Vec<Problem>,
    /// Fingerprint of the inputs.
    pub fingerprint: String,
}

/// What was set on the days.
struct Gates {
    choosing: Choosing,
    now: Option<Setting>,
    schedule: Option<(String, Source)>,
}

/// Fits the knobs of the pool between two casts and tests them on a third. Nothing is written.
///
/// # Errors
/// Words that cannot be understood; casts or days that are not told; a fit that is not worth keeping; a caller who stops
/// it.
pub fn learn(context: &Context, asked: &LearnAsked, progress: Progress) -> Result<LearnAnswer, Failure> {
    let refused = |problem: Problem| Failure::Refused(vec![problem], context.system);
    let Between { casts, listed, plan } = between(context, asked)?;
    let [first, second, third] = casts;
    let mut notes: Vec<Problem> = plan.notes.clone();
    let gates = gates(context, asked, &listed, first.date, &mut notes)?;
    // as it was, nothing shifted
    let case = Case { name: "as told".into(), air_c: 0.0, wind: 1.0, inflow: 1.0, inflow_c: 0.0 };
    let last = third.date.pred_opt().unwrap_or(third.date);
    let skies = Skies::of_case(context.site(), &context.conditions, &case, first.date, last)
        .map_err(|why| refused(Problem::refused("no-air", why, "")))?;
    notes.extend(air_of_months(context, first.date, last));
    // the morning of the last cast as far as plan and air tell its day
    let is_told = |date: NaiveDate| date <= last || (date == third.date && skies.days.contains_key(&date));
    let days = plan.days.iter().filter(|day| is_told(day.date)).copied().collect();
    let setup = Setup {
        start: &first.profile,
        begins: first.date,
        decides: first.date,
        now: gates.now.as_ref(),
        plan: &Plan { days, ..(*plan).clone() },
        skies: &skies,
        choosing: gates.choosing.clone(),
        decide_days: context.site().season.decide_days,
        order: &Criterion::USUAL,
    };
    let run = passed(&setup, progress).ok_or(Failure::Stopped)?;
    if let Some(ended) = &run.ended {
        let words =
            format!("the days cannot be gone through as they are told, on {}: {}", ended.date, ended.words);
        let cure = "correct that day in the plan or in the schedule";
        return Err(refused(Problem::refused("not-learned", words, cure)));
    }
    let days = past(&setup, &run);
    let profiles = [&first.profile, &second.profile, &third.profile];
    let learned = fit(&skies.site, profiles, &days, progress)
        .ok_or(Failure::Stopped)?
        .map_err(|words| refused(not_learned(&words)))?;
    let others = [&first, &second, &third].into_iter().filter_map(|cast| cast.source.as_ref());
    let told = listed.source.iter().chain(gates.schedule.iter().map(|s| &s.1));
    let sources: Vec<&Source> = others.chain(&context.folder.around().sources).chain(told).collect();
    Ok(LearnAnswer {
        fingerprint: fingerprint(&context.folder, &sources, &context.log),
        casts: [first, second, third],
        plan,
        schedule: gates.schedule.map(|s| s.0),
        air: skies.from,
        learned,
        notes,
    })
}

/// Says on how many days the weather is not that of the day; what of it the pool shows, the knobs would make up for.
fn air_of_months(context: &Context, from: NaiveDate, to: NaiveDate) -> Option<Problem> {
    let days = || from.iter_days().take_while(|date| *date <= to);
    let untold = days().filter(|date| context.conditions.weather.day(*date).is_none()).count();
    (untold > 0).then(|| {
        let words = format!(
            "the weather of {untold} of the {} days is not told, and mean figures stand for it: the knobs then make up \
             for what the weather was",
            days().count()
        );
        Problem::flag("air-of-months", words, "give a weather file of the days between: season.weather in site.yaml")
    })
}

fn not_learned(why: &str) -> Problem {
    let words = format!("nothing is learned: {why}");
    let cure = "keep the figures of the site file; other casts, or days told more closely, may tell more";
    Problem::refused("not-learned", words, cure)
}

/// What tells the gates of the days: the schedule that is named, that of the plan's name, else what is set now.
fn gates(
    context: &Context,
    asked: &LearnAsked,
    listed: &ListedPlan,
    first: NaiveDate,
    notes: &mut Vec<Problem>,
) -> Result<Gates, Failure> {
    let refused = |problems: Vec<Problem>| Failure::Refused(problems, context.system);
    let read = match asked.schedule.as_deref() {
        Some(file) => Some(context.folder.schedule(file).map_err(|problem| usage("--schedule", &problem))?),
        None => context.folder.schedule_of(listed).transpose().map_err(|problem| refused(vec![problem]))?,
    };
    if let Some(read) = read {
        let Some(schedule) = read.schedule else { return Err(refused(read.problems)) };
        if let Some((begins, _)) = schedule.changes.first().filter(|change| change.0 > first) {
            let words =
                format!("the schedule begins on {begins}, and what was set from {first} on is needed");
            let cure = format!("add a row of {first}: the flow of each gate that stood open");
            return Err(refused(vec![Problem::refused("not-told", words, cure).in_file(&schedule.file)]));
        }
        notes.extend(read.problems.into_iter().filter(|problem| problem.weight != Weight::Refused));
        let told = Some((schedule.file.clone(), read.source));
        return Ok(Gates { choosing: Choosing::Schedule(schedule), now: None, schedule: told });
    }
    let Some(now) = crate::tasks::rank::now(context, &asked.now, notes)? else {
        let words = format!("nothing tells how the gates stood from {first} on");
        let cure = "write a schedule of the plan's name into the folder `schedules`: date, and the flow of each outlet";
        return Err(refused(vec![Problem::refused("not-told", words, cure)]));
    };
    let words = "no schedule tells how the gates stood: what is set now is taken for all of the days";
    let cure = "write a schedule of the plan's name into the folder `schedules`, or name one with --schedule";
    notes.push(Problem::flag("gates-as-now", words, cure));
    Ok(Gates { choosing: Choosing::By(Strategy::Hold), now: Some(now), schedule: None })
}
