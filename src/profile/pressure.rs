//! What the levelled water weighs: the part of the pool's pressure that density differences make.
//!
//! Methods: `docs/methods.md`, section 4.

use super::column::Column;
use super::slices::GAUSS_TWO;

impl Column {
    /// Levelled density at the bed, from which [`excess_kg_m2`](Self::excess_kg_m2) counts, kg/m3.
    pub fn bed_density_kg_m3(&self) -> f64 {
        self.node_density_kg_m3()[0]
    }

    /// Mass of the levelled water from the bed up to `z`, above that of as much water of the bed's density,
    /// kg/m2; never above zero inside the pool, since density never rises upward. Density is held beyond bed and
    /// surface, below the bed the mass counts downward.
    ///
    /// Counted as an excess, so that what differs by grams is not lost beside tonnes.
    ///
    /// # References
    /// Two-point Gauss in slices that end at every node (derived; a slice is at most a 180th of the depth).
    pub fn excess_kg_m2(&self, z: f64) -> f64 {
        let inside = z.clamp(self.bed_m(), self.surface_m());
        let slices = self.slices();
        let slice = slices.holding(inside);
        let stretch = self.stretch(slices.stretch[slice]);
        let excess = |z: f64| stretch.density_kg_m3(z) - self.bed_density_kg_m3();
        let edge = slices.edges_m[slice];
        let half = 0.5 * (inside - edge);
        let part = half * (excess(edge + half * (1.0 - GAUSS_TWO)) + excess(edge + half * (1.0 + GAUSS_TWO)));
        let beyond = if z > inside { (z - inside) * excess(inside) } else { 0.0 };
        slices.excess_kg_m2[slice] + part + beyond
    }

    /// Head that still water of one density leaves against the pool between two elevations, m of water of
    /// 1000 kg/m3: int (rho_pool - rho)/1000 dz, positive where the pool is the heavier and `to` the higher.
    ///
    /// # Units
    /// m, m, kg/m3; m.
    pub fn density_head_m(&self, from_m: f64, to_m: f64, density_kg_m3: f64) -> f64 {
        let pool = self.excess_kg_m2(to_m) - self.excess_kg_m2(from_m);
        (pool - (density_kg_m3 - self.bed_density_kg_m3()) * (to_m - from_m)) / HEAD_KG_M3
    }
}

/// Density of the water in which heads are counted, kg/m3 (choice).
pub(crate) const HEAD_KG_M3: f64 = 1000.0;
