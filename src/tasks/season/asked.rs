//! What a season is asked, from words to numbers.

use std::sync::Arc;

use chrono::NaiveDate;

use crate::files::folder::ListedPlan;
use crate::files::text::Source;
use crate::problem::{Problem, Weight};
use crate::rank::Criterion;
use crate::season::{Choosing, Plan, Schedule, Skies};
use crate::site::{self, Strategy};
use crate::tasks::rank::order;
use crate::tasks::{Context, Failure, fingerprint};
use crate::units::System;

/// What a season is asked, as typed.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct SeasonAsked {
    /// Plan: a file of `plans/`, its name, or a path; the first by name when absent.
    pub plan: Option<String>,
    /// Case, by name; the middle one when absent.
    pub case: Option<String>,
    /// Whether the other plans are run in every case, not only in the one spoken of.
    pub every_case: bool,
    /// Strategy, by name; the site's own when absent.
    pub strategy: Option<String>,
    /// File of a gate schedule, instead of a strategy.
    pub schedule: Option<String>,
    /// Days between decisions; the site's own when absent.
    pub every: Option<String>,
    /// Criteria by name, comma between; those not named follow in their usual order.
    pub order: Option<String>,
    /// The setting now, gate by gate; empty for the site's own.
    pub now: Vec<String>,
}

impl SeasonAsked {
    /// Name of what chooses the gates, where that is asked.
    pub fn chooses(&self) -> Option<String> {
        self.schedule.as_deref().map(Schedule::called).or_else(|| self.strategy.clone())
    }
}

/// Most days between decisions.
const MOST_DAYS: u32 = 366;

/// A case of weather.
#[derive(Debug, Clone)]
pub(super) enum Case {
    /// Made by shifts.
    Shifted(site::Case),
    /// A year of a record, over the days of the plan spoken of.
    Year(Arc<Skies>),
}

/// What is asked, understood.
pub(super) struct Understood {
    /// The plan spoken of.
    pub(super) plan: Arc<Plan>,
    /// The other sound plans of the folder.
    pub(super) other_plans: Vec<Arc<Plan>>,
    /// Plans of the folder that are refused, each with its first problem.
    pub(super) refused: Vec<Problem>,
    /// Plans of the folder whose days are over: they tell the past.
    pub(super) over: Vec<Arc<Plan>>,
    /// The case spoken of.
    pub(super) case: Case,
    /// Every case.
    pub(super) cases: Vec<Case>,
    /// Whether the other plans are run in each of them.
    pub(super) every_case: bool,
    /// How gates are chosen.
    pub(super) choosing: Choosing,
    /// Days between decisions.
    pub(super) decide_days: u32,
    /// What counts first where the mix of a day is chosen.
    pub(super) order: Vec<Criterion>,
    /// The first day.
    pub(super) begins: NaiveDate,
    /// The first day on which gates may be moved.
    pub(super) decides: NaiveDate,
    /// Fingerprint of the inputs.
    pub(super) fingerprint: String,
}

/// What the words say.
pub(super) fn understood(context: &Context, asked: &SeasonAsked) -> Result<Understood, Failure> {
    let site = context.site();
    let decide_days = every(asked.every.as_deref())?.unwrap_or(site.season.decide_days);
    let mut sources = Vec::new();
    let choosing = choosing(context, asked, &mut sources)?;
    let decides = context.on.date_naive();
    let Plans { plan, others, refused, over: passed, sources: read } =
        plans(context, asked.plan.as_deref(), decides)?;
    sources.extend(read);
    sources.extend(context.folder.years().and_then(|years| years.source.clone()));
    let cast = context.profile.taken.map(|taken| taken.with_timezone(&site.offset).date_naive());
    let begins = cast.map_or(decides, |cast| cast.min(decides));
    if is_over(&plan, decides) {
        return Err(Failure::Refused(vec![over(&plan, decides)], context.system));
    }
    let cases = cases(context, begins, &plan);
    let case = case(asked.case.as_deref(), &cases)?;
    let all: Vec<&Source> =
        std::iter::once(&context.source).chain(&context.folder.around().sources).chain(&sources).collect();
    Ok(Understood {
        fingerprint: fingerprint(&context.folder, &all, &context.log),
        plan,
        other_plans: others,
        refused,
        over: passed,
        case,
        cases,
        every_case: asked.every_case,
        choosing,
        decide_days,
        order: order(asked.order.as_deref())?,
        begins,
        decides,
    })
}

fn every(typed: Option<&str>) -> Result<Option<u32>, Failure> {
    let Some(text) = typed else { return Ok(None) };
    match text.trim().parse::<u32>() {
        Ok(days) if (1..=MOST_DAYS).contains(&days) => Ok(Some(days)),
        _ => Err(Failure::Usage(format!("--every {text}: give whole days, 1 to {MOST_DAYS}"))),
    }
}

fn choosing(context: &Context, asked: &SeasonAsked, sources: &mut Vec<Source>) -> Result<Choosing, Failure> {
    match (asked.strategy.as_deref(), asked.schedule.as_deref()) {
        (Some(_), Some(_)) => {
            Err(Failure::Usage("--strategy and --schedule both say how gates are chosen: give one".into()))
        }
        (None, Some(file)) => {
            let read = context.folder.schedule(file).map_err(|problem| usage("--schedule", &problem))?;
            sources.push(read.source);
            let refused = || Failure::Refused(read.problems, context.system);
            read.schedule.map(Choosing::Schedule).ok_or_else(refused)
        }
        (Some(name), None) => Strategy::parse(name).map(Choosing::By).ok_or_else(|| {
            let names: Vec<&str> = Strategy::NAMES.iter().map(|n| n.0).collect();
            Failure::Usage(format!(
                "--strategy {name}: there is none of that name; there are {}",
                names.join(", ")
            ))
        }),
        (None, None) => Ok(Choosing::By(context.site().season.strategy)),
    }
}

