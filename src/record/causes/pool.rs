//! Causes in the pool: layers that rise and fall, a cast that has been overtaken.
//!
//! Methods: `docs/methods.md`, section 9.

use std::f64::consts::PI;

use crate::profile::{Column, buoyancy_s2};
use crate::site::Pool;
use crate::units::say;

use super::clues::Clues;
use super::{Weighed, days, mean, most, root_mean_square};

/// Fewest days in a row on one side that speak against a swing (choice).
const ONE_SIDED: usize = 4;
/// A cast up to this old has hardly been overtaken, one from the second on may well have been, days (choice).
const AGES: [f64; 2] = [2.0, 5.0];
/// The next cast explains where it leaves no more than this share of the error, and does not from the second on (choice).
const LEAVES: [f64; 2] = [0.5, 0.8];
/// Fewest days of one cast that show how its error grows (choice).
const GROWS_DAYS: usize = 4;
/// Correlation of error and age from which it grows (choice).
const GROWS: f64 = 0.7;

/// How long the layers of a pool take to swing from end to end and back in their slowest form.
///
/// # Units
/// Hours; `None` where the column is not layered.
///
/// # References
/// `T = 2 L / c`, with `c = N H / pi` of even layering (Fischer et al. 1979, recalled); the length `L` as the diameter of a
/// circle of the surface's area (choice: no pool's length is told).
pub fn swing_h(pool: &Pool, column: &Column) -> Option<f64> {
    let (bed, surface) = (column.bed_m(), column.surface_m());
    let density = |z: f64| (z, column.density_kg_m3(z));
    let squared = buoyancy_s2(density(bed), density(surface));
    let length_m = 2.0 * (pool.area_m2(surface) / PI).sqrt();
    (squared > 0.0).then(|| 2.0 * length_m * PI / (squared.sqrt() * (surface - bed)) / 3600.0)
}

/// Layers that rise and fall before the gates.
pub(super) fn heave(clues: &Clues) -> Weighed {
    let mut out = Weighed::new(
        "layers swinging (seiche)",
        "two casts some hours apart, or a chain of thermistors before the gates",
    );
    let told: Vec<_> = clues.days.iter().filter_map(|day| Some((day, day.heave_c?))).collect();
    let holds = told.iter().filter(|(day, (low, high))| (*low..=*high).contains(&day.measured_c)).count();
    let (low, high) = (mean(told.iter().map(|t| t.1.0)), mean(told.iter().map(|t| t.1.1)));
    if let (Some(low), Some(high)) = (low, high) {
        let (low, high) = (say::c(low, 1), say::c(high, 1));
        if most(holds, told.len()) {
            let all = days(told.len());
            out.pro(1.0, format!("layers that heave as assumed take the release from {low} to {high}, which holds the gauge on {holds} of {all}"));
            if let Some(period) = clues.period_h {
                out.pro(0.0, format!("layers of this cast swing in about {period:.0} hours"));
            }
        } else {
            out.con(1.0, format!("layers that heave as assumed take the release only from {low} to {high}"));
        }
    }
    let above = clues.days.iter().filter(|day| day.off_c() > 0.0).count();
    let n = clues.days.len();
    if above > 0 && above < n {
        let below = days(n - above);
        out.pro(1.5, format!("the gauge lay above the band on {} and below it on {below}", days(above)));
    } else if n >= ONE_SIDED {
        out.con(1.0, format!("on all of {} the gauge lay on one side, and layers swing back", days(n)));
    }
    out
}

/// A pool that has changed since it was cast.
pub(super) fn stale(clues: &Clues) -> Weighed {
    let mut out = Weighed::new("stale cast", "a cast: the next one shows whether the layers had moved");
    if let Some(age) = mean(clues.days.iter().map(|day| day.age_days as f64)) {
        if age <= AGES[0] {
            out.con(1.5, format!("the cast is {age:.0} days old on the mean"));
        } else if age >= AGES[1] {
            out.pro(0.5, format!("the cast is {age:.0} days old on the mean"));
        }
    }
    let with_next: Vec<_> = clues.days.iter().filter_map(|day| Some((day, day.next_c?))).collect();
    let plain = root_mean_square(with_next.iter().map(|(day, _)| day.off_c()));
    let next = root_mean_square(with_next.iter().map(|(day, next)| day.measured_c - next.1));
    let later = mean(with_next.iter().map(|(_, next)| next.0 as f64));
    if let (Some(plain), Some(next), Some(later)) = (plain, next, later) {
        let words = format!(
            "on the water of the next cast, {later:.0} days later, the release is off by {} instead of {}",
            say::dc(next, 1),
            say::dc(plain, 1)
        );
        if next <= LEAVES[0] * plain {
            out.pro(2.5, words);
        } else if next >= LEAVES[1] * plain {
            out.con(1.5, words);
        }
    }
    if let Some((young, old)) = grows(clues) {
        let told = |(age, off): (i64, f64)| format!("{} at {age} days", say::dc(off, 1).signed());
        out.pro(1.0, format!("the error grows with the age of the cast: {}, {}", told(young), told(old)));
    }
    out
}

/// Age and error of the youngest and the oldest day of one cast, where its error grows with its age.
fn grows(clues: &Clues) -> Option<((i64, f64), (i64, f64))> {
    let (first, last) = (clues.days.first()?, clues.days.last()?);
    if first.cast != last.cast || clues.days.len() < GROWS_DAYS {
        return None;
    }
    let each = || clues.days.iter().map(|day| (day.age_days as f64, day.off_c().abs()));
    let (age, off) = (mean(each().map(|e| e.0))?, mean(each().map(|e| e.1))?);
    let sum = |of: &dyn Fn((f64, f64)) -> f64| each().map(of).sum::<f64>();
    let both = sum(&|e| (e.0 - age) * (e.1 - off));
    let apart = (sum(&|e| (e.0 - age).powi(2)) * sum(&|e| (e.1 - off).powi(2))).sqrt();
    let is_growing = apart > 0.0 && both / apart > GROWS && last.off_c().abs() > first.off_c().abs();
    is_growing.then(|| ((first.age_days, first.off_c()), (last.age_days, last.off_c())))
}
