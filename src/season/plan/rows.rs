//! Rows of a plan: in order, without gaps, with figures that can be believed; and the days between them.
//!
//! Methods: `docs/methods.md`, section 8.

use chrono::{Datelike, NaiveDate};

use crate::problem::Problem;
use crate::site::Site;
use crate::units::say;
use crate::water;

use super::{PlanDay, RawPlan, RawPlanRow};

/// Most days of a plan (choice: three years).
const MOST_DAYS: i64 = 1100;
/// Water that flows in, C (choice: open water of this Earth).
const INFLOW_C: std::ops::RangeInclusive<f64> = 0.0..=40.0;
/// Most oxygen of water that flows in, mg/L (choice: what casts are refused at).
const MOST_OXYGEN_MG_L: f64 = 40.0;
/// Most solids of water that flows in, mg/L (choice: dissolved ones of the sea, suspended ones of a mud flow).
const MOST_SOLIDS_MG_L: f64 = 50_000.0;
/// Most flow in or out, m3/s (choice: above any river's flood).
const MOST_FLOW_M3S: f64 = 1e6;

/// So many times the inflow of both rows beside it, or so small a part of it, is asked about (choice: rows are weeks
/// apart, and a slipped point makes ten times).
const SPIKE: f64 = 5.0;

/// Tells what is wrong with single rows and with their order.
pub(super) fn rows(raw: &RawPlan, site: &Site, problems: &mut Vec<Problem>) {
    for row in &raw.rows {
        missing(raw, row, problems);
        believed(row, site, problems);
    }
    let mut before: Option<(NaiveDate, usize)> = None;
    for row in &raw.rows {
        let Some(date) = row.date else { continue };
        if let Some((last, line)) = before.filter(|(last, _)| date <= *last) {
            let words = if date == last {
                format!("{date} stands on line {line} already")
            } else {
                format!("{date} comes after {last} of line {line}")
            };
            let cure = "give each day one row, the earlier ones first";
            problems.push(Problem::refused("plan-order", words, cure).on_line(row.line));
        }
        before = Some(before.map_or((date, row.line), |b| if date > b.0 { (date, row.line) } else { b }));
    }
    let dates = || raw.rows.iter().filter_map(|row| row.date);
    if raw.rows.len() < 2 {
        let words = "the plan has fewer than two rows";
        problems.push(Problem::refused("plan-short", words, "give its first and its last day at least"));
    } else if let (Some(first), Some(last)) = (dates().min(), dates().max())
        && (last - first).num_days() >= MOST_DAYS
    {
        let words = format!("the plan goes from {first} to {last}, and {MOST_DAYS} days are the most");
        problems.push(Problem::refused("plan-long", words, "make several plans of it"));
    }
    above_full(raw, site, problems);
    spikes(raw, problems);
    held(raw, problems);
}

/// Flags rows whose inflow stands far off that of the two rows beside it, of the first and the last row the next two: a
/// slipped point, or another unit.
fn spikes(raw: &RawPlan, problems: &mut Vec<Problem>) {
    let last = raw.rows.len().saturating_sub(1);
    let inflow = |at: usize| raw.rows.get(at)?.inflow_m3s.filter(|flow| *flow > 0.0);
    for (at, row) in raw.rows.iter().enumerate() {
        let beside = match at {
            0 => [1, 2],
            at if at == last => [last.saturating_sub(2), last.saturating_sub(1)],
            at => [at - 1, at + 1],
        };
        let (Some(flow), [Some(a), Some(b)]) = (inflow(at), beside.map(inflow)) else { continue };
        if last < 2 || (flow < SPIKE * a.max(b) && flow * SPIKE > a.min(b)) {
            continue;
        }
        let [told, a, b] = [flow, a, b].map(|flow| say::m3s(flow, 2));
        let words = format!("inflow {told} stands far off that of the rows beside it, {a} and {b}");
        let cure =
            "correct it where a figure slipped; a flood of a few days needs rows for its rise and fall";
        problems.push(Problem::flag("plan-spike", words, cure).on_line(row.line));
    }
}

