//! Fitting one effect to days, and what the fit is worth: each stretch is left out in turn.
//!
//! Methods: `docs/methods.md`, section 9.

use crate::record::pairs::Curve;

use super::scatter::{effective, student_90};

/// How an effect changes what was computed for a day.
#[derive(Debug, Clone)]
pub(super) enum Shape<'a> {
    /// It adds each value times the pull it has that day.
    Shift(Vec<f64>),
    /// Its one value is the zone factor.
    Zone(&'a Curve),
}

/// One day as a fit sees it.
#[derive(Debug, Clone)]
pub(super) struct Seen<'a> {
    /// The stretch it belongs to.
    pub(super) stretch: usize,
    /// How much it counts.
    pub(super) weight: f64,
    /// What the gauge read.
    pub(super) measured: f64,
    /// What was computed, with nothing learned.
    pub(super) plain: f64,
    /// What the effect does to it.
    pub(super) shape: Shape<'a>,
}

/// Half the stretch of zone factors over which a slope is taken (choice: a step of the curves).
const SLOPE: f64 = 0.05;
/// A zone factor is sought this far beyond its range, so that its interval is not cut at the end (choice).
const BEYOND: f64 = 0.35;
/// A pivot smaller than this share of its column is none (choice): the values cannot be told apart.
const LEAST_PIVOT: f64 = 1e-6;

impl Seen<'_> {
    /// Measured less computed, with values of the effect.
    fn error(&self, values: &[f64]) -> f64 {
        let with = match &self.shape {
            Shape::Shift(pulls) => self.plain + pulls.iter().zip(values).map(|(p, v)| p * v).sum::<f64>(),
            Shape::Zone(curve) => values.first().map_or(self.plain, |factor| curve.at(*factor).0),
        };
        self.measured - with
    }

    /// How the computed figure changes with each value.
    fn pulls(&self, values: &[f64]) -> Vec<f64> {
        match &self.shape {
            Shape::Shift(pulls) => pulls.clone(),
            Shape::Zone(curve) => values
                .iter()
                .map(|f| (curve.at(f + SLOPE).0 - curve.at(f - SLOPE).0) / (2.0 * SLOPE))
                .collect(),
        }
    }

    /// Measured less computed as it was.
    pub(super) fn plain_error(&self) -> f64 {
        self.measured - self.plain
    }
}

/// A fit.
#[derive(Debug, Clone)]
pub(super) struct Fit {
    /// The values.
    pub(super) values: Vec<f64>,
    /// 80 % interval of each; `None` where a single stretch tells it.
    pub(super) intervals: Vec<Option<(f64, f64)>>,
    /// Days that tell each.
    pub(super) told_by: Vec<usize>,
    /// Error of each day with the values.
    pub(super) errors: Vec<f64>,
    /// Error of each day with the values that all other stretches tell.
    pub(super) held_out: Vec<f64>,
}

/// Fits the days. `None` where they do not tell the values.
pub(super) fn fit(days: &[Seen]) -> Option<Fit> {
    let values = solve(days.iter())?;
    let stretches = days.iter().map(|d| d.stretch + 1).max()?;
    let without: Vec<Vec<f64>> =
        (0..stretches).map(|left| solve(days.iter().filter(|d| d.stretch != left))).collect::<Option<_>>()?;
    let pulls: Vec<Vec<f64>> = days.iter().map(|d| d.pulls(&values)).collect();
    let interval = |i: usize| {
        let mut told = vec![0.0; stretches];
        for (day, pulls) in days.iter().zip(&pulls) {
            told[day.stretch] += day.weight * pulls[i] * pulls[i];
        }
        let count = effective(&told);
        // one stretch alone does not show how it scatters
        (count > 1.5).then(|| {
            let squares: f64 = without.iter().map(|w| (w[i] - values[i]).powi(2)).sum();
            let half = student_90(count - 1.0) * ((count - 1.0) / count * squares).sqrt();
            (values[i] - half, values[i] + half)
        })
    };
    let told_by = |i: usize| pulls.iter().filter(|p| p[i].abs() > 0.0).count();
    Some(Fit {
        intervals: (0..values.len()).map(interval).collect(),
        told_by: (0..values.len()).map(told_by).collect(),
        errors: days.iter().map(|d| d.error(&values)).collect(),
        held_out: days.iter().map(|d| d.error(&without[d.stretch])).collect(),
        values,
    })
}

/// The values of least weighted squares. A value that no day pulls at stays 0.
fn solve<'a>(days: impl Iterator<Item = &'a Seen<'a>> + Clone) -> Option<Vec<f64>> {
    match days.clone().next()?.shape {
        Shape::Zone(_) => zone(days).map(|factor| vec![factor]),
        Shape::Shift(ref pulls) => shift(days, pulls.len()),
    }
}

/// Normal equations, by elimination.
fn shift<'a>(days: impl Iterator<Item = &'a Seen<'a>>, count: usize) -> Option<Vec<f64>> {
    let mut rows = vec![vec![0.0; count + 1]; count];
    for day in days {
        let Shape::Shift(pulls) = &day.shape else { return None };
        for (row, pull) in rows.iter_mut().zip(pulls) {
            let weighed = day.weight * pull;
            for (cell, other) in row.iter_mut().zip(pulls.iter().chain([&day.plain_error()])) {
                *cell += weighed * other;
            }
        }
    }
    for i in 0..count {
        let own = rows[i][i];
        for j in i + 1..count {
            let share = if own > 0.0 { rows[j][i] / own } else { 0.0 };
            let before = rows[j][j];
            for k in i..=count {
                rows[j][k] -= share * rows[i][k];
            }
            if before > 0.0 && rows[j][j] < LEAST_PIVOT * before {
                return None;
            }
        }
    }
    let mut values = vec![0.0; count];
    for i in (0..count).rev() {
        let rest: f64 = (i + 1..count).map(|k| rows[i][k] * values[k]).sum();
        values[i] = if rows[i][i] > 0.0 { (rows[i][count] - rest) / rows[i][i] } else { 0.0 };
    }
    Some(values)
}

/// The zone factor: on each straight piece of the curves the least squares are known, and the least of all is taken.
fn zone<'a>(days: impl Iterator<Item = &'a Seen<'a>> + Clone) -> Option<f64> {
    let curves = |day: &'a Seen<'a>| match day.shape {
        Shape::Zone(curve) => Some((day, curve)),
        Shape::Shift(_) => None,
    };
    let pieces = curves(days.clone().next()?)?.1.pieces().count();
    let mut best: Option<(f64, f64)> = None;
    for piece in 0..pieces {
        let (mut ends, mut sums) = ([0.0; 2], [0.0_f64; 3]);
        for (day, curve) in days.clone().filter_map(curves) {
            let (factors, [a, b]) = curve.pieces().nth(piece)?;
            ends = factors;
            let error = day.measured - a;
            let add = [error * error, error * (b - a), (b - a) * (b - a)];
            sums.iter_mut().zip(add).for_each(|(sum, term)| *sum += day.weight * term);
        }
        let [square, cross, slope] = sums;
        if slope <= 0.0 {
            continue;
        }
        let wide = ends[1] - ends[0];
        let low = if piece == 0 { -BEYOND / wide } else { 0.0 };
        let high = if piece + 1 == pieces { 1.0 + BEYOND / wide } else { 1.0 };
        let share = (cross / slope).clamp(low, high);
        let left = square - 2.0 * share * cross + share * share * slope;
        if best.is_none_or(|b| left < b.0) {
            best = Some((left, ends[0] + share * wide));
        }
    }
    best.map(|b| b.1)
}
