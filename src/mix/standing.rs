//! How a day's release stands against every target, over time as a gauge sees it.
//!
//! Methods: `docs/methods.md`, section 7.

use chrono::NaiveDate;

use crate::site::Site;
use crate::target::{Standing, Target};

use super::band::Spread;
use super::blend::Blend;

/// How the release stands against one target.
#[derive(Debug, Clone, PartialEq)]
pub struct TargetStanding {
    /// Index in the site's targets.
    pub target: usize,
    /// Temperature by the rule's statistic, C.
    pub value_c: Option<f64>,
    /// Standing of the temperature and distance outside, C.
    pub temperature: (Standing, Option<f64>),
    /// Oxygen below the dam, mg/L.
    pub oxygen_mg_l: Option<f64>,
    /// Standing of the oxygen and distance below, mg/L.
    pub oxygen: (Standing, Option<f64>),
    /// Share of the perturbed cases inside the temperature range.
    pub share_inside: Option<f64>,
    /// Share of the perturbed cases above the oxygen minimum.
    pub oxygen_share_inside: Option<f64>,
    /// Share of the perturbed cases inside both.
    pub share_inside_both: Option<f64>,
    /// The strictest rule valid on that date.
    pub governs: bool,
}

impl TargetStanding {
    /// Whether either standing is a miss.
    pub fn missed(&self) -> bool {
        [self.temperature.0, self.oxygen.0].iter().any(|s| matches!(s, Standing::Below | Standing::Above))
    }

    /// Whether a bound the rule sets cannot be judged.
    pub fn unknown(&self, site: &Site) -> bool {
        let rule = &site.targets[self.target];
        let range = rule.low_c.is_some() || rule.high_c.is_some();
        (range && self.temperature.0 == Standing::Unknown)
            || (rule.oxygen_min_mg_l.is_some() && self.oxygen.0 == Standing::Unknown)
    }
}

/// A part of the day: its share of it, what is then released, and its perturbed cases.
pub type Part<'a> = (f64, &'a Blend, &'a Spread);

/// Standing of the parts of a day against every target valid on a date; the rule with the least room governs. A steady
/// day is one part.
///
/// A statistic of temperature is taken over time, not over flow. Oxygen is held against its floor by the time mean
/// where the rule speaks of a daily mean, else by its least.
pub fn standings(site: &Site, parts: &[Part], date: NaiveDate) -> Vec<TargetStanding> {
    let temperatures: Vec<(f64, f64)> = parts.iter().map(|p| (p.0, p.1.temperature_c)).collect();
    let oxygens: Option<Vec<(f64, f64)>> =
        parts.iter().map(|p| Some((p.0, p.1.oxygen_below_mg_l?))).collect();
    // a case without oxygen is neither inside nor outside, so one such case leaves the shares unknown
    let oxygen_known = oxygens.is_some() && parts.iter().all(|p| p.2.cases.iter().all(|c| c.1.is_some()));
    let valid = site.targets.iter().enumerate().filter(|(_, rule)| rule.span.contains(date));
    let mut out: Vec<TargetStanding> = valid
        .map(|(target, rule)| {
            let statistic = rule.statistic;
            let value_c = Some(rule.value_over(&temperatures));
            let oxygen_mg_l = oxygens.as_ref().map(|o| statistic.oxygen_over(o));
            let inside = |s: (Standing, Option<f64>)| s.0 == Standing::Inside;
            let floor = rule.oxygen_min_mg_l.is_some();
            let has_range = rule.low_c.is_some() || rule.high_c.is_some();
            let warm = |case: usize| {
                let of = |p: &Part| Some((p.0, p.2.cases.get(case)?.0));
                let values: Option<Vec<(f64, f64)>> = parts.iter().map(of).collect();
                !has_range || inside(rule.temperature(values.map(|v| rule.value_over(&v))))
            };
            let aired = |case: usize| {
                let of = |p: &Part| Some((p.0, p.2.cases.get(case)?.1?));
                let values: Option<Vec<(f64, f64)>> = parts.iter().map(of).collect();
                !floor || inside(rule.oxygen(values.map(|v| statistic.oxygen_over(&v))))
            };
            let share = |holds: &dyn Fn(usize) -> bool| share(parts, holds);
            TargetStanding {
                target,
                value_c,
                temperature: rule.temperature(value_c),
                oxygen_mg_l,
                oxygen: rule.oxygen(oxygen_mg_l),
                share_inside: if has_range { share(&warm) } else { None },
                oxygen_share_inside: if floor && oxygen_known { share(&aired) } else { None },
                share_inside_both: if floor && !oxygen_known {
                    None
                } else {
                    share(&|case| warm(case) && aired(case))
                },
                governs: false,
            }
        })
        .collect();
    let rule = |s: &TargetStanding| -> &Target { &site.targets[s.target] };
    let strictest = out
        .iter()
        .enumerate()
        .filter_map(|(i, s)| Some((i, rule(s).room(s.value_c, s.oxygen_mg_l)?)))
        .min_by(|a, b| a.1.total_cmp(&b.1))
        .map(|(i, _)| i);
    if let Some(i) = strictest {
        out[i].governs = true;
    }
    out
}

/// Share of the perturbed cases for which a test holds; the same members stand behind every part.
fn share(parts: &[Part], holds: &dyn Fn(usize) -> bool) -> Option<f64> {
    let count = parts.iter().map(|p| p.2.cases.len()).min().filter(|n| *n > 0)?;
    Some((0..count).filter(|&case| holds(case)).count() as f64 / count as f64)
}
