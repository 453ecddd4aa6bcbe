//! What a search found.
//!
//! Methods: `docs/methods.md`, section 10.

use super::goal::whole;

/// Distance of the trade curve per bin, C (choice: finer than any bin, so that the curve is one).
const TRADE_STEP_C: f64 = 0.1;
/// Bins of the trade curve.
const TRADE_BINS: usize = 400;

/// A value with the number of the mix that has it.
pub(super) type At = (f64, u64);

/// No value, where the lower is kept.
pub(super) const NO_LOW: At = (f64::INFINITY, u64::MAX);
/// No value, where the higher is kept.
pub(super) const NO_HIGH: At = (f64::NEG_INFINITY, u64::MAX);

/// Misses of one rule of the whole.
#[derive(Debug, Clone, Copy)]
pub(super) struct Missed {
    /// Number of mixes.
    pub(super) count: u64,
    /// Smallest miss, in the rule's own unit, and the mix.
    pub(super) nearest: At,
}

/// What a search found. Every field is the same whatever the number of threads.
#[derive(Debug, Clone)]
pub(super) struct Found {
    /// Mixes held against every rule.
    pub(super) judged: u64,
    /// Mixes passed over because a level that parts share draws what is not to be drawn.
    pub(super) undrawn: u64,
    /// Mixes passed over because none of them can be the best of anything.
    pub(super) beaten: u64,
    /// Mixes that miss a rule of the whole.
    pub(super) refused: u64,
    /// Best key and number of each idea; [`NO_LOW`] where none is allowed.
    pub(super) best: Vec<At>,
    /// Coldest, warmest, least and most oxygen of allowed mixes.
    pub(super) coldest: At,
    pub(super) warmest: At,
    pub(super) least_oxygen: At,
    pub(super) most_oxygen: At,
    /// Most oxygen in each bin of distance from the preferred temperature.
    pub(super) trade: Vec<At>,
    /// Most oxygen in each bin or any nearer one.
    pub(super) nearer_mg_l: Vec<f64>,
    /// Misses of each rule of the whole.
    pub(super) missed: Vec<Missed>,
}

impl Found {
    pub(super) fn nothing(ideas: usize, rules: usize) -> Self {
        Self {
            judged: 0,
            undrawn: 0,
            beaten: 0,
            refused: 0,
            best: vec![NO_LOW; ideas],
            coldest: NO_LOW,
            warmest: NO_HIGH,
            least_oxygen: NO_LOW,
            most_oxygen: NO_HIGH,
            trade: vec![NO_HIGH; TRADE_BINS],
            nearer_mg_l: vec![f64::NEG_INFINITY; TRADE_BINS],
            missed: vec![Missed { count: 0, nearest: NO_LOW }; rules],
        }
    }

    /// The same to be beaten, with nothing counted.
    pub(super) fn to_beat(&self) -> Self {
        let missed = vec![Missed { count: 0, nearest: NO_LOW }; self.missed.len()];
        Self { judged: 0, undrawn: 0, beaten: 0, refused: 0, missed, ..self.clone() }
    }

    pub(super) fn merge(mut self, other: &Self) -> Self {
        self.judged += other.judged;
        self.undrawn += other.undrawn;
        self.beaten += other.beaten;
        self.refused += other.refused;
        for (a, b) in self.best.iter_mut().zip(&other.best) {
            lower(a, *b);
        }
        lower(&mut self.coldest, other.coldest);
        higher(&mut self.warmest, other.warmest);
        lower(&mut self.least_oxygen, other.least_oxygen);
        higher(&mut self.most_oxygen, other.most_oxygen);
        for (a, b) in self.trade.iter_mut().zip(&other.trade) {
            higher(a, *b);
        }
        for (a, b) in self.nearer_mg_l.iter_mut().zip(&other.nearer_mg_l) {
            *a = a.max(*b);
        }
        for (a, b) in self.missed.iter_mut().zip(&other.missed) {
            a.count += b.count;
            lower(&mut a.nearest, b.nearest);
        }
        self
    }

    /// Enters a mix among the ends of what is attainable: temperature (C), and oxygen (mg/L) where it is known.
    pub(super) fn ends(&mut self, temperature_c: f64, oxygen_mg_l: Option<f64>, number: u64) {
        lower(&mut self.coldest, (temperature_c, number));
        higher(&mut self.warmest, (temperature_c, number));
        if let Some(oxygen) = oxygen_mg_l {
            lower(&mut self.least_oxygen, (oxygen, number));
            higher(&mut self.most_oxygen, (oxygen, number));
        }
    }

    /// Enters the oxygen of a mix at its distance from the preferred temperature, C.
    #[inline]
    pub(super) fn trade(&mut self, distance_c: f64, at: At) {
        let bin = trade_bin(distance_c);
        if at.0 >= self.nearer_mg_l[bin] {
            higher(&mut self.trade[bin], at);
            for nearer in &mut self.nearer_mg_l[bin..] {
                if *nearer >= at.0 {
                    break;
                }
                *nearer = at.0;
            }
        }
    }

    /// Whether a mix at least so far from the preferred temperature with no more than that oxygen is beaten in both.
    #[inline]
    pub(super) fn beaten_in_both(&self, distance_c: f64, oxygen_mg_l: f64) -> bool {
        oxygen_mg_l < self.nearer_mg_l[trade_bin(distance_c)]
    }
}

/// Bin of the trade curve that holds a distance from the preferred temperature, C; the last holds all beyond.
#[inline]
#[expect(
    clippy::cast_possible_truncation,
    clippy::cast_sign_loss,
    reason = "a whole number from 0 to the last bin"
)]
fn trade_bin(distance_c: f64) -> usize {
    let last = (TRADE_BINS - 1) as f64;
    let bin = whole(distance_c * (1.0 / TRADE_STEP_C));
    (if bin < last { bin } else { last }) as u32 as usize
}

/// Keeps the lower value; of equal ones the mix that comes first.
#[inline]
pub(super) fn lower(kept: &mut At, new: At) {
    if new.0 < kept.0 || (new.0 <= kept.0 && new.1 < kept.1) {
        *kept = new;
    }
}

/// Keeps the higher value; of equal ones the mix that comes first.
#[inline]
pub(super) fn higher(kept: &mut At, new: At) {
    if new.0 > kept.0 || (new.0 >= kept.0 && new.1 < kept.1) {
        *kept = new;
    }
}
