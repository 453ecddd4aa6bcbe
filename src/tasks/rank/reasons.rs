//! Why a mix stands where it does, in words.

use crate::mix::TargetStanding;
use crate::rank::Criterion;
use crate::site::Site;
use crate::target::{Standing, Target};
use crate::units::say;

use super::shown::Shown;

/// What a mix gives and takes.
pub(super) fn reasons(site: &Site, shown: &Shown) -> Vec<String> {
    let mut out = Vec::new();
    for standing in shown.targets.iter().filter(|s| s.governs || s.missed()) {
        let rule = &site.targets[standing.target];
        let words: Vec<String> =
            [warmth(rule, standing), air(rule, standing)].into_iter().flatten().collect();
        if !words.is_empty() {
            out.push(format!("{}: {}", rule.name, words.join(", ")));
        }
    }
    if let (Some(cold), Some(threshold)) = (shown.cold_m3_per_day, site.cold_water_c.first()) {
        let share = cold / (86_400.0 * shown.flow_m3s);
        out.push(format!(
            "takes {} a day below {}, {:.0} % of the release",
            say::m3(cold, 0),
            say::c(*threshold, 1),
            100.0 * share
        ));
    }
    if let Some(moves) = shown.change.as_ref().map(|c| c.moves) {
        let crew = if moves.crew_hours > 0.0 {
            format!(", {:.1} crew hours", moves.crew_hours)
        } else {
            String::new()
        };
        out.push(match moves.count {
            0 => "no gate moves".to_owned(),
            1 => format!("1 gate moves{crew}"),
            n => format!("{n} gates move{crew}"),
        });
    }
    out
}

/// What puts a mix behind the one before; `None` where no criterion tells them apart.
pub(super) fn behind(criterion: Option<Criterion>) -> String {
    match criterion {
        Some(criterion) => format!("behind the one before by {}", words(criterion)),
        None => "level with the one before; elevation and name decide".to_owned(),
    }
}

/// A criterion in a sentence.
fn words(criterion: Criterion) -> &'static str {
    match criterion {
        Criterion::Oxygen => "its oxygen below the floor",
        Criterion::Range => "its temperature outside the range",
        Criterion::Preferred => "its distance from the preferred temperature",
        Criterion::ColdWater => "the cold water it takes",
        Criterion::Moves => "its moves and crew hours",
    }
}

fn warmth(rule: &Target, standing: &TargetStanding) -> Option<String> {
    let value = standing.value_c?;
    let by = standing.temperature.1.unwrap_or(0.0);
    if !rule.is_of_temperature() {
        return difference(rule, standing.temperature.0, value, by);
    }
    let shown = say::c(value, 1);
    match standing.temperature.0 {
        Standing::Unknown => None,
        Standing::Below => Some(format!("{shown} is {} too cold", say::dc(by, 1))),
        Standing::Above => Some(format!("{shown} is {} too warm", say::dc(by, 1))),
        Standing::Inside => Some(match rule.preferred_c {
            Some(preferred) => format!(
                "{shown} is inside its range, {} from the preferred",
                say::dc((value - preferred).abs(), 1)
            ),
            None => format!("{shown} is inside its range"),
        }),
    }
}

/// The same of a difference, or of a sum of degrees.
fn difference(rule: &Target, standing: Standing, value: f64, by: f64) -> Option<String> {
    let of = if rule.statistic.is_sum() { " days" } else { " of difference" };
    let (value, by) = (say::dc(value, 1), say::dc(by, 1));
    match standing {
        Standing::Unknown => None,
        Standing::Inside => Some(format!("{value}{of} is inside its range")),
        Standing::Below => Some(format!("{value}{of} is {by} too little")),
        Standing::Above => Some(format!("{value}{of} is {by} too much")),
    }
}

fn air(rule: &Target, standing: &TargetStanding) -> Option<String> {
    if !rule.has_floor() {
        return None;
    }
    Some(match (standing.oxygen_mg_l, standing.oxygen.0) {
        (Some(oxygen), Standing::Below) => {
            let by = standing.oxygen.1.unwrap_or(0.0);
            format!("oxygen {oxygen:.1} mg/L is {by:.1} mg/L below its floor")
        }
        (Some(oxygen), Standing::Inside) => {
            format!("oxygen {oxygen:.1} mg/L keeps its floor")
        }
        _ => "oxygen is not known".to_owned(),
    })
}
