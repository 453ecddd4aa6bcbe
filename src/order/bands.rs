//! Bands to avoid that lie between two places at which the dam is looked at, however narrow they are.
//!
//! Methods: `docs/methods.md`, section 11.

use std::rc::Rc;

use crate::mix::limits::{Check, Of, Rule};
use crate::site::{Avoid, Avoided};

use super::Moved;
use super::standing::{Put, Standing};
use super::works::{State, Works, key};

/// Where something stands, with what that makes of the dam.
pub(super) struct At {
    pub(super) put: Put,
    pub(super) state: Rc<State>,
}

/// Bands that are crossed, or entered, between two places near each other.
pub(super) fn crossed(works: &Works, standing: &Standing, moved: Moved, a: &At, b: &At) -> Vec<Check> {
    let mut out = Vec::new();
    let flowing = match moved {
        Moved::Gate(outlet) => standing.flows(works.site, outlet),
        _ => a.put.flow_m3s.max(b.put.flow_m3s) > 0.0,
    };
    if let (Moved::Gate(outlet) | Moved::Outlet(outlet), true) = (moved, flowing) {
        for (item, band) in bands(works, outlet) {
            if let Avoided::Openings(from, to) = band.what {
                let ends = (a.put.opening, b.put.opening);
                out.extend(inside(ends, (from, to), Rule::AvoidOpening, Of::Outlet(outlet), item));
            }
        }
    }
    let told =
        |of: &[Check], check: &Check| of.iter().find(|c| key(c) == key(check)).map_or(0.0, |c| c.found);
    let gone = a.state.bands.iter().filter(|c| b.state.bands.iter().all(|d| key(c) != key(d)));
    for check in b.state.bands.iter().chain(gone) {
        let Of::Outlet(outlet) = check.of else { continue };
        let band = bands(works, outlet).find(|(item, _)| *item == check.item);
        if let Some((item, &Avoid { what: Avoided::Flows(from, to), .. })) = band {
            let ends = (told(&a.state.bands, check), told(&b.state.bands, check));
            out.extend(inside(ends, (from, to), Rule::AvoidFlow, check.of, item));
        }
    }
    out.retain(|check| works.stops(check));
    out
}

fn bands<'a>(works: &Works<'a>, outlet: usize) -> impl Iterator<Item = (usize, &'a Avoid)> {
    works.site.outlets.get(outlet).into_iter().flat_map(|o| o.avoid.iter().enumerate())
}

/// The deepest point of a band between two figures; `None` where they do not reach into it.
fn inside(ends: (f64, f64), (from, to): (f64, f64), rule: Rule, of: Of, item: usize) -> Option<Check> {
    let (low, high) = (ends.0.min(ends.1).max(from), ends.0.max(ends.1).min(to));
    (low < high).then(|| {
        let found = (0.5 * (from + to)).clamp(low, high);
        let bound = if found - from < to - found { from } else { to };
        Check { rule, of, item, found, bound, room: (from - found).max(found - to) }
    })
}
