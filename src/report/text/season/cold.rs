//! Cold water through the season: usable, beside it all of it and what cannot be reached.

use chrono::{Datelike, NaiveDate};

use crate::season::ColdWater;
use crate::tasks::season::SeasonRun;
use crate::units::System;

use super::super::{temperature, volume};
use super::first::days;

/// Columns of a date and of each volume.
const DATE: usize = 12;
const CELL: usize = 18;

/// Cold water below each threshold on the first and the middle of every month, and on the last day.
pub fn cold(run: &SeasonRun, system: System) -> Vec<String> {
    let mut out = Vec::new();
    for water in &run.outcome.cold {
        out.extend(table(water, system));
    }
    if run.outcome.cold.is_empty() {
        out.push("the site file names no threshold of cold water (cold_water)".to_owned());
    }
    out.extend(left(run, system));
    out
}

fn table(water: &ColdWater, system: System) -> Vec<String> {
    let head = format!("below {}", temperature(water.threshold_c, system));
    let mut out =
        vec![format!("{head:<DATE$}{:>CELL$}{:>CELL$}{:>CELL$}", "usable", "out of reach", "in all")];
    let last = water.days.last().map(|day| day.date);
    for day in water.days.iter().filter(|day| is_shown(day.date) || Some(day.date) == last) {
        let usable = day.usable_m3.map_or_else(|| "no gate usable".to_owned(), |m3| volume(m3, system));
        let beyond = volume(day.unreachable_m3(), system);
        let all = volume(day.total_m3, system);
        out.push(format!("{:<DATE$}{usable:>CELL$}{beyond:>CELL$}{all:>CELL$}", day.date));
    }
    out
}

fn is_shown(date: NaiveDate) -> bool {
    matches!(date.day(), 1 | 15)
}

/// What was left on the first of every month, and how many days came to lie outside from then on: of this season, as
/// it was run.
pub fn left(run: &SeasonRun, system: System) -> Vec<String> {
    let Some(water) = run.outcome.cold.first() else { return Vec::new() };
    let then = run.run.ended.as_ref().map_or_else(
        || "from then on".to_owned(),
        |ended| format!("from then to {}, when it stops,", ended.date),
    );
    let of = |left: &crate::season::Left| {
        let usable = left.usable_m3.map_or_else(|| "nothing usable".to_owned(), |m3| volume(m3, system));
        let outside = match left.days_outside {
            0 => "no day outside a hard target".to_owned(),
            count => format!("{} outside the hard targets", days(count)),
        };
        format!("{usable} left on {}: {then} {outside}", left.date)
    };
    let mut out: Vec<String> = run.outcome.left.iter().map(of).collect();
    if !out.is_empty() {
        out.insert(
            0,
            format!(
                "What was left below {} in this season (plan {}, case {}), and what came of it",
                temperature(water.threshold_c, system),
                run.run.plan,
                run.run.case
            ),
        );
    }
    out
}
