//! A day of the pool: inflow, release, surface, overturn, wind, diffusion, oxygen, in sub-steps.
//!
//! Methods: `docs/methods.md`, section 8.

use chrono::NaiveDate;

use crate::mix::{Drawn, Level};
use crate::profile::Column;
use crate::site::Site;
use crate::units::{DAY_S, say};

use super::balance::Balance;
use super::layers::Layers;
use super::skies::Sky;
use super::surface::Through;
use super::{diffusion, inflow, mixing, outflow, oxygen, reshape, surface};

/// Water that enters the pool on a day.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Inflow {
    /// Flow, m3/s.
    pub flow_m3s: f64,
    /// Temperature, C.
    pub temperature_c: f64,
    /// Oxygen, mg/L; `None`: at saturation.
    pub oxygen_mg_l: Option<f64>,
    /// Dissolved solids, g/kg.
    pub salt_g_per_kg: f64,
    /// Suspended solids, mg/L.
    pub suspended_mg_l: f64,
}

/// What a day brings.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Forcing {
    /// The date: for sentences.
    pub date: NaiveDate,
    /// The air; `None` leaves the surface without exchange.
    pub sky: Option<Sky>,
    /// Water that enters.
    pub inflow: Inflow,
}

/// What a day made.
#[derive(Debug, Clone, PartialEq)]
pub struct Stepped {
    /// The levels that drew, with their zone at the start of the day and their water as the mean of the day.
    pub drawn: Vec<Drawn>,
    /// The balances.
    pub balance: Balance,
    /// Whether the pool overturned from surface to bed.
    pub overturned: bool,
    /// Sub-steps taken.
    pub steps: u32,
}

/// A balance that does not close, or a pool that cannot give what is asked.
#[derive(Debug, Clone, PartialEq)]
pub struct Unbalanced {
    /// The day.
    pub date: NaiveDate,
    /// What fails, and by how much.
    pub words: String,
}

/// Shortest sub-step, s (choice): what a layer cannot give in it comes from the next.
const SHORTEST_S: f64 = 900.0;
/// Most that a balance may fail to close, as a share of its largest term (choice: round-off of a day stays a
/// thousand times below).
pub const MOST_OPEN: f64 = 1e-9;

/// Water that may stand above the top of the pool table, m (choice: dew of a few days; the next release takes it).
const MOST_OVER_M: f64 = 0.01;

/// Takes the pool through one day. `levels` says what is drawn from a column under a pool (m), flows in m3/s; it is
/// asked once, at the start of the day. Nothing is changed where the day fails.
///
/// # Errors
/// The term that does not close; water asked that the pool does not hold.
pub fn day(
    layers: &mut Layers,
    site: &Site,
    forcing: &Forcing,
    levels: &dyn Fn(&Column, f64) -> Vec<Level>,
) -> Result<Stepped, Unbalanced> {
    part_of_day(layers, site, forcing, DAY_S, levels)
}

