//! One setting on one column: the zone and water of each level, and the release they blend to.
//!
//! Methods: `docs/methods.md`, section 4.

use crate::profile::Column;
use crate::water;
use crate::withdrawal::{Draw, Zone, zone};

use super::levels::{Level, as_one};

/// A level with what it draws. A level with an open gate that gives nothing has neither zone nor draw.
#[derive(Debug, Clone, PartialEq)]
pub struct Drawn {
    /// The level.
    pub level: Level,
    /// Where its water comes from.
    pub zone: Option<Zone>,
    /// That water.
    pub draw: Option<Draw>,
}

/// Blended water.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Blend {
    /// Flow, m3/s.
    pub flow_m3s: f64,
    /// Temperature, C, with the bias that was learned.
    pub temperature_c: f64,
    /// That bias, C; 0 for water that leaves as it is.
    pub bias_c: f64,
    /// Oxygen leaving the pool, mg/L; `None` when any level's is missing.
    pub oxygen_mg_l: Option<f64>,
    /// Oxygen below the dam, mg/L: after what the conduits add and what was learned; without either that leaving the
    /// pool.
    pub oxygen_below_mg_l: Option<f64>,
    /// Dissolved solids, g/kg.
    pub salt_g_per_kg: f64,
    /// Suspended solids, mg/L.
    pub suspended_mg_l: f64,
    /// Share of the flow from water below 1 mg/L of oxygen.
    pub oxygen_low_share: f64,
}

impl Blend {
    /// Dissolved and suspended solids, mg/L; the salt as [`water::dissolved_g_per_kg`] took it.
    pub fn solids_mg_l(&self) -> f64 {
        self.salt_g_per_kg * water::pure_water_kg_m3(self.temperature_c - self.bias_c) + self.suspended_mg_l
    }
}

/// Solves every level of a setting.
pub fn draw_levels(column: &Column, levels: &[Level], zone_factor: f64) -> Vec<Drawn> {
    levels
        .iter()
        .map(|level| {
            let zone = zone(column, &level.sink, zone_factor);
            let draw = zone.and_then(|z| z.draw(column));
            Drawn { level: level.clone(), zone, draw }
        })
        .collect()
}

/// Flow-weighted blend of streams of (flow, water). `None` when nothing flows.
pub fn blend(streams: &[(f64, Draw)]) -> Option<Blend> {
    let flow_m3s: f64 = streams.iter().map(|(q, _)| q).sum();
    if flow_m3s <= 0.0 {
        return None;
    }
    let mean = |read: &dyn Fn(&Draw) -> f64| streams.iter().map(|(q, d)| q * read(d)).sum::<f64>() / flow_m3s;
    let oxygen_known = streams.iter().all(|(q, d)| *q <= 0.0 || d.oxygen_mg_l.is_some());
    let oxygen_mg_l = oxygen_known.then(|| mean(&|d| d.oxygen_mg_l.unwrap_or(0.0)));
    Some(Blend {
        flow_m3s,
        temperature_c: mean(&|d| d.temperature_c),
        bias_c: 0.0,
        oxygen_mg_l,
        oxygen_below_mg_l: oxygen_mg_l,
        salt_g_per_kg: mean(&|d| d.salt_g_per_kg),
        suspended_mg_l: mean(&|d| d.suspended_mg_l),
        oxygen_low_share: mean(&|d| d.oxygen_low_share),
    })
}

/// The release of drawn levels as it leaves the pool ([`Blend::aerated`] makes of it what comes below the dam).
pub fn release(drawn: &[Drawn]) -> Option<Blend> {
    let streams: Vec<(f64, Draw)> =
        drawn.iter().filter_map(|d| Some((d.level.sink.flow_m3s, d.draw?))).collect();
    blend(&streams)
}

/// Groups of levels whose centre-lines lie inside each other's zones, as indices into `drawn`. A thin zone between
/// two thick ones that overlap stays out of their group.
pub fn overlapping(drawn: &[Drawn]) -> Vec<Vec<usize>> {
    let reaches = |a: usize, b: usize| {
        let centre = drawn[b].level.sink.centre_m;
        drawn[a].zone.is_some_and(|z| (z.lower.limit_m..=z.upper.limit_m).contains(&centre))
    };
    let mut groups: Vec<Vec<usize>> = Vec::new();
    for i in (0..drawn.len()).filter(|&i| drawn[i].zone.is_some()) {
        // a level can link two groups; they then become one
        let (linked, apart): (Vec<_>, Vec<_>) =
            groups.into_iter().partition(|g| g.iter().any(|&k| reaches(k, i) && reaches(i, k)));
        groups = apart;
        let mut joined: Vec<usize> = linked.into_iter().flatten().chain([i]).collect();
        joined.sort_unstable();
        groups.push(joined);
    }
    groups.retain(|g| g.len() > 1);
    groups
}

/// The release when each overlapping group draws as one sink at its flow-weighted elevation.
pub fn release_joined(
    column: &Column,
    drawn: &[Drawn],
    groups: &[Vec<usize>],
    zone_factor: f64,
) -> Option<Blend> {
    let alone = drawn
        .iter()
        .enumerate()
        .filter(|(i, _)| !groups.iter().any(|g| g.contains(i)))
        .filter_map(|(_, d)| Some((d.level.sink.flow_m3s, d.draw?)));
    let joined = groups.iter().filter_map(|group| {
        let members: Vec<&Level> = group.iter().map(|&i| &drawn[i].level).collect();
        let sink = as_one(&members)?;
        Some((sink.flow_m3s, zone(column, &sink, zone_factor)?.draw(column)?))
    });
    let streams: Vec<(f64, Draw)> = alone.chain(joined).collect();
    blend(&streams)
}
