//! A season held against the targets, by the very code that judges records, and its score.
//!
//! Methods: `docs/methods.md`, section 8.

use std::cmp::Ordering;

use crate::site::Site;
use crate::target::Tally;

use super::run::{Run, SeasonDay};

/// The season against one target.
#[derive(Debug, Clone, PartialEq)]
pub struct TargetTally {
    /// Index of the target.
    pub target: usize,
    /// Its temperature range.
    pub temperature: Option<Tally>,
    /// Its oxygen floor.
    pub oxygen: Option<Tally>,
}

impl TargetTally {
    /// Days on which it is outside by its temperature, or by its oxygen where that is more.
    pub fn days_outside(&self) -> u32 {
        let days = |t: &Option<Tally>| t.as_ref().map_or(0, |t| t.over + t.under);
        days(&self.temperature).max(days(&self.oxygen))
    }
}

/// What a strategy is measured by, in this order: the smaller the better.
#[derive(Debug, Clone, Copy, Default, PartialEq)]
pub struct Score {
    /// Farthest outside any hard range, C.
    pub worst_c: f64,
    /// Days outside, summed over the hard targets.
    pub days_outside: u32,
    /// Degree-days outside.
    pub degree_days: f64,
    /// Gates moved.
    pub moves: usize,
}

impl Score {
    /// The score of a season.
    pub fn of(site: &Site, run: &Run) -> Self {
        let _ = (site, run);
        Self::default()
    }

    /// Which of two is better.
    pub fn order(&self, other: &Self) -> Ordering {
        self.worst_c
            .total_cmp(&other.worst_c)
            .then(self.days_outside.cmp(&other.days_outside))
            .then(self.degree_days.total_cmp(&other.degree_days))
            .then(self.moves.cmp(&other.moves))
    }
}

/// The days of a season held against every target of its site.
pub fn tallies(site: &Site, days: &[SeasonDay]) -> Vec<TargetTally> {
    let _ = (site, days);
    Vec::new()
}
