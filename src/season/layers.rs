//! The pool as layers that move with their water.
//!
//! Methods: `docs/methods.md`, section 8.

use chrono::{DateTime, FixedOffset};

use crate::profile::{Column, Profile};
use crate::site::{Pool, Site};

/// A layer of one water.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Layer {
    /// Volume, m3.
    pub volume_m3: f64,
    /// Temperature, C.
    pub temperature_c: f64,
    /// Oxygen, mg/L; read only where [`Layers::has_oxygen`] holds.
    pub oxygen_mg_l: f64,
    /// Dissolved solids, g/kg.
    pub salt_g_per_kg: f64,
    /// Suspended solids, mg/L.
    pub suspended_mg_l: f64,
}

/// The pool as layers, from the bed up.
#[derive(Debug, Clone, PartialEq)]
pub struct Layers {
    /// From the bed up.
    pub layers: Vec<Layer>,
    /// Whether oxygen is known.
    pub has_oxygen: bool,
    /// Wanted thickness, m: thinner than half joins a neighbour, thicker than twice is cut.
    pub thickness_m: f64,
}

impl Layers {
    /// The water of a cast, in layers of a thickness (m). `None` for a pool without water.
    pub fn of_profile(site: &Site, profile: &Profile, thickness_m: f64) -> Option<Self> {
        let _ = (site, profile, thickness_m);
        None
    }

    /// Volume, m3.
    pub fn volume_m3(&self) -> f64 {
        self.layers.iter().map(|l| l.volume_m3).sum()
    }

    /// Heat above 0 C, J.
    pub fn heat_j(&self) -> f64 {
        let share = |l: &Layer| l.volume_m3 * l.temperature_c;
        crate::water::RHO_REF_KG_M3 * crate::water::CP_REF_J_KG_K * self.layers.iter().map(share).sum::<f64>()
    }

    /// Edges of the layers from the bed to the surface, m: one more than there are layers.
    pub fn edges_m(&self, pool: &Pool) -> Vec<f64> {
        let _ = pool;
        Vec::new()
    }

    /// The surface, m.
    pub fn pool_m(&self, pool: &Pool) -> f64 {
        self.edges_m(pool).last().copied().unwrap_or(pool.bed_m)
    }

    /// The column as withdrawal and intake see it: linear between the middles of the layers.
    pub fn column(&self, site: &Site) -> Option<Column> {
        let _ = site;
        None
    }

    /// The same as a cast at a moment, for what asks one.
    pub fn profile(&self, site: &Site, at: DateTime<FixedOffset>) -> Option<Profile> {
        let _ = (site, at);
        None
    }

    /// Volume colder than a temperature (C) between two elevations (m), m3: layers count as a whole or by their part.
    pub fn colder_m3(&self, pool: &Pool, threshold_c: f64, from_m: f64, to_m: f64) -> f64 {
        let _ = (pool, threshold_c, from_m, to_m);
        0.0
    }
}
