//! The pool as layers that move with their water.
//!
//! A layer is a volume of one water; where it lies follows from the volumes below it and the pool table.
//!
//! Methods: `docs/methods.md`, section 8.

use chrono::{DateTime, FixedOffset};

use crate::profile::{Column, OxygenSample, Profile, Sample};
use crate::site::{Pool, Site};
use crate::water::{self, CP_REF_J_KG_K, RHO_REF_KG_M3};

/// Slices of a layer over which the water of a cast is averaged (choice).
const SLICES: usize = 16;

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

impl Layer {
    /// Density of its water at the pressure of the surface, kg/m3; `grain_kg_m3` that of suspended grains.
    pub fn density_kg_m3(&self, grain_kg_m3: f64) -> f64 {
        water::density_kg_m3(self.temperature_c, self.salt_g_per_kg, self.suspended_mg_l, grain_kg_m3)
    }

    /// Heat above 0 C, J, with fixed density and specific heat: so mixing keeps it.
    pub fn heat_j(&self) -> f64 {
        RHO_REF_KG_M3 * CP_REF_J_KG_K * self.volume_m3 * self.temperature_c
    }

    /// Both waters as one: volumes add up, all else by volume.
    #[must_use]
    pub fn joined(&self, other: &Self) -> Self {
        let volume_m3 = self.volume_m3 + other.volume_m3;
        let share = if volume_m3 > 0.0 { other.volume_m3 / volume_m3 } else { 0.0 };
        // equal waters stay as they are, to the last digit
        let mean = |a: f64, b: f64| a + share * (b - a);
        Self {
            volume_m3,
            temperature_c: mean(self.temperature_c, other.temperature_c),
            oxygen_mg_l: mean(self.oxygen_mg_l, other.oxygen_mg_l),
            salt_g_per_kg: mean(self.salt_g_per_kg, other.salt_g_per_kg),
            suspended_mg_l: mean(self.suspended_mg_l, other.suspended_mg_l),
        }
    }

    /// As much of this water.
    #[must_use]
    pub(super) fn part(&self, volume_m3: f64) -> Self {
        Self { volume_m3, ..*self }
    }
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
    /// The water of a cast, in layers of a thickness (m): each the mean of the cast over its volume. Below the lowest
    /// reading of oxygen, and above the highest, its value is held. `None` for a pool without water.
    pub fn of_profile(site: &Site, profile: &Profile, thickness_m: f64) -> Option<Self> {
        let (pool, column) = (&site.pool, &profile.column);
        let (bed, surface) = (column.bed_m(), column.surface_m());
        if surface <= bed || pool.volume_m3(surface) <= pool.volume_m3(bed) || thickness_m <= 0.0 {
            return None;
        }
        let count = ((surface - bed) / thickness_m).round().max(1.0);
        let (first, last) = (profile.oxygen.first(), profile.oxygen.last());
        let oxygen_at = |z: f64, read: Option<f64>| {
            let held = if first.is_some_and(|o| z < o.elevation_m) { first } else { last };
            read.or_else(|| held.map(|o| o.oxygen_mg_l)).unwrap_or(0.0)
        };
        let step = (surface - bed) / (count * SLICES as f64);
        let mut layers = Vec::new();
        let mut slice = 0.0;
        let mut below = pool.volume_m3(bed);
        while slice < count * SLICES as f64 {
            let mut layer: Option<Layer> = None;
            for _ in 0..SLICES {
                let z = bed + (slice + 0.5) * step;
                slice += 1.0;
                let above = pool.volume_m3(bed + slice * step);
                let read = column.reading(z);
                let water = Layer {
                    volume_m3: above - below,
                    temperature_c: read.temperature_c,
                    oxygen_mg_l: oxygen_at(z, read.oxygen_mg_l),
                    salt_g_per_kg: read.salt_g_per_kg,
                    suspended_mg_l: read.suspended_mg_l,
                };
                below = above;
                layer = Some(layer.map_or(water, |l| l.joined(&water)));
            }
            layers.extend(layer.filter(|l| l.volume_m3 > 0.0));
        }
        Some(Self { layers, has_oxygen: first.is_some(), thickness_m })
    }

    /// Volume, m3.
    pub fn volume_m3(&self) -> f64 {
        self.layers.iter().map(|l| l.volume_m3).sum()
    }

