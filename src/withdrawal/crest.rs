//! Water over an edge: spillways, shutters, stacked leaves.
//!
//! Methods: `docs/methods.md`, section 3.

use std::f64::consts::PI;

use crate::profile::Column;
use crate::water::G_M_S2;

use super::limit::{Reach, Way};
use super::zone::{End, Side, Zone};

/// Coefficient c of the lower limit, q = c (Z0 + H) sqrt(g Z0 drho/rho) (Grace 1971, WES TR H-71-4; recalled).
const GRACE: f64 = 0.32;
/// Coefficient of two-layer hydraulic control, (2/3)^1.5 (derived).
const CONTROL: f64 = 0.544_331_053_951_817_3;
/// Free overfall, q = 1.84 H^1.5 in m and s (Francis 1883; recalled, and printed in most handbooks).
pub const FRANCIS: f64 = 1.84;

/// Which form gives the lower limit of a crest.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default)]
pub enum CrestForm {
    /// Grace 1971; where the zone is deeper than the crest is long, the smaller of it and that of a port.
    #[default]
    Overflow,
    /// Two-layer hydraulic control, with the same smaller-of rule.
    Control,
    /// Grace 1971, and where the zone is deeper than the crest is long, the larger of the two.
    Larger,
}

/// Flow over a free crest, m3/s, from the head on it.
///
/// # Units
/// Head and length m.
pub fn free_crest_flow_m3s(head_m: f64, length_m: f64) -> f64 {
    FRANCIS * length_m * head_m.max(0.0).powf(1.5)
}

/// Head on a free crest, m, from its flow; the inverse of [`free_crest_flow_m3s`].
pub fn free_crest_head_m(flow_m3s: f64, length_m: f64) -> f64 {
    (flow_m3s.max(0.0) / (FRANCIS * length_m)).powf(2.0 / 3.0)
}

/// Zone of a crest drawing `flow` (already times f^3). The upper limit is the surface, and the upper side takes
/// the bounded form of the shape (choice); the lower side is free, or bounded by the bed.
pub(super) fn crest(
    column: &Column,
    crest_m: f64,
    flow: f64,
    length_m: f64,
    form: CrestForm,
) -> Option<Zone> {
    let head = column.surface_m() - crest_m;
    if head <= 0.0 {
        return None;
    }
    let bed = column.bed_m();
    let (mut limit_m, mut bed_flow) = over(column, crest_m, flow, length_m, form);
    if crest_m - limit_m > length_m {
        let (round_m, round_flow) = round(column, crest_m + 0.5 * head, flow);
        if form == CrestForm::Larger {
            limit_m = limit_m.min(round_m);
            bed_flow = bed_flow.min(round_flow);
        } else {
            // not shallower than the crest is long, or the zone would jump back where it gets that deep
            limit_m = limit_m.max(round_m).min(crest_m - length_m);
            bed_flow = bed_flow.max(round_flow);
        }
    }
    let lower = Side {
        limit_m,
        end: if limit_m > bed { End::Free } else { End::Boundary },
        boundary_flow_m3s: Some(bed_flow),
        free_weight: if limit_m > bed { 1.0 } else { (bed_flow / flow).min(1.0) },
    };
    let upper =
        Side { limit_m: column.surface_m(), end: End::Boundary, boundary_flow_m3s: None, free_weight: 0.0 };
    Some(Zone::between(lower, upper, crest_m))
}

/// Lower limit of water drawn over the edge alone, m, the bed where none comes before it; and the flow that
/// just meets the bed, m3/s.
fn over(column: &Column, crest_m: f64, flow: f64, length_m: f64, form: CrestForm) -> (f64, f64) {
    let head = column.surface_m() - crest_m;
    let reach = Reach::new(column, crest_m, PI);
    // squared, as the search wants it
    let relation = |distance: f64, difference: f64| {
        let gravity = G_M_S2 * difference / reach.density;
        let depth = distance + head;
        let per_metre = match form {
            CrestForm::Overflow | CrestForm::Larger => GRACE * GRACE * depth * depth * gravity * distance,
            CrestForm::Control => CONTROL * CONTROL * gravity * depth.powi(3),
        };
        per_metre * length_m * length_m
    };
    let met = reach.meet(Way::Down, flow, relation);
    let (distance, difference) = reach.boundary(Way::Down);
    (met.unwrap_or(column.bed_m()), relation(distance, difference).sqrt())
}

/// The same of a port at mid-head: a crest shorter than its zone is deep draws from all round.
fn round(column: &Column, centre_m: f64, flow: f64) -> (f64, f64) {
    let reach = Reach::new(column, centre_m, PI);
    let met = reach.bounded(Way::Down, flow);
    (met.unwrap_or(column.bed_m()), reach.boundary_flow_m3s(Way::Down))
}
