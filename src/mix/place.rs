//! The day's water at the places where rules apply: at the dam, and as the river carries it to the points.
//!
//! Methods: `docs/methods.md`, sections 6 and 7.

use crate::river::{self, AtPoint, Course};
use crate::site::Site;
use crate::target::{Air, Figure, OxygenFigure, Today};

use super::blend::Blend;
use super::day::Day;
use super::links::Links;
use super::standing::Part;

/// What the span of releases that links are made for goes beyond those asked about, C (choice).
const BESIDE_C: f64 = 0.5;

/// A day's water at one place.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Water {
    mean_c: f64,
    /// Greatest and least.
    range_c: Option<(f64, f64)>,
    hourly_change_c: Option<f64>,
    /// Mean and least.
    oxygen_mg_l: [Option<f64>; 2],
    /// Saturation, mg/L: what the mean and the least oxygen are divided by to give the mean and the least share of it.
    saturation_mg_l: [Option<f64>; 2],
    /// Its greatest and least are known, not its mean alone.
    by_hour: bool,
}

/// Which of mean and least.
fn of(figure: OxygenFigure) -> usize {
    usize::from(figure == OxygenFigure::Min)
}

impl Water {
    /// The figure of today that a rule is held against; of every reading the one farthest outside.
    pub(super) fn figure_c(&self, today: &Today) -> Option<f64> {
        match today.figure {
            Figure::Mean => Some(self.mean_c),
            Figure::Max => Some(self.range_c?.0),
            Figure::Min => Some(self.range_c?.1),
            Figure::HourlyChange => self.hourly_change_c,
            Figure::Both => {
                let (most, least) = self.range_c?;
                let below = today.outside_c(least);
                Some(if below < 0.0 && -below > today.outside_c(most) { least } else { most })
            }
        }
    }

    /// The oxygen that a floor is held against, mg/L.
    pub(super) fn oxygen_mg_l(&self, air: &Air) -> Option<f64> {
        self.oxygen_mg_l[of(air.figure)]
    }

    /// Its mean or its least oxygen, mg/L.
    pub(super) fn least_mg_l(&self, figure: OxygenFigure) -> Option<f64> {
        self.oxygen_mg_l[of(figure)]
    }

    /// The floor of that oxygen, mg/L.
    pub(super) fn floor_mg_l(&self, air: &Air) -> Option<f64> {
        if air.share {
            self.saturation_mg_l[of(air.figure)].map(|s| air.floor_mg_l(s))
        } else {
            Some(air.floor)
        }
    }

    /// Saturation there that its mean or its least oxygen is held against, mg/L.
    pub(super) fn saturation_mg_l(&self, figure: OxygenFigure) -> Option<f64> {
        self.saturation_mg_l[of(figure)]
    }

    /// Whether the mean of the day is all that is known of it.
    pub(super) fn mean_only(&self) -> bool {
        !self.by_hour
    }
}

/// The oxygen of a release that rules are held against, mg/L: below the dam.
pub(super) fn oxygen(blend: &Blend) -> Option<f64> {
    blend.oxygen_below_mg_l
}

/// Water at the dam of temperatures (C) and oxygens (mg/L) that each hold for a share of the day.
pub(super) fn at_dam(site: &Site, parts: &[(f64, f64, Option<f64>)], salt_g_per_kg: f64) -> Water {
    let temperatures = || parts.iter().map(|p| p.1);
    let oxygens: Option<Vec<f64>> = parts.iter().map(|p| p.2).collect();
    let mean_c = parts.iter().map(|p| p.0 * p.1).sum();
    // within the day, as at a point: what the next day begins with is not known
    let next = temperatures().skip(1);
    let change = temperatures().zip(next).map(|(a, b)| (a - b).abs()).fold(0.0, f64::max);
    let oxygen_mg_l =
        [parts.iter().map(|p| Some(p.0 * p.2?)).sum(), oxygens.and_then(|o| o.into_iter().reduce(f64::min))];
    let full = |t: f64| site.saturation_below_mg_l(t, salt_g_per_kg);
    let shares = || parts.iter().map(|p| Some((p.0, p.2? / full(p.1))));
    // a steady day has one saturation
    let share = match parts {
        [_] => [None; 2],
        _ => [
            shares().map(|s| s.map(|(of_day, share)| of_day * share)).sum(),
            shares().map(|s| s.map(|s| s.1)).reduce(|a, b| Some(a?.min(b?))).flatten(),
        ],
    };
    Water {
        mean_c,
        range_c: Some((
            temperatures().fold(f64::NEG_INFINITY, f64::max),
            temperatures().fold(f64::INFINITY, f64::min),
        )),
        hourly_change_c: Some(change),
        oxygen_mg_l,
        saturation_mg_l: saturations(oxygen_mg_l, share, full(mean_c)),
        by_hour: true,
    }
}

