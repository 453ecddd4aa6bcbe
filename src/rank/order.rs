//! Where a mix that was computed in full stands in the order of a question.
//!
//! Methods: `docs/methods.md`, section 10.

use crate::mix::limits::Moves;

use super::Question;
use super::goal::{Days, Efforts, Goal};

/// A steady release computed in full.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Full {
    /// Temperature, C.
    pub temperature_c: f64,
    /// Oxygen below the dam, mg/L.
    pub oxygen_mg_l: Option<f64>,
    /// Share of it from water colder than the first threshold of the site.
    pub cold_share: f64,
}

/// The order of a question about a steady day, for mixes computed in full.
#[derive(Debug)]
pub struct Order {
    goal: Goal,
    efforts: Efforts,
}

impl Order {
    /// The order of a question.
    pub fn of(question: &Question) -> Self {
        Self { goal: Goal::new(question), efforts: Efforts::of(question.site) }
    }

    /// How far a release of a temperature (C) lies outside the ranges of the rules at all their places, and then from
    /// what they prefer, C.
    pub fn off_c(&self, temperature_c: f64) -> (f64, f64) {
        let days = steady(temperature_c);
        let ([outside], [far]) = (self.goal.outside_c::<1, 1>(&days), self.goal.distances_c::<1, 1>(&days));
        (outside, far)
    }

    /// Its key: the smaller the better. The moves are those from the setting now.
    pub fn key(&self, release: &Full, moves: &Moves) -> f64 {
        let mut days = steady(release.temperature_c);
        days.cold_share = [release.cold_share];
        days.effort = [self.efforts.effort(moves.cost, moves.crew_hours)];
        let far = self.goal.distances_c::<1, 1>(&days);
        let [key] = if let Some(oxygen) = release.oxygen_mg_l {
            days.oxygen_mg_l = [[oxygen]; 2];
            self.goal.keys::<1, 1>(&days, &far)
        } else {
            self.goal.keys_unknown::<1, 1>(&days, &far)
        };
        key
    }
}

/// A day of one temperature.
fn steady(temperature_c: f64) -> Days<1> {
    Days { low_c: [[temperature_c]; 3], high_c: [[temperature_c]; 3], ..Days::default() }
}