/// Flags the first row on which the pool stands above full, with how many do.
fn above_full(raw: &RawPlan, site: &Site, problems: &mut Vec<Problem>) {
    let pool = &site.pool;
    let above = |row: &&RawPlanRow| row.pool_m.is_some_and(|m| m > pool.full_m && m <= pool.top_m());
    let mut rows = raw.rows.iter().filter(above);
    let Some((first, pool_m)) = rows.next().and_then(|row| Some((row, row.pool_m?))) else { return };
    let words = match rows.count() {
        0 => format!("pool {} lies above full pool {}", say::m(pool_m, 2), say::m(pool.full_m, 2)),
        more => format!(
            "pool {} lies above full pool {}, as on {more} further rows",
            say::m(pool_m, 2),
            say::m(pool.full_m, 2)
        ),
    };
    let cure = "correct it where no surcharge is meant";
    problems.push(Problem::flag("plan-above-full", words, cure).on_line(first.line));
}

/// Notes what the inflow is taken to bring where no row tells it, or only some do.
fn held(raw: &RawPlan, problems: &mut Vec<Problem>) {
    let told = |of: fn(&RawPlanRow) -> Option<f64>| raw.rows.iter().filter(|row| of(row).is_some()).count();
    let oxygen = told(|row| row.inflow_mg_l);
    let solids = told(|row| row.inflow_solids_mg_l);
    let suspended = told(|row| row.inflow_suspended_mg_l);
    if oxygen == 0 {
        let words = "no oxygen of the inflow is given: it enters at saturation";
        problems.push(Problem::note("inflow-oxygen", words));
    }
    let lacking = match (solids, suspended) {
        (0, 0) => "dissolved or suspended solids",
        (0, _) => "dissolved solids",
        (_, 0) => "suspended solids",
        _ => "",
    };
    if !lacking.is_empty() {
        let words =
            format!("no {lacking} of the inflow are given: it enters with those of the surface of the pool");
        problems.push(Problem::note("inflow-solids", words));
    }
    let all = raw.rows.len();
    for (rows, what) in [(oxygen, "oxygen"), (solids, "dissolved solids"), (suspended, "suspended solids")] {
        if (1..all).contains(&rows) {
            let words = format!(
                "{what} of the inflow: given on {rows} of {all} rows, on straight lines between them, the nearest \
                 held before and after"
            );
            problems.push(Problem::note("inflow-some", words));
        }
    }
}

fn missing(raw: &RawPlan, row: &RawPlanRow, problems: &mut Vec<Problem>) {
    if row.unread {
        return;
    }
    let by_pool = raw.by_pool && !raw.by_release;
    let needed = [
        (row.inflow_m3s.is_none(), "inflow"),
        (row.inflow_c.is_none(), "inflow temperature"),
        (by_pool && row.pool_m.is_none(), "pool"),
        (raw.by_release && row.release_m3s.is_none(), "release"),
    ];
    for (_, what) in needed.into_iter().filter(|(is, _)| *is) {
        let words = format!("the row tells no {what}");
        problems.push(
            Problem::refused("plan-missing", words, "fill the cell, or leave the whole row out")
                .on_line(row.line),
        );
    }
}

fn believed(row: &RawPlanRow, site: &Site, problems: &mut Vec<Problem>) {
    let mut refuse = |kind, words: String, cure: &str| {
        problems.push(Problem::refused(kind, words, cure).on_line(row.line));
    };
    let pool = &site.pool;
    if let Some(pool_m) = row.pool_m.filter(|m| !(pool.bed_m..=pool.top_m()).contains(m)) {
        let (over, beyond) = if pool_m > pool.bed_m {
            (pool_m - pool.top_m(), "above the table of the pool")
        } else {
            (pool.bed_m - pool_m, "below the bed")
        };
        let words =
            format!("pool {} lies {} {beyond} ({})", say::m(pool_m, 2), say::m(over, 2), pool.extent());
        refuse("outside-pool", words, "correct it, or check its unit and its datum");
    }
    for (flow, what) in [(row.inflow_m3s, "inflow"), (row.release_m3s, "release")] {
        if let Some(flow) = flow.filter(|q| !(0.0..=MOST_FLOW_M3S).contains(q)) {
            let words = format!("no {what} is {}", say::m3s(flow, 2));
            refuse("plan-range", words, "correct the figure");
        }
    }
    if let Some(water_c) = row.inflow_c.filter(|c| !INFLOW_C.contains(c)) {
        let (least, most) = (say::c(*INFLOW_C.start(), 0), say::c(*INFLOW_C.end(), 0));
        let words = format!("inflow of {} lies outside {least} to {most}", say::c(water_c, 1));
        refuse("plan-range", words, "check the unit of the column");
    }
    for (value, most, what) in [
        (row.inflow_mg_l, MOST_OXYGEN_MG_L, "oxygen"),
        (row.inflow_solids_mg_l, MOST_SOLIDS_MG_L, "dissolved solids"),
        (row.inflow_suspended_mg_l, MOST_SOLIDS_MG_L, "suspended solids"),
    ] {
        if let Some(value) = value.filter(|v| !(0.0..=most).contains(v)) {
            let words = format!("{value} mg/L is no {what} of an inflow; 0 to {most} mg/L are believed");
            refuse("plan-range", words, "check the unit of the column");
        }
    }
}

