//! The air over the pool and the river, day by day, in one case.
//!
//! Methods: `docs/methods.md`, section 8.

use std::collections::BTreeMap;
use std::sync::Arc;

use chrono::NaiveDate;

use crate::river::Conditions;
use crate::site::{Case, Site};
use crate::weather::{Air, Weather};

/// What the surface trades with on a day.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Sky {
    /// The air.
    Air(Air),
    /// A given equilibrium temperature, C, and exchange, W/m2/C: light then warms the surface alone.
    Given {
        /// Equilibrium temperature, C.
        equilibrium_c: f64,
        /// Exchange, W/m2/C.
        exchange_w_m2_c: f64,
    },
}

/// A case of the season: its air by day, and what it does to the inflow.
#[derive(Debug, Clone)]
pub struct Skies {
    /// The case and its shifts; a year of weather is a case without any.
    pub case: Case,
    /// The year whose weather it is, where it is one of several.
    pub year: Option<i32>,
    /// The air by day.
    pub days: BTreeMap<NaiveDate, Sky>,
    /// The site with the river under the same air.
    pub site: Arc<Site>,
    /// What is known around the river, with the same air; no station has recorded a day ahead.
    pub conditions: Arc<Conditions>,
    /// Where its air comes from, in words.
    pub from: String,
}

impl Skies {
    /// The case of a site between two dates, made from the weather of the folder, the months of the site file and the
    /// case's shifts; a reason where a day has no air.
    ///
    /// # Errors
    /// The first day without air, in words.
    pub fn of_case(
        site: &Site,
        conditions: &Conditions,
        case: &Case,
        from: NaiveDate,
        to: NaiveDate,
    ) -> Result<Self, String> {
        let _ = (site, conditions, case, from, to);
        Err(String::new())
    }

    /// One case for each year of a weather record that holds all the days of the season.
    pub fn of_years(
        site: &Site,
        conditions: &Conditions,
        years: &Weather,
        from: NaiveDate,
        to: NaiveDate,
    ) -> Vec<Self> {
        let _ = (site, conditions, years, from, to);
        Vec::new()
    }
}
