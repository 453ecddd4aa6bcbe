//! The order of mixes: criteria one after the other, each in steps no finer than can be told apart.
//!
//! Methods: `docs/methods.md`, section 10.

use chrono::NaiveDate;

use crate::site::{Bins, Site};
use crate::target::{Statistic, Target};

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

    /// The name used on the command line.
    pub fn name(self) -> &'static str {
        Self::NAMES.iter().find(|(_, c)| *c == self).map_or("", |(n, _)| n)
    }

    /// Bits its steps take in a key.
    fn bits(self) -> u32 {
        match self {
            Self::Oxygen | Self::Range | Self::Preferred => BITS,
            Self::ColdWater => COLD_BITS,
            Self::Moves => 2 * MOVE_BITS,
        }
    }
}

/// Steps of one criterion go up to 2^BITS - 1 and stay there (choice: 1023 bins of 0.5 C are beyond any water).
const BITS: u32 = 10;
/// The same for cold water: its bins are shares of the release.
const COLD_BITS: u32 = 8;
/// The same for moves and for crew hours.
const MOVE_BITS: u32 = 12;
/// Cost of moves is told apart to a hundredth, crew hours to a tenth (choice).
const COST_STEPS: f64 = 100.0;
const HOUR_STEPS: f64 = 10.0;
/// Distance of the trade curve per bin, C (choice: finer than any bin, so that the curve is one).
pub(super) const TRADE_STEP_C: f64 = 0.1;
/// A miss smaller than this is none, C and mg/L: round-off of a blend.
const ROUND_OFF: f64 = 1e-9;

/// What is wanted of one statistic of the release.
#[derive(Debug, Clone, Copy)]
struct Wanted {
    low: f64,
    high: f64,
    /// Least and greatest preferred temperature of the rules; infinite the wrong way round where none.
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

    fn add(&mut self, rule: &Target) {
        self.low = self.low.max(rule.low_kept_c().unwrap_or(f64::NEG_INFINITY));
        self.high = self.high.min(rule.high_kept_c().unwrap_or(f64::INFINITY));
        if let Some(preferred) = rule.preferred_c {
            self.preferred = (self.preferred.0.min(preferred), self.preferred.1.max(preferred));
        }
        self.floor = self.floor.max(rule.oxygen_min_mg_l.unwrap_or(f64::NEG_INFINITY));
    }
}

/// What a day's water is judged by: over time, as a gauge sees it.
#[derive(Debug, Clone, Copy)]
pub(super) struct Day {
    /// Time mean, greatest and least temperature, C.
    pub(super) temperature_c: [f64; 3],
    /// Time mean and least oxygen, mg/L.
    pub(super) oxygen_mg_l: [f64; 2],
    /// Oxygen is known in every block.
    pub(super) oxygen_known: bool,
    /// Cold water as a share of the release.
    pub(super) cold_share: f64,
    /// Cost of moves, and crew hours.
    pub(super) cost: f64,
    pub(super) hours: f64,
}

/// The rules valid on a date and the order asked for, made ready for many mixes.
#[derive(Debug, Clone)]
pub(super) struct Goal {
    /// By mean, greatest and least of the day.
    wanted: [Wanted; 3],
    per_c: f64,
    per_mg_l: f64,
    per_share: f64,
    /// By how much each criterion's steps are shifted in the key, in the order of [`Criterion::NAMES`].
    shifts: [u32; 5],
}

impl Goal {
    /// The rules of a site valid on a date, judged in an order. Rules for other points than the dam are left out.
    pub(super) fn new(site: &Site, date: NaiveDate, order: &[Criterion]) -> Self {
        let mut wanted = [Wanted::NOTHING; 3];
        for rule in site.targets.iter().filter(|t| t.span.contains(date) && t.point == "dam") {
            let by = match rule.statistic {
                Statistic::DailyMean => 0,
                Statistic::DailyMax | Statistic::SevenDayMeanOfMaxima => 1,
                Statistic::DailyMin => 2,
                Statistic::Instantaneous => {
                    wanted[2].add(rule);
                    1
                }
            };
            wanted[by].add(rule);
        }
        let Bins { temperature_c, oxygen_mg_l, cold_share } = site.bins;
        let mut shifts = [0; 5];
        let mut used = 0;
        for criterion in order.iter().rev() {
            shifts[*criterion as usize] = used;
            used += criterion.bits();
        }
        Self {
            wanted,
            per_c: 1.0 / temperature_c,
            per_mg_l: 1.0 / oxygen_mg_l,
            per_share: 1.0 / cold_share,
            shifts,
        }
    }

