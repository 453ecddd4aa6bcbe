//! What was sampled, and values between samples: linear, held beyond the ends.
//!
//! Methods: `docs/methods.md`, section 2.

use crate::water;

/// Water at one elevation.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Sample {
    /// Elevation, m.
    pub elevation_m: f64,
    /// Temperature, C.
    pub temperature_c: f64,
    /// Dissolved solids, g/kg.
    pub salt_g_per_kg: f64,
    /// Suspended solids, mg/L.
    pub suspended_mg_l: f64,
}

/// Oxygen at one elevation.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct OxygenSample {
    /// Elevation, m.
    pub elevation_m: f64,
    /// Dissolved oxygen, mg/L.
    pub oxygen_mg_l: f64,
}

/// How far oxygen may be carried beyond its last sample where samples stand closer, m (choice).
pub const OXYGEN_CARRY_M: f64 = 2.0;

#[inline]
pub(super) fn lerp(ends: [f64; 2], t: f64) -> f64 {
    ends[0] + t * (ends[1] - ends[0])
}

/// Linear between neighbours, held beyond the ends.
pub(super) fn interpolate(samples: &[Sample], z: f64, value: impl Fn(usize) -> f64) -> f64 {
    let i = samples.partition_point(|s| s.elevation_m <= z);
    if i == 0 {
        return value(0);
    }
    if i == samples.len() {
        return value(i - 1);
    }
    let (a, b) = (samples[i - 1].elevation_m, samples[i].elevation_m);
    lerp([value(i - 1), value(i)], (z - a) / (b - a))
}

pub(super) fn sample_at(samples: &[Sample], z: f64) -> Sample {
    Sample {
        elevation_m: z,
        temperature_c: interpolate(samples, z, |i| samples[i].temperature_c),
        salt_g_per_kg: interpolate(samples, z, |i| samples[i].salt_g_per_kg),
        suspended_mg_l: interpolate(samples, z, |i| samples[i].suspended_mg_l),
    }
}

impl Sample {
    pub(super) fn density_kg_m3(&self, solids_kg_m3: f64) -> f64 {
        water::density_kg_m3(self.temperature_c, self.salt_g_per_kg, self.suspended_mg_l, solids_kg_m3)
    }
}

/// Share of the way between two samples over which the slope of density is taken.
const SLOPE_SHARE: f64 = 1e-3;
/// Halvings that find a turn of density to far below any sample spacing.
const HALVINGS: usize = 40;

/// Elevation between two samples at which density turns: where fresh water is densest, or where salt or silt
/// and warmth, rising together, outweigh each other in turn. `None` where density goes one way.
pub(super) fn density_turn_m(a: &Sample, b: &Sample, solids_kg_m3: f64) -> Option<f64> {
    // fresh water is densest at 3.98 C and salt only lowers that, so warmer water turns by its solids alone
    let same = |x: f64, y: f64| (x - y).abs() < f64::EPSILON;
    let solids_differ = !same(a.salt_g_per_kg, b.salt_g_per_kg) || !same(a.suspended_mg_l, b.suspended_mg_l);
    if !solids_differ && a.temperature_c.min(b.temperature_c) > 4.0 {
        return None;
    }
    let density = |t: f64| {
        water::density_kg_m3(
            lerp([a.temperature_c, b.temperature_c], t),
            lerp([a.salt_g_per_kg, b.salt_g_per_kg], t),
            lerp([a.suspended_mg_l, b.suspended_mg_l], t),
            solids_kg_m3,
        )
    };
    let rise = |t: f64| density(t + SLOPE_SHARE) - density(t - SLOPE_SHARE);
    let (mut low, mut high) = (0.0, 1.0);
    let rises = rise(low) > 0.0;
    if rises == (rise(high) > 0.0) {
        return None;
    }
    for _ in 0..HALVINGS {
        let middle = 0.5 * (low + high);
        if (rise(middle) > 0.0) == rises {
            low = middle;
        } else {
            high = middle;
        }
    }
    Some(lerp([a.elevation_m, b.elevation_m], low))
}

/// Elevation between two oxygen samples at which oxygen passes a level.
pub(super) fn crossing_m(pair: &[OxygenSample], level: f64) -> Option<f64> {
    let (a, b) = (&pair[0], &pair[1]);
    let (fa, fb) = (a.oxygen_mg_l - level, b.oxygen_mg_l - level);
    (fa * fb < 0.0).then(|| a.elevation_m + (b.elevation_m - a.elevation_m) * fa / (fa - fb))
}

/// From where to where oxygen readings reach: one sample spacing, or [`OXYGEN_CARRY_M`] where that is
/// more, beyond the last sample on either side.
pub(super) fn oxygen_reach(oxygen: &[OxygenSample]) -> Option<(f64, f64)> {
    let (first, last) = (oxygen.first()?, oxygen.last()?);
    let spacing = |pair: Option<&[OxygenSample]>| {
        pair.map_or(0.0, |p| p[1].elevation_m - p[0].elevation_m).max(OXYGEN_CARRY_M)
    };
    Some((
        first.elevation_m - spacing(oxygen.windows(2).next()),
        last.elevation_m + spacing(oxygen.windows(2).last()),
    ))
}

pub(super) fn oxygen_at(oxygen: &[OxygenSample], z: f64) -> f64 {
    let i = oxygen.partition_point(|o| o.elevation_m <= z);
    match (i.checked_sub(1).and_then(|k| oxygen.get(k)), oxygen.get(i)) {
        (Some(a), Some(b)) => {
            lerp([a.oxygen_mg_l, b.oxygen_mg_l], (z - a.elevation_m) / (b.elevation_m - a.elevation_m))
        }
        (Some(a), None) | (None, Some(a)) => a.oxygen_mg_l,
        // never read: such stretches are marked missing
        (None, None) => 0.0,
    }
}
