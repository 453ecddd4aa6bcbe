//! Both limits of a port, and where its velocity peaks.
//!
//! Methods: `docs/methods.md`, section 3.

use std::f64::consts::FRAC_PI_2;

use crate::profile::Column;

use super::limit::{Reach, Way};

/// What ends a zone on one side.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum End {
    /// Density holds it.
    Free,
    /// The bed or the surface.
    Boundary,
}

/// One side of a zone.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Side {
    /// Elevation of the limit, m.
    pub limit_m: f64,
    /// What ends it.
    pub end: End,
    /// Flow whose free limit just meets the boundary on this side, m3/s; `None` for a crest's upper side.
    pub boundary_flow_m3s: Option<f64>,
    /// Weight w of the free form of the shape: 1 on a free side, less the harder the boundary cuts.
    pub free_weight: f64,
}

/// A withdrawal zone.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Zone {
    /// Towards the bed.
    pub lower: Side,
    /// Towards the surface.
    pub upper: Side,
    /// Level of greatest velocity, m.
    pub peak_m: f64,
    /// Centre-line, or the crest, m.
    pub centre_m: f64,
}

impl Zone {
    /// Thickness, m.
    pub fn thickness_m(&self) -> f64 {
        self.upper.limit_m - self.lower.limit_m
    }

    /// Zone between two sides about a centre-line, with its peak by
    /// Y_L/H = sin^2((pi/2) Z_L/H) (Bohan & Grace 1973, recalled).
    pub(super) fn between(lower: Side, upper: Side, centre_m: f64) -> Self {
        let thickness = upper.limit_m - lower.limit_m;
        let share = if thickness > 0.0 { (centre_m - lower.limit_m) / thickness } else { 0.5 };
        // round-off must not lift the peak of a sink at the surface out of its zone
        let peak_m = (lower.limit_m + thickness * (FRAC_PI_2 * share).sin().powi(2)).min(upper.limit_m);
        Self { lower, upper, peak_m, centre_m }
    }
}

/// Limits of a port drawing `flow` (already times f^3), methods (3.1) and (3.2): both sides free first; when
/// exactly one is bounded, the other again with the boundary factor, which moves it outward and may bring
/// it to its own boundary; when both are, the whole column.
pub(super) fn port(column: &Column, centre_m: f64, flow: f64, angle_rad: f64) -> Zone {
    let reach = Reach::new(column, centre_m, angle_rad);
    let mut up = reach.free(Way::Up, flow);
    let mut down = reach.free(Way::Down, flow);
    match (up, down) {
        (None, Some(_)) => down = reach.bounded(Way::Down, flow),
        (Some(_), None) => up = reach.bounded(Way::Up, flow),
        _ => {}
    }
    let (up_flow, down_flow) = (reach.boundary_flow_m3s(Way::Up), reach.boundary_flow_m3s(Way::Down));
    let side = |limit: Option<f64>, way, boundary_flow: f64| Side {
        limit_m: limit.unwrap_or_else(|| reach.boundary_m(way)),
        end: if limit.is_some() { End::Free } else { End::Boundary },
        boundary_flow_m3s: Some(boundary_flow),
        free_weight: if limit.is_some() { 1.0 } else { (boundary_flow / flow).min(1.0) },
    };
    Zone::between(side(down, Way::Down, down_flow), side(up, Way::Up, up_flow), centre_m)
}
