//! What a sensor in a river gets wrong: spikes, a stuck value, days out of the water.
//!
//! Methods: `docs/methods.md`, section 7.

use std::collections::BTreeMap;

use chrono::{Days, NaiveDate, TimeDelta, Timelike};

use crate::problem::Problem;
use crate::series::LONGEST_GAP_H;
use crate::units::say;

use super::gather::Gather;
use super::{Reading, Row};

/// A reading that stands off both neighbours by more is a spike, C (choice).
const SPIKE_C: f64 = 3.0;
/// Longest time without the smallest change, hours (choice).
const STUCK_H: i64 = 12;
/// A day out of the water swings by more than so many times what is usual (choice).
const SWING_TIMES: f64 = 3.0;
/// And by more than this, C (choice).
const SWING_C: f64 = 6.0;
/// Days before and after that tell what is usual (choice).
const AROUND_DAYS: u64 = 7;
/// Days among them that must be there (choice: half of them).
const LEAST_DAYS: usize = 7;
/// Hours of standard time in which air in the sun is warmest (choice).
const WARM_HOURS: std::ops::RangeInclusive<u32> = 11..=18;

/// Leaves out the readings of days out of the water, and flags the rest.
pub(super) fn faults(rows: &mut [Row], said: &mut Gather) {
    out_of_water(rows, said);
    spikes(rows, said);
    stuck(rows, "temperature", |reading| reading.temperature_c, said);
    stuck(rows, "oxygen", |reading| reading.oxygen_mg_l, said);
}

/// Temperatures of a day: the line of its first row, least, greatest, and the hour of the greatest.
#[derive(Debug, Clone, Copy)]
struct Swing {
    line: usize,
    least: f64,
    greatest: f64,
    warmest_hour: u32,
}

impl Swing {
    fn range(&self) -> f64 {
        self.greatest - self.least
    }
}

fn out_of_water(rows: &mut [Row], said: &mut Gather) {
    let mut swings: BTreeMap<NaiveDate, Swing> = BTreeMap::new();
    for row in &*rows {
        let Some(value) = row.reading.temperature_c else { continue };
        let hour = row.time.hour();
        let fresh = Swing { line: row.line, least: value, greatest: value, warmest_hour: hour };
        let swing = swings.entry(row.time.date_naive()).or_insert(fresh);
        swing.least = swing.least.min(value);
        if value > swing.greatest {
            (swing.greatest, swing.warmest_hour) = (value, hour);
        }
    }
    let usual = |date: NaiveDate| {
        let from = date.checked_sub_days(Days::new(AROUND_DAYS))?;
        let to = date.checked_add_days(Days::new(AROUND_DAYS))?;
        let around = swings.range(from..=to).filter(|(day, _)| **day != date);
        median(around.map(|(_, swing)| swing.range()).collect())
    };
    let mut dry: Vec<(NaiveDate, Swing, f64)> = Vec::new();
    for (date, swing) in &swings {
        if swing.range() <= SWING_C || !WARM_HOURS.contains(&swing.warmest_hour) {
            continue;
        }
        if let Some(usual) = usual(*date).filter(|usual| swing.range() > SWING_TIMES * usual) {
            dry.push((*date, *swing, usual));
        }
    }
    for run in dry.chunk_by(|a, b| a.0.succ_opt() == Some(b.0)) {
        let (Some(first), Some(last)) = (run.first(), run.last()) else { continue };
        let dates =
            if first.0 == last.0 { first.0.to_string() } else { format!("{} to {}", first.0, last.0) };
        let swing = run.iter().map(|d| d.1.range()).fold(0.0, f64::max);
        let words = format!(
            "the sensor seems out of the water on {dates}: its temperature swings by {} in a day where {} is usual, \
             warmest in the sun; its temperature and oxygen of these days are left out",
            say::dc(swing, 1),
            say::dc(first.2, 1)
        );
        let cure = "blank the cells of the days it was dry, or see to the station";
        // each run is told by itself: its dates matter
        said.add(dates, Problem::flag("out-of-water", words, cure).on_line(first.1.line));
    }
    for row in rows {
        if dry.binary_search_by_key(&row.time.date_naive(), |d| d.0).is_ok() {
            row.reading.dry();
        }
    }
}

/// The middle of the values, where they are enough.
fn median(mut values: Vec<f64>) -> Option<f64> {
    if values.len() < LEAST_DAYS {
        return None;
    }
    values.sort_by(f64::total_cmp);
    let upper = *values.get(values.len() / 2)?;
    let lower = *values.get((values.len() - 1) / 2)?;
    Some(0.5 * (lower + upper))
}

fn spikes(rows: &[Row], said: &mut Gather) {
    let readings: Vec<_> =
        rows.iter().filter_map(|r| Some((r.line, r.time, r.reading.temperature_c?))).collect();
    for three in readings.windows(3) {
        let [before, here, after] = three else { continue };
        let near = |a: TimeDelta| a <= TimeDelta::hours(LONGEST_GAP_H);
        let (off, back) = (here.2 - before.2, here.2 - after.2);
        let stands_off = off.abs() > SPIKE_C && back.abs() > SPIKE_C && off * back > 0.0;
        if stands_off && near(here.1 - before.1) && near(after.1 - here.1) {
            let words = format!(
                "{} at {} stands off the readings before and after by more than {}; it is kept",
                say::c(here.2, 1),
                here.1.format("%Y-%m-%d %H:%M"),
                say::dc(SPIKE_C, 0)
            );
            let cure = "blank the cell if it is a slip";
            said.add("spike", Problem::flag("spike", words, cure).on_line(here.0));
        }
    }
}

fn stuck(rows: &[Row], what: &str, of: impl Fn(&Reading) -> Option<f64>, said: &mut Gather) {
    let readings: Vec<_> = rows.iter().filter_map(|r| Some((r.line, r.time, of(&r.reading)?))).collect();
    for run in readings.chunk_by(|a, b| a.2.to_bits() == b.2.to_bits()) {
        let (Some(first), Some(last)) = (run.first(), run.last()) else { continue };
        // two readings far apart may well be alike by accident
        let dense = run.windows(2).all(|w| w[1].1 - w[0].1 <= TimeDelta::hours(LONGEST_GAP_H));
        if dense && last.1 - first.1 > TimeDelta::hours(STUCK_H) {
            let words = format!(
                "the {what} does not move by its last digit from {} for {} hours; it is kept",
                first.1.format("%Y-%m-%d %H:%M"),
                (last.1 - first.1).num_hours()
            );
            let cure = "look whether the sensor is stuck";
            said.add(format!("stuck {what}"), Problem::flag("stuck", words, cure).on_line(first.0));
        }
    }
}
