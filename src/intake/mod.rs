//! From gates to flows: capacity, submergence and leakage of each opening under a pool, and how a well's flow
//! divides among its ports.
//!
//! Methods: `docs/methods.md`, section 4.

mod branch;
mod root;
mod split;
mod velocity;

pub use split::{Entering, Port, Shaft, Split};
pub use velocity::{entrance_velocity_m_s, gordon_submergence_m, shaft_velocity_head_m, velocity_head_m};

use crate::site::{Kind, Leakage, Outlet, SAME_OPENING, Site};
use crate::water::G_M_S2;
use crate::withdrawal::free_crest_flow_m3s;

/// Loss of a well port where the site gives none, on the port velocity (choice; marked `assumed-loss`).
pub const ASSUMED_LOSS: f64 = 1.5;
/// Discharge coefficient of a direct outlet where the site gives none (common practice, no source).
pub const ASSUMED_DISCHARGE: f64 = 0.6;

/// Water above the top of the open part, m; negative when it stands out of the water.
pub fn submergence_m(outlet: &Outlet, opening: f64, pool_m: f64) -> f64 {
    pool_m - outlet.open_part(opening).top_m
}

/// Whether an outlet has water: the centre-line of its open part, or the crest, below the pool.
pub fn is_wet(outlet: &Outlet, opening: f64, pool_m: f64) -> bool {
    outlet.open_part(opening).centre_m < pool_m
}

/// Most flow an outlet passes under a pool, m3/s: the site's own figure, else computed from opening and
/// head: a direct outlet Cd A sqrt(2 g h), a well port A sqrt(2 g h/K) at the head its well allows, a crest
/// by its rating or as a free overfall, whichever is less. `None` where nothing bounds it.
pub fn capacity_m3s(site: &Site, outlet: &Outlet, opening: f64, pool_m: f64) -> Option<f64> {
    if outlet.is_crest() {
        let free = crest_flow_m3s(outlet, opening, pool_m)?;
        return Some(outlet.flow_max_m3s.map_or(free, |most| most.min(free)));
    }
    if outlet.flow_max_m3s.is_some() {
        return outlet.flow_max_m3s;
    }
    match outlet.well.and_then(|w| site.wells.get(w)) {
        None => Some(orifice_flow_m3s(outlet, opening, pool_m)),
        Some(well) => {
            let head = well.max_head_loss_m?;
            let loss = outlet.loss.unwrap_or(ASSUMED_LOSS);
            Some(outlet.open_part(opening).area_m2 * (2.0 * G_M_S2 * head / loss).sqrt())
        }
    }
}

/// Flow of an outlet on no well at an opening under a pool, whatever its greatest, m3/s: Cd A sqrt(2 g h), a crest as
/// [`crest_flow_m3s`]. `None` for a crest partly open by no crest of its own: the flow under its gate is not
/// modelled.
pub fn opening_flow_m3s(outlet: &Outlet, opening: f64, pool_m: f64) -> Option<f64> {
    if !outlet.is_crest() {
        return Some(orifice_flow_m3s(outlet, opening, pool_m));
    }
    let free = opening >= 1.0 - SAME_OPENING || outlet.positions.iter().any(|p| p.crest_m.is_some());
    if free { crest_flow_m3s(outlet, opening, pool_m) } else { None }
}

/// Cd A sqrt(2 g h), m3/s.
fn orifice_flow_m3s(outlet: &Outlet, opening: f64, pool_m: f64) -> f64 {
    let part = outlet.open_part(opening);
    let head_m = (pool_m - part.centre_m).max(0.0);
    outlet.discharge.unwrap_or(ASSUMED_DISCHARGE) * part.area_m2 * (2.0 * G_M_S2 * head_m).sqrt()
}

/// Flow over a crest at an opening under a pool, m3/s: the site's rating where it has one (held beyond its last row),
/// else a free overfall. `None` for an outlet that is no crest.
pub fn crest_flow_m3s(outlet: &Outlet, opening: f64, pool_m: f64) -> Option<f64> {
    let Kind::Crest { length_m, rating, .. } = &outlet.kind else { return None };
    let head = (pool_m - outlet.crest_m(opening)).max(0.0);
    let (Some(first), Some(last)) = (rating.first(), rating.last()) else {
        return Some(free_crest_flow_m3s(head, *length_m));
    };
    if head <= first.0 {
        return Some(first.1 * if first.0 > 0.0 { head / first.0 } else { 1.0 });
    }
    let flow = rating
        .windows(2)
        .find(|w| head <= w[1].0)
        .map_or(last.1, |w| w[0].1 + (w[1].1 - w[0].1) * (head - w[0].0) / (w[1].0 - w[0].0));
    Some(flow)
}

/// Whether a crest spills whenever the pool stands above it; into a well it passes what the conduit draws.
pub fn spills_by_itself(outlet: &Outlet) -> bool {
    outlet.well.is_none() && matches!(outlet.kind, Kind::Crest { gated: false, .. })
}

/// Area of the port that would leak as a shut gate does, always open, m2: q_ref sqrt(K/(2 g h_ref)).
/// `place` as in [`leak_m3s`].
pub fn leak_area_m2(outlet: &Outlet, place: f64) -> f64 {
    let loss = outlet.loss.unwrap_or(ASSUMED_LOSS);
    let area = |leak: Leakage| reference_leak_m3s(leak, place) * (loss / (2.0 * G_M_S2 * leak.head_m)).sqrt();
    outlet.leakage.map_or(0.0, area)
}

/// Leak of a shut gate under a head, m3/s: a port always open, so it goes as the root of the head.
/// `place` from 0 to 1 moves within the range the site gives about its figure; 0.5 is the figure itself.
pub fn leak_m3s(outlet: &Outlet, head_m: f64, place: f64) -> f64 {
    let leak = |leak: Leakage| reference_leak_m3s(leak, place) * (head_m.max(0.0) / leak.head_m).sqrt();
    outlet.leakage.map_or(0.0, leak)
}

/// Leak at the reference head, m3/s.
fn reference_leak_m3s(leak: Leakage, place: f64) -> f64 {
    let (low, high) = leak.range_m3s.unwrap_or((leak.flow_m3s, leak.flow_m3s));
    if place < 0.5 {
        low + (leak.flow_m3s - low) * place * 2.0
    } else {
        leak.flow_m3s + (high - leak.flow_m3s) * (place - 0.5) * 2.0
    }
}
