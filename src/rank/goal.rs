//! The order of mixes: criteria one after the other, each in steps no finer than can be told apart.
//!
//! Methods: `docs/methods.md`, section 10.

use crate::mix::{RuleToday, is_wish};
use crate::site::{Bins, Site};
use crate::target::{Figure, OxygenFigure, Today};

use super::Question;
use super::afar::{Afar, Seen};

/// A criterion of the order.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Criterion {
    /// How far the oxygen lies below the floor.
    Oxygen,
    /// How far the temperature lies outside its range.
    Range,
    /// How far it lies from the preferred temperature, beyond one bin.
    Preferred,
    /// Cold water spent.
    ColdWater,
    /// Moves by their cost, then crew hours.
    Moves,
}

impl Criterion {
    /// Every criterion in the order used unless another is asked for, with its name.
    pub const NAMES: [(&'static str, Self); 5] = [
        ("oxygen", Self::Oxygen),
        ("range", Self::Range),
        ("preferred", Self::Preferred),
        ("cold_water", Self::ColdWater),
        ("moves", Self::Moves),
    ];

    /// The usual order.
    pub const USUAL: [Self; 5] = {
        let [oxygen, range, preferred, cold_water, moves] = Self::NAMES;
        [oxygen.1, range.1, preferred.1, cold_water.1, moves.1]
    };

    /// The name used on the command line.
    pub fn name(self) -> &'static str {
        Self::NAMES.iter().find(|(_, c)| *c == self).map_or("", |(n, _)| n)
    }

    /// How many steps it takes in a key, as powers of two; moves take cost and hours one after the other.
    fn steps(self) -> f64 {
        match self {
            Self::Oxygen | Self::Range | Self::Preferred => STEPS,
            Self::ColdWater => COLD_STEPS,
            Self::Moves => MOVE_STEPS * MOVE_STEPS,
        }
    }
}

impl Criterion {
    /// The first criterion of an order in which two keys differ.
    pub fn first_apart(order: &[Self], a: f64, b: f64) -> Option<Self> {
        let mut weight: f64 = order.iter().map(|c| c.steps()).product();
        order.iter().copied().find(|criterion| {
            weight /= criterion.steps();
            let step = |key: f64| (key / weight).floor();
            step(a) < step(b) || step(a) > step(b)
        })
    }
}

/// Steps a criterion can take before it stays where it is (choice: 255 bins of 0.5 C are beyond any water). All
/// criteria together stay below 2^53, so that a key is a whole number that a float holds exactly.
const STEPS: f64 = 256.0;
/// The same for cold water, whose bins are shares of the release.
const COLD_STEPS: f64 = 128.0;
/// The same for the cost of moves and for crew hours.
const MOVE_STEPS: f64 = 1024.0;
/// Cost of moves is told apart to a tenth, crew hours to a quarter (choice).
const COST_STEP: f64 = 0.1;
const HOUR_STEP: f64 = 0.25;
/// A miss smaller than this is none, C and mg/L: round-off of a blend.
const ROUND_OFF: f64 = 1e-9;

/// Oxygen beyond any floor, mg/L (choice).
const PLENTY_MG_L: f64 = 1e12;

/// What is wanted of one statistic of the release.
#[derive(Debug, Clone, Copy)]
struct Wanted {
    low: f64,
    high: f64,
    /// Warmer than the first, or colder than the second, is away from what some rule prefers.
    preferred: (f64, f64),
    floor: f64,
}

impl Wanted {
    const NOTHING: Self = Self {
        low: f64::NEG_INFINITY,
        high: f64::INFINITY,
        preferred: (f64::INFINITY, f64::NEG_INFINITY),
        floor: f64::NEG_INFINITY,
    };

    /// Adds what a rule asks of today; a wish only draws the preferred temperature near.
    fn add(&mut self, today: &Today, wish: bool) {
        let low = today.low_asked_c();
        if !wish {
            self.low = self.low.max(low.unwrap_or(f64::NEG_INFINITY));
            self.high = self.high.min(today.high_c.unwrap_or(f64::INFINITY));
        }
        // where none is preferred, every temperature of the range is
        let preferred = [today.preferred_c.or(today.high_c), today.preferred_c.or(low)];
        self.preferred.0 = self.preferred.0.min(preferred[0].unwrap_or(f64::INFINITY));
        self.preferred.1 = self.preferred.1.max(preferred[1].unwrap_or(f64::NEG_INFINITY));
    }
}

