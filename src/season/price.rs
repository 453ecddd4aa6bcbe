//! The price of today's choice: what a mix held until the next decision changes by the end of the season.
//!
//! Methods: `docs/methods.md`, section 8.

use std::sync::Mutex;

use chrono::{Days, NaiveDate};
use rayon::prelude::*;

use crate::mix::{Asked, Perturbed, Setting};
use crate::profile::Profile;
use crate::rank::{Criterion, Progress};

use super::outcome::{Exhausted, season_site};
use super::plan::Plan;
use super::reached;
use super::run::{Choosing, Setup, run};
use super::skies::Skies;
use super::tally::Score;

/// Members behind the range of a price (choice: each costs a season for every mix).
pub const PRICE_MEMBERS: usize = 5;

/// What the prices of mixes are asked with.
#[derive(Clone, Copy)]
pub struct Pricing<'a> {
    /// The cast.
    pub start: &'a Profile,
    /// Its perturbed cases.
    pub perturbed: &'a Perturbed,
    /// The day of the cast.
    pub begins: NaiveDate,
    /// The day decided for: from the cast to it what is set now stays.
    pub on: NaiveDate,
    /// What is set now.
    pub now: Option<&'a Setting>,
    /// The plan.
    pub plan: &'a Plan,
    /// The case.
    pub skies: &'a Skies,
    /// Days until the next decision, and between those after it.
    pub decide_days: u32,
    /// What counts first where the mix of a later day is chosen.
    pub order: &'a [Criterion],
}

/// A change in days against the mix that prices are told against, with its range over the members.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Change {
    /// From the cast as it is.
    pub days: i64,
    /// Least and greatest over the members and the cast itself.
    pub range: (i64, i64),
}

impl Change {
    fn of(days: i64, members: impl Iterator<Item = i64>) -> Self {
        let range = members.fold((days, days), |(low, high), one| (low.min(one), high.max(one)));
        Self { days, range }
    }

    /// Whether it is more than can be told: all of its range lies on one side of no change.
    pub fn is_told(self) -> bool {
        self.range.0 > 0 || self.range.1 < 0
    }
}

/// The price of a mix.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Price {
    /// Days by which cold water runs out later; `None` where that is not known. A season in which it does not run out
    /// counts as running out on the day after its last.
    pub exhausted: Option<Change>,
    /// Whether, from the cast as it is, cold water lasts to the end of the season: with the mix that prices are told
    /// against, and with this one.
    pub lasts: [bool; 2],
    /// Days more outside the hard targets; `None` where a season stops before its plan, so that they cannot be counted.
    pub outside: Option<Change>,
}

/// What a season comes to, as far as prices go.
#[derive(Debug, Clone, Copy)]
struct Cost {
    exhausted: Option<NaiveDate>,
    lasts: bool,
    outside: Option<u32>,
}

/// The price of each mix if it is set on the day decided for and held until the next decision as long as no limit
/// stands against it, the best mix of the day from then on: against the first of them. From the cast to the day decided
/// for what is set now stays; where that is not known, the first of them. `None` where the caller stops it, or the cast
/// shows no water.
pub fn prices(of: &Pricing, mixes: &[&Setting], progress: Progress) -> Option<Vec<Price>> {
    let columns = of.perturbed.columns().take(PRICE_MEMBERS);
    let perturbed = columns.map(|column| Profile { column: column.clone(), ..of.start.clone() });
    let casts: Vec<Profile> = std::iter::once(of.start.clone()).chain(perturbed).collect();
    let jobs: Vec<(&Profile, &Setting)> =
        casts.iter().flat_map(|cast| mixes.iter().map(move |mix| (cast, *mix))).collect();
    let before = of.now.or(mixes.first().copied());
    let done = Mutex::new(0_usize);
    let cost = |&(cast, mix): &(&Profile, &Setting)| {
        let cost = held(of, cast, before, mix, progress)?;
        let count = done.lock().map_or(0, |mut done| {
            *done += 1;
            *done
        });
        progress(count as f64 / jobs.len() as f64).is_continue().then_some(cost)
    };
    let costs: Vec<Cost> = jobs.par_iter().map(cost).collect::<Option<_>>()?;
    let by_cast: Vec<&[Cost]> = costs.chunks(mixes.len().max(1)).collect();
    Some((0..mixes.len()).filter_map(|mix| price(&by_cast, mix)).collect())
}

/// The price of a mix, from the costs of every mix on the cast and on each member. What one member cannot tell has no
/// range.
fn price(by_cast: &[&[Cost]], mix: usize) -> Option<Price> {
    let pairs: Vec<(Cost, Cost)> =
        by_cast.iter().filter_map(|costs| Some((*costs.first()?, *costs.get(mix)?))).collect();
    let later = |(base, this): &(Cost, Cost)| Some((this.exhausted? - base.exhausted?).num_days());
    let more = |(base, this): &(Cost, Cost)| Some(i64::from(this.outside?) - i64::from(base.outside?));
    let change = |of: &dyn Fn(&(Cost, Cost)) -> Option<i64>| {
        let days: Vec<i64> = pairs.iter().map(of).collect::<Option<_>>()?;
        let (cast, members) = days.split_first()?;
        Some(Change::of(*cast, members.iter().copied()))
    };
    let (base, this) = pairs.first()?;
    Some(Price { exhausted: change(&later), lasts: [base.lasts, this.lasts], outside: change(&more) })
}

/// What comes of holding a mix from the day decided for to the next decision.
fn held(
    of: &Pricing,
    start: &Profile,
    before: Option<&Setting>,
    mix: &Setting,
    progress: Progress,
) -> Option<Cost> {
    let next = of.on.checked_add_days(Days::new(of.decide_days.into()))?;
    let setup = Setup {
        start,
        begins: of.begins,
        decides: of.on,
        now: before,
        plan: of.plan,
        skies: of.skies,
        choosing: Choosing::Held(Asked::of(&of.skies.site, mix), next),
        decide_days: of.decide_days,
        order: of.order,
    };
    // whoever is told how much is done is told of whole seasons
    let season = run(&setup, &|_| progress(0.0))?;
    let site = season_site(&setup);
    let reached = reached::reached(&setup, &site, &season);
    let end = season.days.last().and_then(|day| day.date.succ_opt());
    let (exhausted, lasts) = match reached::exhausted(&reached, &season).first {
        Exhausted::On(date) => (Some(date), false),
        Exhausted::NotBy(_) => (end, true),
        Exhausted::Unknown(_) => (None, false),
    };
    let score = Score::of(&setup, &season);
    let outside = (season.ended.is_none() && score.lost == 0).then_some(score.days_outside);
    Some(Cost { exhausted, lasts, outside })
}
