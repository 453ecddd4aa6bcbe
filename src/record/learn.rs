//! Learning from the gauge below the dam: how far the release that is computed is off, and what would mend it.
//!
//! Each effect is fitted over the pairs of a recent window and tested on stretches of days that its fit has not seen.
//! Nothing that is learned is applied here; the pairs stay as they were computed.
//!
//! Methods: `docs/methods.md`, section 9.

mod choose;
mod fit;
mod scatter;
mod sensor;
mod sides;

use chrono::{Days, NaiveDate};

use crate::site::{Learned, Site};

use super::pairs::Pair;

pub use choose::Verdict;
pub use sensor::{Sensor, Suspect};

use choose::{Tried, choose};
use fit::Seen;
use sides::Sides;

/// Fewest days that anything is learned from (choice).
pub const LEAST_DAYS: usize = 8;
/// Fewest stretches of days, each with casts of its own (choice): fewer do not show how errors scatter.
pub const LEAST_STRETCHES: usize = 4;
/// What can be learned.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Effect {
    /// The release is warmer or colder than computed by a constant.
    Bias,
    /// All zones are thinner or thicker than published by one factor.
    ZoneFactor,
    /// The release is off by a constant of its own for each level, as where shut gates leak.
    ByLevel,
    /// Oxygen gained on the way to the gauge.
    OxygenGain,
}

impl Effect {
    /// What it is called.
    pub fn name(self) -> &'static str {
        match self {
            Self::Bias => "constant bias",
            Self::ZoneFactor => "zone factor",
            Self::ByLevel => "bias by level",
            Self::OxygenGain => "oxygen gain",
        }
    }

    /// The value at which it does nothing.
    pub fn nothing(self) -> f64 {
        if self == Self::ZoneFactor { 1.0 } else { 0.0 }
    }
}

/// One learned value.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Figure {
    /// The level it is of, where it is of one.
    pub level: Option<usize>,
    /// The value: C, mg/L or a factor.
    pub value: f64,
    /// Its 80 % interval; `None` where a single stretch tells it.
    pub interval: Option<(f64, f64)>,
    /// Days that tell it.
    pub n: usize,
}

/// An effect with what the record says of it.
#[derive(Debug, Clone, PartialEq)]
pub struct Candidate {
    /// The effect.
    pub effect: Effect,
    /// Its values; empty where it cannot be fitted.
    pub figures: Vec<Figure>,
    /// Days it was fitted over.
    pub n: usize,
    /// Stretches of days that count as independent.
    pub stretches: usize,
    /// Root mean square of measured less computed, without and with it, over the days it was fitted over.
    pub rmse: Option<[f64; 2]>,
    /// The same over each stretch as fitted over all the others.
    pub held_out: Option<[f64; 2]>,
    /// Whether it is kept, and why not.
    pub verdict: Verdict,
}

/// Everything that learning has to say.
#[derive(Debug, Clone, PartialEq)]
pub struct Learning {
    /// What is kept.
    pub learned: Learned,
    /// Every effect that was tried.
    pub candidates: Vec<Candidate>,
    /// Effects that the record does not tell apart, in words.
    pub alike: Vec<String>,
    /// A sensor that the mixed pool speaks against.
    pub suspect: Option<Suspect>,
}

/// Learns from pairs in order of their dates, those of the last `window_days` before the newest.
///
/// # Units
/// Temperatures C, oxygen mg/L.
///
/// # References
/// Least squares; intervals by leaving out one stretch after the other (jackknife: Tukey 1958, recalled), their width
/// by Student's distribution (standard); what is kept is a choice.
pub fn learn(site: &Site, pairs: &[Pair], window_days: u64) -> Learning {
    let window = window(pairs, window_days);
    let inside = |pair: &&Pair| window.is_some_and(|(from, to)| (from..=to).contains(&pair.date));
    let pairs: Vec<&Pair> = pairs.iter().filter(inside).collect();
    let mut learned = Learned { window, n: pairs.len(), ..Learned::default() };
    let warmth = Sides::temperature(&pairs);
    let effects = [Effect::Bias, Effect::ZoneFactor, Effect::ByLevel];
    let mut tried = effects.map(|effect| warmth.tried(effect));
    let alike = choose(&mut tried);
    keep(&mut learned, &tried);
    learned.release_c = left(&tried).and_then(|errors| warmth.missed(&errors, site.band.release_c));
    let breath = Sides::oxygen(&pairs, learned.zone_factor.unwrap_or(1.0));
    let mut gain = [breath.tried(Effect::OxygenGain)];
    choose(&mut gain);
    keep(&mut learned, &gain);
    learned.release_mg_l = left(&gain).and_then(|errors| breath.missed(&errors, site.band.release_mg_l));
    let candidates = tried.into_iter().chain(gain).map(|tried| tried.candidate).collect();
    Learning { learned, candidates, alike, suspect: sensor::suspect(site, &pairs) }
}

/// First and last day looked at.
fn window(pairs: &[Pair], days: u64) -> Option<(NaiveDate, NaiveDate)> {
    let newest = pairs.iter().map(|pair| pair.date).max()?;
    let oldest = pairs.iter().map(|pair| pair.date).min()?;
    let from = newest.checked_sub_days(Days::new(days.saturating_sub(1))).unwrap_or(oldest);
    Some((from.max(oldest), newest))
}

/// Errors that are left on days not fitted: with the effect that is kept, else as computed. `None` where there are too
/// few days to speak of their scatter.
fn left(tried: &[Tried]) -> Option<Vec<f64>> {
    let first =
        tried.first().filter(|t| t.candidate.n >= LEAST_DAYS && t.candidate.stretches >= LEAST_STRETCHES)?;
    let kept = tried.iter().find(|t| t.candidate.verdict == Verdict::Kept).and_then(|t| t.fit.as_ref());
    Some(kept.map_or_else(|| first.days.iter().map(Seen::plain_error).collect(), |fit| fit.held_out.clone()))
}

/// Takes over what is kept.
fn keep(learned: &mut Learned, tried: &[Tried]) {
    let kept = tried.iter().map(|t| &t.candidate).filter(|c| c.verdict == Verdict::Kept);
    for Candidate { effect, figures, .. } in kept {
        let value = figures.first().map(|figure| figure.value);
        match effect {
            Effect::Bias => learned.bias_c = value,
            Effect::ZoneFactor => {
                learned.zone_factor = value;
                learned.zone_range = figures.first().and_then(|figure| figure.interval);
            }
            Effect::OxygenGain => learned.oxygen_gain_mg_l = value,
            Effect::ByLevel => {
                learned.by_level_c = figures.iter().filter_map(|f| Some((f.level?, f.value))).collect();
            }
        }
    }
}
