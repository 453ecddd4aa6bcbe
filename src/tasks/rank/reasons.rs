//! Why a mix stands where it does, in words.

use crate::mix::TargetStanding;
use crate::rank::Criterion;
use crate::site::Site;
use crate::target::{Standing, Target};
use crate::units::say;

use super::shown::Shown;

/// Reasons of a mix; `behind` is the criterion that puts it behind the one before, where there is one: `None` where no
/// criterion tells them apart.
pub(super) fn reasons(site: &Site, shown: &Shown, behind: Option<Option<Criterion>>) -> Vec<String> {
    let mut out = Vec::new();
    for standing in shown.targets.iter().filter(|s| s.governs || s.missed()) {
        let rule = &site.targets[standing.target];
        out.extend(warmth(rule, standing));
        out.extend(air(rule, standing));
    }
    if let (Some(cold), Some(threshold)) = (shown.cold_m3_per_day, site.cold_water_c.first()) {
        let flow_m3: f64 = shown.parts.iter().map(|p| p.share * p.mix.release.flow_m3s * 86_400.0).sum();
        out.push(format!(
            "takes {} a day colder than {}, {:.0} % of the release",
            say::m3(cold, 0),
            say::c(*threshold, 1),
            100.0 * cold / flow_m3
        ));
    }
    if let Some(moves) = shown.moves {
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
    match behind {
        None => {}
        Some(Some(criterion)) => out.push(format!("behind the one before by {}", words(criterion))),
        Some(None) => out.push("level with the one before; elevation and name decide".to_owned()),
    }
    out
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
    let name = &rule.name;
    let by = standing.temperature.1.unwrap_or(0.0);
    match standing.temperature.0 {
        Standing::Unknown => None,
        Standing::Below => Some(format!("{name}: {} is {} too cold", say::c(value, 1), say::dc(by, 1))),
        Standing::Above => Some(format!("{name}: {} is {} too warm", say::c(value, 1), say::dc(by, 1))),
        Standing::Inside => Some(match rule.preferred_c {
            Some(preferred) => format!(
                "{name}: {} is inside its range, {} from the preferred {}",
                say::c(value, 1),
                say::dc((value - preferred).abs(), 1),
                say::c(preferred, 1)
            ),
            None => format!("{name}: {} is inside its range", say::c(value, 1)),
        }),
    }
}

fn air(rule: &Target, standing: &TargetStanding) -> Option<String> {
    let floor = rule.oxygen_min_mg_l?;
    let name = &rule.name;
    Some(match (standing.oxygen_mg_l, standing.oxygen.0) {
        (Some(oxygen), Standing::Below) => {
            format!("{name}: oxygen {oxygen:.1} mg/L is {:.1} mg/L below its floor", floor - oxygen)
        }
        (Some(oxygen), Standing::Inside) => {
            format!("{name}: oxygen {oxygen:.1} mg/L keeps its floor of {floor:.1} mg/L")
        }
        _ => format!("{name}: oxygen is not known"),
    })
}
