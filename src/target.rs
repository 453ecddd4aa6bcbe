//! Targets: rules the user enters, valid over a span of dates, and how a release stands against them.
//!
//! Methods: `docs/methods.md`, section 7.

use chrono::{Datelike, NaiveDate};

use crate::problem::Problem;
use crate::units::say;

/// A day of the year, month and day.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub struct YearDay {
    /// 1 to 12.
    pub month: u32,
    /// 1 to 31.
    pub day: u32,
}

impl YearDay {
    /// `MM-DD`; 29 February is a day.
    pub fn parse(text: &str) -> Option<Self> {
        let (month, day) = text.trim().split_once('-')?;
        let plain = |t: &str| t.len() <= 2 && t.bytes().all(|b| b.is_ascii_digit());
        if !plain(month) || !plain(day) {
            return None;
        }
        let (month, day) = (month.parse().ok()?, day.parse().ok()?);
        NaiveDate::from_ymd_opt(2024, month, day).map(|_| Self { month, day })
    }
}

/// Days of the year from `from` to `to`, both included; `to` before `from` wraps over New Year.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Span {
    /// First day.
    pub from: YearDay,
    /// Last day.
    pub to: YearDay,
}

impl Span {
    /// Every day of the year.
    pub const YEAR: Self = Self { from: YearDay { month: 1, day: 1 }, to: YearDay { month: 12, day: 31 } };

    /// Whether a date lies in the span.
    pub fn contains(&self, date: NaiveDate) -> bool {
        let day = YearDay { month: date.month(), day: date.day() };
        if self.from <= self.to {
            self.from <= day && day <= self.to
        } else {
            day >= self.from || day <= self.to
        }
    }
}

/// The statistic over time that a rule speaks of.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Statistic {
    /// Any reading.
    Instantaneous,
    /// Mean of the day.
    DailyMean,
    /// Maximum of the day.
    DailyMax,
    /// Minimum of the day.
    DailyMin,
    /// Seven-day mean of the daily maxima (7DADM).
    SevenDayMeanOfMaxima,
}

impl Statistic {
    /// All statistics with the names used in files.
    pub const NAMES: [(&'static str, Self); 5] = [
        ("instantaneous", Self::Instantaneous),
        ("daily_mean", Self::DailyMean),
        ("daily_max", Self::DailyMax),
        ("daily_min", Self::DailyMin),
        ("7dadm", Self::SevenDayMeanOfMaxima),
    ];

    /// The name used in files.
    pub fn name(self) -> &'static str {
        Self::NAMES.iter().find(|(_, s)| *s == self).map_or("", |(n, _)| n)
    }

    /// The statistic of a name.
    pub fn parse(name: &str) -> Option<Self> {
        Self::NAMES.iter().find(|(n, _)| *n == name).map(|(_, s)| *s)
    }

    /// The statistic of temperatures that each hold for a share of the day, C; the shares sum to 1. One temperature all
    /// day is itself by every statistic.
    pub fn over(self, parts: &[(f64, f64)]) -> f64 {
        let values = parts.iter().map(|p| p.1);
        match self {
            Self::DailyMean => mean(parts),
            Self::DailyMin => values.fold(f64::INFINITY, f64::min),
            Self::Instantaneous | Self::DailyMax | Self::SevenDayMeanOfMaxima => {
                values.fold(f64::NEG_INFINITY, f64::max)
            }
        }
    }

    /// The same of oxygen, mg/L: what the floor is held against is the mean where the rule speaks of one, else the
    /// least.
    pub fn oxygen_over(self, parts: &[(f64, f64)]) -> f64 {
        match self {
            Self::DailyMean => mean(parts),
            _ => parts.iter().map(|p| p.1).fold(f64::INFINITY, f64::min),
        }
    }
}

fn mean(parts: &[(f64, f64)]) -> f64 {
    parts.iter().map(|(share, value)| share * value).sum()
}

/// Where a value stands against a range.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Standing {
    /// Within the range, or above the oxygen minimum.
    Inside,
    /// Below it.
    Below,
    /// Above it.
    Above,
    /// The value is missing, or the rule sets no such bound.
    Unknown,
}

impl Standing {
    /// The word used in every output.
    pub fn word(self) -> &'static str {
        match self {
            Self::Inside => "inside",
            Self::Below => "below",
            Self::Above => "above",
            Self::Unknown => "unknown",
        }
    }
}

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
    /// Where it applies.
    pub point: String,
    /// Where the rule is written.
    pub source: Option<String>,
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
