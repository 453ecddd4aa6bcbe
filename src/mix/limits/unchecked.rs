//! What is not checked: limits nobody gave, and those that what is known does not reach.

use crate::mix::{Drawn, Setting};
use crate::profile::Column;
use crate::site::Site;

use super::gates::unread;
use super::{Check, Of, Rule, held};

/// Limits that no check holds, by name, with the outlets or wells they are missing for. Only what a setting uses is
/// spoken of. Lists (outages, stretches to avoid, reserved flows, shares, layers) are complete as they stand.
pub fn not_checked(
    site: &Site,
    column: &Column,
    setting: &Setting,
    drawn: &[Drawn],
    checks: &[Check],
) -> Vec<String> {
    let held = held(checks);
    let mut outlets: Vec<usize> = setting
        .gates
        .iter()
        .filter(|g| g.outlet < site.outlets.len() && setting.stands_open(site, g))
        .map(|g| g.outlet)
        .collect();
    outlets.sort_unstable_by_key(|&i| &site.outlets[i].name);
    let mut wells: Vec<usize> = outlets.iter().filter_map(|&i| site.outlets[i].well).collect();
    wells.sort_unstable_by_key(|&w| &site.wells[w].name);
    wells.dedup();
    let mut out = Vec::new();
    let mut tell = |rule: Rule, names: Vec<&str>| {
        if !names.is_empty() {
            out.push(format!("{} of {}", rule.name(), names.join(", ")));
        }
    };
    for rule in
        [Rule::PoolWindow, Rule::MinSubmergence, Rule::MovesUnderFlow, Rule::FlowMax, Rule::EntranceVelocity]
    {
        let open = |i: &&usize| {
            let o = &site.outlets[**i];
            // over a crest the head bounds the flow; a gate free to move needs no check
            let free = match rule {
                Rule::FlowMax | Rule::EntranceVelocity => o.is_crest(),
                Rule::MovesUnderFlow => o.moves_under_flow == Some(true),
                _ => false,
            };
            !free && !held.contains(&(rule, Of::Outlet(**i)))
        };
        tell(rule, outlets.iter().filter(open).map(|&i| site.outlets[i].name.as_str()).collect());
    }
    for rule in [Rule::MaxOpen, Rule::WellMaxFlow, Rule::MaxHeadLoss] {
        let open = |w: &&usize| !held.contains(&(rule, Of::Well(**w)));
        tell(rule, wells.iter().filter(open).map(|&w| site.wells[w].name.as_str()).collect());
    }
    let whole = [
        Rule::ReleaseMin,
        Rule::ReleaseMax,
        Rule::FlowChangePerHour,
        Rule::FlowChangePerDay,
        Rule::Drawdown,
        Rule::TemperatureChangePerHour,
        Rule::TemperatureChangePerDay,
        Rule::SolidsMax,
        Rule::MaxMoves,
        Rule::MaxCrewHours,
    ];
    out.extend(whole.iter().filter(|&&r| !held.contains(&(r, Of::Whole))).map(|r| r.name().to_owned()));
    let airless: Vec<&str> = drawn
        .iter()
        .filter(|d| d.zone.is_some_and(|zone| unread(site, column, &zone)))
        .flat_map(|d| &d.level.outlets)
        .filter(|i| outlets.contains(i))
        .map(|&i| site.outlets[i].name.as_str())
        .collect();
    if !airless.is_empty() {
        out.push(format!("undrawn of {} (oxygen is not measured in the whole zone)", airless.join(", ")));
    }
    out
}