/// Water at a point.
fn at_point(site: &Site, at: &AtPoint) -> Water {
    let f = &at.figures;
    let oxygen_mg_l = [f.oxygen_mean_mg_l, f.oxygen_min_mg_l];
    let share = [f.oxygen_share.map(|s| s.1), f.oxygen_share.map(|s| s.0)];
    Water {
        mean_c: f.mean_c,
        range_c: f.range_c,
        hourly_change_c: f.hourly_change_c,
        oxygen_mg_l,
        saturation_mg_l: saturations(oxygen_mg_l, share, site.saturation_below_mg_l(f.mean_c, 0.0)),
        by_hour: f.range_c.is_some(),
    }
}

/// What oxygen divided by a share of saturation makes saturation; of water without oxygen that of its temperature.
fn saturations(
    oxygen_mg_l: [Option<f64>; 2],
    share: [Option<f64>; 2],
    by_temperature_mg_l: f64,
) -> [Option<f64>; 2] {
    let one = |i: usize| {
        let by_share = oxygen_mg_l[i].zip(share[i]).filter(|(_, share)| *share > 0.0);
        Some(by_share.map_or(by_temperature_mg_l, |(oxygen, share)| oxygen / share))
    };
    [one(0), one(1)]
}

/// The places of a day with its release.
pub(super) struct Places<'a> {
    site: &'a Site,
    parts: &'a [Part<'a>],
    dam: Water,
    /// The way down the river, where it is known.
    pub(super) course: Option<Course>,
    /// How points see the release.
    pub(super) links: Links,
    /// Mean temperature of the release by flow, C.
    mean_c: f64,
}

