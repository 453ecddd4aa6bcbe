//! A rule the user enters, and how a value stands against it.
//!
//! Methods: `docs/methods.md`, section 7.

use chrono::NaiveDate;

use crate::problem::Problem;
use crate::units::say;

use super::{OxygenStatistic, Span, Standing, Statistic};

/// The name of the dam among the points.
pub const DAM: &str = "dam";

/// A rule the user entered.
#[derive(Debug, Clone, PartialEq)]
pub struct Target {
    /// Name, unique in the site.
    pub name: String,
    /// When it is valid.
    pub span: Span,
    /// What it speaks of.
    pub statistic: Statistic,
    /// Lowest temperature, C.
    pub low_c: Option<f64>,
    /// Preferred temperature, C.
    pub preferred_c: Option<f64>,
    /// Highest temperature, C.
    pub high_c: Option<f64>,
    /// Distance kept from both ends of the range, C.
    pub buffer_c: f64,
    /// Least oxygen, mg/L.
    pub oxygen_min_mg_l: Option<f64>,
    /// Least oxygen over saturation, 0 to 1 and above.
    pub oxygen_min_share: Option<f64>,
    /// What the floor speaks of; by the statistic of the temperature where none is given.
    pub oxygen_statistic: Option<OxygenStatistic>,
    /// Where it applies: `dam` or a point of the river.
    pub point: String,
    /// Its range is that of the difference from the temperature of this reference.
    pub reference: Option<Reference>,
    /// Water-year types in which it is valid; in all where empty.
    pub years: Vec<String>,
    /// Last day on which it is valid, where an event ends it before its span does.
    pub until: Option<NaiveDate>,
    /// Name of that event.
    pub until_event: Option<String>,
    /// Something wished for: it orders like a preference and is never missed.
    pub soft: bool,
    /// 1 comes first: where rules conflict, those of a larger number are held as wishes.
    pub priority: u32,
    /// Who set it.
    pub authority: Option<String>,
    /// Where the rule is written.
    pub source: Option<String>,
    /// An example: its values are nobody's licence.
    pub example: bool,
}

impl Default for Target {
    /// A rule for every day at the dam that sets no bound yet.
    fn default() -> Self {
        Self {
            name: String::new(),
            span: Span::YEAR,
            statistic: Statistic::DailyMean,
            low_c: None,
            preferred_c: None,
            high_c: None,
            buffer_c: 0.0,
            oxygen_min_mg_l: None,
            oxygen_min_share: None,
            oxygen_statistic: None,
            point: DAM.into(),
            reference: None,
            years: Vec::new(),
            until: None,
            until_event: None,
            soft: false,
            priority: 1,
            authority: None,
            source: None,
            example: false,
        }
    }
}

/// What a temperature is compared with.
#[derive(Debug, Clone, PartialEq, Eq)]
pub enum Reference {
    /// The river as it would be in balance with the air: the equilibrium temperature of the day.
    Natural,
    /// A side stream or a point, by its name.
    Stream(String),
}

impl Target {
    /// What the rule is held against of temperatures that each hold for a share of the day, C: its statistic, and of
    /// readings that are each to lie in the range the one farthest outside.
    pub fn value_over(&self, parts: &[(f64, f64)]) -> f64 {
        let greatest = self.statistic.over(parts);
        if self.statistic != Statistic::Instantaneous {
            return greatest;
        }
        let least = Statistic::DailyMin.over(parts);
        let outside = |value: f64| self.temperature(Some(value)).1.unwrap_or(0.0);
        if outside(least) > outside(greatest) { least } else { greatest }
    }

    /// Lower end of the range the buffer leaves, C.
    pub fn low_kept_c(&self) -> Option<f64> {
        self.low_c.map(|t| t + self.buffer_c)
    }

    /// Upper end of the range the buffer leaves, C.
    pub fn high_kept_c(&self) -> Option<f64> {
        self.high_c.map(|t| t - self.buffer_c)
    }

    /// Standing of a temperature and how far outside it lies, C (0 inside).
    pub fn temperature(&self, value_c: Option<f64>) -> (Standing, Option<f64>) {
        let Some(value) = value_c else { return (Standing::Unknown, None) };
        match (self.low_kept_c(), self.high_kept_c()) {
            (None, None) => (Standing::Unknown, None),
            (Some(low), _) if value < low => (Standing::Below, Some(low - value)),
            (_, Some(high)) if value > high => (Standing::Above, Some(value - high)),
            _ => (Standing::Inside, Some(0.0)),
        }
    }

    /// Standing of an oxygen concentration and how far below the minimum it lies, mg/L (0 inside).
    pub fn oxygen(&self, value_mg_l: Option<f64>) -> (Standing, Option<f64>) {
        match (value_mg_l, self.oxygen_min_mg_l) {
            (Some(value), Some(least)) if value < least => (Standing::Below, Some(least - value)),
            (Some(_), Some(_)) => (Standing::Inside, Some(0.0)),
            _ => (Standing::Unknown, None),
        }
    }

    /// Room to the nearest bound, negative outside, in C for temperature and mg/L for oxygen taken as equal
    /// (choice: bins of both are 0.5). `None` where no bound can be judged.
    pub fn room(&self, value_c: Option<f64>, oxygen_mg_l: Option<f64>) -> Option<f64> {
        let temperature = value_c.and_then(|v| {
            let low = self.low_kept_c().map(|low| v - low);
            let high = self.high_kept_c().map(|high| high - v);
            [low, high].into_iter().flatten().reduce(f64::min)
        });
        let oxygen = oxygen_mg_l.zip(self.oxygen_min_mg_l).map(|(v, least)| v - least);
        [temperature, oxygen].into_iter().flatten().reduce(f64::min)
    }

    /// What is wrong with the rule itself; each problem at `path`.
    pub fn problems(&self, path: &str) -> Vec<Problem> {
        let mut out = Vec::new();
        let mut refuse = |key: &str, words: String, cure: &str| {
            out.push(Problem::refused("target-range", words, cure).at(format!("{path}.{key}")));
        };
        if let (Some(low), Some(high)) = (self.low_kept_c(), self.high_kept_c())
            && low > high
        {
            refuse(
                "low",
                format!("low {} is above high {}, the buffer counted in", say::c(low, 2), say::c(high, 2)),
                "swap low and high, or make the buffer smaller",
            );
        }
        if let Some(preferred) = self.preferred_c {
            let out_of = self.low_c.is_some_and(|low| preferred < low)
                || self.high_c.is_some_and(|high| preferred > high);
            if out_of {
                refuse(
                    "preferred",
                    format!("preferred {} lies outside low to high", say::c(preferred, 2)),
                    "move it between low and high",
                );
            }
        }
        if self.buffer_c < 0.0 {
            refuse(
                "buffer",
                format!("the buffer {} is negative", say::dc(self.buffer_c, 2)),
                "give 0 or more",
            );
        }
        if self.low_c.is_none() && self.high_c.is_none() && self.oxygen_min_mg_l.is_none() {
            refuse("name", "the target sets no bound".into(), "give at least one of low, high, oxygen_min");
        }
        out
    }
}
