//! The exact split of a mix that the ranking found at splits of a tenth.
//!
//! Methods: `docs/methods.md`, section 8.

use crate::intake;
use crate::mix::Asked;
use crate::mix::split::Part;
use crate::rank::Order;

use super::decide::{Choice, STEPS, Tried};

/// A split is drawn in so often, each time to 0.62 of what is left (choice: a fifth of the release to a thousandth).
const DRAWN_IN: usize = 11;
/// The golden section: 2 over 1 + root of 5 (derived).
const GOLDEN: f64 = 0.618_033_988_749_895;
/// A mix nearer to what is wanted is not refined, C (choice: a tenth of what is shown).
const NEAR_C: f64 = 0.01;
/// The split keeps within this share of one step (choice): the neighbours are mixes of the ranking themselves.
const WITHIN: f64 = 0.99;

/// A mix with the split of its two largest parts drawn in to where it comes nearest to what is wanted, everything else
/// kept, within a step of the ranking. `None` where there is nothing to gain: one part, or already near.
pub(super) fn refined(choice: &Choice, plain: &Tried, order: &Order) -> Option<Tried> {
    let (between, [a, b]) = largest(choice, &plain.asked)?;
    let asked = |first_m3s: f64| plain.asked.with(between, [first_m3s, a + b - first_m3s]);
    let off_c = |first_m3s: f64| {
        let water = choice.flowing(&asked(first_m3s));
        water.map_or((f64::INFINITY, f64::INFINITY), |w| order.off_c(w.release.temperature_c))
    };
    let before = order.off_c(plain.temperature_c);
    if before.0 + before.1 < NEAR_C {
        return None;
    }
    let step = WITHIN * choice.blocks[0].1 / STEPS as f64;
    let (mut low, mut high) = ((a - step).max((1.0 - WITHIN) * a), (a + step).min(a + WITHIN * b));
    let inner = |low: f64, high: f64, share: f64| low + share * (high - low);
    let (mut x, mut y) = (inner(low, high, 1.0 - GOLDEN), inner(low, high, GOLDEN));
    let (mut at_x, mut at_y) = (off_c(x), off_c(y));
    for _ in 0..DRAWN_IN {
        if at_x <= at_y {
            (high, y, at_y) = (y, x, at_x);
            x = inner(low, high, 1.0 - GOLDEN);
            at_x = off_c(x);
        } else {
            (low, x, at_x) = (x, y, at_y);
            y = inner(low, high, GOLDEN);
            at_y = off_c(y);
        }
    }
    let (at, first_m3s) = if at_x <= at_y { (at_x, x) } else { (at_y, y) };
    if at < before { choice.tried(&asked(first_m3s), order) } else { None }
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
