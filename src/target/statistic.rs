//! Statistics over time that rules speak of.
//!
//! Methods: `docs/methods.md`, section 7.

use crate::units::say;

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

    /// Whether its figures are differences of temperature.
    pub fn is_difference(self) -> bool {
        matches!(self, Self::HourlyChange | Self::DailyChange)
    }

    /// Whether its figures are sums of degrees, C days.
    pub fn is_sum(self) -> bool {
        matches!(self, Self::DegreeDays { .. })
    }

    /// Whether it counts days above the range.
    pub fn counts_days(self) -> bool {
        matches!(self, Self::DaysInARow(_) | Self::ShareOfDays(_) | Self::DaysAbove(_))
    }

    /// As a sentence names it, its figures with it; a base of degree days as [`say`](crate::units::say) marks it.
    pub fn words(self) -> String {
        match self {
            Self::SevenDayMeanOfMaxima => "7-day mean of daily maxima".into(),
            Self::MeanOfDays(days) => format!("mean of {days} days"),
            Self::DaysInARow(days) => format!("daily maximum, not {days} days in a row above"),
            Self::ShareOfDays(share) => {
                format!("daily maximum, on at most {} % of days above", tidy(100.0 * share))
            }
            Self::DaysAbove(days) => format!("daily maximum, on at most {days} days above"),
            Self::DegreeDays { base_c, since } => {
                format!("degree days above {} since {:02}-{:02}", say::c(base_c, 1), since.month, since.day)
            }
            _ => self.name().replace('_', " "),
        }
    }

    /// The unit of its own figure.
    pub fn unit(self) -> &'static str {
        match self {
            Self::DaysInARow(_) | Self::DaysAbove(_) => "days",
            Self::ShareOfDays(_) => "%",
            Self::DegreeDays { .. } => "C days",
            _ => "C",
        }
    }
}

/// A figure without needless zeros.
fn tidy(value: f64) -> String {
    let text = format!("{value:.1}");
    text.strip_suffix(".0").map_or(text.clone(), str::to_owned)
}

impl OxygenStatistic {
    /// All of them with the names used in files.
    pub const NAMES: [(&'static str, Self); 3] = [
        ("daily_min", Self::DailyMin),
        ("daily_mean", Self::DailyMean),
        ("7dmin", Self::SevenDayMeanOfMinima),
    ];

    /// The name used in files.
    pub fn name(self) -> &'static str {
        Self::NAMES.iter().find(|(_, s)| *s == self).map_or("", |(n, _)| n)
    }

    /// The statistic of a name.
    pub fn parse(name: &str) -> Option<Self> {
        Self::NAMES.iter().find(|(n, _)| *n == name).map(|(_, s)| *s)
    }

    /// As a sentence names it.
    pub fn words(self) -> &'static str {
        match self {
            Self::DailyMin => "least",
            Self::DailyMean => "daily mean",
            Self::SevenDayMeanOfMinima => "7-day mean of daily minima",
        }
    }
}

/// Which of today's oxygen a floor is held against.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum OxygenFigure {
    /// The mean of the day.
    Mean,
    /// The least of the day.
    Min,
}