    /// The same with every statistic of a steady day held against its one temperature.
    pub(super) fn steady(mut self) -> Self {
        let [mean, most, least] = self.wanted;
        let all = [mean, most, least];
        let fold = |read: fn(&Wanted) -> f64, pick: fn(f64, f64) -> f64| {
            all.iter().map(read).fold(read(&mean), pick)
        };
        self.wanted[0] = Wanted {
            low: fold(|w| w.low, f64::max),
            high: fold(|w| w.high, f64::min),
            preferred: (fold(|w| w.preferred.0, f64::min), fold(|w| w.preferred.1, f64::max)),
            floor: fold(|w| w.floor, f64::max),
        };
        self.wanted[1] = Wanted::NOTHING;
        self.wanted[2] = Wanted::NOTHING;
        self
    }

    /// Distance outside the ranges, C, and below the oxygen floors, mg/L; 0 inside.
    #[inline]
    fn misses(&self, day: &Day, statistics: usize) -> (f64, f64) {
        let (mut range, mut oxygen) = (0.0_f64, 0.0_f64);
        for (i, w) in self.wanted.iter().take(statistics).enumerate() {
            let t = day.temperature_c[i];
            range = range.max(w.low - t).max(t - w.high);
            oxygen = oxygen.max(w.floor - day.oxygen_mg_l[usize::from(i > 0)]);
        }
        (range, oxygen)
    }

    /// Whether any oxygen floor is set.
    pub(super) fn has_floor(&self) -> bool {
        self.wanted.iter().any(|w| w.floor > f64::NEG_INFINITY)
    }

    /// Whether every range and floor is kept.
    pub(super) fn met(&self, day: &Day) -> bool {
        let (range, oxygen) = self.misses(day, 3);
        range <= ROUND_OFF && (!self.has_floor() || (day.oxygen_known && oxygen <= ROUND_OFF))
    }

    /// Distance from the preferred temperature, C; where no rule prefers one, from the range.
    #[inline]
    pub(super) fn distance_c(&self, day: &Day, statistics: usize) -> f64 {
        let mut distance = 0.0_f64;
        for (i, w) in self.wanted.iter().take(statistics).enumerate() {
            let t = day.temperature_c[i];
            distance = if w.preferred.0 <= w.preferred.1 {
                distance.max(t - w.preferred.0).max(w.preferred.1 - t)
            } else {
                distance.max(w.low - t).max(t - w.high)
            };
        }
        distance
    }

    /// The key by which mixes are ordered: the smaller the better. Unknown oxygen comes after oxygen known to keep
    /// the floor and before any that does not. `statistics` is 1 for a steady day.
    #[inline]
    pub(super) fn key(&self, day: &Day, statistics: usize, distance_c: f64) -> u64 {
        let (range, oxygen) = self.misses(day, statistics);
        let oxygen_step = if !self.has_floor() {
            0
        } else if !day.oxygen_known {
            1
        } else if oxygen > ROUND_OFF {
            1 + whole((oxygen * self.per_mg_l).ceil(), BITS)
        } else {
            0
        };
        let range_step = if range > ROUND_OFF { whole((range * self.per_c).ceil(), BITS) } else { 0 };
        (oxygen_step.min((1 << BITS) - 1) << self.shifts[0])
            | (range_step << self.shifts[1])
            | (whole(distance_c * self.per_c + ROUND_OFF, BITS) << self.shifts[2])
            | (whole(day.cold_share * self.per_share + ROUND_OFF, COLD_BITS) << self.shifts[3])
            | (((whole(day.cost * COST_STEPS + 0.5, MOVE_BITS) << MOVE_BITS)
                | whole(day.hours * HOUR_STEPS + 0.5, MOVE_BITS))
                << self.shifts[4])
    }
}

/// A number of steps from 0 to what some bits hold.
#[inline]
#[expect(clippy::cast_possible_truncation, clippy::cast_sign_loss, reason = "the cast saturates and drops the part below one")]
fn whole(steps: f64, bits: u32) -> u64 {
    (steps as u64).min((1 << bits) - 1)
}
