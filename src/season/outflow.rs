//! What leaves: the zones of the levels, layer by layer.
//!
//! Methods: `docs/methods.md`, section 8.

use crate::mix::Level;
use crate::profile::{Column, OXYGEN_LOW_MG_L};
use crate::units::say;
use crate::withdrawal::{Draw, Zone, zone};

use super::layers::Layers;

/// Most of a layer that is taken at once (choice).
pub(super) const MOST_OF_LAYER: f64 = 0.5;

/// From which layers a level draws.
#[derive(Debug, Clone)]
pub(super) struct Drawing {
    pub(super) zone: Option<Zone>,
    /// Flow out of each layer, m3/s.
    pub(super) flows_m3s: Vec<f64>,
}

/// The zones of the levels on a column, binned onto its layers. A level that the pool has sunk below since the day began
/// (`is_later`) still gives its flow of the day, from the surface.
///
/// # Errors
/// A level that gives water and stands above it as the day begins, in words.
pub(super) fn drawings(
    column: &Column,
    levels: &[Level],
    edges_m: &[f64],
    zone_factor: f64,
    is_later: bool,
) -> Result<Vec<Drawing>, String> {
    let drawing = |level: &Level| {
        let mut flows_m3s = vec![0.0; edges_m.len().saturating_sub(1)];
        if level.sink.flow_m3s <= 0.0 {
            return Ok(Drawing { zone: None, flows_m3s });
        }
        let Some(zone) = zone(column, &level.sink, zone_factor) else {
            let is_dry = level.sink.centre_m >= column.surface_m();
            if let (true, true, Some(surface)) = (is_later, is_dry, flows_m3s.last_mut()) {
                *surface = level.sink.flow_m3s;
                return Ok(Drawing { zone: None, flows_m3s });
            }
            return Err(format!(
                "{} is asked of the level at {}, which lies outside the water ({} to {})",
                say::m3s(level.sink.flow_m3s, 1),
                say::m(level.sink.centre_m, 2),
                say::m(column.bed_m(), 2),
                say::m(column.surface_m(), 2)
            ));
        };
        bin(&zone.shares(column), level.sink.flow_m3s, edges_m, &mut flows_m3s);
        Ok(Drawing { zone: Some(zone), flows_m3s })
    };
    levels.iter().map(drawing).collect()
}

/// Adds the shares of slices (lower edge, upper edge, share) to the layers they overlap, in proportion; a slice
/// without height goes to the layer that holds it.
fn bin(shares: &[(f64, f64, f64)], flow_m3s: f64, edges_m: &[f64], flows_m3s: &mut [f64]) {
    let last = flows_m3s.len().saturating_sub(1);
    for &(low, high, share) in shares {
        let first = edges_m.partition_point(|e| *e <= low).saturating_sub(1).min(last);
        for layer in first..=last {
            let (from, to) = (edges_m[layer].max(low), edges_m[layer + 1].min(high));
            // the last digit of the surface goes to the surface layer
            let to = if layer == last { high } else { to };
            if to > from {
                flows_m3s[layer] += flow_m3s * share * (to - from) / (high - low);
            }
            if edges_m[layer + 1] >= high {
                break;
            }
        }
    }
}

/// Longest time in which no layer gives more than half, s.
pub(super) fn longest_s(layers: &Layers, drawings: &[Drawing], surface_m3s: f64) -> f64 {
    let last = layers.layers.len().saturating_sub(1);
    let time = |(i, layer): (usize, &super::layers::Layer)| {
        let drawn: f64 = drawings.iter().filter_map(|d| d.flows_m3s.get(i)).sum();
        let flow = drawn + if i == last { surface_m3s } else { 0.0 };
        if flow > 0.0 { MOST_OF_LAYER * layer.volume_m3 / flow } else { f64::INFINITY }
    };
    layers.layers.iter().enumerate().map(time).fold(f64::INFINITY, f64::min)
}

/// Water drawn by one level so far.
#[derive(Debug, Clone, Copy, Default)]
pub(super) struct Drawn {
    volume_m3: f64,
    temperature: f64,
    oxygen: f64,
    salt: f64,
    suspended: f64,
    low_m3: f64,
}

impl Drawn {
    /// The water of all that was drawn; `None` where nothing was.
    pub(super) fn draw(&self, has_oxygen: bool) -> Option<Draw> {
        if self.volume_m3 <= 0.0 {
            return None;
        }
        let share = self.volume_m3.recip();
        Some(Draw {
            temperature_c: self.temperature * share,
            oxygen_mg_l: has_oxygen.then_some(self.oxygen * share),
            salt_g_per_kg: self.salt * share,
            suspended_mg_l: self.suspended * share,
            oxygen_missing_share: if has_oxygen { 0.0 } else { 1.0 },
            oxygen_low_share: self.low_m3 * share,
        })
    }
}

/// What left in a time.
#[derive(Debug, Clone, Copy, Default)]
pub(super) struct Left {
    pub(super) volume_m3: f64,
    pub(super) heat_j: f64,
}

/// Takes the water of a time (s) out of the layers, each with the water of its layer. What a layer cannot give without
/// losing more than half comes from the next above, and where none above can, from below (choice).
///
/// # Errors
/// The pool cannot give it, in words.
pub(super) fn take(
    layers: &mut Layers,
    drawings: &[Drawing],
    seconds: f64,
    drawn: &mut [Drawn],
) -> Result<Left, String> {
    let mut given: Vec<f64> = layers.layers.iter().map(|l| MOST_OF_LAYER * l.volume_m3).collect();
    let mut left = Left::default();
    for (drawing, drawn) in drawings.iter().zip(drawn) {
        let mut owed = 0.0;
        let mut parts = vec![0.0; given.len()];
        for (i, part) in parts.iter_mut().enumerate() {
            let asked = owed + drawing.flows_m3s.get(i).map_or(0.0, |q| q * seconds);
            *part = asked.min(given[i]);
            given[i] -= *part;
            owed = asked - *part;
        }
        for (part, given) in parts.iter_mut().zip(&mut given).rev() {
            let more = owed.min(*given);
            *part += more;
            *given -= more;
            owed -= more;
        }
        if owed > 0.0 {
            return Err(format!("the pool does not hold the water asked: {} more", say::m3(owed, 0)));
        }
        for (layer, part) in layers.layers.iter_mut().zip(&parts).filter(|(_, part)| **part > 0.0) {
            let water = layer.part(*part);
            layer.volume_m3 -= part;
            left.volume_m3 += part;
            left.heat_j += water.heat_j();
            drawn.volume_m3 += part;
            drawn.temperature += part * layer.temperature_c;
            drawn.oxygen += part * layer.oxygen_mg_l;
            drawn.salt += part * layer.salt_g_per_kg;
            drawn.suspended += part * layer.suspended_mg_l;
            if layers.has_oxygen && layer.oxygen_mg_l < OXYGEN_LOW_MG_L {
                drawn.low_m3 += part;
            }
        }
    }
    Ok(left)
}
