//! The cast under another pool elevation.
//!
//! Methods: `docs/methods.md`, section 2.

use crate::problem::Problem;
use crate::site::Site;
use crate::units::say;

use super::cast::Profile;
use super::layering::mixed_base_m;
use super::samples::{OxygenSample, Sample};

/// A pool moved by more than this against its cast is flagged, m (choice).
const MOVED_M: f64 = 1.0;

impl Profile {
    /// The same water under a pool elevation other than the cast's: water below the surface mixed layer keeps
    /// its elevation, the mixed layer keeps its depth below the surface. Samples left above water, or in the
    /// place the mixed layer moves into, are left out and flagged.
    ///
    /// # Errors
    /// A refusal when the pool lies outside the site's table or fewer than two samples are left.
    pub fn at_pool(&self, site: &Site, pool_m: f64) -> Result<Self, Problem> {
        if !(site.pool.bed_m..=site.pool.top_m()).contains(&pool_m) || pool_m <= site.pool.bed_m {
            return Err(Problem::refused(
                "pool-outside",
                format!("pool {} lies outside the pool table ({})", say::m(pool_m, 2), site.pool.extent()),
                "check --pool, its unit and its datum",
            ));
        }
        let by = pool_m - self.pool_m;
        let base = mixed_base_m(&self.column);
        // a sample of the layer goes with the surface unless the bed is in its way; one below stays unless the
        // layer now stands there
        let kept = |z: f64| {
            if z >= base {
                Some(z + by).filter(|z| *z > site.pool.bed_m)
            } else {
                (z < base + by).then_some(z)
            }
        };
        let mut samples: Vec<Sample> = Vec::with_capacity(self.samples.len());
        let mut lines = Vec::with_capacity(self.lines.len());
        for (s, line) in self.samples.iter().zip(&self.lines) {
            if let Some(elevation_m) = kept(s.elevation_m) {
                samples.push(Sample { elevation_m, ..*s });
                lines.push(*line);
            }
        }
        let oxygen: Vec<OxygenSample> = self
            .oxygen
            .iter()
            .filter_map(|o| Some(OxygenSample { elevation_m: kept(o.elevation_m)?, ..*o }))
            .collect();
        let mut flags = self.flags.clone();
        if by.abs() > MOVED_M {
            flags.push(Problem::flag(
                "pool-moved",
                format!(
                    "the pool is {} from that of the cast: the mixed layer moves with it, the water below keeps its elevation",
                    say::m(by, 2).signed()
                ),
                "take a new cast; until then the profile is a guess",
            ));
        }
        let left_out = self.samples.len() - samples.len();
        if left_out > 0 {
            flags.push(Problem::flag(
                "exposed",
                format!("{left_out} sample(s) left out: the surface or its mixed layer is now where they were taken"),
                "take a new cast at this pool",
            ));
        }
        let column = if samples.len() >= 2 { Self::column_of(site, pool_m, &samples, &oxygen) } else { None };
        let Some(column) = column else {
            return Err(Problem::refused(
                "too-few",
                "fewer than two samples are left under this pool",
                "take a new cast at this pool",
            ));
        };
        Ok(Self { pool_m, samples, lines, oxygen, column, flags, ..self.clone() })
    }
}
