//! A day's release carried down the river.
//!
//! Methods: `docs/methods.md`, section 6.

use chrono::NaiveDate;

use crate::problem::Problem;
use crate::site::Site;

use super::Conditions;

/// A part of the day with its release, in the order of the day from midnight.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Part {
    /// Hours it lasts; the parts of a day sum to 24.
    pub hours: f64,
    /// Flow, m3/s.
    pub flow_m3s: f64,
    /// Temperature below the dam, C.
    pub temperature_c: f64,
    /// Oxygen below the dam, mg/L.
    pub oxygen_mg_l: Option<f64>,
}

/// The figures of a day's water at one place.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Figures {
    /// Time mean of the temperature, C.
    pub mean_c: f64,
    /// Greatest and least temperature, C; `None` where only days are known, not hours.
    pub range_c: Option<(f64, f64)>,
    /// Greatest change from one hour to the next, C; `None` as above.
    pub hourly_change_c: Option<f64>,
    /// Time mean of the oxygen, mg/L.
    pub oxygen_mean_mg_l: Option<f64>,
    /// Least oxygen, mg/L; the mean where only days are known.
    pub oxygen_min_mg_l: Option<f64>,
    /// Least and mean oxygen over saturation.
    pub oxygen_share: Option<(f64, f64)>,
    /// Flow, m3/s, as its time mean.
    pub flow_m3s: f64,
}

/// What arrives at a point.
#[derive(Debug, Clone, PartialEq)]
pub struct AtPoint {
    /// Index in the points of the site's river.
    pub point: usize,
    /// Its figures.
    pub figures: Figures,
    /// Hours the water takes from the dam, by the mean flow of the day.
    pub travel_h: f64,
    /// Hours before which a change of flow cannot arrive.
    pub rise_first_h: f64,
    /// Hours its bulk takes.
    pub rise_h: f64,
    /// Temperature by the hour of release, C; empty where only days are known.
    pub hourly_c: Vec<f64>,
}

/// The river at one distance, for a picture of it.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Place {
    /// Distance from the dam, m.
    pub at_m: f64,
    /// Its figures.
    pub figures: Figures,
}

/// A day's release on its way down.
#[derive(Debug, Clone, PartialEq)]
pub struct Course {
    /// What arrives at every point, in the order of the site's river.
    pub points: Vec<AtPoint>,
    /// The river from the dam to its end.
    pub along: Vec<Place>,
    /// What to beware of: a travel table held at its end, a coefficient beyond its range, weather that ends.
    pub flags: Vec<Problem>,
}

/// Carries a day's release down the river. `None` where the site has no river or what its surface trades with the air
/// on that day is not known.
pub fn course(site: &Site, conditions: &Conditions, date: NaiveDate, parts: &[Part]) -> Option<Course> {
    let _ = (site, conditions, date, parts);
    None
}
