//! The calendar of the gates: when each can be used, what ends that, what is moved when, and whom to tell by when.
//!
//! Methods: `docs/methods.md`, section 8.

use chrono::NaiveDate;

use crate::mix::limits::{self, Check, Rule};
use crate::site::Site;

use super::called::because;
use super::decide::{Decision, Why};
use super::outcome::{Fully, GateLife, GateMoves, Turned};
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
        told = usable_at(site, outlet, opening, pool_m, date);
        if told.is_ok() {
            break;
        }
    }
    told
}

/// Whether it can be used at one opening.
fn usable_at(site: &Site, outlet: usize, opening: f64, pool_m: f64, date: NaiveDate) -> Result<(), Check> {
    let mut checks = Vec::new();
    limits::still(site, outlet, opening, pool_m, date, &mut checks);
    checks.into_iter().find(Check::broken).map_or(Ok(()), Err)
}

/// Whether it can be used at the widest of its positions.
fn is_usable_fully(site: &Site, outlet: usize, pool_m: f64, date: NaiveDate) -> bool {
    let positions = site.outlets.get(outlet).map_or(&[][..], |o| &o.positions);
    let widest = positions.iter().map(|p| p.opening).reduce(f64::max).unwrap_or(1.0);
    usable_at(site, outlet, widest, pool_m, date).is_ok()
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
    let mut fully: Vec<(NaiveDate, bool)> = Vec::new();
    let mut before: Option<NaiveDate> = None;
    let mut barred: Option<Check> = None;
    for (day, pool_m) in days.iter().zip(mornings) {
        let reason = |check: &Check| why(site, check, false);
        fully.push((day.date, is_usable_fully(site, outlet, pool_m, day.date)));
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
                    life.book_by = left_as_it_ends(run, outlet, last).and_then(told_by);
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
    for life in &mut out {
        let within = |date: NaiveDate| {
            life.first_day.is_some_and(|first| first <= date) && life.last_day.is_none_or(|last| date <= last)
        };
        let of_it: Vec<(NaiveDate, bool)> = fully.iter().copied().filter(|day| within(day.0)).collect();
        let on: Vec<NaiveDate> = of_it.iter().filter(|day| day.1).map(|day| day.0).collect();
        life.fully = Fully::of(of_it.len(), &on);
    }
    out
}

/// The name of a limit, and why it stands in the way: an outage by its dates, which outlast the day that is told of. The
/// outlet is named where nothing beside it does.
pub(super) fn why(site: &Site, check: &Check, named: bool) -> (&'static str, String) {
    let outage = site.limits.outages.get(check.item).filter(|_| check.rule == Rule::Outage);
    let words = outage.map(|outage| {
        let outlet = site.outlets.get(outage.outlet).filter(|_| named);
        let of = outlet.map_or_else(String::new, |outlet| format!(" of `{}`", outlet.name));
        let end = outage.to.map_or_else(|| "with no end told".to_owned(), |to| format!("until {to}"));
        let reason = if outage.reason.is_empty() { String::new() } else { format!(", {}", outage.reason) };
        format!("outage{of} {end}{reason}")
    });
    (check.rule.name(), words.unwrap_or_else(|| check.plain(site)))
}

/// The decision that leaves a gate as it stands after its last usable day: on that day, or where a limit then forces it
/// on the next. `None` where it is not moved then.
fn left_as_it_ends(run: &Run, outlet: usize, last: NaiveDate) -> Option<&Decision> {
    let is_then = |date: NaiveDate| date == last || Some(date) == last.succ_opt();
    let moves = |decision: &&Decision| decision.moved.iter().any(|one| one.outlet == outlet);
    run.decisions.iter().rev().filter(|decision| is_then(decision.date)).find(moves)
}

/// The day by which the crew must be told of a decision; `None` where it needs no notice.
fn told_by(decision: &Decision) -> Option<NaiveDate> {
    decision.date.checked_sub_days(limits::notice(decision.lead_days)?)
}

/// What is moved when: the decisions on which a gate moves.
pub(super) fn moves(site: &Site, run: &Run) -> Vec<GateMoves> {
    let of = |decision: &Decision| GateMoves {
        date: decision.date,
        forced: match decision.why {
            Why::Forced(check) => Some(why(site, &check, true)),
            _ => None,
        },
        because: because(site, decision),
        moved: decision.moved.clone(),
        crew_hours: decision.crew_hours,
        book_by: told_by(decision),
    };
    run.decisions.iter().filter(|d| !d.moved.is_empty()).map(of).collect()
}

/// Outlets of any flow that are turned from day to day so that each part keeps its share of the release, without a move
/// that is counted.
pub(super) fn turned(site: &Site, run: &Run) -> Vec<Turned> {
    (0..site.outlets.len()).filter_map(|outlet| turned_of(site, run, outlet)).collect()
}

fn turned_of(site: &Site, run: &Run, outlet: usize) -> Option<Turned> {
    let o = site.outlets.get(outlet).filter(|o| o.positions.is_empty())?;
    let flow_m3s = |day: &SeasonDay| {
        let gate = day.gates.iter().find(|gate| gate.outlet == outlet);
        gate.map_or(0.0, |gate| gate.flow_m3s)
    };
    let is_decided = |date: NaiveDate| run.decisions.iter().any(|decision| decision.date == date);
    let turns = run.days.windows(2).filter_map(|pair| match pair {
        [before, day] if !is_decided(day.date) => {
            let [from, to] = [before, day].map(flow_m3s);
            limits::is_moved(o, (1.0, from), (1.0, to)).then_some((day.date, (to - from).abs()))
        }
        _ => None,
    });
    let turns: Vec<(NaiveDate, f64)> = turns.collect();
    let (date, most_m3s) =
        turns.iter().copied().reduce(|most, one| if one.1 > most.1 { one } else { most })?;
    Some(Turned { outlet, days: turns.len(), most_m3s, date })
}
