//! The cold water needed on a date, as JSON.

use serde::Serialize;

use crate::season::{Amount, Found, Stretch};
use crate::site::Site;
use crate::tasks::Context;
use crate::tasks::season::{CaseNeeded, NeededAnswer};

use super::shape::{Head, WarningJson};
use super::{caution, head, warnings, written};

#[derive(Serialize)]
struct Shown {
    #[serde(flatten)]
    head: Head,
    needed: NeededJson,
    warnings: Vec<WarningJson>,
    caution: &'static str,
}

#[derive(Serialize)]
struct NeededJson {
    /// At the end of this day.
    date: String,
    threshold_c: f64,
    plan: String,
    plan_file: String,
    strategy: String,
    begins: String,
    decide_days: u32,
    cases: Vec<CaseJson>,
}

#[derive(Serialize)]
struct CaseJson {
    case: String,
    /// Solved with this very case in view: no evidence.
    foresight: bool,
    /// In the season as it is; null where it stops before the date.
    left: Option<AmountJson>,
    /// The least with the fewest days outside; null where none can be sought.
    needed: Option<AmountJson>,
    /// Left less needed: short by as much as it lies below zero.
    to_spare_m3: Option<f64>,
    /// Whether with it no day lies outside and none is missing.
    enough: Option<bool>,
    next_less: Option<AmountJson>,
    /// Days outside that remain with what is needed.
    remain: Vec<StretchJson>,
    tried: Vec<AmountJson>,
    unknown: Option<String>,
    not_judged: Vec<String>,
}

#[derive(Serialize)]
struct AmountJson {
    usable_m3: Option<f64>,
    total_m3: f64,
    /// By temperature, after the date, summed over the hard targets.
    days_outside: u32,
    /// By oxygen.
    oxygen_days_outside: u32,
    days_not_reached: u32,
}

#[derive(Serialize)]
struct StretchJson {
    target: String,
    point: String,
    side: &'static str,
    first: String,
    last: String,
    days: u32,
}

/// The answer of `season --left`.
pub fn needed(context: &Context, answer: &NeededAnswer) -> String {
    written(&Shown {
        head: head(context, &answer.fingerprint, &[]),
        needed: NeededJson {
            date: answer.date.to_string(),
            threshold_c: answer.threshold_c,
            plan: answer.plan.name.clone(),
            plan_file: answer.plan.file.clone(),
            strategy: answer.strategy.clone(),
            begins: answer.begins.to_string(),
            decide_days: answer.decide_days,
            cases: answer.cases.iter().map(|case| one(context.site(), case)).collect(),
        },
        warnings: warnings(&answer.notes),
        caution: caution(),
    })
}

fn one(site: &Site, of: &CaseNeeded) -> CaseJson {
    let found = of.needed.found.as_ref().ok();
    let name = |at: &usize| site.targets.get(*at).map(|rule| rule.name.clone());
    CaseJson {
        case: of.case.clone(),
        foresight: of.foresight,
        left: of.needed.made.as_ref().map(amount),
        needed: found.map(|found| amount(&found.least)),
        to_spare_m3: of.needed.to_spare_m3(),
        enough: found.map(|found| found.least.is_enough()),
        next_less: found.and_then(|found| found.lower.as_ref()).map(amount),
        remain: found.map_or_else(Vec::new, |found| remain(site, found)),
        tried: found.map_or_else(Vec::new, |found| found.tried.iter().map(amount).collect()),
        unknown: of.needed.found.as_ref().err().cloned(),
        not_judged: of.needed.not_judged.iter().filter_map(name).collect(),
    }
}

fn amount(of: &Amount) -> AmountJson {
    AmountJson {
        usable_m3: of.usable_m3,
        total_m3: of.total_m3,
        days_outside: of.days_outside,
        oxygen_days_outside: of.oxygen_days,
        days_not_reached: of.lost,
    }
}

fn remain(site: &Site, found: &Found) -> Vec<StretchJson> {
    let one = |row: &Stretch| {
        let rule = site.targets.get(row.target)?;
        Some(StretchJson {
            target: rule.name.clone(),
            point: rule.point.clone(),
            side: row.side.word(),
            first: row.first.to_string(),
            last: row.last.to_string(),
            days: row.days(),
        })
    };
    found.remain.iter().filter_map(one).collect()
}
