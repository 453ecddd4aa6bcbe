//! How a point sees the release: its water as a function of what leaves the dam, for one day and one set of flows.
//!
//! Methods: `docs/methods.md`, section 6.

use chrono::NaiveDate;

use crate::site::Site;
use crate::water::saturation_mg_l;

use super::Conditions;
use super::course::{Part, at_points};
use super::figures::Figures;
use super::run::Run;
use super::slices::slices;

/// A parabola through three temperatures: a + b t + c t^2.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Curve(pub [f64; 3]);

impl Curve {
    /// Through values at three evenly spaced places.
    fn through([low, middle, high]: [f64; 3], [at_low, at_middle, at_high]: [f64; 3]) -> Self {
        let half = 0.5 * (high - low);
        let slope = (at_high - at_low) / (2.0 * half);
        let bend = (at_high - 2.0 * at_middle + at_low) / (2.0 * half * half);
        let constant = at_middle - slope * middle + bend * middle * middle;
        Self([constant, slope - 2.0 * bend * middle, bend])
    }

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

/// Oxygen of the release at which a link is exact at its three temperatures, mg/L (choice: what releases often hold).
const USUAL_MG_L: f64 = 8.0;

/// Least span of temperatures that a parabola is laid through, C (choice).
const LEAST_SPAN_C: f64 = 0.5;

/// How every point sees the release of a day: `flows` are the parts of the day as hours and m3/s, `span_c` the coldest
/// and warmest release to be told. The dam itself is not among them.
///
/// Three releases are carried down, the coldest, the warmest and the one between, with oxygen and without; what each
/// mg/L adds is taken at the middle one. Empty where [`course`](super::course) is `None`.
pub fn links(
    site: &Site,
    conditions: &Conditions,
    date: NaiveDate,
    flows: &[(f64, f64)],
    span_c: (f64, f64),
) -> Vec<Link> {
    let Some(run) = Run::new(site, conditions, date, flows, 0) else { return Vec::new() };
    let middle = 0.5 * (span_c.0 + span_c.1);
    let half = (0.5 * (span_c.1 - span_c.0)).max(0.5 * LEAST_SPAN_C);
    let at_c = [middle - half, middle, middle + half];
    let carried = |oxygen: f64| at_c.map(|c| figures(&run, flows, c, Some(oxygen)));
    let (empty, usual) = (carried(0.0), carried(USUAL_MG_L));
    let link = |point: usize| {
        let of = |three: &[Vec<Figures>; 3], figure: &dyn Fn(&Figures) -> Option<f64>| {
            let [a, b, c] = three;
            let one = |list: &Vec<Figures>| list.get(point).and_then(figure);
            Some([one(a)?, one(b)?, one(c)?])
        };
        let curve =
            |figure: &dyn Fn(&Figures) -> Option<f64>| Some(Curve::through(at_c, of(&usual, figure)?));
        let with_oxygen = |figure: &dyn Fn(&Figures) -> Option<f64>| {
            let (none, eight) = (of(&empty, figure)?, of(&usual, figure)?);
            let slope = (eight[1] - none[1]) / USUAL_MG_L;
            Some((Curve::through(at_c, eight.map(|o| o - slope * USUAL_MG_L)), slope))
        };
        let saturation = |c: f64| saturation_mg_l(c, 0.0, run.pressure_atm);
        Some(Link {
            point: Some(point),
            mean_c: curve(&|f| Some(f.mean_c))?,
            range_c: curve(&|f| f.range_c.map(|r| r.0)).zip(curve(&|f| f.range_c.map(|r| r.1))),
            oxygen_mean: with_oxygen(&|f| f.oxygen_mean_mg_l),
            oxygen_min: with_oxygen(&|f| f.oxygen_min_mg_l),
            saturation_mg_l: curve(&|f| Some(saturation(f.mean_c)))?,
        })
    };
    (0..run.river().points.len()).filter_map(link).collect()
}

/// The figures at every point of a release that is alike in all parts of the day.
pub(super) fn figures(
    run: &Run,
    flows: &[(f64, f64)],
    temperature_c: f64,
    oxygen_mg_l: Option<f64>,
) -> Vec<Figures> {
    let part = |&(hours, flow_m3s): &(f64, f64)| Part { hours, flow_m3s, temperature_c, oxygen_mg_l };
    let parts: Vec<Part> = flows.iter().map(part).collect();
    let slices = slices(&parts, run.river().decay.demand_mg_l, run.by_hour());
    let (rows, _) = run.carry(&slices);
    at_points(run, &slices, &rows).into_iter().map(|p| p.figures).collect()
}
