//! Outages that a plan brings with it: `# outage: N2, 2026-09-01, 2026-10-15, hoist repair`.

use chrono::{Datelike, NaiveDate};

use crate::problem::Problem;
use crate::site::{Outage, Site};

use super::RawPlan;

/// Years a plan can be of (choice): others are slips of the pen.
const YEARS: std::ops::RangeInclusive<i32> = 1900..=2200;

/// The outages of a plan; what is wrong with one stands on its line.
pub(super) fn outages(raw: &RawPlan, site: &Site, problems: &mut Vec<Problem>) -> Vec<Outage> {
    let mut out: Vec<Outage> = Vec::new();
    for (line, text) in &raw.outages {
        match outage(text, site) {
            Ok(found) if out.iter().any(|o| o.outlet == found.outlet && o.from == found.from) => {
                let words = "an outage of this outlet from this day is already listed";
                problems.push(Problem::refused("listed-twice", words, "keep one of them").on_line(*line));
            }
            Ok(found) => out.push(found),
            Err(problem) => problems.push(problem.on_line(*line)),
        }
    }
    out
}

fn outage(text: &str, site: &Site) -> Result<Outage, Problem> {
    let mut parts = text.splitn(4, ',').map(str::trim);
    let (name, from, to) = (parts.next(), parts.next(), parts.next());
    let reason = parts.next().unwrap_or_default().to_owned();
    let name = name.unwrap_or_default();
    let outlet = site.outlet(name).ok_or_else(|| {
        let known: Vec<&str> = site.outlets.iter().map(|o| o.name.as_str()).collect();
        let cure = format!("use one of {}", known.join(", "));
        Problem::refused("unknown-outlet", format!("no outlet is named `{}`", short(name)), cure)
    })?;
    let from = day(from.unwrap_or_default())?;
    let to = to.filter(|to| !to.is_empty()).map(day).transpose()?;
    if to.is_some_and(|to| to < from) {
        return Err(Problem::refused("day-order", "the outage ends before it begins", "swap the dates"));
    }
    Ok(Outage { outlet, from, to, reason })
}

fn day(text: &str) -> Result<NaiveDate, Problem> {
    NaiveDate::parse_from_str(text, "%Y-%m-%d").ok().filter(|day| YEARS.contains(&day.year())).ok_or_else(
        || {
            let cure =
                "write `# outage: N2, 2026-09-01, 2026-10-15, hoist repair`; the last day may be blank";
            Problem::refused("day", format!("`{}` is not a date", short(text)), cure)
        },
    )
}

/// A piece of a file short enough for a sentence.
fn short(text: &str) -> String {
    text.chars().take(40).collect()
}
