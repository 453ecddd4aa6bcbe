//! What is kept: the simplest effect that makes days better which its fit has not seen.
//!
//! Methods: `docs/methods.md`, section 9.

use crate::record::pairs::ZONE_FACTORS;
use crate::units::say;

use super::fit::{Fit, Seen};
use super::scatter::{effective, student_90};
use super::{Candidate, Effect, LEAST_DAYS, LEAST_STRETCHES};

/// Whether an effect is kept.
#[derive(Debug, Clone, PartialEq)]
pub enum Verdict {
    /// It is.
    Kept,
    /// It would help as well, but another is kept; in words.
    Passed(String),
    /// It is refused; why, in words.
    Refused(String),
}

/// An effect with the days it was fitted over.
pub(super) struct Tried<'a> {
    pub(super) candidate: Candidate,
    pub(super) days: Vec<Seen<'a>>,
    pub(super) fit: Option<Fit>,
}

/// How much smaller the squares of some errors are than those of others, per day, and the standard error of that by
/// stretches with its Student factor: the gain is more than its scatter where it is above their product.
fn gain(days: &[Seen], before: &[f64], after: &[f64]) -> (f64, f64) {
    let stretches = days.iter().map(|d| d.stretch + 1).max().unwrap_or(0);
    let mut gained = vec![[0.0_f64; 2]; stretches]; // weighted gain, weight
    for ((day, before), after) in days.iter().zip(before).zip(after) {
        gained[day.stretch][0] += day.weight * (before * before - after * after);
        gained[day.stretch][1] += day.weight;
    }
    let total: f64 = gained.iter().map(|g| g[1]).sum();
    let mean = gained.iter().map(|g| g[0]).sum::<f64>() / total;
    let weights: Vec<f64> = gained.iter().map(|g| g[1]).collect();
    let count = effective(&weights);
    let squares: f64 = gained.iter().map(|g| (g[0] - mean * g[1]).powi(2)).sum();
    let error = (count / (count - 1.0) * squares).sqrt() / total;
    (mean, student_90(count - 1.0) * error)
}

/// Whether the held-out errors of one fit are smaller than other errors by more than they scatter.
fn better(days: &[Seen], before: &[f64], after: &[f64]) -> bool {
    let (mean, scatter) = gain(days, before, after);
    mean > scatter
}

/// Why an effect is refused by itself, if it is.
pub(super) fn refusal(tried: &Tried) -> Option<String> {
    let Candidate { effect, n, stretches, figures, held_out, .. } = &tried.candidate;
    if *n < LEAST_DAYS {
        return Some(format!("{n} days can be held against the gauge, and {LEAST_DAYS} are needed"));
    }
    if *stretches < LEAST_STRETCHES {
        return Some(format!(
            "the days fall into {stretches} stretches with casts of their own, and {LEAST_STRETCHES} are needed"
        ));
    }
    let (Some(fit), Some([before, after])) = (&tried.fit, held_out) else {
        return Some(match effect {
            Effect::ByLevel => "no two levels were drawn apart from each other on days enough".into(),
            Effect::ZoneFactor => "the release hardly changes with the thickness of the zones".into(),
            Effect::Bias | Effect::OxygenGain => "the days do not tell it".into(),
        });
    };
    let nothing = effect.nothing();
    let holds =
        |interval: &Option<(f64, f64)>| interval.is_none_or(|(low, high)| (low..=high).contains(&nothing));
    if fit.intervals.iter().all(holds) {
        let intervals: Vec<String> =
            figures.iter().filter_map(|f| f.interval.map(|i| effect.interval_words(i))).collect();
        return Some(match intervals.as_slice() {
            [] => "a single stretch of days tells it".into(),
            some => format!("its 80 % interval, {}, holds {}", some.join("; "), effect.value_words(nothing)),
        });
    }
    let out_of_range = |f: &f64| !(ZONE_FACTORS[0]..=ZONE_FACTORS[1]).contains(f);
    if let (Effect::ZoneFactor, Some(factor)) = (effect, fit.values.first().filter(|f| out_of_range(f))) {
        let [low, high] = ZONE_FACTORS;
        return Some(format!(
            "{factor:.2} lies outside {low:.2} to {high:.2}: it is not the thickness of zones that is off"
        ));
    }
    let plain: Vec<f64> = tried.days.iter().map(Seen::plain_error).collect();
    if after >= before || !better(&tried.days, &plain, &fit.held_out) {
        let how = if after >= before { "does not fall" } else { "falls by less than it scatters" };
        return Some(format!(
            "on days left out of its fit the error {how}: {} without, {} with it",
            effect.error_words(*before),
            effect.error_words(*after)
        ));
    }
    None
}

/// Settles the verdict of every effect of the temperature, the simpler ones first, and says which are alike.
pub(super) fn choose(tried: &mut [Tried]) -> Vec<String> {
    let mut kept: Option<usize> = None;
    let mut alike = Vec::new();
    for i in 0..tried.len() {
        if let Some(words) = refusal(&tried[i]) {
            tried[i].candidate.verdict = Verdict::Refused(words);
            continue;
        }
        tried[i].candidate.verdict = Verdict::Kept;
        let Some(best) = kept else {
            kept = Some(i);
            continue;
        };
        let (Some(old), Some(new)) = (&tried[best].fit, &tried[i].fit) else { continue };
        let days = &tried[i].days;
        let (mean, scatter) = gain(days, &old.held_out, &new.held_out);
        // of equally simple ones the nearer is taken, a less simple one only where it is nearer beyond doubt
        let takes_over = if new.values.len() > old.values.len() { mean > scatter } else { mean > 0.0 };
        let (names, loser) =
            ([best, i].map(|k| tried[k].candidate.effect), if takes_over { best } else { i });
        if mean.abs() <= scatter {
            alike.push(format!(
                "the record does not tell a {} from a {}: on days left out they differ by less than they scatter",
                names[0].name(),
                names[1].name()
            ));
        }
        let winner = names[usize::from(takes_over)].name();
        let why = if new.values.len() > old.values.len() && !takes_over {
            format!("a {winner} explains the record about as well and is simpler")
        } else {
            format!("a {winner} comes nearer on days left out")
        };
        tried[loser].candidate.verdict = Verdict::Passed(why);
        if takes_over {
            kept = Some(i);
        }
    }
    alike
}

impl Effect {
    /// A value of it with its unit.
    pub fn value_words(self, value: f64) -> String {
        match self {
            Self::Bias | Self::ByLevel => say::dc(value, 2).signed().to_string(),
            Self::ZoneFactor => format!("{value:.2}"),
            Self::OxygenGain => format!("{value:+.2} mg/L"),
        }
    }

    /// An interval of it.
    pub fn interval_words(self, (low, high): (f64, f64)) -> String {
        format!("{} to {}", self.value_words(low), self.value_words(high))
    }

    /// An error of what it mends.
    pub fn error_words(self, error: f64) -> String {
        if self == Self::OxygenGain { format!("{error:.2} mg/L") } else { say::dc(error, 2).to_string() }
    }
}