/// What the water of `N` days is judged by, over time as a gauge sees it; a day may stand for several mixes, and has
/// then a range of each.
#[derive(Debug, Clone)]
pub(super) struct Days<const N: usize> {
    /// Least of the time mean, the greatest and the least temperature of the day, C; of a steady day only the first
    /// counts.
    pub(super) low_c: [[f64; N]; 3],
    /// The greatest of each.
    pub(super) high_c: [[f64; N]; 3],
    /// Greatest of the time mean and of the least oxygen, mg/L.
    pub(super) oxygen_mg_l: [[f64; N]; 2],
    /// Least cold water, as a share of the release.
    pub(super) cold_share: [f64; N],
    /// Least effort of the moves, as [`effort`] tells it.
    pub(super) effort: [f64; N],
}

impl<const N: usize> Default for Days<N> {
    fn default() -> Self {
        let none = [0.0; N];
        Self { low_c: [none; 3], high_c: [none; 3], oxygen_mg_l: [none; 2], cold_share: none, effort: none }
    }
}

/// The rules valid on a date and the order asked for, made ready for many mixes.
#[derive(Debug, Clone)]
pub(super) struct Goal {
    /// By mean, greatest and least of the day, at the dam.
    wanted: [Wanted; 3],
    /// What is wanted elsewhere, or depends on the temperature.
    afar: Afar,
    has_floor: bool,
    per_c: f64,
    per_mg_l: f64,
    per_share: f64,
    /// What a step of each criterion weighs in the key, in the order of [`Criterion::NAMES`].
    weights: [f64; 5],
}

impl Goal {
    /// What the rules valid on the day of a question ask, judged in its order. Every statistic of a steady day is held
    /// against its one temperature at the dam.
    pub(super) fn new(question: &Question) -> Self {
        let (site, order) = (question.site, question.order);
        let steady = question.blocks.len() == 1;
        let seen = Seen::of(question);
        let mut wanted = [Wanted::NOTHING; 3];
        let mut afar = Afar::default();
        let rules = question.day.rules(site);
        let conflicts = seen.conflicts(site, &rules);
        for rule in rules.iter() {
            let wish = is_wish(site, rule.target, &conflicts);
            let RuleToday { point, today, air, .. } = rule;
            match (point, today) {
                (None, Ok(today)) => {
                    for &i in at_dam(today.figure, steady) {
                        wanted[i].add(today, wish);
                    }
                }
                (Some(point), Ok(today)) => afar.bound(&seen, *point, today, wish),
                (_, Err(_)) => {}
            }
            match air.filter(|_| !wish) {
                Some(air) if point.is_none() && !air.share => {
                    let i = usize::from(!steady && air.figure == OxygenFigure::Min);
                    wanted[i].floor = wanted[i].floor.max(air.floor);
                }
                Some(air) => afar.floor(&seen, *point, air, steady),
                None => {}
            }
        }
        let Bins { temperature_c, oxygen_mg_l, cold_share } = site.bins;
        let mut weights = [0.0; 5];
        let mut weight = 1.0;
        for criterion in order.iter().rev() {
            weights[*criterion as usize] = weight;
            weight *= criterion.steps();
        }
        Self {
            has_floor: wanted.iter().any(|w| w.floor > f64::NEG_INFINITY) || afar.has_floor(),
            wanted,
            afar,
            per_c: 1.0 / temperature_c,
            per_mg_l: 1.0 / oxygen_mg_l,
            per_share: 1.0 / cold_share,
            weights,
        }
    }

    /// Least distance from the preferred temperature, C; where no rule prefers one, from the range. `S` statistics
    /// count: 1 for steady days, else 3.
    #[inline]
    pub(super) fn distances_c<const N: usize, const S: usize>(&self, days: &Days<N>) -> [f64; N] {
        let mut out = [0.0; N];
        for s in 0..S {
            let (w, low, high) = (&self.wanted[s], &days.low_c[s], &days.high_c[s]);
            for i in 0..N {
                out[i] = most(most(out[i], low[i] - w.preferred.0), w.preferred.1 - high[i]);
            }
        }
        self.afar.distances_c(days, &mut out);
        out
    }

    /// Least distance outside the ranges, C.
    #[inline]
    pub(super) fn outside_c<const N: usize, const S: usize>(&self, days: &Days<N>) -> [f64; N] {
        let mut out = [0.0; N];
        for s in 0..S {
            let (w, low, high) = (&self.wanted[s], &days.low_c[s], &days.high_c[s]);
            for i in 0..N {
                out[i] = most(most(out[i], w.low - high[i]), low[i] - w.high);
            }
        }
        self.afar.outside_c(days, &mut out);
        out
    }

