//! What a floor of oxygen asks of today's water.
//!
//! Methods: `docs/methods.md`, section 7.

use chrono::NaiveDate;

use crate::target::{OxygenFigure, OxygenStatistic, Target};

use super::{Known, before};

/// What a floor of oxygen asks of today's water at its point.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Air {
    /// Which of today's oxygen it is held against.
    pub figure: OxygenFigure,
    /// Least of that figure: mg/L, or over saturation.
    pub floor: f64,
    /// The floor is over saturation, not in mg/L.
    pub share: bool,
    /// The rule's value is this, and ...
    pub add: f64,
    /// ... so many times today's figure.
    pub times: f64,
    /// Days already observed are counted in.
    pub observed: bool,
}

impl Air {
    /// What a rule's floor asks of the oxygen of a day; `None` where it sets none.
    pub fn of(rule: &Target, date: NaiveDate, known: Known) -> Option<Self> {
        let share = rule.oxygen_min_share.is_some();
        let least = rule.oxygen_min_share.or(rule.oxygen_min_mg_l)?;
        let plain =
            Self { figure: rule.oxygen_figure(), floor: least, share, add: 0.0, times: 1.0, observed: false };
        if rule.oxygen_statistic() != OxygenStatistic::SevenDayMeanOfMinima {
            return Some(plain);
        }
        let (Some(record), Some(first)) = (known.days, before(date, 6)) else { return Some(plain) };
        let days = if share { &record.oxygen_share } else { &record.oxygen_mg_l };
        let minima: Vec<f64> = days.days.range(first..date).map(|(_, day)| day.min).collect();
        let count = u32::try_from(minima.len()).unwrap_or(u32::MAX);
        if count == 0 || count + 1 < known.enough(7) {
            return Some(plain);
        }
        let times = 1.0 / f64::from(count + 1);
        let add = times * minima.iter().sum::<f64>();
        Some(Self { floor: (least - add) / times, add, times, observed: true, ..plain })
    }

    /// What the rule's floor is of, from today's figure.
    pub fn value(&self, figure: f64) -> f64 {
        self.add + self.times * figure
    }

    /// The floor of today's figure in mg/L, at a saturation.
    pub fn floor_mg_l(&self, saturation_mg_l: f64) -> f64 {
        if self.share { self.floor * saturation_mg_l } else { self.floor }
    }
}
