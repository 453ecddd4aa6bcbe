//! A season so small that every way to set its gates can be followed.
//!
//! Methods: `docs/methods.md`, section 8.

use std::cmp::Ordering;
use std::sync::Arc;

use crate::rank::Progress;
use crate::site::Strategy;

use super::decide::NoMix;
use super::going::Going;
use super::run::{Run, Setup};
use super::tally::Score;

/// Most mixes allowed at each decision (choice).
const MOST_MIXES: usize = 4;
/// Most decisions that are due (choice).
const MOST_DECISIONS: usize = 8;
/// Most decisions followed in all (choice: minutes of one core); a season that takes more is searched by aims.
const MOST_FOLLOWED: usize = 20_000;

/// Share of the work that the season day by day counts for (choice).
const DAILY_SHARE: f64 = 0.05;

/// What stands in the way of following every mix.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum Stop {
    /// The caller stopped it, or the cast shows no water.
    Cancelled,
    /// There are more than are followed.
    TooLarge,
}

/// The best of all ways to set the gates of a season, where at each decision no more than a few mixes are allowed:
/// depth first, the best of the day first, a branch left where its days so far are already as bad as the best season
/// known.
///
/// `daily` sets the best of each day, with `count` decisions due.
///
/// # Errors
/// A larger season, or a caller who stops it.
pub(super) fn exact(daily: &Setup, count: usize, progress: Progress) -> Result<Run, Stop> {
    if count > MOST_DECISIONS {
        return Err(Stop::TooLarge);
    }
    let going = Going::new(daily).ok_or(Stop::Cancelled)?;
    // a larger season shows it at its first decision, before any is run
    let mut walk = Walk { daily, best: None, followed: 0, done: 0.0, progress };
    let first = walk.next_choice(going.clone())?.ok_or(Stop::TooLarge)?;
    let mut run = going.finished(&|done| progress(DAILY_SHARE * done)).ok_or(Stop::Cancelled)?;
    run.aims = Some(Arc::new(vec![0.0; count]));
    walk.best = Some((Score::of(daily, &run), run));
    walk.branches(first, (DAILY_SHARE, 1.0 - DAILY_SHARE))?;
    let (_, run) = walk.best.ok_or(Stop::Cancelled)?;
    Ok(Run { strategy: Strategy::Thrift.name().to_owned(), ..run })
}

struct Walk<'a> {
    daily: &'a Setup<'a>,
    best: Option<(Score, Run)>,
    followed: usize,
    /// Share of the work done: of each fork of the tree the branches left behind.
    done: f64,
    progress: Progress<'a>,
}

/// Seasons under way, one for each mix of a decision.
type Choices<'a> = Vec<Going<'a>>;

impl<'a> Walk<'a> {
    /// Goes on to the next decision and makes it in every way there is. `None` where the season ends before.
    fn next_choice(&mut self, mut going: Going<'a>) -> Result<Option<Choices<'a>>, Stop> {
        while going.is_on() {
            let Some(morning) = going.morning() else { break };
            let Some(why) = going.why(&morning) else {
                going.pass(morning, None);
                continue;
            };
            self.followed += 1;
            if self.followed > MOST_FOLLOWED {
                return Err(Stop::TooLarge);
            }
            let done = self.done;
            if (self.progress)(done).is_break() {
                return Err(Stop::Cancelled);
            }
            let quiet = |_: f64| (self.progress)(done);
            match going.every(&morning, why, MOST_MIXES, &quiet) {
                Ok(Some(every)) => {
                    let choices = every.into_iter().map(|decision| {
                        let mut next = going.clone();
                        next.pass(morning.clone(), decision);
                        next
                    });
                    return Ok(Some(choices.collect()));
                }
                Ok(None) => return Err(Stop::TooLarge),
                Err(NoMix::Cancelled) => return Err(Stop::Cancelled),
                Err(NoMix::Allowed(check, words)) => going.end(morning.date(), words, check),
            }
        }
        self.ended(going.run);
        Ok(None)
    }

    /// Follows seasons under way to their ends: this much of the work from so much on.
    fn branches(&mut self, choices: Choices<'a>, (from, all): (f64, f64)) -> Result<(), Stop> {
        let each = all / choices.len().max(1) as f64;
        for (i, going) in choices.into_iter().enumerate() {
            self.done = from + i as f64 * each;
            if self.is_beaten(&going.run) {
                continue;
            }
            if let Some(next) = self.next_choice(going)? {
                self.branches(next, (self.done, each))?;
            }
        }
        Ok(())
    }

    /// Whether the days so far are no better than the best season: what comes cannot make them better.
    fn is_beaten(&self, run: &Run) -> bool {
        let skies = self.daily.skies;
        let so_far = Score {
            moves: run.decisions.iter().map(|d| d.moves).sum(),
            ..Score::of_days(&skies.site, &skies.conditions, &run.days)
        };
        self.best.as_ref().is_some_and(|(best, _)| so_far.order(best) != Ordering::Less)
    }

    fn ended(&mut self, run: Run) {
        let score = Score::of(self.daily, &run);
        if self.best.as_ref().is_none_or(|(best, _)| score.order(best).is_lt()) {
            self.best = Some((score, Run { aims: None, ..run }));
        }
    }
}
