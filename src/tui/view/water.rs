//! The picture of the pool, filled from a site and its cast.

use chrono::NaiveDate;

use crate::intake;
use crate::mix::Drawn;
use crate::profile::{Layering, Profile};
use crate::site::Site;
use crate::units::{Dimension, System, figure};
use crate::withdrawal::{End, Zone};

use super::super::draw::column::{GateMark, GateState, Picture, Water, ZoneMark};

/// Elevations at which the velocity of a zone is read (choice: more than a screen has rows for it).
const READ: u32 = 60;

/// The curves of a cast. Oxygen is drawn where a reading reaches, in stretches.
pub(super) fn water(profile: &Profile) -> Water {
    let temperature = profile.samples.iter().map(|s| (s.elevation_m, s.temperature_c)).collect();
    let mut oxygen: Vec<Vec<(f64, f64)>> = Vec::new();
    let mut open = false;
    let mut at: Vec<f64> = profile.column.nodes_m().to_vec();
    at.extend(profile.oxygen.iter().map(|o| o.elevation_m));
    at.sort_by(f64::total_cmp);
    at.dedup();
    for z in at {
        match profile.column.reading(z).oxygen_mg_l {
            Some(value) => {
                if !open {
                    oxygen.push(Vec::new());
                }
                open = true;
                if let Some(stretch) = oxygen.last_mut() {
                    stretch.push((z, value));
                }
            }
            None => open = false,
        }
    }
    Water { temperature, oxygen }
}

/// The pool without gates and zones.
pub(super) fn pool(site: &Site, profile: &Profile, layering: &Layering, system: System) -> Picture {
    Picture {
        system,
        bed_m: profile.column.bed_m(),
        surface_m: profile.column.surface_m(),
        water: water(profile),
        thermocline_m: layering.thermocline.as_ref().map(|t| t.elevation_m),
        mixed_base_m: Some(layering.mixed_base_m),
        cold_c: site.cold_water_c.first().copied(),
        ..Picture::default()
    }
}

/// How an outlet is drawn: whether it is open, whether water passes, whether it may be used.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Stands {
    /// Opening, 0 to 1.
    pub(super) opening: f64,
    /// Flow, m3/s.
    pub(super) flow_m3s: f64,
    /// Whether it is out of use.
    pub(super) out: bool,
}

/// Whether an outlet is out of use on a date.
pub(super) fn is_out(site: &Site, outlet: usize, date: NaiveDate) -> bool {
    site.limits.outages.iter().any(|o| o.outlet == outlet && o.covers(date))
}

/// The mark of an outlet with the water over it as its note.
pub(super) fn gate(
    site: &Site,
    outlet: usize,
    stands: Stands,
    pool_m: f64,
    chosen: bool,
    system: System,
) -> GateMark {
    let o = &site.outlets[outlet];
    let part = o.open_part(if stands.opening > 0.0 { stands.opening } else { 1.0 });
    let state = if !intake::is_wet(o, 1.0, pool_m) {
        GateState::Dry
    } else if stands.out {
        GateState::Out
    } else if stands.flow_m3s > 0.0 {
        GateState::Drawing
    } else if stands.opening > 0.0 {
        GateState::OpenNoFlow
    } else {
        GateState::Shut
    };
    let unit = system.unit(Dimension::Length);
    let over = figure(intake::submergence_m(o, 1.0, pool_m), unit, 0);
    GateMark {
        name: o.name.clone(),
        centre_m: part.centre_m,
        top_m: part.top_m,
        bottom_m: part.top_m - part.height_m,
        state,
        chosen,
        note: format!("{over} {}", unit.symbol()),
    }
}

/// The mark of a level's zone.
pub(super) fn zone(site: &Site, profile: &Profile, drawn: &Drawn) -> Option<ZoneMark> {
    let zone: &Zone = drawn.zone.as_ref()?;
    let names: Vec<&str> = drawn.level.outlets.iter().map(|&i| site.outlets[i].name.as_str()).collect();
    let (low, high) = (zone.lower.limit_m, zone.upper.limit_m);
    let velocity = (0..=READ)
        .map(|i| {
            let z = low + (high - low) * f64::from(i) / f64::from(READ);
            (z, zone.velocity(&profile.column, z))
        })
        .collect();
    Some(ZoneMark {
        label: names.join(" "),
        lower_m: low,
        upper_m: high,
        peak_m: zone.peak_m,
        velocity,
        lower_free: zone.lower.end == End::Free,
        upper_free: zone.upper.end == End::Free,
    })
}
