//! What is wanted of the water elsewhere than at the dam, as curves of the release temperature; and floors of oxygen that
//! depend on the temperature.
//!
//! Every line is a parabola of the release temperature. Of several mixes at once it gives no less than any of them: a
//! temperature never falls as the release warms, so its ends serve; a shortage of oxygen may dip between its ends by no
//! more than a quarter of its bend times the square of the span.
//!
//! Methods: `docs/methods.md`, section 10.

use crate::mix::{Conflict, Links, RuleToday, conflicts};
use crate::profile::Column;
use crate::river::Figures;
use crate::site::Site;
use crate::target::{Air, Figure, OxygenFigure, Today};

use super::Question;
use super::goal::{Days, most};

/// What the span of releases goes beyond the water of the pool, C (choice).
const BESIDE_C: f64 = 0.5;

/// A parabola: a + b t + c t^2.
type Parabola = [f64; 3];

#[inline]
fn at([a, b, c]: Parabola, t: f64) -> f64 {
    a + t * (b + t * c)
}

/// How the places where rules apply see the releases of a question.
pub struct Seen {
    links: Links,
    /// Saturation below the dam, mg/L.
    saturation: Parabola,
}

impl Seen {
    /// The links of the day's parts, for every temperature the pool can give.
    pub fn of(question: &Question) -> Self {
        let column = &question.profile.column;
        let (span, salt) = water(column);
        // with blocks the river is carried by the hour: only so its greatest and least of a day are known
        let flows: Vec<(f64, f64)> = question.blocks.iter().map(|b| (24.0 * b.0, b.1)).collect();
        let links = Links::new(question.site, question.day, &flows, span);
        let saturation = |t: f64| question.site.saturation_below_mg_l(t, salt);
        let middle = 0.5 * (span.0 + span.1);
        Self { links, saturation: through([span.0, middle, span.1], saturation) }
    }

    pub(super) fn conflicts(&self, site: &Site, rules: &[RuleToday]) -> Vec<Conflict> {
        conflicts(site, rules, &self.links)
    }

    /// How far off a point's water lies from what the order took it for: of the temperature that a rule speaks of (C),
    /// and of its oxygen (mg/L); of the same release as a time mean.
    pub fn apart(
        &self,
        rule: &RuleToday,
        (release_c, release_mg_l): (f64, Option<f64>),
        full: &Figures,
    ) -> (Option<f64>, Option<f64>) {
        let Some(point) = rule.point else { return (None, None) };
        let figure = rule.today.as_ref().ok().map(|today| today.figure);
        let far = |upper: bool| {
            let told = match figure? {
                Figure::Mean => full.mean_c,
                Figure::Max => full.range_c?.0,
                Figure::Min => full.range_c?.1,
                Figure::Both => full.range_c.map(|r| if upper { r.0 } else { r.1 })?,
                Figure::HourlyChange => return None,
            };
            Some((self.links.temperature(point, figure?, upper)?.at(release_c) - told).abs())
        };
        let link = self.links.get(point);
        let aired = rule.air.and_then(|air| {
            let least = air.figure == OxygenFigure::Min;
            let (curve, slope) = if least { link?.oxygen_min? } else { link?.oxygen_mean? };
            let told = if least { full.oxygen_min_mg_l? } else { full.oxygen_mean_mg_l? };
            Some((curve.at(release_c) + slope * release_mg_l? - told).abs())
        });
        ([far(false), far(true)].into_iter().flatten().reduce(f64::max), aired)
    }
}

/// Coldest and warmest water of a pool and a little beyond, C; its salt at mid height, g/kg.
fn water(column: &Column) -> ((f64, f64), f64) {
    let temperatures = || column.nodes_m().iter().map(|&z| column.reading(z).temperature_c);
    let low = temperatures().fold(f64::INFINITY, f64::min);
    let high = temperatures().fold(f64::NEG_INFINITY, f64::max);
    let salt = column.reading(0.5 * (column.bed_m() + column.surface_m())).salt_g_per_kg;
    ((low - BESIDE_C, high + BESIDE_C), salt)
}

/// The parabola through three places.
fn through([x, y, z]: [f64; 3], of: impl Fn(f64) -> f64) -> Parabola {
    let (at_x, at_y, at_z) = (of(x), of(y), of(z));
    let (first, second) = ((at_y - at_x) / (y - x), (at_z - at_y) / (z - y));
    let bend = (second - first) / (z - x);
    [at_x - x * first + x * y * bend, first - bend * (x + y), bend]
}

/// Bounds of a temperature elsewhere.
#[derive(Debug, Clone, Copy)]
struct Bound {
    curve: Parabola,
    low: f64,
    high: f64,
    preferred: (f64, f64),
}

