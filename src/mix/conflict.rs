//! Rules that leave no water in common.
//!
//! Methods: `docs/methods.md`, section 7.

use crate::problem::Problem;
use crate::site::Site;
use crate::target::{DAM, Figure};
use crate::units::say;

use super::day::RuleToday;
use super::links::Links;

/// Ranges that overlap or touch within this leave something in common, C (choice: round-off).
const ROUND_OFF_C: f64 = 1e-6;

/// Temperatures that water of a river can have, C (choice).
const WATER_C: (f64, f64) = (0.0, 45.0);

/// Two rules valid on one day that leave no release temperature in common.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Conflict {
    /// Indices in the site's targets: the one that wants it colder, and the one that wants it warmer.
    pub targets: [usize; 2],
    /// The warmest water the first allows, and the coldest the second does, C: at their common point, else as the
    /// river carries them back to the dam.
    pub bounds_c: [f64; 2],
    /// Both speak of one place.
    pub same_place: bool,
}

impl Conflict {
    /// The conflict as a warning.
    pub fn problem(&self, site: &Site) -> Problem {
        let rule = |i: usize| site.targets.get(self.targets[i]);
        let name = |i: usize| rule(i).map_or("", |t| t.name.as_str());
        let place = match rule(0) {
            Some(rule) if self.same_place && rule.point == DAM => "at the dam".to_owned(),
            Some(rule) if self.same_place => format!("at {}", rule.point),
            _ => "of the release".to_owned(),
        };
        let words = format!(
            "`{}` and `{}` leave no temperature {place} in common today: at most {}, and at least {}",
            name(0),
            name(1),
            say::c(self.bounds_c[0], 1),
            say::c(self.bounds_c[1], 1)
        );
        let priority = |i: usize| rule(i).map_or(1, |t| t.priority);
        let first = usize::from(priority(0) > priority(1));
        let cure = if priority(0) == priority(1) {
            "ask who set them which one comes first, and give `priority`".to_owned()
        } else {
            format!(
                "`{}` has the smaller `priority` number: ask who set them whether that is meant",
                name(first)
            )
        };
        Problem::flag("conflict", words, cure)
    }
}

/// Conflicts among the hard rules of a day.
pub fn conflicts(site: &Site, rules: &[RuleToday], links: &Links) -> Vec<Conflict> {
    let hard: Vec<&RuleToday> =
        rules.iter().filter(|r| site.targets.get(r.target).is_some_and(|t| !t.soft)).collect();
    let mut out = Vec::new();
    for (i, a) in hard.iter().enumerate() {
        for b in hard.iter().skip(i + 1) {
            out.extend(conflict(a, b, links).or_else(|| conflict(b, a, links)));
        }
    }
    out
}

/// Whether what one rule allows at most lies below what another asks at least.
fn conflict(colder: &RuleToday, warmer: &RuleToday, links: &Links) -> Option<Conflict> {
    let (of, other) = (colder.today.as_ref().ok()?, warmer.today.as_ref().ok()?);
    let (high, low) = (of.high_c?, other.low_c?);
    let targets = [colder.target, warmer.target];
    let changes = |figure| figure == Figure::HourlyChange;
    if changes(of.figure) || changes(other.figure) {
        return None;
    }
    let same_place = colder.point == warmer.point;
    // at the dam a steady release has one temperature
    let same_water = same_place && (colder.point.is_none() || of.figure == other.figure);
    let bounds_c = if same_water {
        [high, low]
    } else {
        [links.release_c(colder, high, true)?, links.release_c(warmer, low, false)?]
    };
    // a bound that no water can have is out of reach by itself, whatever the other asks
    let is_water = |c: f64| (WATER_C.0..=WATER_C.1).contains(&c);
    let apart = bounds_c[0] < bounds_c[1] - ROUND_OFF_C;
    (apart && bounds_c.into_iter().all(is_water)).then_some(Conflict {
        targets,
        bounds_c,
        same_place: same_water,
    })
}
