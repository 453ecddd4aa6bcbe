//! What a season is asked, from words to numbers.

use std::sync::Arc;

use chrono::NaiveDate;

use crate::problem::Problem;
use crate::season::{Choosing, Plan, Skies};
use crate::site::{self, Strategy};
use crate::tasks::{Context, Failure};

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

/// Most days between decisions.
const MOST_DAYS: u32 = 366;

/// A case of weather.
#[derive(Debug, Clone, PartialEq)]
pub(super) enum Case {
    /// Made by shifts.
    Shifted(site::Case),
    /// A year of a record.
    Year(i32),
}

/// What is asked, understood.
pub(super) struct Understood {
    /// The plan spoken of.
    pub(super) plan: Arc<Plan>,
    /// The other sound plans of the folder.
    pub(super) other_plans: Vec<Arc<Plan>>,
    /// Plans of the folder that are refused, each with its first problem.
    pub(super) refused: Vec<Problem>,
    /// The case spoken of.
    pub(super) case: Case,
    /// Every case.
    pub(super) cases: Vec<Case>,
    /// How gates are chosen.
    pub(super) choosing: Choosing,
    /// Days between decisions.
    pub(super) decide_days: u32,
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
    let choosing = choosing(context, asked)?;
    let decides = context.on.date_naive();
    let cast = context.profile.taken.map(|taken| taken.with_timezone(&site.offset).date_naive());
    let begins = cast.map_or(decides, |cast| cast.min(decides));
    let cases: Vec<Case> = cases(context, begins);
    let case = case(asked.case.as_deref(), &cases)?;
    let plans = plans(context, asked.plan.as_deref())?;
    if plans.plan.days.last().is_none_or(|day| day.date <= decides.max(begins)) {
        return Err(Failure::Refused(vec![over(&plans.plan, decides)], context.system));
    }
    Ok(Understood {
        plan: plans.plan,
        other_plans: plans.others,
        refused: plans.refused,
        case,
        cases,
        choosing,
        decide_days,
        begins,
        decides,
        fingerprint: plans.fingerprint,
    })
}

fn every(typed: Option<&str>) -> Result<Option<u32>, Failure> {
    let Some(text) = typed else { return Ok(None) };
    match text.trim().parse::<u32>() {
        Ok(days) if (1..=MOST_DAYS).contains(&days) => Ok(Some(days)),
        _ => Err(Failure::Usage(format!("--every {text}: give whole days, 1 to {MOST_DAYS}"))),
    }
}

fn choosing(context: &Context, asked: &SeasonAsked) -> Result<Choosing, Failure> {
    match (asked.strategy.as_deref(), asked.schedule.as_deref()) {
        (Some(_), Some(_)) => {
            Err(Failure::Usage("--strategy and --schedule both say how gates are chosen: give one".into()))
        }
        (None, Some(file)) => schedule(context, file),
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
        let names: Vec<String> = cases.iter().map(Case::name).collect();
        let name = typed.unwrap_or_default();
        Failure::Usage(format!("--case {name}: there is none of that name; there are {}", names.join(", ")))
    })
}

fn over(plan: &Plan, decides: NaiveDate) -> Problem {
    let last = plan.days.last().map_or_else(String::new, |day| format!(" on {}", day.date));
    let words = format!("the plan `{}` ends{last}, and the day decided for is {decides}", plan.name);
    Problem::refused(
        "plan-over",
        words,
        "add rows for the days ahead, or decide for an earlier day with --on",
    )
    .in_file(&plan.file)
}

impl Case {
    /// What it is called.
    pub(super) fn name(&self) -> String {
        match self {
            Self::Shifted(case) => case.name.clone(),
            Self::Year(year) => year.to_string(),
        }
    }

    /// Its air over the days of a plan.
    pub(super) fn skies(
        &self,
        context: &Context,
        begins: NaiveDate,
        plan: &Plan,
    ) -> Result<Arc<Skies>, Problem> {
        let last = plan.days.last().map_or(begins, |day| day.date);
        let found = match self {
            Self::Shifted(case) => Skies::of_case(context.site(), &context.conditions, case, begins, last),
            Self::Year(year) => Err(format!("{year}")),
        };
        found.map(Arc::new).map_err(|why| {
            let words = format!("case {}: {why}", self.name());
            Problem::refused(
                "no-air",
                words,
                "give `season.monthly` in the site file, or weather for those days",
            )
        })
    }
}

/// The plans of the folder.
struct Plans {
    plan: Arc<Plan>,
    others: Vec<Arc<Plan>>,
    refused: Vec<Problem>,
    fingerprint: String,
}

fn plans(context: &Context, typed: Option<&str>) -> Result<Plans, Failure> {
    let _ = (context, typed);
    Err(Failure::Stopped)
}

fn schedule(context: &Context, file: &str) -> Result<Choosing, Failure> {
    let _ = (context, file);
    Err(Failure::Stopped)
}

/// The site's own cases, then one for each year of its record.
fn cases(context: &Context, begins: NaiveDate) -> Vec<Case> {
    let _ = begins;
    context.site().season.cases.iter().cloned().map(Case::Shifted).collect()
}