/// Figures of single days, rising; straight lines between them.
struct Line(Vec<(NaiveDate, f64)>);

impl Line {
    fn of(raw: &RawPlan, figure: impl Fn(&RawPlanRow) -> Option<f64>) -> Self {
        Self(raw.rows.iter().filter_map(|row| Some((row.date?, figure(row)?))).collect())
    }

    /// The figure of a day, the nearest beyond the ends; `None` where there is none at all.
    fn at(&self, date: NaiveDate) -> Option<f64> {
        let next = self.0.partition_point(|(day, _)| *day < date);
        let (before, after) = (next.checked_sub(1).and_then(|i| self.0.get(i)), self.0.get(next));
        let (Some((d0, v0)), Some((d1, v1))) = (before, after) else {
            return before.or(after).map(|(_, value)| *value);
        };
        let days =
            |from: NaiveDate, to: NaiveDate| f64::from(to.num_days_from_ce() - from.num_days_from_ce());
        Some(v0 + (v1 - v0) * days(*d0, date) / days(*d0, *d1))
    }
}

/// Every day from the first row to the last; none where a row lacks what each must tell, or the rows are out of order.
pub(super) fn days(raw: &RawPlan) -> Vec<PlanDay> {
    let whole = |row: &RawPlanRow| {
        row.date.is_some()
            && row.inflow_m3s.is_some()
            && row.inflow_c.is_some()
            && (!raw.by_release || row.release_m3s.is_some())
            && (raw.by_release || row.pool_m.is_some())
    };
    let rising = raw.rows.windows(2).all(|rows| matches!(rows, [a, b] if a.date < b.date));
    let (Some(first), Some(last)) =
        (raw.rows.first().and_then(|row| row.date), raw.rows.last().and_then(|row| row.date))
    else {
        return Vec::new();
    };
    if !rising || !raw.rows.iter().all(whole) || (last - first).num_days() >= MOST_DAYS {
        return Vec::new();
    }
    let pool = Line::of(raw, |row| row.pool_m.filter(|_| !raw.by_release));
    let inflow = Line::of(raw, |row| row.inflow_m3s);
    let water = Line::of(raw, |row| row.inflow_c);
    let oxygen = Line::of(raw, |row| row.inflow_mg_l);
    let solids = Line::of(raw, |row| row.inflow_solids_mg_l);
    let suspended = Line::of(raw, |row| row.inflow_suspended_mg_l);
    let release = |date| {
        let row = raw.rows.iter().rev().find(|row| row.date.is_some_and(|day| day <= date));
        row.and_then(|row| row.release_m3s)
    };
    first
        .iter_days()
        .take_while(|date| *date <= last)
        .filter_map(|date| {
            let inflow_c = water.at(date)?;
            Some(PlanDay {
                date,
                pool_m: pool.at(date),
                release_m3s: release(date),
                inflow_m3s: inflow.at(date)?,
                inflow_c,
                inflow_mg_l: oxygen.at(date),
                inflow_salt_g_per_kg: solids.at(date).map(|s| water::dissolved_g_per_kg(s, inflow_c)),
                inflow_suspended_mg_l: suspended.at(date),
            })
        })
        .collect()
}