/// A floor of oxygen: short by a parabola of the release temperature, less so much for each mg/L of the release.
#[derive(Debug, Clone, Copy)]
struct Floor {
    short: Parabola,
    per_mg_l: f64,
    /// 0 by the mean oxygen of the day, 1 by its least.
    oxygen: usize,
    /// How far the shortage can dip between its ends, per square of the span.
    dip: f64,
}

/// What is wanted elsewhere.
#[derive(Debug, Clone, Default)]
pub(super) struct Afar {
    bounds: Vec<Bound>,
    floors: Vec<Floor>,
}

impl Afar {
    /// Adds what a rule asks of the temperature at a point. What the link does not tell, such as the greatest of a day
    /// known only by its mean, orders nothing.
    pub(super) fn bound(&mut self, seen: &Seen, point: usize, today: &Today, wish: bool) {
        let low = today.low_asked_c();
        let curve = |upper| seen.links.temperature(point, today.figure, upper).map(|curve| curve.0);
        let (Some(upper), Some(lower)) = (curve(true), curve(false)) else { return };
        let nothing = Bound {
            curve: upper,
            low: f64::NEG_INFINITY,
            high: f64::INFINITY,
            preferred: (f64::INFINITY, f64::NEG_INFINITY),
        };
        let high = today.high_c.filter(|_| !wish).unwrap_or(f64::INFINITY);
        let kept = low.filter(|_| !wish).unwrap_or(f64::NEG_INFINITY);
        let warmest = today.preferred_c.or(today.high_c).unwrap_or(f64::INFINITY);
        let coldest = today.preferred_c.or(low).unwrap_or(f64::NEG_INFINITY);
        if today.figure == Figure::Both {
            self.bounds.push(Bound { high, preferred: (warmest, nothing.preferred.1), ..nothing });
            let of_least = Bound { curve: lower, ..nothing };
            self.bounds.push(Bound { low: kept, preferred: (nothing.preferred.0, coldest), ..of_least });
        } else {
            self.bounds.push(Bound { low: kept, high, preferred: (warmest, coldest), ..nothing });
        }
    }

    /// Adds what a rule asks of the oxygen, at the dam or at a point.
    pub(super) fn floor(&mut self, seen: &Seen, point: Option<usize>, air: Air, steady: bool) {
        let least = air.figure == OxygenFigure::Min;
        let (without, per_mg_l, saturation) = match point {
            None => ([0.0; 3], 1.0, seen.saturation),
            Some(point) => {
                let link = seen.links.get(point);
                let of = link.and_then(|link| if least { link.oxygen_min } else { link.oxygen_mean });
                let Some((link, (curve, per_mg_l))) = link.zip(of) else { return };
                (curve.0, per_mg_l, link.saturation_mg_l.0)
            }
        };
        let floor = if air.share { saturation.map(|s| air.floor * s) } else { [air.floor, 0.0, 0.0] };
        let short: Parabola = std::array::from_fn(|i| floor[i] - without[i]);
        self.floors.push(Floor {
            short,
            per_mg_l: per_mg_l.max(0.0),
            oxygen: usize::from(least && !steady),
            dip: 0.25 * short[2].max(0.0),
        });
    }

    /// Whether any floor is wanted.
    pub(super) fn has_floor(&self) -> bool {
        !self.floors.is_empty()
    }

    /// Raises distances from the preferred temperatures, C.
    #[inline]
    pub(super) fn distances_c<const N: usize>(&self, days: &Days<N>, out: &mut [f64; N]) {
        for bound in &self.bounds {
            for (i, out) in out.iter_mut().enumerate() {
                let (low, high) = (at(bound.curve, days.low_c[0][i]), at(bound.curve, days.high_c[0][i]));
                *out = most(most(*out, low - bound.preferred.0), bound.preferred.1 - high);
            }
        }
    }

    /// Raises distances outside the ranges, C.
    #[inline]
    pub(super) fn outside_c<const N: usize>(&self, days: &Days<N>, out: &mut [f64; N]) {
        for bound in &self.bounds {
            for (i, out) in out.iter_mut().enumerate() {
                let (low, high) = (at(bound.curve, days.low_c[0][i]), at(bound.curve, days.high_c[0][i]));
                *out = most(most(*out, bound.low - high), low - bound.high);
            }
        }
    }

    /// Raises shortages of oxygen, mg/L.
    #[inline]
    pub(super) fn short_mg_l<const N: usize>(&self, days: &Days<N>, out: &mut [f64; N]) {
        for floor in &self.floors {
            let oxygen = &days.oxygen_mg_l[floor.oxygen];
            for (i, out) in out.iter_mut().enumerate() {
                let (cold, warm) = (days.low_c[0][i], days.high_c[0][i]);
                let ends = [at(floor.short, cold), at(floor.short, warm)];
                let least = if ends[0] < ends[1] { ends[0] } else { ends[1] };
                let dip = floor.dip * (warm - cold) * (warm - cold);
                *out = most(*out, least - dip - floor.per_mg_l * oxygen[i]);
            }
        }
    }
}