/// Takes the pool through as much of a day, s, at the day's flows and under its mean air; all else as [`day`].
///
/// # Errors
/// As [`day`].
pub fn part_of_day(
    layers: &mut Layers,
    site: &Site,
    forcing: &Forcing,
    lasts_s: f64,
    levels: &dyn Fn(&Column, f64) -> Vec<Level>,
) -> Result<Stepped, Unbalanced> {
    let fails = |words: String| Unbalanced { date: forcing.date, words };
    let mut now = layers.clone();
    let no_water = || fails("the pool holds no water".into());
    let mut column = now.column(site).ok_or_else(no_water)?;
    let levels = levels(&column, column.surface_m());
    let mut drawn = vec![outflow::Drawn::default(); levels.len()];
    let mut zones = None;
    let mut balance = Balance::default();
    balance.water_m3.before = now.volume_m3();
    balance.heat_j.before = now.heat_j();
    let (mut left_s, mut steps, mut overturned) = (lasts_s, 0, false);
    while left_s > 0.0 {
        let edges = now.edges_m(&site.pool);
        if steps > 0 && !levels.is_empty() {
            column = now.column(site).ok_or_else(no_water)?;
        }
        let mut drawings =
            outflow::drawings(&column, &levels, &edges, site.zone_factor(), steps > 0).map_err(fails)?;
        zones.get_or_insert_with(|| drawings.iter().map(|d| d.zone).collect::<Vec<_>>());
        let taken_in = site.season.inflow_takes_in * forcing.inflow.flow_m3s.max(0.0);
        let longest = outflow::longest_s(&now, &drawings, taken_in).clamp(SHORTEST_S, site.season.step_s);
        let parts = (left_s / longest).ceil().max(1.0);
        let seconds = left_s / parts;
        left_s = if parts > 1.0 { left_s - seconds } else { 0.0 };
        steps += 1;

        let surface_m = column.surface_m();
        let entered = inflow::enter(&mut now, site, &forcing.inflow, surface_m, seconds);
        balance.water_m3.inflow += entered.volume_m3;
        balance.heat_j.inflow += entered.heat_j;
        if let Some(own) = entered.own {
            for drawing in &mut drawings {
                drawing.flows_m3s.insert(own, 0.0);
            }
        }
        let left = outflow::take(&mut now, &drawings, seconds, &mut drawn).map_err(fails)?;
        balance.water_m3.release -= left.volume_m3;
        balance.heat_j.release -= left.heat_j;
        let through = air_and_stir(&mut now, site, forcing.sky.as_ref(), seconds, &mut overturned);
        balance.water_m3.surface += through.water_m3;
        balance.heat_j.surface += through.heat_j;
        let top_m3 = site.pool.volume_m3(site.pool.top_m()) - site.pool.volume_m3(site.pool.bed_m);
        let over_m3 = now.volume_m3() - top_m3;
        if over_m3 > MOST_OPEN * top_m3 + MOST_OVER_M * site.pool.area_m2(site.pool.top_m()) {
            let (over, top) = (say::m3(over_m3, 0), say::m(site.pool.top_m(), 2));
            return Err(fails(format!("the pool holds {over} more than its table, which ends at {top}")));
        }
    }
    balance.water_m3.after = now.volume_m3();
    balance.heat_j.after = now.heat_j();
    balance.closes().map_err(fails)?;
    let zones = zones.unwrap_or_default();
    let drawn = levels
        .into_iter()
        .zip(zones)
        .zip(&drawn)
        .map(|((level, zone), drawn)| Drawn { level, zone, draw: drawn.draw(now.has_oxygen) })
        .collect();
    *layers = now;
    Ok(Stepped { drawn, balance, overturned, steps })
}

/// What follows inflow and release: the surface, what stirs, what creeps, what breathes.
fn air_and_stir(
    now: &mut Layers,
    site: &Site,
    sky: Option<&Sky>,
    seconds: f64,
    overturned: &mut bool,
) -> Through {
    let grain = site.water.solids_kg_m3;
    let mut through = Through::default();
    if let Some(sky) = sky {
        let edges = now.edges_m(&site.pool);
        through = surface::exchange(&mut now.layers, site, &edges, sky, seconds);
    }
    *overturned |= mixing::overturn(&mut now.layers, grain);
    let edges = now.edges_m(&site.pool);
    if let (Some(sky), Some(&surface_m), Some(top)) = (sky, edges.last(), now.layers.last()) {
        let velocity = mixing::friction_velocity_m_s(surface::wind_m_s(sky), top.density_kg_m3(grain));
        let work = mixing::wind_work_j_m2(velocity, seconds);
        let work_j = site.season.knobs.wind * work * site.pool.area_m2(surface_m);
        *overturned |= mixing::deepen(&mut now.layers, &site.pool, &edges, grain, work_j);
    }
    reshape::reshape(now, site);
    let edges = now.edges_m(&site.pool);
    let traded = diffusion::traded_m3(&now.layers, site, &edges, seconds);
    diffusion::diffuse(&mut now.layers, &traded);
    // what joined or crept together may be denser than what lies below
    *overturned |= mixing::overturn(&mut now.layers, grain);
    oxygen::breathe(now, site, &edges, seconds);
    through
}
