//! Whether the water of a plan adds up: inflow, release and what the pool takes in or gives.
//!
//! Methods: `docs/methods.md`, section 8.

use chrono::NaiveDate;

use crate::problem::Problem;
use crate::site::Site;
use crate::units::{DAY_S, say};

use super::{PlanDay, RawPlan, RawPlanRow};

/// A pool that comes this near to what the plan says follows it, m (choice: wind and waves move a gauge as much).
const FOLLOWS_M: f64 = 0.1;
/// Round-off of a limit, as a share of it (choice).
const SLACK: f64 = 1e-9;

/// Rows that follow one another, both whole and in order, with the days between them.
fn pairs(raw: &RawPlan) -> impl Iterator<Item = (&RawPlanRow, &RawPlanRow, (NaiveDate, NaiveDate), f64)> {
    raw.rows.windows(2).filter_map(|rows| {
        let [a, b] = rows else { return None };
        let (from, to) = (a.date?, b.date?);
        let days = (to - from).num_days();
        (!a.unread && !b.unread && days > 0).then_some((a, b, (from, to), days as f64))
    })
}

/// Holds what a plan asks against the limits of the release and of the fall of the pool.
pub(super) fn limits(raw: &RawPlan, site: &Site, problems: &mut Vec<Problem>) {
    let within = |pool_m: &f64| (site.pool.bed_m..=site.pool.top_m()).contains(pool_m);
    if raw.by_release {
        for row in &raw.rows {
            if let Some(release) = row.release_m3s.filter(|release| *release >= 0.0)
                && let Some((words, _)) = beyond(release, site, "the release is")
            {
                let cure = "correct it, or the limits under release: in site.yaml";
                problems.push(Problem::refused("plan-release", words, cure).on_line(row.line));
            }
        }
        return;
    }
    for (a, b, (from, to), days) in pairs(raw) {
        let (Some(high), Some(low)) = (a.pool_m.filter(within), b.pool_m.filter(within)) else { continue };
        let span = format!("from {from} (line {}) to {to}", a.line);
        let fall = (high - low) / days;
        if let Some(most) = site.limits.drawdown_m_per_day
            && fall > most * (1.0 + SLACK)
        {
            let words = format!(
                "{span} the pool falls by {} a day, {} more than limits.max_drawdown_per_day allows",
                say::m(fall, 3),
                say::m(fall - most, 3)
            );
            let cure = "draw it down over more days";
            problems.push(Problem::refused("plan-drawdown", words, cure).on_line(b.line));
        }
        let (Some(first), Some(last)) = (a.inflow_m3s, b.inflow_m3s) else { continue };
        // the pools are those of the ends of days: the inflow of the first day is past
        let inflow = first + (last - first) * 0.5 * (days + 1.0) / days;
        let taken = site.pool.volume_m3(low) - site.pool.volume_m3(high);
        let release = inflow - taken / (days * DAY_S);
        let what = format!("{span} the volume asks for a mean release of");
        if let Some((words, too_much)) = beyond(release, site, &what) {
            let end = if too_much { "higher" } else { "lower" };
            let cure = format!("let the pool stand {end} at the end, or correct the inflow");
            problems.push(Problem::refused("plan-volume", words, cure).on_line(b.line));
        }
    }
}

/// What to say of a release that cannot be, or may not, and whether it is too much rather than too little.
fn beyond(release_m3s: f64, site: &Site, what: &str) -> Option<(String, bool)> {
    let flow = |flow: f64| say::m3s(flow, 2);
    let told = flow(release_m3s);
    if release_m3s < 0.0 {
        return Some((format!("{what} {told}: the inflow cannot fill the pool so far"), false));
    }
    if let Some(min) = site.release.min_m3s.filter(|min| release_m3s < min * (1.0 - SLACK)) {
        let words = format!("{what} {told}, {} below release.min {}", flow(min - release_m3s), flow(min));
        return Some((words, false));
    }
    let max = site.release.max_m3s.filter(|max| release_m3s > max * (1.0 + SLACK))?;
    Some((format!("{what} {told}, {} above release.max {}", flow(release_m3s - max), flow(max)), true))
}

/// The first day on which a plan by the release brings the pool more than 0.1 m above full, and the volume above full on
/// the day with most of it, m3: from the pool (m) on a date on, if nothing spills and nothing evaporates. `None` where it
/// stays below, and of a plan by the pool.
pub(super) fn above_full(
    days: &[PlanDay],
    site: &Site,
    from: NaiveDate,
    pool_m: f64,
) -> Option<(NaiveDate, f64)> {
    let pool = &site.pool;
    let (full_m3, told_m3) = (pool.volume_m3(pool.full_m), pool.volume_m3(pool.full_m + FOLLOWS_M));
    let gain_m3 = |day: &PlanDay| Some((day.inflow_m3s - day.release_m3s?) * DAY_S);
    let first = days.first()?;
    // before its first row its first flows hold
    let gap_days = (first.date - from).num_days().max(0) as f64;
    let mut volume_m3 = pool.volume_m3(pool_m) + gap_days * gain_m3(first)?;
    let (mut on, mut most_m3) = (None, 0.0_f64);
    for day in days.iter().filter(|day| from <= day.date) {
        volume_m3 += gain_m3(day)?;
        if volume_m3 > told_m3 {
            on.get_or_insert(day.date);
            most_m3 = most_m3.max(volume_m3 - full_m3);
        }
    }
    on.map(|on| (on, most_m3))
}

/// Holds the pools of a plan that goes by the release against what inflow and release make of them, row by row.
pub(super) fn follows(raw: &RawPlan, days: &[PlanDay], site: &Site, problems: &mut Vec<Problem>) {
    for (a, b, (from, to), _) in pairs(raw) {
        let (Some(start), Some(planned)) = (a.pool_m, b.pool_m) else { continue };
        let between = days.iter().filter(|day| from < day.date && day.date <= to);
        let gained: f64 = between.map(|day| (day.inflow_m3s - day.release_m3s.unwrap_or(0.0)) * DAY_S).sum();
        let (volume, wanted) = (site.pool.volume_m3(start) + gained, site.pool.volume_m3(planned));
        let reached = site.pool.elevation_of_volume_m(volume);
        if reached.is_some_and(|m| (m - planned).abs() <= FOLLOWS_M) {
            continue;
        }
        let off = if volume > wanted { "more" } else { "less" };
        let there = reached.map_or_else(|| "out of the table".to_owned(), |m| format!("to {}", say::m(m, 2)));
        let words = format!(
            "from {from} (line {}) to {to} inflow and release bring the pool {there}, not to {}: {} {off} than the \
             plan says; the release is used",
            a.line,
            say::m(planned, 2),
            say::m3((volume - wanted).abs(), 0)
        );
        problems
            .push(Problem::flag("plan-follows", words, "correct the pool or the release").on_line(b.line));
    }
}