impl<'a> Places<'a> {
    pub(super) fn new(site: &'a Site, parts: &'a [Part<'a>], day: &Day, river: bool) -> Self {
        let at = |p: &Part| (p.0, p.1.temperature_c, oxygen(p.1));
        let of_parts: Vec<(f64, f64, Option<f64>)> = parts.iter().map(at).collect();
        let conditions = day.conditions.as_deref().filter(|_| river);
        let down: Vec<river::Part> = parts
            .iter()
            .map(|p| river::Part {
                hours: 24.0 * p.0,
                flow_m3s: p.1.flow_m3s,
                temperature_c: p.1.temperature_c,
                oxygen_mg_l: oxygen(p.1),
            })
            .collect();
        let course = conditions.and_then(|c| river::course(site, c, day.date, &down));
        let flows: Vec<(f64, f64)> = down.iter().map(|p| (p.hours, p.flow_m3s)).collect();
        let cases = parts.iter().flat_map(|p| p.2.cases.iter().map(|c| c.0));
        let all = || of_parts.iter().map(|p| p.1).chain(cases.clone());
        let span = (
            all().fold(f64::INFINITY, f64::min) - BESIDE_C,
            all().fold(f64::NEG_INFINITY, f64::max) + BESIDE_C,
        );
        let links = if course.is_some() { Links::new(site, day, &flows, span) } else { Links::default() };
        let salt = parts.first().map_or(0.0, |p| p.1.salt_g_per_kg);
        let mean_c = by_flow(parts, |p| Some(p.1.temperature_c)).unwrap_or(0.0);
        Self { site, parts, dam: at_dam(site, &of_parts, salt), course, links, mean_c }
    }

    /// The day's water at the dam, or at a point of the river.
    pub(super) fn water(&self, point: Option<usize>) -> Option<Water> {
        let Some(point) = point else { return Some(self.dam) };
        self.course.as_ref()?.points.iter().find(|p| p.point == point).map(|at| at_point(self.site, at))
    }

    /// The same water in a perturbed case: at a point it differs from the central one by what its link makes of the
    /// difference of the release.
    pub(super) fn case(&self, point: Option<usize>, case: usize) -> Option<Water> {
        let of = |p: &Part| p.2.cases.get(case).copied();
        let Some(point) = point else {
            let parts: Option<Vec<(f64, f64, Option<f64>)>> =
                self.parts.iter().map(|p| of(p).map(|(t, o)| (p.0, t, o))).collect();
            let salt = self.parts.first().map_or(0.0, |p| p.1.salt_g_per_kg);
            return Some(at_dam(self.site, &parts?, salt));
        };
        let (middle, link) = (self.water(Some(point))?, self.links.get(point)?);
        let t = by_flow(self.parts, |p| of(p).map(|c| c.0))?;
        let shift = |curve: river::Curve| curve.at(t) - curve.at(self.mean_c);
        let aired = |of_release: Option<(river::Curve, f64)>| {
            let (curve, slope) = of_release?;
            let more = by_flow(self.parts, |p| Some(of(p)?.1? - oxygen(p.1)?))?;
            Some(shift(curve) + slope * more)
        };
        let add = |value: Option<f64>, more: Option<f64>| Some((value? + more?).max(0.0));
        Some(Water {
            mean_c: middle.mean_c + shift(link.mean_c),
            range_c: middle
                .range_c
                .zip(link.range_c)
                .map(|(range, curves)| (range.0 + shift(curves.0), range.1 + shift(curves.1))),
            hourly_change_c: None,
            oxygen_mg_l: [
                add(middle.oxygen_mg_l[0], aired(link.oxygen_mean)),
                add(middle.oxygen_mg_l[1], aired(link.oxygen_min)),
            ],
            saturation_mg_l: middle.saturation_mg_l.map(|s| Some(s? + shift(link.saturation_mg_l))),
            by_hour: middle.by_hour,
        })
    }
}

/// Mean over the parts of a day by their flow; `None` where that of any is.
fn by_flow(parts: &[Part], of: impl Fn(&Part) -> Option<f64>) -> Option<f64> {
    let (mut sum, mut flow) = (0.0, 0.0);
    for part in parts {
        let weight = part.0 * part.1.flow_m3s;
        sum += weight * of(part)?;
        flow += weight;
    }
    (flow > 0.0).then(|| sum / flow)
}

#[cfg(test)]
mod tests {
    use super::{Water, saturations};
    use crate::target::{Air, OxygenFigure};

    /// Least 6 mg/L at 60 % and mean 8 mg/L at 90 % of saturation: 70 % of it is 7 mg/L of the least and 6.22 of the
    /// mean, so the least lies below and the mean does not.
    #[test]
    fn scenario_the_least_share_of_saturation_is_that_of_its_own_hour() {
        let oxygen_mg_l = [Some(8.0), Some(6.0)];
        let water = Water {
            mean_c: 15.0,
            range_c: None,
            hourly_change_c: None,
            oxygen_mg_l,
            saturation_mg_l: saturations(oxygen_mg_l, [Some(0.9), Some(0.6)], 10.0),
            by_hour: true,
        };
        let floor = |figure| {
            let air = Air { figure, floor: 0.7, share: true, add: 0.0, times: 1.0, observed: false };
            water.floor_mg_l(&air).unwrap_or(0.0)
        };
        assert!((floor(OxygenFigure::Min) - 7.0).abs() < 1e-12);
        assert!((floor(OxygenFigure::Mean) - 0.7 * 8.0 / 0.9).abs() < 1e-12);
    }

    /// Water without oxygen lies below a floor over saturation: it is not unknown.
    #[test]
    fn scenario_water_without_oxygen_has_a_saturation() {
        let none = [Some(0.0); 2];
        assert_eq!(saturations(none, none, 9.5), [Some(9.5); 2]);
    }
}
