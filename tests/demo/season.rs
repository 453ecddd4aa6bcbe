//! The shapes that years are made of.

use std::f64::consts::TAU;

use chrono::{Datelike, NaiveDate};
use rand_distr::{Distribution, StandardNormal};
use rand_pcg::Pcg32;

/// The yearly harmonic: 1 on its peak day of the year, -1 half a year away.
pub(crate) fn yearly(day: NaiveDate, peak: f64) -> f64 {
    (TAU * (f64::from(day.ordinal0()) - peak) / 365.25).cos()
}

/// A bell over the days of the year: 1 at its peak, width as a standard deviation in days.
pub(crate) fn bell(day: NaiveDate, peak: f64, width: f64) -> f64 {
    (-0.5 * ((f64::from(day.ordinal0()) - peak) / width).powi(2)).exp()
}

/// The height of a curve over the days of the year, straight between its corners (day of the year from 0, height).
pub(crate) fn through(corners: &[(f64, f64)], day: NaiveDate) -> f64 {
    let x = f64::from(day.ordinal0());
    let i = corners.partition_point(|&(at, _)| at <= x).clamp(1, corners.len() - 1);
    let ((x0, low), (x1, high)) = (corners[i - 1], corners[i]);
    low + (high - low) * (x - x0) / (x1 - x0)
}

/// The next value of a noise whose variance stays 1, of which a share is kept from one day to the next.
pub(crate) fn fading(random: &mut Pcg32, kept: f64, old: f64) -> f64 {
    let fresh: f64 = StandardNormal.sample(random);
    kept * old + (1.0 - kept * kept).sqrt() * fresh
}
