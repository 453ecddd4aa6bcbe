//! One stretch of the column between two neighbouring nodes, everything in it linear but density.

use crate::water;

use super::column::{OXYGEN_LOW_MG_L, Reading};
use super::samples::lerp;

/// Where the density of a stretch comes from.
#[derive(Debug, Clone, Copy)]
pub(super) enum Law {
    /// Pooled by levelling into one value, kg/m3.
    Flat(f64),
    /// Given at both ends, kg/m3.
    Given([f64; 2]),
    /// Water without solids.
    Fresh,
    /// Water with solids, whose grains have this density, kg/m3.
    Solids(f64),
}

/// A stretch between two neighbouring nodes; pairs are values at its lower and upper end.
#[derive(Debug, Clone, Copy)]
pub struct Stretch {
    /// Its ends, m.
    pub z_m: [f64; 2],
    /// One over its height, 1/m.
    pub(super) per_m: f64,
    /// Temperature, C.
    pub temperature_c: [f64; 2],
    /// Dissolved solids, g/kg.
    pub salt_g_per_kg: [f64; 2],
    /// Suspended solids, mg/L.
    pub suspended_mg_l: [f64; 2],
    /// Oxygen, mg/L; says nothing where none is read.
    pub oxygen_mg_l: [f64; 2],
    /// Width, any constant factor; 1 without widths.
    pub width: [f64; 2],
    /// No oxygen reading reaches here.
    pub oxygen_missing: bool,
    pub(super) law: Law,
    /// Levelled density is `shift + scale * measured`.
    pub(super) shift: f64,
    pub(super) scale: f64,
}

impl Stretch {
    /// How far up the stretch an elevation lies, 0 to 1.
    #[inline]
    pub fn share(&self, z: f64) -> f64 {
        (z - self.z_m[0]) * self.per_m
    }

    /// Levelled density, kg/m3.
    #[inline]
    pub fn density_kg_m3(&self, z: f64) -> f64 {
        let t = self.share(z);
        let measured = match self.law {
            Law::Flat(level) => return level,
            Law::Given(ends) => lerp(ends, t),
            Law::Fresh => water::pure_water_kg_m3(lerp(self.temperature_c, t)),
            Law::Solids(grain_kg_m3) => water::density_kg_m3(
                lerp(self.temperature_c, t),
                lerp(self.salt_g_per_kg, t),
                lerp(self.suspended_mg_l, t),
                grain_kg_m3,
            ),
        };
        self.shift + self.scale * measured
    }

    /// Width, any constant factor.
    #[inline]
    pub fn width(&self, z: f64) -> f64 {
        lerp(self.width, self.share(z))
    }

    /// Whether oxygen is known and below [`OXYGEN_LOW_MG_L`]: nowhere or throughout, since its crossings are
    /// nodes.
    #[inline]
    pub fn oxygen_low(&self) -> bool {
        !self.oxygen_missing && 0.5 * (self.oxygen_mg_l[0] + self.oxygen_mg_l[1]) < OXYGEN_LOW_MG_L
    }

    /// What was measured.
    pub fn reading(&self, z: f64) -> Reading {
        let t = self.share(z);
        Reading {
            temperature_c: lerp(self.temperature_c, t),
            salt_g_per_kg: lerp(self.salt_g_per_kg, t),
            suspended_mg_l: lerp(self.suspended_mg_l, t),
            oxygen_mg_l: (!self.oxygen_missing).then(|| lerp(self.oxygen_mg_l, t)),
        }
    }
}
