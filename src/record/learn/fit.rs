//! Fitting one effect to days, and what the fit is worth: each stretch is left out in turn.
//!
//! Methods: `docs/methods.md`, section 9.

use crate::record::pairs::{Curve, ZONE_FACTORS};

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

/// Places over the range of the zone factor at which the squares are looked at, and how often the best of them is
/// drawn in by halves.
const PLACES: u32 = 45;
const HALVINGS: u32 = 30;
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
            Shape::Zone(curve) => values.iter().map(|factor| curve.slope_c(*factor)).collect(),
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
            let told_by = told.iter().filter(|t| **t > 0.0).count() as f64;
            let half = student_90(count - 1.0) * ((told_by - 1.0) / told_by * squares).sqrt();
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
        Shape::Zone(_) => zone(&days).map(|factor| vec![factor]),
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
        let pivot = rows[i].clone();
        for (j, row) in rows.iter_mut().enumerate().skip(i + 1) {
            let share = if pivot[i] > 0.0 { row[i] / pivot[i] } else { 0.0 };
            let before = row[j];
            for (cell, of) in row.iter_mut().zip(&pivot).skip(i) {
                *cell -= share * of;
            }
            if before > 0.0 && row[j] < LEAST_PIVOT * before {
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

/// The zone factor of least squares: the best of places over its range, drawn in; beyond the range, where the curves
/// go straight on, the squares are a parabola with a known least.
fn zone<'a>(days: &(impl Iterator<Item = &'a Seen<'a>> + Clone)) -> Option<f64> {
    let squares =
        |factor: f64| days.clone().map(|day| day.weight * day.error(&[factor]).powi(2)).sum::<f64>();
    let [low, high] = ZONE_FACTORS;
    let mut step = (high - low) / f64::from(PLACES);
    let places = (0..=PLACES).map(|i| low + step * f64::from(i)).map(|factor| (squares(factor), factor));
    let mut best = places.reduce(|a, b| if b.0 < a.0 { b } else { a })?;
    for _ in 0..HALVINGS {
        step *= 0.5;
        for factor in [best.1 - step, best.1 + step].map(|factor| factor.clamp(low, high)) {
            let there = squares(factor);
            if there < best.0 {
                best = (there, factor);
            }
        }
    }
    // an interval cut at the end of the range would look surer than it is
    for (end, outward) in [(low, -1.0), (high, 1.0)] {
        let mut sums = [0.0_f64; 2];
        for day in days.clone() {
            let pull = day.pulls(&[end]).into_iter().sum::<f64>();
            sums[0] += day.weight * pull * day.error(&[end]);
            sums[1] += day.weight * pull * pull;
        }
        let by = sums[0] / sums[1];
        if by * outward > 0.0 && squares(end + by) < best.0 {
            best = (squares(end + by), end + by);
        }
    }
    best.1.is_finite().then_some(best.1)
}
