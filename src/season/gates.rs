//! The calendar of the gates: when each can be used, what ends that, what is moved when, and whom to tell by when.
//!
//! Methods: `docs/methods.md`, section 8.

use chrono::{Days, NaiveDate};

use crate::mix::limits::{self, Check, Rule};
use crate::site::{Outlet, Site};

use super::decide::{Decision, Why};
use super::outcome::{GateLife, GateMoves};
use super::run::{Run, SeasonDay};

/// Whether an outlet can be used on a date under a pool (m): at any of its positions, fully open where it has none.
///
/// # Errors
/// The limit that forbids it, at the opening that comes nearest to the bed.
pub(super) fn usable(site: &Site, outlet: usize, pool_m: f64, date: NaiveDate) -> Result<(), Check> {
    let Some(o) = site.outlets.get(outlet) else { return Ok(()) };
    let mut openings: Vec<f64> = o.positions.iter().map(|p| p.opening).filter(|open| *open > 0.0).collect();
    if openings.is_empty() {
        openings.push(1.0);
    }
    // the lowest top last: its limit is the one told
    openings.sort_by(|a, b| o.open_part(*b).top_m.total_cmp(&o.open_part(*a).top_m));
    let mut told = Ok(());
    for opening in openings {
        let mut checks = Vec::new();
        limits::still(site, outlet, opening, pool_m, date, &mut checks);
        match checks.into_iter().find(Check::broken) {
            None => return Ok(()),
            Some(check) => told = Err(check),
        }
    }
    told
}

/// The stretches of the season in which each outlet can be used, by outlet; one that never can has one without days.
///
/// A day is judged under the pool of its morning, as what is set on it is.
pub(super) fn lives(site: &Site, run: &Run) -> Vec<GateLife> {
    (0..site.outlets.len()).flat_map(|outlet| lives_of(site, run, outlet)).collect()
}

fn lives_of(site: &Site, run: &Run, outlet: usize) -> Vec<GateLife> {
    let days = &run.days;
    let mornings = std::iter::once(run.start.pool_m(&site.pool)).chain(days.iter().map(|day| day.pool_m));
    let mut out: Vec<GateLife> = Vec::new();
    let mut before: Option<NaiveDate> = None;
    let mut barred: Option<Check> = None;
    for (day, pool_m) in days.iter().zip(mornings) {
        let reason = |check: &Check| why(site, check, false);
        match (usable(site, outlet, pool_m, day.date), before) {
            (Ok(()), None) => {
                let reason = barred.as_ref().map(reason);
                out.push(GateLife { first_day: Some(day.date), reason, ..GateLife::never(outlet) });
                before = Some(day.date);
            }
            (Ok(()), Some(_)) => before = Some(day.date),
            (Err(check), last) => {
                if let (Some(last), Some(life)) = (last, out.last_mut()) {
                    life.last_day = Some(last);
                    life.reason = Some(reason(&check));
                    life.book_by = open_on(days, outlet, last).then(|| lead(site, outlet, last)).flatten();
                }
                before = None;
                barred = Some(check);
            }
        }
    }
    if out.is_empty() {
        let reason = barred.map(|check| why(site, &check, false));
        out.push(GateLife { reason, ..GateLife::never(outlet) });
    }
    out
}

/// The name of a limit, and why it stands in the way: an outage by its dates, which outlast the day that is told of. The
/// outlet is named where nothing beside it does.
fn why(site: &Site, check: &Check, named: bool) -> (&'static str, String) {
    let outage = site.limits.outages.get(check.item).filter(|_| check.rule == Rule::Outage);
    let words = outage.map(|outage| {
        let outlet = site.outlets.get(outage.outlet).filter(|_| named);
        let of = outlet.map_or_else(String::new, |outlet| format!(" of `{}`", outlet.name));
        let end = outage.to.map_or_else(|| "with no end told".to_owned(), |to| format!("until {to}"));
        let reason = if outage.reason.is_empty() { String::new() } else { format!(", {}", outage.reason) };
        format!("outage{of} {end}{reason}")
    });
    (check.rule.name(), words.unwrap_or_else(|| check.words(site)))
}

/// Whether a gate is set open on a day.
fn open_on(days: &[SeasonDay], outlet: usize, date: NaiveDate) -> bool {
    let day = days.iter().find(|d| d.date == date);
    day.is_some_and(|d| d.gates.iter().any(|g| g.outlet == outlet && g.flow_m3s > 0.0))
}

/// The day by which the crew of a gate must be told of a move on a date; `None` where it needs no notice.
fn lead(site: &Site, outlet: usize, date: NaiveDate) -> Option<NaiveDate> {
    let lead_days = site.outlets.get(outlet).map_or(0.0, |o: &Outlet| o.crew.lead_days);
    earlier(date, lead_days)
}

/// The day so many days before another, a part of one counted as one; `None` where there are none.
#[expect(clippy::cast_possible_truncation, clippy::cast_sign_loss, reason = "a whole number of days, capped")]
fn earlier(date: NaiveDate, days: f64) -> Option<NaiveDate> {
    (days > 0.0).then(|| date.checked_sub_days(Days::new(days.ceil().clamp(0.0, 36_500.0) as u64)))?
}

/// What is moved when: the decisions on which a gate moves.
pub(super) fn moves(site: &Site, run: &Run) -> Vec<GateMoves> {
    let of = |decision: &Decision| GateMoves {
        date: decision.date,
        forced: match decision.why {
            Why::Forced(check) => Some(why(site, &check, true)),
            Why::Begin | Why::Due => None,
        },
        moved: decision.moved.clone(),
        crew_hours: decision.crew_hours,
        book_by: earlier(decision.date, decision.lead_days),
    };
    run.decisions.iter().filter(|d| !d.moved.is_empty()).map(of).collect()
}
