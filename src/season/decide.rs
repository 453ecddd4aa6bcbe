//! The mix of a day inside a season: the ranking at splits of a tenth, the best two refined.
//!
//! Methods: `docs/methods.md`, section 8.

use chrono::NaiveDate;

use crate::mix::limits::{self, Before, Check, Move, Moves};
use crate::mix::{Asked, Day, Drawn, Setting, checks};
use crate::profile::Profile;
use crate::rank::{
    Criterion, Extreme, Full, Idea, Order, Progress, Question, Ranking, Stopped, rank_roughly,
};
use crate::site::{Outlet, SAME_OPENING, Site};

use super::refine::{Side, reach_c, refined};
use super::set::{Flowing, flowing};

/// Steps the release is cut into (choice: splits of a tenth).
pub(super) const STEPS: usize = 10;
/// Mixes refined (choice).
const REFINED: usize = 2;
/// Mixes computed in full until enough of them keep every limit (choice): what the ranking allows by a hair may break
/// one in full.
const TRIED: usize = 6;

/// Why a mix was decided on.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Why {
    /// The season begins.
    Begin,
    /// The days between decisions have passed, or the schedule says so.
    Due,
    /// What was set can no longer be kept.
    Forced(Check),
}

/// What was decided on a day.
#[derive(Debug, Clone, PartialEq)]
pub struct Decision {
    /// The day.
    pub date: NaiveDate,
    /// Why.
    pub why: Why,
    /// What is set; flows are those of the day on which it was decided, and keep their shares of the release after.
    pub asked: Asked,
    /// Gates moved.
    pub moves: usize,
    /// Which, from what was set as it would flow on the day; empty where nothing was known to be set.
    pub moved: Vec<Move>,
    /// Crew hours.
    pub crew_hours: f64,
    /// Longest notice that a move needs, days.
    pub lead_days: f64,
    /// Coldest and warmest release that an allowed mix gives, however many days the change to it takes, C.
    pub attainable_c: Option<[f64; 2]>,
    /// Limits of the change that it breaks, since no mix keeps them.
    pub past: Vec<Check>,
}

/// What a mix is decided on: the water and the wants of one day.
pub(super) struct Choice<'a> {
    /// The site on the day.
    pub(super) site: &'a Site,
    /// Its groups of outlets.
    pub(super) groups: &'a [Vec<usize>],
    /// The water.
    pub(super) profile: &'a Profile,
    /// What the rules ask.
    pub(super) day: &'a Day,
    /// The whole day and its release, m3/s.
    pub(super) blocks: [(f64, f64); 1],
    /// What is set before.
    pub(super) now: Option<&'a Setting>,
    /// What leaves the dam before.
    pub(super) before: Before,
    /// What counts first.
    pub(super) order: &'a [Criterion],
}

/// A mix decided on.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct Chosen {
    /// What is asked.
    pub(super) asked: Asked,
    /// Moves from what is set before.
    pub(super) moves: Moves,
    /// Which gates move.
    pub(super) moved: Vec<Move>,
    /// Coldest and warmest release that an allowed mix gives, C.
    pub(super) attainable_c: Option<[f64; 2]>,
    /// Limits of the change that it breaks.
    pub(super) past: Vec<Check>,
}

/// Why there is no mix.
#[derive(Debug, Clone, PartialEq)]
pub(super) enum NoMix {
    /// The caller stopped.
    Cancelled,
    /// None is allowed: the limit that stands in the way, where one does, and why in words.
    Allowed(Option<Check>, String),
}

/// A mix in full.
pub(super) struct Tried {
    pub(super) asked: Asked,
    pub(super) temperature_c: f64,
    moves: Moves,
    moved: Vec<Move>,
    still: Vec<Check>,
    change: Vec<Check>,
    key: f64,
    off_c: (f64, f64),
}

