//! The water where rules apply, mix by mix: at a point by its link to the parts of the day.

use gatemix::mix::{Conflict, Links, conflicts};
use gatemix::rank::Question;
use gatemix::target::{Figure, OxygenFigure};

/// The span of releases that links are made for goes beyond the water of the pool by this, C.
const BESIDE_C: f64 = 0.5;

pub(super) struct Afar {
    links: Links,
    pub(super) conflicts: Vec<Conflict>,
    /// Places of the release, C, and saturation below the dam there, mg/L.
    saturation: [(f64, f64); 3],
}

impl Afar {
    pub(super) fn of(question: &Question) -> Self {
        let column = &question.profile.column;
        let warm = || column.nodes_m().iter().map(|&z| column.reading(z).temperature_c);
        let low = warm().fold(f64::INFINITY, f64::min) - BESIDE_C;
        let high = warm().fold(f64::NEG_INFINITY, f64::max) + BESIDE_C;
        let flows: Vec<(f64, f64)> = question.blocks.iter().map(|b| (24.0 * b.0, b.1)).collect();
        let links = Links::new(question.site, question.day, &flows, (low, high));
        let conflicts = conflicts(question.site, &question.day.rules(question.site), &links);
        let salt = column.reading(0.5 * (column.bed_m() + column.surface_m())).salt_g_per_kg;
        let at = |t: f64| (t, question.site.saturation_below_mg_l(t, salt));
        Self { links, conflicts, saturation: [at(low), at(0.5 * (low + high)), at(high)] }
    }

    /// Temperatures at a point, with the ends of a range each is held against: lower, upper.
    pub(super) fn at_point(&self, point: usize, figure: Figure, release_c: f64) -> Vec<(f64, [bool; 2])> {
        let one = |upper| self.links.temperature(point, figure, upper).map(|curve| curve.at(release_c));
        match figure {
            Figure::Both => {
                let least = one(false).map(|t| (t, [true, false]));
                least.into_iter().chain(one(true).map(|t| (t, [false, true]))).collect()
            }
            _ => one(true).map(|t| (t, [true; 2])).into_iter().collect(),
        }
    }

    /// Oxygen at a place, where that of the release is known, and saturation there, mg/L; `None` where nothing is known
    /// of the place.
    pub(super) fn oxygen(
        &self,
        point: Option<usize>,
        figure: OxygenFigure,
        release_c: f64,
        release_mg_l: Option<f64>,
    ) -> Option<(Option<f64>, f64)> {
        let Some(point) = point else { return Some((release_mg_l, self.saturation_mg_l(release_c))) };
        let link = self.links.get(point)?;
        let of = match figure {
            OxygenFigure::Mean => link.oxygen_mean,
            OxygenFigure::Min => link.oxygen_min,
        };
        let (curve, slope) = of?;
        let found = release_mg_l.map(|o| curve.at(release_c) + slope * o);
        Some((found, link.saturation_mg_l.at(release_c)))
    }

    /// Lagrange's parabola through the three places.
    fn saturation_mg_l(&self, t: f64) -> f64 {
        let [a, b, c] = self.saturation;
        let part = |at: (f64, f64), x: (f64, f64), y: (f64, f64)| {
            at.1 * (t - x.0) * (t - y.0) / ((at.0 - x.0) * (at.0 - y.0))
        };
        part(a, b, c) + part(b, a, c) + part(c, a, b)
    }
}
