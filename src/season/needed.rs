//! How much cold water is needed on a date for what is left of a season to have no day outside the hard targets.
//!
//! Methods: `docs/methods.md`, section 8.

use std::cmp::Ordering;
use std::sync::atomic::{AtomicUsize, Ordering::Relaxed};

use chrono::NaiveDate;
use rayon::prelude::*;

use crate::rank::Progress;
use crate::site::{Site, Strategy};
use crate::target::{Mark, Standing};

use super::cold;
use super::going::Going;
use super::layers::Layers;
use super::outcome::season_site;
use super::run::{Choosing, SeasonDay, Setup, run};
use super::tally::{TargetTally, lost, tallies};

/// Equal steps of the amounts tried first, from none to all the water that the outlets reach (choice).
const STEPS: usize = 8;
/// Times that the gap below the least amount is halved (choice: to 0.4 % of what the outlets reach).
const HALVINGS: usize = 5;
/// Most seasons that follow the date (derived): the run made, the steps with both their ends, the halvings.
const MOST: usize = 2 + STEPS + HALVINGS;
/// Share of the work that solving thrift is (choice: 38 seasons, and then some fifteen that begin on the date).
const SOLVED: f64 = 0.8;

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

impl Stretch {
    /// Its days.
    pub fn days(&self) -> u32 {
        u32::try_from((self.last - self.first).num_days() + 1).unwrap_or_default()
    }

    /// Whether a day outside a target on a side is its next.
    fn goes_on(&self, target: usize, side: Standing, date: NaiveDate) -> bool {
        (self.target, self.side, self.last.succ_opt()) == (target, side, Some(date))
    }
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
/// # Units
/// Volumes m3, the threshold C.
///
/// # References
/// The amounts tried, and the water they are made of ([`Layers::with_cold`]), are ours (choice).
pub fn needed(setup: &Setup, date: NaiveDate, progress: Progress) -> Option<Needed> {
    let threshold_c = *setup.skies.site.cold_water_c.first()?;
    if let Choosing::By(Strategy::Thrift) = setup.choosing {
        let solved = run(setup, &|done| progress(SOLVED * done))?;
        let setup = Setup { choosing: solved.again(&setup.choosing), ..setup.clone() };
        return needed(&setup, date, &|done| progress(SOLVED + (1.0 - SOLVED) * done));
    }
    let mut going = Going::new(setup)?;
    going.through(date, &|_| progress(0.0))?;
    let Some(day) = going.run.days.last().filter(|day| day.date == date).cloned() else {
        let why = going.run.ended.map_or_else(
            || format!("{date} is no day of the season"),
            |ended| format!("the season stops on {}", ended.date),
        );
        return Some(Needed { date, threshold_c, made: None, found: Err(why), not_judged: Vec::new() });
    };
    let search =
        Search { site: season_site(setup), threshold_c, going, day, progress, done: AtomicUsize::new(0) };
    let (made, not_judged) = search.made()?;
    let amount = made.amount;
    let found = match search.range_m3() {
        Ok(range) => Ok(search.found(made, range)?),
        // there is none, and none is needed
        Err(_) if amount.is_enough() && amount.usable_m3.is_some_and(|m3| m3 <= 0.0) => {
            Ok(Found { least: amount, lower: None, remain: made.remain, tried: vec![amount] })
        }
        Err(why) => Err(why),
    };
    Some(Needed { date, threshold_c, made: Some(amount), found, not_judged })
}

impl Needed {
    /// What is left in the run made less what is needed, m3: short by as much as it lies below zero.
    pub fn to_spare_m3(&self) -> Option<f64> {
        Some(self.made?.usable_m3? - self.found.as_ref().ok()?.least.usable_m3?)
    }
}

/// A season that goes on from a date with an amount of cold water.
struct Tried {
    amount: Amount,
    remain: Vec<Stretch>,
}

/// A search under way.
struct Search<'a> {
    /// The site of the season.
    site: Site,
    threshold_c: f64,
    /// The season at the end of the date.
    going: Going<'a>,
    /// The day of the date.
    day: SeasonDay,
    progress: Progress<'a>,
    /// Seasons gone through.
    done: AtomicUsize,
}