    /// Heat above 0 C, J.
    pub fn heat_j(&self) -> f64 {
        self.layers.iter().map(Layer::heat_j).sum()
    }

    /// Edges of the layers from the bed to the surface, m: one more than there are layers. Held at the top of the
    /// pool table.
    pub fn edges_m(&self, pool: &Pool) -> Vec<f64> {
        let mut edges = Vec::with_capacity(self.layers.len() + 1);
        edges.push(pool.bed_m);
        let mut below = pool.volume_m3(pool.bed_m);
        for layer in &self.layers {
            below += layer.volume_m3;
            edges.push(elevation_m(pool, below));
        }
        edges
    }

    /// The surface, m.
    pub fn pool_m(&self, pool: &Pool) -> f64 {
        elevation_m(pool, pool.volume_m3(pool.bed_m) + self.volume_m3())
    }

    /// The column as withdrawal and intake see it: linear between the middles of the layers.
    pub fn column(&self, site: &Site) -> Option<Column> {
        let (samples, oxygen, surface) = self.samples(site);
        Profile::column_of(site, surface, &samples, &oxygen)
    }

    /// The same as a cast at a moment, for what asks one.
    pub fn profile(&self, site: &Site, at: DateTime<FixedOffset>) -> Option<Profile> {
        let (samples, oxygen, pool_m) = self.samples(site);
        let column = Profile::column_of(site, pool_m, &samples, &oxygen)?;
        Some(Profile {
            file: String::from("the season's pool"),
            taken: Some(at),
            pool_m,
            lines: (1..=samples.len()).collect(),
            has_solids: samples.iter().any(|s| s.salt_g_per_kg > 0.0 || s.suspended_mg_l > 0.0),
            samples,
            oxygen,
            column,
            large_inversion: false,
            flags: Vec::new(),
        })
    }

    /// Samples at the middles of the layers, and the surface. A single layer is sampled at bed and surface, since two
    /// samples make a cast.
    fn samples(&self, site: &Site) -> (Vec<Sample>, Vec<OxygenSample>, f64) {
        let edges = self.edges_m(&site.pool);
        let surface = edges.last().copied().unwrap_or(site.pool.bed_m);
        let single = self.layers.len() == 1;
        let places: Vec<(f64, &Layer)> = if single {
            edges.iter().zip(self.layers.iter().cycle()).map(|(z, l)| (*z, l)).collect()
        } else {
            edges.windows(2).zip(&self.layers).map(|(e, l)| (0.5 * (e[0] + e[1]), l)).collect()
        };
        let sample = |&(elevation_m, layer): &(f64, &Layer)| Sample {
            elevation_m,
            temperature_c: layer.temperature_c,
            salt_g_per_kg: layer.salt_g_per_kg,
            suspended_mg_l: layer.suspended_mg_l,
        };
        let read = |&(elevation_m, layer): &(f64, &Layer)| OxygenSample {
            elevation_m,
            oxygen_mg_l: layer.oxygen_mg_l,
        };
        let oxygen = if self.has_oxygen { places.iter().map(read).collect() } else { Vec::new() };
        (places.iter().map(sample).collect(), oxygen, surface)
    }

    /// Volume colder than a temperature (C) between two elevations (m), m3: layers count as a whole or by their part.
    pub fn colder_m3(&self, pool: &Pool, threshold_c: f64, from_m: f64, to_m: f64) -> f64 {
        let edges = self.edges_m(pool);
        let part = |(ends, layer): (&[f64], &Layer)| {
            let (low, high) = (ends[0].max(from_m), ends[1].min(to_m));
            if layer.temperature_c >= threshold_c || high <= low {
                0.0
            } else if low <= ends[0] && high >= ends[1] {
                layer.volume_m3
            } else {
                pool.volume_m3(high) - pool.volume_m3(low)
            }
        };
        edges.windows(2).zip(&self.layers).map(part).sum()
    }
}

/// Elevation below which a volume of the pool table stands, m; held at its ends.
pub(super) fn elevation_m(pool: &Pool, volume_m3: f64) -> f64 {
    let beyond = || if volume_m3 > pool.volume_m3(pool.bed_m) { pool.top_m() } else { pool.bed_m };
    pool.elevation_of_volume_m(volume_m3).unwrap_or_else(beyond).max(pool.bed_m)
}
