//! Limits of the release as a whole, and of a change from the setting now.

use crate::mix::{Blend, Setting};
use crate::site::Site;
use crate::units::DAY_S;

use super::{Check, Moves, Of, Rule, moves};

/// Hours over which a change is made where the site does not say (choice: the most cautious).
const CHANGE_HOURS: f64 = 1.0;

/// What leaves the dam now, as far as it is known.
#[derive(Debug, Clone, Copy, Default, PartialEq)]
pub struct Before {
    /// Flow, m3/s.
    pub flow_m3s: Option<f64>,
    /// Temperature, C.
    pub temperature_c: Option<f64>,
}

/// A release as its limits see it.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct Whole {
    /// Flow, m3/s.
    pub flow_m3s: f64,
    /// Temperature, C.
    pub temperature_c: f64,
    /// Dissolved and suspended solids, mg/L, where measured.
    pub solids_mg_l: Option<f64>,
    /// Flow through the outlets of each share rule, in their order, m3/s.
    pub share_flows_m3s: Vec<f64>,
    /// What leaves the dam now; `None` leaves changes unchecked.
    pub before: Option<Before>,
    /// Moves from the setting now; `None` leaves them unchecked.
    pub moves: Option<Moves>,
}

/// Limits of a release: total, drawdown, solids, shares, and of the change where one is known. `pool_m` is the
/// elevation of the pool.
///
/// The pool falls by what is released beyond the inflow, over its area at that elevation (derived).
pub fn whole(site: &Site, pool_m: f64, release: &Whole, out: &mut Vec<Check>) {
    let (flow, of) = (release.flow_m3s, Of::Whole);
    out.extend(site.release.min_m3s.map(|least| Check::least(Rule::ReleaseMin, of, flow, least)));
    out.extend(site.release.max_m3s.map(|most| Check::most(Rule::ReleaseMax, of, flow, most)));
    if let (Some(most), Some(inflow)) = (site.limits.drawdown_m_per_day, site.inflow_m3s) {
        let area_m2 = site.pool.effective_area_m2(pool_m);
        if area_m2 > 0.0 {
            out.push(Check::most(Rule::Drawdown, of, (flow - inflow) * DAY_S / area_m2, most));
        }
    }
    if let (Some(most), Some(solids)) = (site.limits.solids_max_mg_l, release.solids_mg_l) {
        out.push(Check::most(Rule::SolidsMax, of, solids, most));
    }
    if flow > 0.0 {
        for (i, (rule, part)) in site.limits.shares.iter().zip(&release.share_flows_m3s).enumerate() {
            let (share, of) = (part / flow, Of::Share(i));
            out.extend(rule.min.map(|least| Check::least(Rule::ShareMin, of, share, least)));
            out.extend(rule.max.map(|most| Check::most(Rule::ShareMax, of, share, most)));
        }
    }
    if let Some(before) = release.before {
        rates(site, before, flow, release.temperature_c, out);
    }
    if let Some(moves) = release.moves {
        effort(site, moves, out);
    }
}

/// Limits of a change from the setting now to another whose release is known: rates, moves, crew hours and moves
/// under flow. Gives what the change takes.
pub fn change(
    site: &Site,
    now: &Setting,
    before: Before,
    to: &Setting,
    release: &Blend,
    out: &mut Vec<Check>,
) -> Moves {
    rates(site, before, release.flow_m3s, release.temperature_c, out);
    let moves = moves(site, now, to, out);
    effort(site, moves, out);
    moves
}

/// How many times the hourly and the daily rate a change may come to: it lasts `change_hours`, and no less than a day
/// counts for the daily one.
pub fn change_times(site: &Site) -> (f64, f64) {
    let hours = site.limits.change_hours.unwrap_or(CHANGE_HOURS);
    (hours, (hours / 24.0).max(1.0))
}

fn rates(site: &Site, before: Before, flow_m3s: f64, temperature_c: f64, out: &mut Vec<Check>) {
    let limits = &site.limits;
    let (hours, days) = change_times(site);
    let flow = before.flow_m3s.map(|now| (flow_m3s - now).abs());
    let warmth = before.temperature_c.map(|now| (temperature_c - now).abs());
    for (rule, change, rate, times) in [
        (Rule::FlowChangePerHour, flow, limits.flow_change_m3s_per_hour, hours),
        (Rule::FlowChangePerDay, flow, limits.flow_change_m3s_per_day, days),
        (Rule::TemperatureChangePerHour, warmth, limits.temperature_change_c_per_hour, hours),
        (Rule::TemperatureChangePerDay, warmth, limits.temperature_change_c_per_day, days),
    ] {
        if let (Some(change), Some(rate)) = (change, rate) {
            out.push(Check::most(rule, Of::Whole, change, rate * times));
        }
    }
}

fn effort(site: &Site, moves: Moves, out: &mut Vec<Check>) {
    let (most_moves, most_hours) = (site.limits.max_moves, site.limits.max_crew_hours);
    out.extend(
        most_moves.map(|most| Check::most(Rule::MaxMoves, Of::Whole, moves.count as f64, most as f64)),
    );
    out.extend(most_hours.map(|most| Check::most(Rule::MaxCrewHours, Of::Whole, moves.crew_hours, most)));
}
