//! Statistics over time that rules speak of.
//!
//! Methods: `docs/methods.md`, section 7.

use super::{Span, YearDay};

/// The statistic over time that a rule speaks of.
#[derive(Debug, Clone, Copy, Default, PartialEq)]
pub enum Statistic {
    /// Any reading.
    Instantaneous,
    /// Mean of the day.
    #[default]
    DailyMean,
    /// Maximum of the day.
    DailyMax,
    /// Minimum of the day.
    DailyMin,
    /// Seven-day mean of the daily maxima (7DADM).
    SevenDayMeanOfMaxima,
    /// Mean of the daily means of so many days, today the last.
    MeanOfDays(u32),
    /// So many days in a row whose maximum lies above the range are outside; fewer are not.
    DaysInARow(u32),
    /// At most this share (0 to 1) of the days of the span so far may have a maximum above the range.
    ShareOfDays(f64),
    /// At most so many days of the span may have a maximum above the range.
    DaysAbove(u32),
    /// Greatest change from one hour to the next, as a difference.
    HourlyChange,
    /// Change of the daily mean from yesterday, as a difference.
    DailyChange,
    /// Degrees of the daily means above a base (C), summed from a day of the year to today, C days.
    DegreeDays {
        /// The base, C.
        base_c: f64,
        /// First day that counts.
        since: YearDay,
    },
}

/// The statistic of oxygen that a rule's floor speaks of.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum OxygenStatistic {
    /// Least reading of the day.
    DailyMin,
    /// Mean of the day.
    DailyMean,
    /// Seven-day mean of the daily minima.
    SevenDayMeanOfMinima,
}

impl Statistic {
    /// All statistics with the names used in files; days, shares and bases there stand for any.
    pub const NAMES: [(&'static str, Self); 12] = [
        ("instantaneous", Self::Instantaneous),
        ("daily_mean", Self::DailyMean),
        ("daily_max", Self::DailyMax),
        ("daily_min", Self::DailyMin),
        ("7dadm", Self::SevenDayMeanOfMaxima),
        ("mean_of_days", Self::MeanOfDays(7)),
        ("days_in_a_row", Self::DaysInARow(3)),
        ("share_of_days", Self::ShareOfDays(0.1)),
        ("days_above", Self::DaysAbove(5)),
        ("hourly_change", Self::HourlyChange),
        ("daily_change", Self::DailyChange),
        ("degree_days", Self::DegreeDays { base_c: 0.0, since: Span::YEAR.from }),
    ];

    /// The name used in files.
    pub fn name(self) -> &'static str {
        let same = |s: &Self| std::mem::discriminant(s) == std::mem::discriminant(&self);
        Self::NAMES.iter().find(|(_, s)| same(s)).map_or("", |(n, _)| n)
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
            Self::DailyMean | Self::MeanOfDays(_) | Self::DailyChange | Self::DegreeDays { .. } => {
                mean(parts)
            }
            Self::DailyMin => values.fold(f64::INFINITY, f64::min),
            _ => values.fold(f64::NEG_INFINITY, f64::max),
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
