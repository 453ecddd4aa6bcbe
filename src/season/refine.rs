//! The exact split of a mix that the ranking found at splits of a tenth.
//!
//! Methods: `docs/methods.md`, section 8.

use crate::intake;
use crate::mix::Asked;
use crate::mix::split::Part;
use crate::rank::Order;

use super::decide::{Choice, STEPS, Tried};

/// The golden section: 2 over 1 + root of 5 (derived).
const GOLDEN: f64 = 0.618_033_988_749_895;
/// Sections until the wanted temperature is known to a millionth of what is sought through (choice).
const SECTIONS: usize = 30;
/// Most splits tried between the first two (choice): a release is nearly straight in its split.
const SPLITS: usize = 6;
/// A mix nearer to what is wanted is not refined, C (choice: a tenth of what is shown).
const NEAR_C: f64 = 0.01;
/// The split keeps within this share of one step (choice): the neighbours are mixes of the ranking themselves.
const WITHIN: f64 = 0.99;

/// A mix with the split of its two largest parts drawn in to where it comes nearest to what is wanted, everything else
/// kept, within a step of the ranking. `None` where there is nothing to gain: one part, or already near.
///
/// The temperature that comes nearest is sought first, which takes no water; then the split that gives it, by secants
/// that keep it between (false position, the end that stays halved: after the Illinois form, recalled).
pub(super) fn refined(choice: &Choice, plain: &Tried, order: &Order) -> Option<Tried> {
    let (between, [a, b]) = largest(choice, &plain.asked)?;
    let before = order.off_c(plain.temperature_c);
    if before.0 + before.1 < NEAR_C {
        return None;
    }
    let asked = |first_m3s: f64| plain.asked.with(between, [first_m3s, a + b - first_m3s]);
    let release_c = |first_m3s: f64| Some(choice.flowing(&asked(first_m3s))?.release.temperature_c);
    let step = WITHIN * choice.blocks[0].1 / STEPS as f64;
    let (mut low, mut high) = ((a - step).max((1.0 - WITHIN) * a), (a + step).min(a + WITHIN * b));
    let (at_low, at_high) = (release_c(low)?, release_c(high)?);
    let wanted_c = nearest_c(order, at_low.min(at_high), at_low.max(at_high));
    let (mut off_low, mut off_high) = (at_low - wanted_c, at_high - wanted_c);
    let mut best = if off_low.abs() < off_high.abs() { (low, off_low) } else { (high, off_high) };
    for _ in 0..SPLITS {
        if best.1.abs() < 0.5 * NEAR_C || off_low * off_high >= 0.0 {
            break;
        }
        let first_m3s = (low * off_high - high * off_low) / (off_high - off_low);
        let off = release_c(first_m3s)? - wanted_c;
        if off.abs() < best.1.abs() {
            best = (first_m3s, off);
        }
        // the end that stays counts half, so that it does not stay for good
        if off * off_high > 0.0 {
            (high, off_high, off_low) = (first_m3s, off, 0.5 * off_low);
        } else {
            (low, off_low, off_high) = (first_m3s, off, 0.5 * off_high);
        }
    }
    if order.off_c(wanted_c + best.1) < before { choice.tried(&asked(best.0), order) } else { None }
}

/// The temperature between two that lies least outside, and then nearest to what is preferred, C: both grow away from
/// it.
fn nearest_c(order: &Order, mut low: f64, mut high: f64) -> f64 {
    let inner = |low: f64, high: f64, share: f64| low + share * (high - low);
    for _ in 0..SECTIONS {
        let (x, y) = (inner(low, high, 1.0 - GOLDEN), inner(low, high, GOLDEN));
        if order.off_c(x) <= order.off_c(y) {
            high = y;
        } else {
            low = x;
        }
    }
    inner(low, high, 0.5)
}

/// A side of what is within reach.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum Side {
    /// The colder.
    Colder,
    /// The warmer.
    Warmer,
}

/// Halvings that find how far a split can go (choice: a thirtieth of a step).
const HALVINGS: usize = 5;

/// Release of the mix of a ranking that lies farthest on a side, C. Where more of it would come nearer to what is asked,
/// the split of its two largest parts is drawn out within a step as far as every limit but those of the change is kept:
/// a level may pass more than the last whole step of it. `None` where nothing flows.
pub(super) fn reach_c(choice: &Choice, asked: &Asked, side: Side, order: &Order) -> Option<f64> {
    let plain_c = choice.flowing(asked)?.release.temperature_c;
    let farther = |a: f64, b: f64| if side == Side::Colder { a < b } else { a > b };
    let beyond_c = plain_c + if side == Side::Colder { -NEAR_C } else { NEAR_C };
    let Some((between, [a, b])) = largest(choice, asked) else { return Some(plain_c) };
    if order.off_c(beyond_c).0 >= order.off_c(plain_c).0 {
        return Some(plain_c);
    }
    let step = WITHIN * choice.blocks[0].1 / STEPS as f64;
    let moved = |by_m3s: f64| asked.with(between, [a + by_m3s, b - by_m3s]);
    let release_c = |by_m3s: f64| choice.flowing(&moved(by_m3s)).map(|f| f.release.temperature_c);
    let ways = [step.min(WITHIN * b), -step.min(WITHIN * a)];
    let Some(way) = ways.into_iter().find(|way| release_c(*way).is_some_and(|c| farther(c, plain_c))) else {
        return Some(plain_c);
    };
    let allowed_c = |share: f64| {
        let tried = choice.tried(&moved(share * way), order)?;
        tried.keeps(true).then_some(tried.temperature_c)
    };
    if let Some(all_c) = allowed_c(1.0) {
        return Some(all_c);
    }
    let (mut low, mut high, mut found_c) = (0.0, 1.0, plain_c);
    for _ in 0..HALVINGS {
        let middle = 0.5 * (low + high);
        match allowed_c(middle) {
            Some(c) => (low, found_c) = (middle, c),
            None => high = middle,
        }
    }
    Some(if farther(found_c, plain_c) { found_c } else { plain_c })
}

/// The two largest parts that can be varied, with their flows, m3/s.
fn largest(choice: &Choice, asked: &Asked) -> Option<([Part; 2], [f64; 2])> {
    let outlets = &choice.site.outlets;
    let can_vary = |part: &Part| match part {
        Part::Outlet(outlet) => outlets.get(*outlet).is_some_and(|o| !intake::spills_by_itself(o)),
        Part::Well(_) => true,
    };
    let mut parts: Vec<(Part, f64)> = asked.parts().into_iter().filter(|p| can_vary(&p.0)).collect();
    parts.sort_by(|a, b| b.1.total_cmp(&a.1));
    let [a, b] = parts.get(..2)?.first_chunk::<2>()?;
    Some(([a.0, b.0], [a.1, b.1]))
}
