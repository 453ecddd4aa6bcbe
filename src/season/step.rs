//! A day of the pool: inflow, release, surface, overturn, wind, diffusion, oxygen, in sub-steps.
//!
//! Methods: `docs/methods.md`, section 8.

use chrono::NaiveDate;

use crate::mix::{Drawn, Level};
use crate::profile::Column;
use crate::site::Site;

use super::balance::Balance;
use super::layers::Layers;
use super::skies::Sky;

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

/// Takes the pool through one day. `levels` says what is drawn from a column under a pool (m), flows in m3/s.
///
/// # Errors
/// The term that does not close; water asked that the pool does not hold.
pub fn day(
    layers: &mut Layers,
    site: &Site,
    forcing: &Forcing,
    levels: &dyn Fn(&Column, f64) -> Vec<Level>,
) -> Result<Stepped, Unbalanced> {
    let _ = (layers, site, levels);
    Err(Unbalanced { date: forcing.date, words: String::new() })
}
