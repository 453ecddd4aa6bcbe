//! Spans of the year in which a rule is valid.
//!
//! Methods: `docs/methods.md`, section 7.

use chrono::{Datelike, NaiveDate};

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

    /// The last time it came on or before a date; 29 February comes on 1 March where there is none.
    pub fn last_on(self, date: NaiveDate) -> Option<NaiveDate> {
        let in_year = |year: i32| {
            NaiveDate::from_ymd_opt(year, self.month, self.day)
                .or_else(|| NaiveDate::from_ymd_opt(year, 3, 1))
        };
        in_year(date.year()).filter(|day| *day <= date).or_else(|| in_year(date.year() - 1))
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

    /// The day on which the span that holds a date, or the last one before it, began. A span from 29 February begins on
    /// 1 March where there is none.
    pub fn began(&self, date: NaiveDate) -> Option<NaiveDate> {
        self.from.last_on(date)
    }
}
