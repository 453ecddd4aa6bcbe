//! How long water, and a rise of the water, take through a reach.
//!
//! Methods: `docs/methods.md`, section 6.

use crate::water::G_M_S2;

use super::Reach;

/// Roughness after Manning of a natural channel, s/m^(1/3) (recalled: Chow 1959, clean and winding; an input).
pub const ROUGHNESS: f64 = 0.035;

/// The bulk of a rise travels so many times as fast as the water (derived: wide channel, flow as depth to the 5/3).
pub const BULK_PER_WATER: f64 = 5.0 / 3.0;

/// Least flow that is given a time, m3/s (choice): below it a river stands.
const LEAST_FLOW_M3S: f64 = 1e-6;

/// Longest time through a reach, h (choice: eleven years; a flow near nothing would take for ever).
pub const MOST_TRAVEL_H: f64 = 1e5;

/// Seconds of an hour (standard).
const HOUR_S: f64 = 3600.0;

/// Hours of a flow by rows of flow and hours: a power of the flow between two rows, the nearest row outside them;
/// and whether one was held so. `None` without rows.
///
/// # Units
/// m3/s, rows m3/s and h; h.
///
/// # References
/// A power between velocity and flow as in hydraulic geometry, Leopold & Maddock 1953 (recalled); that the nearest row
/// is held is a choice.
pub fn hours_at(rows: &[(f64, f64)], flow_m3s: f64) -> Option<(f64, bool)> {
    let (first, last) = (*rows.first()?, *rows.last()?);
    if flow_m3s <= first.0 {
        return Some((first.1, flow_m3s < first.0));
    }
    let between = rows.windows(2).find_map(|pair| {
        let [(q0, h0), (q1, h1)] = *pair else { return None };
        (flow_m3s <= q1).then(|| h0 * (h1 / h0).powf((flow_m3s / q0).ln() / (q1 / q0).ln()))
    });
    Some(between.map_or((last.1, flow_m3s > last.0), |hours| (hours, false)))
}

impl Reach {
    /// Hours the water takes through the reach at a flow, and whether its table was held at an end. Without a table
    /// they follow from width and slope.
    ///
    /// # Units
    /// m3/s; h.
    ///
    /// # References
    /// Manning for a wide channel (standard): U = (sqrt(S)/n)^(3/5) (Q/B)^(2/5).
    pub fn water_h(&self, flow_m3s: f64) -> (f64, bool) {
        let flow = flow_m3s.max(LEAST_FLOW_M3S);
        hours_at(&self.travel_h, flow).unwrap_or_else(|| {
            let velocity = self.slope.map_or(flow / (self.width_m * self.depth_m), |slope| {
                (slope.sqrt() / self.roughness).powf(0.6) * (flow / self.width_m).powf(0.4)
            });
            ((self.length_m / velocity / HOUR_S).min(MOST_TRAVEL_H), false)
        })
    }

    /// Velocity of the water at a flow, m/s.
    pub fn velocity_m_s(&self, flow_m3s: f64) -> f64 {
        self.length_m / (self.water_h(flow_m3s).0 * HOUR_S)
    }

    /// Hours before which no change of flow can arrive: a front on shallow water.
    ///
    /// # Units
    /// m3/s; h.
    ///
    /// # References
    /// x/(U + sqrt(g h)) (derived: long waves).
    pub fn front_h(&self, flow_m3s: f64) -> f64 {
        self.length_m / (self.velocity_m_s(flow_m3s) + (G_M_S2 * self.depth_m).sqrt()) / HOUR_S
    }

    /// Hours the bulk of a rise takes at a flow: by the site's table, never later than the water; else by
    /// [`BULK_PER_WATER`].
    ///
    /// # Units
    /// m3/s; h.
    pub fn bulk_h(&self, flow_m3s: f64) -> f64 {
        let water = self.water_h(flow_m3s).0;
        hours_at(&self.rise_h, flow_m3s.max(LEAST_FLOW_M3S))
            .map_or(water / BULK_PER_WATER, |(hours, _)| hours.min(water))
    }
}
