//! What to beware of where gates share a well, and where an opening lies shallow.
//!
//! Methods: `docs/methods.md`, section 4.

use crate::intake::{
    ASSUMED_LOSS, entrance_velocity_m_s, gordon_submergence_m, shaft_velocity_head_m, submergence_m,
    velocity_head_m,
};
use crate::mix::band::{GREATEST_LOSS, LEAST_LOSS};
use crate::mix::levels::{Gate, Setting, passing};
use crate::mix::wells::WellState;
use crate::problem::Problem;
use crate::site::Site;
use crate::units::say;

/// Flows that are given differ from the split when any gate's does by more than this share of its well's (choice).
const DIFFERS_SHARE: f64 = 0.02;
/// The shaft's velocity head matters above this share of the least port loss (choice).
const SHAFT_SHARE: f64 = 0.1;

/// Splits that do not settle, that assume a loss, that leave an open gate without flow, or that are not what was given.
pub(in crate::mix) fn wells(
    site: &Site,
    groups: &[Vec<usize>],
    setting: &Setting,
    pool_m: f64,
    warnings: &mut Vec<Problem>,
) {
    for state in &setting.wells {
        let name = &site.wells[state.well].name;
        let mut flag = |kind, words: String, cure: &str| warnings.push(Problem::flag(kind, words, cure));
        if state.given && differs(site, groups, setting, state, pool_m) {
            let assumed = if state.assumed_loss {
                format!(", a loss of {ASSUMED_LOSS} assumed")
            } else {
                String::new()
            };
            let words = format!(
                "well {name} at {} would pass {}{assumed}: the flows given are not how it would share them",
                say::m3s(state.flow_m3s, 1),
                shares(site, &state.split)
            );
            flag("split-differs", words, "give openings (--open) and the well's total, and the well decides");
        }
        if !state.settled {
            let words = format!("the flows of the gates of well {name} did not settle");
            flag("unsettled", words, "read them as a guess");
        }
        if state.assumed_loss && !state.given {
            let words = format!(
                "the gates of well {name} give no loss: {ASSUMED_LOSS} is assumed, {LEAST_LOSS} to {GREATEST_LOSS} in the band, and the head on it is not checked"
            );
            flag("assumed-loss", words, "give `loss` for its gates");
        }
        let blocked = state.split.iter().filter(|g| g.opening > 0.0 && g.flow_m3s <= 0.0 && !state.given);
        for gate in blocked {
            let words = format!(
                "{} is open and gives nothing: at {} in well {name} the density of the water holds it shut",
                site.outlets[gate.outlet].name,
                say::m3s(state.flow_m3s, 1)
            );
            flag("blocked", words, "shut it, or let the well carry more");
        }
        if let Some((shaft_m, port_m)) = shaft_and_port_m(site, state)
            && shaft_m > SHAFT_SHARE * port_m
        {
            let words = format!(
                "the velocity head in the shaft of well {name}, {}, is over a tenth of the least loss at its gates, {}: the split neglects it",
                say::m(shaft_m, 3),
                say::m(port_m, 3)
            );
            flag("shaft-velocity", words, "read the shares of its gates as rough");
        }
    }
}

/// Whether the flows that make the release are not those of the split.
fn differs(site: &Site, groups: &[Vec<usize>], setting: &Setting, state: &WellState, pool_m: f64) -> bool {
    let flows = passing(site, groups, setting, pool_m, 0.5);
    state.split.iter().any(|gate| {
        let given_m3s = flows[gate.outlet].map_or(0.0, |(_, flow)| flow);
        (given_m3s - gate.flow_m3s).abs() > DIFFERS_SHARE * state.flow_m3s
    })
}

/// `N1 25.1 m3/s, N3 14.9 m3/s`, by name.
fn shares(site: &Site, split: &[Gate]) -> String {
    let mut gates: Vec<(&str, &Gate)> =
        split.iter().map(|g| (site.outlets[g.outlet].name.as_str(), g)).collect();
    gates.sort_by(|a, b| a.0.cmp(b.0));
    let words: Vec<String> = gates
        .iter()
        .map(|(name, g)| {
            let leak = if g.opening > 0.0 { "" } else { " (leak)" };
            format!("{name}{leak} {}", say::m3s(g.flow_m3s, 1))
        })
        .collect();
    words.join(", ")
}

/// Velocity head of the whole flow in the shaft and the least loss of the gates that flow, m; `None` without a plan
/// area.
fn shaft_and_port_m(site: &Site, state: &WellState) -> Option<(f64, f64)> {
    let shaft_m = shaft_velocity_head_m(state.flow_m3s, site.wells[state.well].plan_area_m2?)?;
    let losses = state.split.iter().filter(|g| g.opening > 0.0 && g.flow_m3s > 0.0).filter_map(|g| {
        let outlet = &site.outlets[g.outlet];
        let velocity = entrance_velocity_m_s(g.flow_m3s, outlet.open_part(g.opening).area_m2)?;
        Some(outlet.loss.unwrap_or(ASSUMED_LOSS) * velocity_head_m(velocity))
    });
    Some((shaft_m, losses.reduce(f64::min)?))
}

/// Openings so shallow for their velocity that they may draw air.
pub(in crate::mix) fn vortices(site: &Site, setting: &Setting, pool_m: f64, warnings: &mut Vec<Problem>) {
    let mut found: Vec<(&str, Problem)> = Vec::new();
    for gate in setting.gates.iter().filter(|g| g.flow_m3s > 0.0) {
        let Some(outlet) = site.outlets.get(gate.outlet).filter(|o| !o.is_crest()) else { continue };
        let part = outlet.open_part(gate.opening);
        let Some(velocity) = entrance_velocity_m_s(gate.flow_m3s, part.area_m2) else { continue };
        let depth_m = submergence_m(outlet, gate.opening, pool_m);
        let (low_m, high_m) = gordon_submergence_m(velocity, part.height_m);
        // one that stands out of the water is told as such
        if (0.0..high_m).contains(&depth_m) {
            let words = format!(
                "{}: {} of water above it, where Gordon's rule against vortices (0.55 to 0.73 V sqrt(D) in metres) asks for {} to {}",
                outlet.name,
                say::m(depth_m, 1),
                say::m(low_m, 1),
                say::m(high_m, 1)
            );
            let cure = "published rules differ fourfold: the site's own min_submergence decides";
            found.push((&outlet.name, Problem::flag("vortex", words, cure)));
        }
    }
    found.sort_by(|a, b| a.0.cmp(b.0));
    warnings.extend(found.into_iter().map(|f| f.1));
}
