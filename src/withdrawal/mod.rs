//! The withdrawal zone of one level: its limits, its velocity shape, the water it draws.
//!
//! A [`Sink`] is where the water leaves and how much; [`zone`] finds between which limits it comes and
//! [`Zone::draw`] blends what lies there. Everything is a pure function of the column and the sink.

mod crest;
mod limit;
mod shape;
mod zone;

pub use crest::{CrestForm, FRANCIS, free_crest_flow_m3s, free_crest_head_m};
pub use limit::{boundary_factor, first_entrainment_flow_m3s, linear_limit_m};
pub use shape::{Draw, NOISE_KG_M3};
pub use zone::{End, Side, Zone};

use std::f64::consts::PI;

use crate::profile::Column;

/// Where the water leaves.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Opening {
    /// A submerged port, taken as a point at its centre-line.
    Port {
        /// Withdrawal angle, rad.
        angle_rad: f64,
    },
    /// Water over an edge.
    Crest {
        /// Length of the crest, m.
        length_m: f64,
        /// Which published form gives the lower limit.
        form: CrestForm,
    },
}

impl Opening {
    /// A port in a straight face.
    pub const FACE: Self = Self::Port { angle_rad: PI };
}

/// One level acting as a sink.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Sink {
    /// Centre-line, or the crest, m.
    pub centre_m: f64,
    /// Flow, m3/s, above zero.
    pub flow_m3s: f64,
    /// Kind and angle.
    pub opening: Opening,
}

/// Less than this is no flow, m3/s (choice): its square would be lost in the search for a limit.
pub const LEAST_FLOW_M3S: f64 = 1e-60;

/// The zone of one sink.
///
/// # Units
/// SI. `zone_factor` is the factor f on the thickness of the zone (1 as published): the flow enters the
/// limits, the boundary factor and the shape as Q f^3 and nothing else.
///
/// `None` when the sink lies outside the water or gives nothing.
///
/// # References
/// Bohan & Grace 1973, US Army WES TR H-73-4 (recalled); boundary factor and angle WES TR E-87-2, 1987
/// (recalled); see `docs/methods.md`, section 3.
pub fn zone(column: &Column, sink: &Sink, zone_factor: f64) -> Option<Zone> {
    let inside = (column.bed_m()..=column.surface_m()).contains(&sink.centre_m);
    if !inside || sink.flow_m3s < LEAST_FLOW_M3S {
        return None;
    }
    let flow = sink.flow_m3s * zone_factor.powi(3);
    match sink.opening {
        Opening::Port { angle_rad } => Some(zone::port(column, sink.centre_m, flow, angle_rad)),
        Opening::Crest { length_m, form } => crest::crest(column, sink.centre_m, flow, length_m, form),
    }
}
