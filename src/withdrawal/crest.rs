//! Water over an edge: spillways, shutters, stacked leaves.

use std::f64::consts::PI;

use crate::profile::Column;
use crate::water::G_M_S2;

use super::limit::{Reach, Way};
use super::zone::{End, Side, Zone, port};

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
    let reach = Reach { column, centre_m: crest_m, density: column.density_kg_m3(crest_m), angle: 1.0 };
    let relation = |distance: f64, difference: f64| {
        let gravity = G_M_S2 * difference / reach.density;
        let per_metre = match form {
            CrestForm::Overflow | CrestForm::Larger => {
                GRACE * (distance + head) * (gravity * distance).sqrt()
            }
            CrestForm::Control => CONTROL * gravity.sqrt() * (distance + head).powf(1.5),
        };
        per_metre * length_m
    };
    let met = reach.meet(Way::Down, |distance, difference| relation(distance, difference) - flow);
    let bed = column.bed_m();
    let bed_flow = relation(
        crest_m - bed,
        column.node_density_kg_m3().first().map_or(0.0, |rho| (rho - reach.density).abs()),
    );
    let lower = Side {
        limit_m: met.unwrap_or(bed),
        end: if met.is_some() { End::Free } else { End::Boundary },
        boundary_flow_m3s: Some(bed_flow),
        free_weight: if met.is_some() { 1.0 } else { (bed_flow / flow).min(1.0) },
    };
    let upper =
        Side { limit_m: column.surface_m(), end: End::Boundary, boundary_flow_m3s: None, free_weight: 0.0 };
    let over = Zone::between(lower, upper, crest_m);
    if crest_m - lower.limit_m <= length_m {
        return Some(over);
    }
    // deeper than long: the crest draws from all round, like a port
    let round = port(column, crest_m + 0.5 * head, flow, PI);
    let smaller = round.thickness_m() < over.thickness_m();
    Some(if smaller == (form != CrestForm::Larger) { round } else { over })
}
