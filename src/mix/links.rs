//! How the points of the river see the release, as curves of its temperature.
//!
//! Methods: `docs/methods.md`, sections 6 and 7.

use crate::river::{Curve, Link, links};
use crate::site::Site;
use crate::target::Figure;

use super::day::{Day, RuleToday};

/// Halvings that find the release a point asks for.
const HALVINGS: usize = 60;
/// Releases among which it is sought, C (choice: all water there is, and beyond).
const SOUGHT_C: (f64, f64) = (-50.0, 90.0);

/// How every point sees the releases of a span of temperatures.
#[derive(Debug, Clone, Default)]
pub struct Links {
    links: Vec<Link>,
    span_c: (f64, f64),
}

impl Links {
    /// The links of a day; `flows` are its parts as hours and m3/s, `span_c` the coldest and warmest release. None where
    /// no rule of the day speaks of a point.
    pub fn new(site: &Site, day: &Day, flows: &[(f64, f64)], span_c: (f64, f64)) -> Self {
        let asked = day.rules(site).iter().any(|rule| rule.point.is_some());
        let links = match day.conditions.as_deref().filter(|_| asked) {
            Some(conditions) => links(site, conditions, day.date, flows, span_c),
            None => Vec::new(),
        };
        Self { links, span_c }
    }

    /// How a point sees the release.
    pub fn get(&self, point: usize) -> Option<&Link> {
        self.links.iter().find(|link| link.point == Some(point))
    }

    /// The curve of a temperature at a point, never falling within the span: where the parabola would, the straight line
    /// between its ends serves, or their mean. Of every reading it is that of the greatest for an upper bound, else of
    /// the least.
    pub fn temperature(&self, point: usize, figure: Figure, upper: bool) -> Option<Curve> {
        let link = self.get(point)?;
        let curve = match figure {
            Figure::Mean => link.mean_c,
            Figure::Max => link.range_c?.0,
            Figure::Min => link.range_c?.1,
            Figure::Both => {
                if upper {
                    link.range_c?.0
                } else {
                    link.range_c?.1
                }
            }
            Figure::HourlyChange => return None,
        };
        Some(rising(curve, self.span_c))
    }

    /// The release temperature (C) with which a rule's figure comes to a bound; straight on beyond the span.
    pub(super) fn release_c(&self, rule: &RuleToday, bound_c: f64, upper: bool) -> Option<f64> {
        let Some(point) = rule.point else { return Some(bound_c) };
        let curve = self.temperature(point, rule.today.as_ref().ok()?.figure, upper)?;
        let at = |release_c: f64| {
            let inside = release_c.clamp(self.span_c.0, self.span_c.1);
            curve.at(inside) + slope(curve, inside) * (release_c - inside)
        };
        let (mut low, mut high) = SOUGHT_C;
        if !(at(low) < bound_c && at(high) > bound_c) {
            return None;
        }
        for _ in 0..HALVINGS {
            let middle = 0.5 * (low + high);
            if at(middle) < bound_c {
                low = middle;
            } else {
                high = middle;
            }
        }
        Some(0.5 * (low + high))
    }
}

fn slope(curve: Curve, release_c: f64) -> f64 {
    let [_, b, c] = curve.0;
    b + 2.0 * c * release_c
}

/// A curve that does not fall within a span.
fn rising(curve: Curve, (low, high): (f64, f64)) -> Curve {
    if slope(curve, low) >= 0.0 && slope(curve, high) >= 0.0 {
        return curve;
    }
    let (at_low, at_high) = (curve.at(low), curve.at(high));
    if at_high > at_low && high > low {
        let slope = (at_high - at_low) / (high - low);
        return Curve([at_low - slope * low, slope, 0.0]);
    }
    Curve([0.5 * (at_low + at_high), 0.0, 0.0])
}