    /// The keys by which mixes are ordered, whole numbers: the smaller the better; of several mixes none has a smaller
    /// one. Every line goes over all days, so that they are computed side by side.
    #[inline]
    pub(super) fn keys<const N: usize, const S: usize>(
        &self,
        days: &Days<N>,
        distances_c: &[f64; N],
    ) -> [f64; N] {
        let range = self.outside_c::<N, S>(days);
        let mut short = [0.0; N];
        for s in 0..S {
            let (w, oxygen) = (&self.wanted[s], &days.oxygen_mg_l[usize::from(s > 0)]);
            for i in 0..N {
                short[i] = most(short[i], w.floor - oxygen[i]);
            }
        }
        self.afar.short_mg_l(days, &mut short);
        let [w_oxygen, w_range, w_far, w_cold, w_moves] = self.weights;
        let mut key = [0.0; N];
        // a miss of part of a bin is a whole one; one step is kept for oxygen that is not known
        for i in 0..N {
            let missed = if short[i] > ROUND_OFF { 2.0 } else { 0.0 };
            key[i] = w_oxygen * (missed + up_to(whole(short[i] * self.per_mg_l - ROUND_OFF), STEPS - 3.0));
        }
        for i in 0..N {
            let missed = if range[i] > ROUND_OFF { 1.0 } else { 0.0 };
            key[i] += w_range * (missed + up_to(whole(range[i] * self.per_c - ROUND_OFF), STEPS - 2.0));
        }
        for (key, far) in key.iter_mut().zip(distances_c) {
            *key += w_far * up_to(whole(far * self.per_c + ROUND_OFF), STEPS - 1.0);
        }
        for (key, cold) in key.iter_mut().zip(&days.cold_share) {
            *key += w_cold * up_to(whole(cold * self.per_share + ROUND_OFF), COLD_STEPS - 1.0);
        }
        for (key, effort) in key.iter_mut().zip(&days.effort) {
            *key += w_moves * up_to(*effort, MOVE_STEPS * MOVE_STEPS - 1.0);
        }
        key
    }

    /// The keys of the same days with oxygen unknown: after oxygen known to keep the floor, before any that does not.
    pub(super) fn keys_unknown<const N: usize, const S: usize>(
        &self,
        days: &Days<N>,
        distances_c: &[f64; N],
    ) -> [f64; N] {
        let told = Days { oxygen_mg_l: [[PLENTY_MG_L; N]; 2], ..days.clone() };
        let unknown = if self.has_floor { self.weights[0] } else { 0.0 };
        self.keys::<N, S>(&told, distances_c).map(|key| key + unknown)
    }
}

/// Steps of cost and of crew hours by which efforts are told apart: a tenth and a quarter, or wider where all gates of
/// the site together would come to more steps than a key holds.
#[derive(Debug, Clone, Copy)]
pub(super) struct Efforts {
    cost: f64,
    hours: f64,
}

impl Efforts {
    pub(super) fn of(site: &Site) -> Self {
        let outlets = site.outlets.len() as f64;
        let step = |least: f64, all: f64| least.max(all / (MOVE_STEPS - 1.0 - outlets).max(1.0));
        Self {
            cost: step(COST_STEP, site.outlets.iter().map(|o| o.crew.cost).sum()),
            hours: step(HOUR_STEP, site.outlets.iter().map(|o| o.crew.hours).sum()),
        }
    }

    /// Effort of the moves of one unit: steps of their cost, then of their crew hours, in one whole number. Efforts of
    /// several units add up.
    pub(super) fn effort(self, cost: f64, crew_hours: f64) -> f64 {
        whole(cost / self.cost + 0.5) * MOVE_STEPS + whole(crew_hours / self.hours + 0.5)
    }
}

/// Which of mean, greatest and least of the day a figure at the dam is.
fn at_dam(figure: Figure, steady: bool) -> &'static [usize] {
    match figure {
        // shown with every mix, and not ordered by
        Figure::HourlyChange => &[],
        _ if steady => &[0],
        Figure::Both => &[1, 2],
        Figure::Min => &[2],
        Figure::Max => &[1],
        Figure::Mean => &[0],
    }
}

/// The larger of two numbers that are numbers.
#[inline]
pub(super) fn most(a: f64, b: f64) -> f64 {
    if a > b { a } else { b }
}

#[inline]
fn up_to(steps: f64, last: f64) -> f64 {
    if steps < last { steps } else { last }
}

/// A float this large has no room for parts of one (exact: 2^52).
const WHOLE: f64 = 4_503_599_627_370_496.0;

/// The whole part of a number from 0 up, 0 below: to the nearest whole number of half a step less. Several lanes at
/// once can do it, which a cast cannot.
#[inline]
pub(super) fn whole(steps: f64) -> f64 {
    let nearest = (steps - 0.5 + 1e-12) + WHOLE - WHOLE;
    if nearest > 0.0 { nearest } else { 0.0 }
}