impl Choice<'_> {
    /// The best mix of the day: of the first mixes of the ranking that keep every limit in full, each refined, the one
    /// that comes first in the order, then the nearer to what is wanted.
    pub(super) fn best(&self, progress: Progress) -> Result<Chosen, NoMix> {
        let order = Order::of(&self.question(self.site));
        let free = self.ranked(false, progress)?;
        let first = self.kept(&free, &order, true);
        // the first of all that keeps the limits of the change is the first of those that keep them
        let kept = if first.first().is_some_and(|tried| tried.keeps(false)) {
            first.into_iter().filter(|tried| tried.keeps(false)).collect()
        } else {
            let narrowed = if first.is_empty() { None } else { Some(self.ranked(true, progress)?) };
            let strict = narrowed.map_or_else(Vec::new, |ranking| self.kept(&ranking, &order, false));
            if strict.is_empty() { first } else { strict }
        };
        let is_free = !kept.first().is_some_and(|tried| tried.keeps(false));
        let mut found: Vec<Tried> = Vec::new();
        for plain in kept.into_iter().take(REFINED) {
            let better = refined(self, &plain, &order).filter(|tried| tried.keeps(is_free));
            found.push(plain);
            found.extend(better);
        }
        let first = found.into_iter().reduce(|best, other| if other.before(&best) { other } else { best });
        first.map_or_else(|| Err(none_allowed(self.site, &free)), |best| Ok(self.chosen(best, &free, &order)))
    }

    /// The best mix of each of the first ideas of a ranking that keeps every limit in full, in their order.
    fn kept(&self, ranking: &Ranking, order: &Order, is_free: bool) -> Vec<Tried> {
        let tried = |idea: Idea| self.tried(idea.best.asked.first()?, order);
        let ideas = ranking.ideas(TRIED).into_iter();
        ideas.filter_map(tried).filter(|tried| tried.keeps(is_free)).collect()
    }

    /// Every mix allowed at splits of a tenth, where each set of open outlets allows no more than one and they are no
    /// more than `most`: then each is worth following for itself.
    pub(super) fn every(&self, most: usize, progress: Progress) -> Result<Option<Vec<Chosen>>, NoMix> {
        let order = Order::of(&self.question(self.site));
        let free = self.ranked(false, progress)?;
        let is_few =
            |ranking: &Ranking| ranking.allowed == ranking.mixes.len() as u64 && ranking.mixes.len() <= most;
        let narrowed = if is_few(&free) { None } else { Some(self.ranked(true, progress)?) };
        let ranking = narrowed.as_ref().filter(|ranking| !ranking.mixes.is_empty()).unwrap_or(&free);
        if !is_few(ranking) {
            return Ok(None);
        }
        let tried = ranking.mixes.iter().filter_map(|mix| self.tried(mix.asked.first()?, &order));
        let all: Vec<Tried> = tried.filter(|tried| tried.keeps(true)).collect();
        let is_free = !all.iter().any(|tried| tried.keeps(false));
        let kept = all.into_iter().filter(|tried| tried.keeps(is_free));
        let every: Vec<Chosen> = kept.map(|tried| self.chosen(tried, &free, &order)).collect();
        if every.is_empty() { Err(none_allowed(self.site, &free)) } else { Ok(Some(every)) }
    }

    /// What is set whatever the ranking says, with what could be reached instead.
    pub(super) fn given(&self, asked: &Asked, progress: Progress) -> Result<Chosen, NoMix> {
        let free = self.ranked(false, progress)?;
        let order = Order::of(&self.question(self.site));
        let tried = self.tried(asked, &order);
        tried.map(|tried| self.chosen(tried, &free, &order)).ok_or_else(|| none_allowed(self.site, &free))
    }

    /// What could be set, ranked, with the limits of the change or without: what those keep from one day can be reached
    /// in several. Gates stand shut, as they stand, or as wide as they go; where that allows no mix, in any of their
    /// positions.
    fn ranked(&self, with_change: bool, progress: Progress) -> Result<Ranking, NoMix> {
        let ranked = |site: &Site| {
            rank_roughly(&self.question(site), progress).map_err(|stopped| match stopped {
                Stopped::Cancelled => NoMix::Cancelled,
                Stopped::Refused(problem) => NoMix::Allowed(None, problem.words),
            })
        };
        let free = if with_change { None } else { Some(without_change(self.site)) };
        let site = free.as_ref().unwrap_or(self.site);
        if let Some(coarse) = with_fewer_positions(site, self.now) {
            let ranking = ranked(&coarse)?;
            if !ranking.mixes.is_empty() {
                return Ok(ranking);
            }
        }
        ranked(site)
    }

    fn question<'b>(&'b self, site: &'b Site) -> Question<'b> {
        Question {
            site,
            profile: self.profile,
            day: self.day,
            blocks: &self.blocks,
            now: self.now,
            before: self.before,
            steps: STEPS,
            order: self.order,
            without: &[],
        }
    }

    /// The water that is asked, in full.
    pub(super) fn flowing(&self, asked: &Asked) -> Option<Flowing> {
        flowing(self.site, self.groups, &self.profile.column, asked, self.profile.pool_m)
    }

    /// A mix in full. `None` where nothing flows.
    pub(super) fn tried(&self, asked: &Asked, order: &Order) -> Option<Tried> {
        let Flowing { setting, drawn, release } = self.flowing(asked)?;
        let column = &self.profile.column;
        let still = checks(self.site, column, &setting, self.profile.pool_m, self.day.date, &drawn, &release);
        let mut change = Vec::new();
        let moves = self.now.map_or_else(Moves::default, |now| {
            limits::change(self.site, now, self.before, &setting, &release, &mut change)
        });
        let cold_share = self.site.cold_water_c.first().map_or(0.0, |&cold_c| {
            let share = |d: &Drawn| d.zone.map_or(0.0, |zone| zone.colder_share(column, cold_c));
            drawn.iter().map(|d| d.level.sink.flow_m3s * share(d)).sum::<f64>() / release.flow_m3s
        });
        let (temperature_c, oxygen_mg_l) = (release.temperature_c, release.oxygen_below_mg_l);
        Some(Tried {
            asked: asked.clone(),
            temperature_c,
            key: order.key(&Full { temperature_c, oxygen_mg_l, cold_share }, &moves),
            off_c: order.off_c(temperature_c),
            moves,
            moved: self.now.map_or_else(Vec::new, |now| limits::moved(self.site, now, &setting)),
            still,
            change,
        })
    }

    /// Coldest and warmest release of a ranking, C.
    fn extremes_c(&self, ranking: &Ranking, order: &Order) -> Option<[f64; 2]> {
        let [coldest, warmest] = ranking.attainable_c.as_ref()?;
        let in_full = |extreme: &Extreme, side| reach_c(self, extreme.mix.asked.first()?, side, order);
        Some([in_full(coldest, Side::Colder)?, in_full(warmest, Side::Warmer)?])
    }

    fn chosen(&self, tried: Tried, free: &Ranking, order: &Order) -> Chosen {
        let extremes = self.extremes_c(free, order);
        // what is chosen is attainable: it may lie a hair beyond what splits of a tenth give
        let attainable_c =
            extremes.map(|[low, high]| [low.min(tried.temperature_c), high.max(tried.temperature_c)]);
        let past = tried.change.into_iter().filter(Check::broken).collect();
        Chosen { asked: tried.asked, moves: tried.moves, moved: tried.moved, attainable_c, past }
    }
}

