//! Both sides of a pair, gauge and computed, as the days of a fit: of the temperature or of the oxygen.
//!
//! Methods: `docs/methods.md`, section 9.

use crate::record::pairs::Pair;

use super::fit::{Seen, Shape, fit};
use super::scatter::{NORMAL_90, stretches};
use super::{Candidate, Effect, Figure, Tried, Verdict};

/// A day counts as if its band were at least this wide a standard deviation, C or mg/L (choice: what a gauge of the
/// trade resolves); and no less is left for what the method misses.
const LEAST_DEVIATION: f64 = 0.1;
/// A level is told by no less flow than that of so many whole days (choice).
const LEAST_LEVEL_DAYS: f64 = 3.0;

/// Measured, computed, and the band of the latter.
type Both = (f64, f64, (f64, f64));

/// One day with both.
struct Side<'a> {
    pair: &'a Pair,
    stretch: usize,
    measured: f64,
    plain: f64,
    /// Standard deviation of its band.
    deviation: f64,
}

/// The days of a window that have both.
pub(super) struct Sides<'a>(Vec<Side<'a>>);

impl<'a> Sides<'a> {
    /// Of the temperature, C.
    pub(super) fn temperature(pairs: &[&'a Pair]) -> Self {
        Self::of(pairs, |pair| Some((pair.measured_c?, pair.computed_c, pair.band_c)))
    }

    /// Of the oxygen, mg/L, with the zones of a factor.
    pub(super) fn oxygen(pairs: &[&'a Pair], zone_factor: f64) -> Self {
        Self::of(pairs, |pair| Some((pair.measured_mg_l?, pair.curve.at(zone_factor).1?, pair.band_mg_l?)))
    }

    fn of(pairs: &[&'a Pair], read: impl Fn(&Pair) -> Option<Both>) -> Self {
        let with: Vec<(&'a Pair, _)> = pairs.iter().filter_map(|pair| Some((*pair, read(pair)?))).collect();
        let places = stretches(with.iter().map(|(pair, _)| (pair.date, pair.cast.as_str())));
        let one = |((pair, (measured, plain, band)), stretch): ((&'a Pair, Both), usize)| {
            let deviation = (0.5 * (band.1 - band.0) / NORMAL_90).max(LEAST_DEVIATION);
            Side { pair, stretch, measured, plain, deviation }
        };
        Self(with.into_iter().zip(places).map(one).collect())
    }

    /// Fits an effect; its verdict is still open.
    pub(super) fn tried(&self, effect: Effect) -> Tried<'a> {
        let levels = if effect == Effect::ByLevel { self.levels() } else { Vec::new() };
        let days: Vec<Seen<'a>> = self.0.iter().map(|side| side.seen(effect, &levels)).collect();
        // one level alone is the constant bias
        let fit = if effect == Effect::ByLevel && levels.len() < 2 { None } else { fit(&days) };
        let plain: Vec<f64> = days.iter().map(Seen::plain_error).collect();
        let figures = fit.iter().flat_map(|fit| {
            fit.values.iter().zip(&fit.intervals).zip(&fit.told_by).enumerate().map(
                |(i, ((&value, &interval), &n))| Figure { level: levels.get(i).copied(), value, interval, n },
            )
        });
        let candidate = Candidate {
            effect,
            figures: figures.collect(),
            n: days.len(),
            stretches: self.0.last().map_or(0, |side| side.stretch + 1),
            rmse: fit.as_ref().map(|fit| [root_mean_square(&plain), root_mean_square(&fit.errors)]),
            held_out: fit.as_ref().map(|fit| [root_mean_square(&plain), root_mean_square(&fit.held_out)]),
            verdict: Verdict::Kept,
        };
        Tried { candidate, days, fit }
    }

    /// Levels that were drawn enough to tell anything of them.
    fn levels(&self) -> Vec<usize> {
        let mut levels: Vec<usize> =
            self.0.iter().flat_map(|side| side.pair.shares.iter().map(|s| s.0)).collect();
        levels.sort_unstable();
        levels.dedup();
        let days = |level: usize| self.0.iter().map(|side| side.share(level)).sum::<f64>();
        levels.retain(|level| days(*level) >= LEAST_LEVEL_DAYS);
        levels
    }

    /// What the method misses, standard deviation, from errors of days on which nothing was fitted: what is left of
    /// their mean square when the other doubts of the band are taken off. `release` is what the band holds for it now.
    pub(super) fn missed(&self, errors: &[f64], release: f64) -> Option<f64> {
        let others: f64 = self.0.iter().map(|side| side.deviation.powi(2) - release.powi(2)).sum();
        let count = self.0.len() as f64;
        let left = root_mean_square(errors).powi(2) - others / count;
        (count > 0.0).then(|| left.max(LEAST_DEVIATION.powi(2)).sqrt())
    }
}

impl<'a> Side<'a> {
    fn share(&self, level: usize) -> f64 {
        self.pair.shares.iter().find(|s| s.0 == level).map_or(0.0, |s| s.1)
    }

    fn seen(&self, effect: Effect, levels: &[usize]) -> Seen<'a> {
        let shape = match effect {
            Effect::Bias | Effect::OxygenGain => Shape::Shift(vec![1.0]),
            Effect::ByLevel => Shape::Shift(levels.iter().map(|level| self.share(*level)).collect()),
            Effect::ZoneFactor => Shape::Zone(&self.pair.curve),
        };
        let weight = self.deviation.powi(-2);
        Seen { stretch: self.stretch, weight, measured: self.measured, plain: self.plain, shape }
    }
}

fn root_mean_square(values: &[f64]) -> f64 {
    (values.iter().map(|v| v * v).sum::<f64>() / values.len() as f64).sqrt()
}
