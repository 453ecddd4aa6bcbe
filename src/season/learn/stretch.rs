//! The way from one cast to another: the days between, gone through by the hour of either, and how far the pool that
//! comes of them is from the cast that was taken.
//!
//! Methods: `docs/methods.md`, section 8.

use chrono::{NaiveDate, NaiveDateTime, NaiveTime, TimeDelta};

use crate::mix::Level;
use crate::profile::{Column, Profile};
use crate::season::layers::Layers;
use crate::season::step::{Forcing, part_of_day};
use crate::site::Site;
use crate::units::DAY_S;

use super::{LEAST_DAYS, LEAST_SAMPLES};

/// One day that has passed.
#[derive(Debug, Clone, PartialEq)]
pub struct Past {
    /// What it brought.
    pub forcing: Forcing,
    /// What was drawn.
    pub levels: Vec<Level>,
}

/// How far a computed pool is from a cast, as the root of the mean square over its samples.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Apart {
    /// Temperature, C.
    pub temperature_c: f64,
    /// Oxygen, mg/L, where the casts have it.
    pub oxygen_mg_l: Option<f64>,
}

/// Cast less pool, sample by sample.
pub(super) struct Off {
    pub(super) warmth_c: Vec<f64>,
    pub(super) breath_mg_l: Vec<f64>,
}

impl Off {
    pub(super) fn apart(&self) -> Apart {
        let oxygen_mg_l = (!self.breath_mg_l.is_empty()).then(|| root_mean_square(&self.breath_mg_l));
        Apart { temperature_c: root_mean_square(&self.warmth_c), oxygen_mg_l }
    }
}

/// Root of the mean square; of no values 0.
pub(super) fn root_mean_square(values: &[f64]) -> f64 {
    let sum: f64 = values.iter().map(|v| v * v).sum();
    (sum / values.len().max(1) as f64).sqrt()
}

/// From one cast to the next.
pub(super) struct Stretch<'a> {
    begun: &'a Profile,
    cast: &'a Profile,
    /// Days, and how much of each lies between, s.
    parts: Vec<(&'a Past, f64)>,
}

impl<'a> Stretch<'a> {
    /// The stretch between two casts at their times.
    ///
    /// # Errors
    /// The day that is not told.
    pub(super) fn new(
        casts: [&'a Profile; 2],
        [from, to]: [NaiveDateTime; 2],
        days: &'a [Past],
    ) -> Result<Self, String> {
        let mut parts = Vec::new();
        for date in from.date().iter_days().take_while(|date| *date <= to.date()) {
            let midnight = date.and_time(NaiveTime::MIN);
            let ends = (midnight + TimeDelta::days(1)).min(to);
            let lasts_s = (ends - from.max(midnight)).num_seconds() as f64;
            match days.iter().find(|past| past.forcing.date == date) {
                Some(past) if lasts_s > 0.0 => parts.push((past, lasts_s.min(DAY_S))),
                // of the morning of the cast nobody may have written yet
                None if date < to.date() => {
                    return Err(format!("nothing tells what came and went on {date}"));
                }
                _ => {}
            }
        }
        let [begun, cast] = casts;
        Ok(Self { begun, cast, parts })
    }

    /// Takes the pool of the first cast along and holds the second against it.
    ///
    /// # Errors
    /// The day on which the pool cannot give what was drawn.
    pub(super) fn off(&self, site: &Site) -> Result<Off, String> {
        let none = || format!("{} shows no water", self.begun.file);
        let mut layers = Layers::of_profile(site, self.begun, site.season.layer_m).ok_or_else(none)?;
        for (past, lasts_s) in &self.parts {
            let levels = |_: &Column, _: f64| past.levels.clone();
            part_of_day(&mut layers, site, &past.forcing, *lasts_s, &levels)
                .map_err(|e| format!("on {}: {}", e.date, e.words))?;
        }
        let column = layers.column(site).ok_or_else(none)?;
        let samples = self.cast.samples.iter();
        let warmth_c = samples.map(|s| s.temperature_c - column.reading(s.elevation_m).temperature_c);
        let oxygen = self.cast.oxygen.iter();
        let breath = oxygen.filter_map(|o| Some(o.oxygen_mg_l - column.reading(o.elevation_m).oxygen_mg_l?));
        Ok(Off { warmth_c: warmth_c.collect(), breath_mg_l: breath.collect() })
    }
}

/// The times of three casts by the site's clock, where they can be learned from.
pub(super) fn times(site: &Site, casts: [&Profile; 3]) -> Result<[NaiveDateTime; 3], String> {
    let time = |cast: &Profile| {
        let few = cast.samples.len();
        if few < LEAST_SAMPLES {
            return Err(format!("{} has {few} samples, and {LEAST_SAMPLES} are needed", cast.file));
        }
        let taken = cast.taken.ok_or_else(|| format!("{} does not say when it was taken", cast.file))?;
        Ok(taken.with_timezone(&site.offset).naive_local())
    };
    let times = [time(casts[0])?, time(casts[1])?, time(casts[2])?];
    let dates: [NaiveDate; 3] = times.map(|time| time.date());
    for (pair, cast) in dates.windows(2).zip(casts.iter().skip(1)) {
        let days = (pair[1] - pair[0]).num_days();
        if days < LEAST_DAYS {
            return Err(format!(
                "{} lies {days} days after the cast before it, and {LEAST_DAYS} are needed",
                cast.file
            ));
        }
    }
    Ok(times)
}
