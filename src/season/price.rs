//! The price of today's choice: what a mix held until the next decision changes by the end of the season.
//!
//! Methods: `docs/methods.md`, section 8.

use std::sync::Mutex;

use chrono::{Days, NaiveDate, NaiveTime};
use rayon::prelude::*;

use crate::mix::{Perturbed, Setting};
use crate::profile::Profile;
use crate::rank::Progress;
use crate::site::Strategy;

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
    /// Days more outside the hard targets.
    pub outside: Change,
}

/// What a season comes to, as far as prices go.
#[derive(Debug, Clone, Copy)]
struct Cost {
    exhausted: Option<NaiveDate>,
    outside: u32,
}

/// The price of each mix if it is held until the next decision and the best mix of the day is set from then on: against
/// the first of them. `None` where the caller stops it, or the cast shows no water.
pub fn prices(of: &Pricing, mixes: &[&Setting], progress: Progress) -> Option<Vec<Price>> {
    let columns = of.perturbed.columns().take(PRICE_MEMBERS);
    let perturbed = columns.map(|column| Profile { column: column.clone(), ..of.start.clone() });
    let casts: Vec<Profile> = std::iter::once(of.start.clone()).chain(perturbed).collect();
    let casts: Vec<(Profile, NaiveDate)> =
        casts.iter().map(|cast| today(of, cast, progress)).collect::<Option<_>>()?;
    let jobs: Vec<(usize, usize)> =
        (0..casts.len()).flat_map(|cast| (0..mixes.len()).map(move |mix| (cast, mix))).collect();
    let done = Mutex::new(0_usize);
    let cost = |&(cast, mix): &(usize, usize)| {
        let (start, begins) = casts.get(cast)?;
        let cost = held(of, start, *begins, mixes.get(mix)?, progress)?;
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

/// The price of a mix, from the costs of every mix on the cast and on each member.
fn price(by_cast: &[&[Cost]], mix: usize) -> Option<Price> {
    let pairs: Vec<(Cost, Cost)> =
        by_cast.iter().filter_map(|costs| Some((*costs.first()?, *costs.get(mix)?))).collect();
    let later = |(base, this): &(Cost, Cost)| Some((this.exhausted? - base.exhausted?).num_days());
    let more = |(base, this): &(Cost, Cost)| i64::from(this.outside) - i64::from(base.outside);
    let (cast, members) = pairs.split_first()?;
    let outside = Change::of(more(cast), members.iter().map(more));
    let exhausted = later(cast).map(|days| Change::of(days, members.iter().filter_map(later)));
    Some(Price { exhausted, outside })
}

/// The pool on the day decided for, after what is set now has been held since the cast.
fn today(of: &Pricing, cast: &Profile, progress: Progress) -> Option<(Profile, NaiveDate)> {
    if of.begins >= of.on || of.now.is_none() {
        return Some((cast.clone(), of.begins));
    }
    let last = of.on.pred_opt()?;
    let days = of.plan.days.iter().filter(|day| day.date <= last).copied().collect::<Vec<_>>();
    if days.last().is_none_or(|day| day.date < last) {
        return Some((cast.clone(), of.begins));
    }
    let until = Plan { days, ..of.plan.clone() };
    // whoever is told how much is done is told of the seasons that follow
    let before =
        run(&Setup { plan: &until, ..setup(of, cast, of.begins, of.now, of.on) }, &|_| progress(0.0))?;
    let site = &of.skies.site;
    let at = of.on.and_time(NaiveTime::MIN).and_local_timezone(site.offset).single()?;
    Some((before.days.last()?.layers.profile(site, at)?, of.on))
}

fn setup<'a>(
    of: &Pricing<'a>,
    start: &'a Profile,
    begins: NaiveDate,
    now: Option<&'a Setting>,
    decides: NaiveDate,
) -> Setup<'a> {
    Setup {
        start,
        begins,
        decides,
        now,
        plan: of.plan,
        skies: of.skies,
        choosing: Choosing::By(Strategy::Best),
        decide_days: of.decide_days,
    }
}

/// What comes of holding a mix until the next decision.
fn held(of: &Pricing, start: &Profile, begins: NaiveDate, mix: &Setting, progress: Progress) -> Option<Cost> {
    let next = of.on.checked_add_days(Days::new(of.decide_days.into()))?;
    let setup = setup(of, start, begins, Some(mix), next);
    let season = run(&setup, &|_| progress(0.0))?;
    let site = season_site(&setup);
    let reached = reached::reached(&setup, &site, &season);
    let end = season.days.last().and_then(|day| day.date.succ_opt());
    let exhausted = match reached::exhausted(&reached, &season).first {
        Exhausted::On(date) => Some(date),
        Exhausted::NotBy(_) => end,
        Exhausted::Unknown(_) => None,
    };
    Some(Cost { exhausted, outside: Score::of(&setup, &season).days_outside })
}
