//! The plan of a season: pool or release, inflow and its water, outages; raw as read and checked.
//!
//! Methods: `docs/methods.md`, section 8.

mod outages;
mod rows;
mod volume;

use chrono::NaiveDate;

use crate::mix::Gate;
use crate::problem::{Problem, any_refused};
use crate::site::{Outage, Site};
use crate::units::say;

/// One row as read, SI.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct RawPlanRow {
    /// Line of the file.
    pub line: usize,
    /// Whether a cell of it could not be read, which is told already.
    pub unread: bool,
    /// Date.
    pub date: Option<NaiveDate>,
    /// Pool at the end of the day, m.
    pub pool_m: Option<f64>,
    /// Required release, m3/s.
    pub release_m3s: Option<f64>,
    /// Inflow, m3/s.
    pub inflow_m3s: Option<f64>,
    /// Its temperature, C.
    pub inflow_c: Option<f64>,
    /// Its oxygen, mg/L.
    pub inflow_mg_l: Option<f64>,
    /// Its dissolved solids, mg/L.
    pub inflow_solids_mg_l: Option<f64>,
    /// Its suspended solids, mg/L.
    pub inflow_suspended_mg_l: Option<f64>,
}

/// A plan as read.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct RawPlan {
    /// File as shown.
    pub file: String,
    /// `# name:`.
    pub name: Option<String>,
    /// `# outage: N2, 2026-09-01, 2026-10-15, hoist repair`, each with its line.
    pub outages: Vec<(usize, String)>,
    /// Whether it has a column of pools.
    pub by_pool: bool,
    /// Whether it has a column of releases, which then rules over one of pools.
    pub by_release: bool,
    /// Rows in the order of the file.
    pub rows: Vec<RawPlanRow>,
}

/// One day of a checked plan.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct PlanDay {
    /// Date.
    pub date: NaiveDate,
    /// Pool at its end, m, where the plan goes by the pool.
    pub pool_m: Option<f64>,
    /// Release, m3/s, where the plan goes by the release.
    pub release_m3s: Option<f64>,
    /// Inflow, m3/s.
    pub inflow_m3s: f64,
    /// Its temperature, C.
    pub inflow_c: f64,
    /// Its oxygen, mg/L; `None`: at saturation.
    pub inflow_mg_l: Option<f64>,
    /// Its dissolved solids, g/kg; `None`: those of the surface of the pool.
    pub inflow_salt_g_per_kg: Option<f64>,
    /// Its suspended solids, mg/L; `None`: those of the surface of the pool.
    pub inflow_suspended_mg_l: Option<f64>,
}

/// A checked plan: every day between its first and its last row.
#[derive(Debug, Clone, PartialEq)]
pub struct Plan {
    /// Name.
    pub name: String,
    /// File as shown.
    pub file: String,
    /// Days, one after the other.
    pub days: Vec<PlanDay>,
    /// Outages beside those of the site.
    pub outages: Vec<Outage>,
    /// Notes and flags on it.
    pub notes: Vec<Problem>,
}

/// A gate schedule: from each date on, what is set.
#[derive(Debug, Clone, PartialEq)]
pub struct Schedule {
    /// File as shown.
    pub file: String,
    /// By date, rising: gates with their flows, which are scaled to the release of the day.
    pub changes: Vec<(NaiveDate, Vec<Gate>)>,
}

impl Schedule {
    /// What one of a file is called where strategies are named.
    pub fn called(file: &str) -> String {
        format!("schedule {}", stem(file))
    }
}

impl Plan {
    /// Checks a raw plan against its site. The list holds every refusal, flag and note; `None` when any refuses.
    pub fn check(raw: &RawPlan, site: &Site) -> (Option<Self>, Vec<Problem>) {
        let mut problems = Vec::new();
        let outages = outages::outages(raw, site, &mut problems);
        rows::rows(raw, site, &mut problems);
        let days = rows::days(raw);
        volume::limits(raw, site, &mut problems);
        if raw.by_release && raw.by_pool && !any_refused(&problems) {
            volume::follows(raw, &days, site, &mut problems);
        }
        problems.sort_by_key(|p| p.place.line.unwrap_or(0));
        for problem in &mut problems {
            problem.place.file.get_or_insert_with(|| raw.file.clone());
        }
        if any_refused(&problems) || days.is_empty() {
            return (None, problems);
        }
        let plan = Self {
            name: raw.name.clone().unwrap_or_else(|| stem(&raw.file).to_owned()),
            file: raw.file.clone(),
            days,
            outages,
            notes: problems.clone(),
        };
        (Some(plan), problems)
    }

    /// Flags a plan by the release whose flows bring the pool above full, from the pool (m) of a date on.
    pub fn above_full(&self, site: &Site, from: NaiveDate, pool_m: f64) -> Option<Problem> {
        let (on, most_m3) = volume::above_full(&self.days, site, from, pool_m)?;
        let words = format!(
            "from the pool of {from}, {}, its flows bring the pool above full {} on {on}, with {} too much at most: it \
             spills, or the inflow is too large",
            say::m(pool_m, 2),
            say::m(site.pool.full_m, 2),
            say::m3(most_m3, 0)
        );
        let cure = "correct the inflow or the release where no spill is meant";
        Some(Problem::flag("plan-above-full", words, cure).in_file(&self.file))
    }

    /// The first and the last day.
    pub fn span(&self) -> Option<(NaiveDate, NaiveDate)> {
        Some((self.days.first()?.date, self.days.last()?.date))
    }
}

/// The last part of a path without its ending.
fn stem(file: &str) -> &str {
    let base = file.rsplit(['/', '\\']).next().unwrap_or(file);
    base.rsplit_once('.').map_or(base, |(stem, _)| stem)
}