impl Tried {
    /// Whether it keeps every limit; where no mix keeps those of the change, every other.
    pub(super) fn keeps(&self, is_free: bool) -> bool {
        !self.still.iter().any(Check::broken) && (is_free || !self.change.iter().any(Check::broken))
    }

    /// Whether it comes before another.
    fn before(&self, other: &Self) -> bool {
        let order = self.key.total_cmp(&other.key);
        order
            .then(self.off_c.0.total_cmp(&other.off_c.0))
            .then(self.off_c.1.total_cmp(&other.off_c.1))
            .is_lt()
    }
}

/// The site with gates that stand shut, as they stand now, or as wide as they go. `None` where they have no other
/// positions.
fn with_fewer_positions(site: &Site, now: Option<&Setting>) -> Option<Site> {
    let mut coarse = site.clone();
    // positions with crests of their own are levels of their own
    let plain = |o: &Outlet| o.positions.iter().all(|p| p.crest_m.is_none());
    for (index, outlet) in coarse.outlets.iter_mut().enumerate().filter(|(_, o)| plain(o)) {
        let widest = outlet.positions.iter().map(|p| p.opening).fold(0.0, f64::max);
        let gates = now.map_or(&[][..], |setting| &setting.gates);
        let is_now = |opening: f64| {
            gates.iter().any(|g| g.outlet == index && (g.opening - opening).abs() < SAME_OPENING)
        };
        outlet.positions.retain(|p| p.opening <= 0.0 || p.opening >= widest || is_now(p.opening));
    }
    let positions = |site: &Site| site.outlets.iter().map(|o| o.positions.len()).sum::<usize>();
    (positions(&coarse) < positions(site)).then_some(coarse)
}

/// The site without its limits of a change: moves, crew hours, rates, gates not to be moved under flow.
fn without_change(site: &Site) -> Site {
    let mut free = site.clone();
    let limits = &mut free.limits;
    (limits.max_moves, limits.max_crew_hours) = (None, None);
    (limits.flow_change_m3s_per_hour, limits.flow_change_m3s_per_day) = (None, None);
    (limits.temperature_change_c_per_hour, limits.temperature_change_c_per_day) = (None, None);
    free.outlets.iter_mut().for_each(|o| o.moves_under_flow = None);
    free
}

/// The limit that rejects the most mixes.
fn none_allowed(site: &Site, ranking: &Ranking) -> NoMix {
    let most = ranking.rejected.iter().max_by_key(|r| r.count).map(|r| r.check);
    let words = most.map_or_else(
        || "no outlet can give the release".to_owned(),
        |check| format!("every mix breaks a limit; most often: {}", check.words(site)),
    );
    NoMix::Allowed(most, words)
}
