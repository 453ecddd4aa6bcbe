//! Velocities at an opening and in a shaft, and what they ask for.
//!
//! Methods: `docs/methods.md`, section 4.

use crate::water::G_M_S2;

/// Gordon's coefficients for a straight and for a sidewise approach, s/m^(1/2) (recalled: Gordon 1970).
const GORDON: (f64, f64) = (0.55, 0.73);

/// Mean velocity through an opening, m/s; `None` where it has no area.
///
/// # Units
/// m3/s, m2; m/s.
pub fn entrance_velocity_m_s(flow_m3s: f64, area_m2: f64) -> Option<f64> {
    (area_m2 > 0.0).then(|| flow_m3s / area_m2)
}

/// Velocity head v^2/2g, m.
///
/// # Units
/// m/s; m.
pub fn velocity_head_m(velocity_m_s: f64) -> f64 {
    velocity_m_s * velocity_m_s / (2.0 * G_M_S2)
}

/// Velocity head of the flow up or down a well, which the split neglects, m; `None` without a plan area.
///
/// # Units
/// m3/s, m2; m.
pub fn shaft_velocity_head_m(flow_m3s: f64, plan_area_m2: f64) -> Option<f64> {
    entrance_velocity_m_s(flow_m3s, plan_area_m2).map(velocity_head_m)
}

/// Submergence below which an intake may draw air through a vortex, S = 0.55 to 0.73 V sqrt(D), m: for a straight
/// and for a sidewise approach. It only warns: published rules for one case differ fourfold.
///
/// # Units
/// Velocity at the opening m/s, its height m; m.
///
/// # References
/// Gordon 1970, Vortices at intakes, Water Power 22:137-138 (recalled, title and pages from memory).
pub fn gordon_submergence_m(velocity_m_s: f64, height_m: f64) -> (f64, f64) {
    let depth = velocity_m_s * height_m.max(0.0).sqrt();
    (GORDON.0 * depth, GORDON.1 * depth)
}
