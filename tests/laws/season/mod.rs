//! Laws of the pool through a season: what is conserved, what does not change, what is never so.

mod balance;
mod brim;
mod drawdown;
mod learn;
mod needed;
mod outflow;
mod still;
mod surface;

use chrono::NaiveDate;
use gatemix::mix::Level;
use gatemix::profile::Column;
use gatemix::season::{Forcing, Inflow, Layer, Layers, Sky, Stepped, day};
use gatemix::site::{Raw, RawOutlet, RawPool, RawRow, Site};
use gatemix::weather::Air;
use gatemix::withdrawal::{Opening, Sink};

use crate::mix::sites::checked;

/// An invented pool by elevation and area, whose table is its own.
pub(super) fn pool(table: &[(f64, f64)]) -> Site {
    let row = |&(elevation_m, area_m2): &(f64, f64)| RawRow { elevation_m, area_m2, ..RawRow::default() };
    let raw = Raw {
        name: Some("invented".into()),
        pool: RawPool {
            bed_m: table.first().map(|r| r.0),
            full_m: table.last().map(|r| r.0),
            table: table.iter().map(row).collect(),
            ..RawPool::default()
        },
        outlets: vec![RawOutlet {
            name: Some("A".into()),
            centre_m: table.first().map(|r| r.0 + 1.0),
            height_m: Some(1.0),
            width_m: Some(2.0),
            ..RawOutlet::default()
        }],
        ..Raw::default()
    };
    checked(&raw)
}

/// The same in which nothing happens by itself.
pub(super) fn still(table: &[(f64, f64)]) -> Site {
    let mut site = pool(table);
    let season = &mut site.season;
    season.knobs.wind = 0.0;
    season.knobs.diffusion = 0.0;
    season.knobs.water_demand_mg_l_day = 0.0;
    season.knobs.bed_demand_g_m2_day = 0.0;
    season.transfer_m_day = 0.0;
    season.evaporates = false;
    site
}

/// Layers of equal thickness (m) from the bed up to a surface, of temperatures and oxygen by elevation.
pub(super) fn layers(site: &Site, surface_m: f64, count: usize, water: &dyn Fn(f64) -> (f64, f64)) -> Layers {
    let bed_m = site.pool.bed_m;
    let thickness_m = (surface_m - bed_m) / count as f64;
    let layer = |i: usize| {
        let low = bed_m + i as f64 * thickness_m;
        let (temperature_c, oxygen_mg_l) = water(low + 0.5 * thickness_m);
        Layer {
            volume_m3: site.pool.volume_m3(low + thickness_m) - site.pool.volume_m3(low),
            temperature_c,
            oxygen_mg_l,
            salt_g_per_kg: 0.0,
            suspended_mg_l: 0.0,
        }
    };
    Layers { layers: (0..count).map(layer).collect(), has_oxygen: true, thickness_m }
}

/// A level in a straight face.
pub(super) fn level(centre_m: f64, flow_m3s: f64) -> Level {
    let sink = Sink { centre_m, flow_m3s, opening: Opening::FACE };
    Level { outlets: vec![0], flows_m3s: vec![flow_m3s], sink, height_m: 1.0 }
}

pub(super) fn date() -> NaiveDate {
    NaiveDate::from_ymd_opt(2026, 7, 1).unwrap()
}

pub(super) fn no_inflow() -> Inflow {
    Inflow { flow_m3s: 0.0, temperature_c: 10.0, oxygen_mg_l: None, salt_g_per_kg: 0.0, suspended_mg_l: 0.0 }
}

pub(super) fn air(temperature_c: f64, wind_m_s: f64, solar_w_m2: f64) -> Air {
    Air { temperature_c, dew_point_c: temperature_c - 5.0, wind_m_s, cloud: 0.4, solar_w_m2 }
}

/// One day under a sky with levels drawing.
pub(super) fn go(
    layers: &mut Layers,
    site: &Site,
    sky: Option<Sky>,
    inflow: Inflow,
    draws: &[Level],
) -> Stepped {
    let forcing = Forcing { date: date(), sky, inflow };
    let levels = |_: &Column, _: f64| draws.to_vec();
    day(layers, site, &forcing, &levels).unwrap_or_else(|e| panic!("{e:?}"))
}

/// Volume of the water of a temperature or warmer, m3.
pub(super) fn warmer_m3(layers: &Layers, threshold_c: f64) -> f64 {
    layers.layers.iter().filter(|l| l.temperature_c >= threshold_c).map(|l| l.volume_m3).sum()
}
