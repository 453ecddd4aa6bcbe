//! A rule the user enters, and how a value stands against it.
//!
//! Methods: `docs/methods.md`, section 7.

use chrono::NaiveDate;

use crate::problem::Problem;
use crate::units::{Dimension, say};

use super::{OxygenFigure, OxygenStatistic, Span, Statistic};

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
    /// Whether it is valid on a date in a water year of a type: within its span, in one of its types of year, and not
    /// after the event that ends it. That event ends only the span it falls in: the next year begins anew.
    pub fn valid_on(&self, date: NaiveDate, year_type: Option<&str>) -> bool {
        let ended =
            self.until.is_some_and(|until| date > until && self.span.began(date) == self.span.began(until));
        self.holds_in(year_type) && !ended && self.span.contains(date)
    }

    /// Whether it holds in water years of a type.
    pub fn holds_in(&self, year_type: Option<&str>) -> bool {
        self.years.is_empty() || year_type.is_some_and(|t| self.years.iter().any(|y| y == t))
    }

    /// Whether its range bounds a temperature: not a difference, not a sum of degrees.
    pub fn is_of_temperature(&self) -> bool {
        self.reference.is_none() && !self.statistic.is_difference() && !self.statistic.is_sum()
    }

    /// What its range measures.
    pub fn dimension(&self) -> Dimension {
        if self.is_of_temperature() { Dimension::Temperature } else { Dimension::TemperatureDifference }
    }

    /// Whether it sets a range.
    pub fn has_range(&self) -> bool {
        self.low_c.is_some() || self.high_c.is_some()
    }

    /// Whether it sets a floor of oxygen.
    pub fn has_floor(&self) -> bool {
        self.oxygen_min_mg_l.is_some() || self.oxygen_min_share.is_some()
    }

    /// What its floor of oxygen speaks of; where nothing is said, the mean of the day for a daily mean, else the least
    /// (choice).
    pub fn oxygen_statistic(&self) -> OxygenStatistic {
        self.oxygen_statistic.unwrap_or(match self.statistic {
            Statistic::DailyMean => OxygenStatistic::DailyMean,
            _ => OxygenStatistic::DailyMin,
        })
    }

    /// Which of today's oxygen its floor is held against.
    pub fn oxygen_figure(&self) -> OxygenFigure {
        match self.oxygen_statistic() {
            OxygenStatistic::DailyMean => OxygenFigure::Mean,
            _ => OxygenFigure::Min,
        }
    }

    /// Lower end of the range the buffer leaves, C.
    pub fn low_kept_c(&self) -> Option<f64> {
        self.low_c.map(|t| t + self.buffer_c)
    }

    /// Upper end of the range the buffer leaves, C.
    pub fn high_kept_c(&self) -> Option<f64> {
        self.high_c.map(|t| t - self.buffer_c)
    }

    /// What is wrong with the rule itself; each problem at `path`.
    pub fn problems(&self, path: &str) -> Vec<Problem> {
        let mut out = Vec::new();
        let said = |value: f64| {
            if self.is_of_temperature() {
                say::c(value, 2).to_string()
            } else {
                say::dc(value, 2).to_string()
            }
        };
        let mut refuse = |key: &str, words: String, cure: &str| {
            out.push(Problem::refused("target-range", words, cure).at(format!("{path}.{key}")));
        };
        if let (Some(low), Some(high)) = (self.low_kept_c(), self.high_kept_c())
            && low > high
        {
            refuse(
                "low",
                format!("low {} is above high {}, the buffer counted in", said(low), said(high)),
                "swap low and high, or make the buffer smaller",
            );
        }
        if let Some(preferred) = self.preferred_c {
            let out_of = self.low_c.is_some_and(|low| preferred < low)
                || self.high_c.is_some_and(|high| preferred > high);
            if out_of {
                refuse(
                    "preferred",
                    format!("preferred {} lies outside low to high", said(preferred)),
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
        if !self.has_range() && !self.has_floor() {
            let cure = "give at least one of low, high, oxygen_min, oxygen_min_percent";
            refuse("name", "the target sets no bound".into(), cure);
        }
        out
    }
}