impl Search<'_> {
    /// The run made, and the hard targets that it does not judge.
    fn made(&self) -> Option<(Tried, Vec<usize>)> {
        let (tried, tallies) = self.tried(&self.day.layers)?;
        let is_unknown = |held: &&TargetTally| {
            let mut after = self.after(&held.temperature_days).peekable();
            after.peek().is_some() && after.all(|(_, mark)| mark.standing == Standing::Unknown)
        };
        let not_judged = self.hard(&tallies).filter(is_unknown).map(|held| held.target).collect();
        Some((tried, not_judged))
    }

    /// Least and greatest amount of cold water tried, m3: none within reach, and all that is within reach.
    ///
    /// # Errors
    /// Why no other amount can be made.
    fn range_m3(&self) -> Result<[f64; 2], String> {
        let date = self.day.date;
        let reach_m = self.reach_m(&self.day).ok_or_else(|| format!("no outlet is usable on {date}"))?;
        let [colder_m3, warmer_m3] = self.day.layers.parted_m3(self.threshold_c);
        if colder_m3 <= 0.0 {
            return Err(format!(
                "no water of the pool is that cold on {date}: there is none to be more or less"
            ));
        }
        if warmer_m3 <= 0.0 {
            return Err(format!(
                "all water of the pool is that cold on {date}: there can be no more, nor less"
            ));
        }
        let pool = &self.site.pool;
        let below_m3 = pool.volume_m3(reach_m.max(pool.bed_m)) - pool.volume_m3(pool.bed_m);
        let all_m3 = colder_m3 + warmer_m3;
        Ok([below_m3.min(all_m3), all_m3])
    }

    /// The least amount with the fewest days outside: equal steps side by side, then the gap below the best of them
    /// halved.
    fn found(&self, made: Tried, [least_m3, most_m3]: [f64; 2]) -> Option<Found> {
        let amount_m3 = |step: usize| least_m3 + step as f64 / STEPS as f64 * (most_m3 - least_m3);
        let steps: Option<Vec<Tried>> =
            (0..=STEPS).into_par_iter().map(|step| self.with(amount_m3(step))).collect();
        let mut tried = steps?;
        tried.push(made);
        tried.sort_by(|a, b| a.amount.total_m3.total_cmp(&b.amount.total_m3));
        let best = |tried: &[Tried]| {
            let least = tried.iter().enumerate().min_by(|a, b| a.1.amount.order(&b.1.amount));
            least.map_or(0, |(at, _)| at)
        };
        let mut at = best(&tried);
        for _ in 0..HALVINGS {
            let Some([lower, least]) = at.checked_sub(1).and_then(|from| tried.get(from..=at)) else { break };
            let half = self.with(0.5 * (lower.amount.total_m3 + least.amount.total_m3))?;
            tried.insert(at, half);
            at = best(&tried);
        }
        let lower = at.checked_sub(1).and_then(|below| tried.get(below)).map(|one| one.amount);
        let amounts = tried.iter().map(|one| one.amount).collect();
        let least = tried.into_iter().nth(at)?;
        Some(Found { least: least.amount, lower, remain: least.remain, tried: amounts })
    }

    /// Lowest elevation within reach of the outlets usable on a day, m.
    fn reach_m(&self, day: &SeasonDay) -> Option<f64> {
        cold::reaches_m(&self.site, std::slice::from_ref(day)).into_iter().next().flatten()
    }

    /// The season with so much cold water (m3).
    fn with(&self, cold_m3: f64) -> Option<Tried> {
        let layers = self.day.layers.with_cold(&self.site, self.threshold_c, cold_m3)?;
        Some(self.tried(&layers)?.0)
    }

    /// The season with this pool. `None` where the caller stops it.
    fn tried(&self, layers: &Layers) -> Option<(Tried, Vec<TargetTally>)> {
        let share = || self.done.load(Relaxed) as f64 / MOST as f64;
        let run = self.going.with(layers.clone()).finished(&|_| (self.progress)(share()))?;
        self.done.fetch_add(1, Relaxed);
        let setup = self.going.setup;
        let tallies = tallies(&self.site, &setup.skies.conditions, &run.days);
        let remain = self.stretches(&tallies, |held| &held.temperature_days);
        let day = SeasonDay { layers: layers.clone(), ..self.day.clone() };
        let reach = self.reach_m(&day);
        let cold = cold::by_day(&self.site, &[day], &[reach], self.threshold_c);
        let cold = cold.days.first()?;
        let amount = Amount {
            total_m3: cold.total_m3,
            usable_m3: cold.usable_m3,
            lost: lost(setup, &run),
            days_outside: remain.iter().map(Stretch::days).sum(),
            oxygen_days: self.stretches(&tallies, |held| &held.oxygen_days).iter().map(Stretch::days).sum(),
        };
        Some((Tried { amount, remain }, tallies))
    }

    /// What became of the hard targets.
    fn hard<'t>(&self, tallies: &'t [TargetTally]) -> impl Iterator<Item = &'t TargetTally> {
        tallies.iter().filter(|held| self.site.targets.get(held.target).is_some_and(|rule| !rule.soft))
    }

    /// The days after the date.
    fn after<'t>(&self, days: &'t [(NaiveDate, Mark)]) -> impl Iterator<Item = &'t (NaiveDate, Mark)> {
        let date = self.day.date;
        days.iter().filter(move |(day, _)| *day > date)
    }

    /// The days after the date outside hard targets, in rows.
    fn stretches(
        &self,
        tallies: &[TargetTally],
        days: impl Fn(&TargetTally) -> &[(NaiveDate, Mark)],
    ) -> Vec<Stretch> {
        let mut out: Vec<Stretch> = Vec::new();
        for held in self.hard(tallies) {
            for (date, mark) in self.after(days(held)).filter(|(_, mark)| mark.outside()) {
                match out.last_mut() {
                    Some(row) if row.goes_on(held.target, mark.standing, *date) => row.last = *date,
                    _ => out.push(Stretch {
                        target: held.target,
                        side: mark.standing,
                        first: *date,
                        last: *date,
                    }),
                }
            }
        }
        out
    }
}