/// The case of a name; the middle one of the site's own without.
fn case(typed: Option<&str>, cases: &[Case]) -> Result<Case, Failure> {
    let own = cases.iter().filter(|case| matches!(case, Case::Shifted(_))).count();
    let found = match typed {
        Some(name) => cases.iter().find(|case| case.name() == name),
        None => cases.get(own / 2),
    };
    found.cloned().ok_or_else(|| {
        let names: Vec<&str> = cases.iter().map(Case::name).collect();
        let name = typed.unwrap_or_default();
        Failure::Usage(format!("--case {name}: there is none of that name; there are {}", names.join(", ")))
    })
}

/// Whether a plan ends before anything is decided.
fn is_over(plan: &Plan, decides: NaiveDate) -> bool {
    plan.span().is_none_or(|(_, last)| last <= decides)
}

fn over(plan: &Plan, decides: NaiveDate) -> Problem {
    let last = plan.span().map_or_else(String::new, |(_, last)| format!(" on {last}"));
    let words = format!("the plan `{}` ends{last}, and the day decided for is {decides}", plan.name);
    let cure = "add rows for the days ahead, or decide for an earlier day with --on";
    Problem::refused("plan-over", words, cure).in_file(&plan.file)
}

impl Case {
    /// What it is called.
    pub(super) fn name(&self) -> &str {
        match self {
            Self::Shifted(case) => &case.name,
            Self::Year(skies) => &skies.case.name,
        }
    }

    /// Whether it is the same: a shifted case may bear the name of a year.
    pub(super) fn is(&self, other: &Self) -> bool {
        self.name() == other.name() && matches!(self, Self::Year(_)) == matches!(other, Self::Year(_))
    }

    /// Its air over the days of a plan.
    pub(super) fn skies(
        &self,
        context: &Context,
        begins: NaiveDate,
        plan: &Plan,
    ) -> Result<Arc<Skies>, Problem> {
        let last = plan.span().map_or(begins, |(_, last)| last);
        let found = match self {
            Self::Shifted(case) => {
                Skies::of_case(context.site(), &context.conditions, case, begins, last).map(Arc::new)
            }
            Self::Year(skies) if skies.days.contains_key(&last) => Ok(skies.clone()),
            Self::Year(skies) => years(context, begins, plan)
                .into_iter()
                .find(|other| other.year == skies.year)
                .map(Arc::new)
                .ok_or_else(|| format!("its record does not hold every day to {last}")),
        };
        found.map_err(|why| {
            let words = format!("case {}, plan {}: {why}", self.name(), plan.name);
            let cure = "give `season.monthly` in the site file, or weather for those days";
            Problem::refused("no-air", words, cure)
        })
    }
}

/// The plans of the folder, the one spoken of apart.
struct Plans {
    plan: Arc<Plan>,
    others: Vec<Arc<Plan>>,
    refused: Vec<Problem>,
    over: Vec<Arc<Plan>>,
    sources: Vec<Source>,
}

/// The plan of a name, without one the first by file name that is not over; every other sound one of the folder beside
/// it.
fn plans(context: &Context, typed: Option<&str>, decides: NaiveDate) -> Result<Plans, Failure> {
    let folder = &context.folder;
    let listed = match typed {
        Some(name) => folder.plan(name).map_err(|problem| usage("--plan", &problem))?,
        None => ahead(folder.plans(), decides).cloned().ok_or_else(|| {
            let cure = "put one into the folder `plans` of the site: date, pool or release, inflow and its temperature";
            let problem = Problem::refused("no-plan", "the site has no plan of a season", cure);
            Failure::Refused(vec![problem], context.system)
        })?,
    };
    let Some(plan) = listed.plan.clone() else {
        return Err(Failure::Refused(listed.problems, context.system));
    };
    let beside = || folder.plans().iter().filter(|other| other.file != listed.file);
    let refused = beside()
        .filter(|other| other.plan.is_none())
        .filter_map(|other| other.problems.iter().find(|p| p.weight == Weight::Refused).cloned());
    let sound = beside().filter_map(|other| other.plan.clone());
    let (over, others) = sound.partition(|other| is_over(other, decides));
    Ok(Plans {
        plan,
        others,
        over,
        refused: refused.collect(),
        sources: listed.source.into_iter().chain(beside().filter_map(|other| other.source.clone())).collect(),
    })
}

/// The first plan that is not over, or is refused; where all are over the first.
fn ahead(plans: &[ListedPlan], decides: NaiveDate) -> Option<&ListedPlan> {
    let is_ahead = |listed: &&ListedPlan| listed.plan.as_ref().is_none_or(|plan| !is_over(plan, decides));
    plans.iter().find(is_ahead).or_else(|| plans.first())
}

/// What cannot be found by a name that was typed, with those there are.
pub(super) fn usage(option: &str, problem: &Problem) -> Failure {
    Failure::Usage(format!("{option}: {}", problem.advice(System::default())))
}

/// The site's own cases, then one for each year of its record that holds every day.
fn cases(context: &Context, begins: NaiveDate, plan: &Plan) -> Vec<Case> {
    let own = context.site().season.cases.iter().cloned().map(Case::Shifted);
    own.chain(years(context, begins, plan).into_iter().map(|skies| Case::Year(Arc::new(skies)))).collect()
}

fn years(context: &Context, begins: NaiveDate, plan: &Plan) -> Vec<Skies> {
    let told = context.folder.years().and_then(|years| years.weather.as_ref()).zip(plan.span());
    told.map_or_else(Vec::new, |(weather, (_, last))| {
        Skies::of_years(context.site(), &context.conditions, weather, begins, last)
    })
}
