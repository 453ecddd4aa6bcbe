//! Checks of how outlets may be used, and of what is set now.

use crate::problem::Problem;
use crate::site::{
    Avoid, Avoided, Outlet, Pool, Raw, RawAvoid, RawNow, RawOutlet, RawWell, SAME_OPENING, SetNow,
};
use crate::units::say;

use super::outlets::{not_negative, positive};

/// A well's least flow against its most.
pub(super) fn well(w: &RawWell, i: usize, problems: &mut Vec<Problem>) {
    let at = |key: &str| format!("wells[{i}].{key}");
    positive(w.plan_area_m2, at("plan_area"), "plan_area", problems);
    not_negative(w.min_flow_m3s, at("min_flow"), "min_flow", problems);
    if let (Some(min), Some(max)) = (w.min_flow_m3s, w.max_flow_m3s)
        && min > max
    {
        problems.push(
            Problem::refused(
                "flow-order",
                format!("min_flow {} is above max_flow {}", say::m3s(min, 2), say::m3s(max, 2)),
                "swap them",
            )
            .at(at("min_flow")),
        );
    }
}

/// How an outlet may be used; the stretches it avoids.
pub(super) fn outlet(
    o: &RawOutlet,
    i: usize,
    pool: Option<&Pool>,
    problems: &mut Vec<Problem>,
) -> Vec<Avoid> {
    let at = |key: &str| format!("outlets[{i}].{key}");
    positive(o.max_entrance_m_s, at("max_entrance_velocity"), "max_entrance_velocity", problems);
    if o.max_entrance_m_s.is_some() && o.kind.as_deref() == Some("crest") {
        let words = "max_entrance_velocity belongs to an opening under water";
        problems.push(Problem::refused("shape", words, "drop it").at(at("max_entrance_velocity")));
    }
    for (value, key) in
        [(o.crew.hours, "crew.hours"), (o.crew.lead_days, "crew.lead_days"), (o.crew.cost, "crew.cost")]
    {
        not_negative(Some(value), at(key), key, problems);
    }
    if let Some(lost) = o.generation_lost {
        positive(Some(lost.flow_m3s), at("generation_lost.flow"), "generation_lost.flow", problems);
        not_negative(Some(lost.power_mw), at("generation_lost.power"), "generation_lost.power", problems);
    }
    if let Some((low, high)) = o.pool_window_m {
        if low >= high {
            let words = "pool_window ends where it begins or below";
            problems.push(
                Problem::refused("pool-window", words, "write [lowest, highest]").at(at("pool_window")),
            );
        } else if let Some(pool) = pool.filter(|p| high < p.bed_m || low > p.top_m()) {
            let (window, cure) = ([say::m(low, 2), say::m(high, 2)], "check the elevations and their datum");
            let words = format!(
                "pool_window {} to {} lies outside the pool ({})",
                window[0],
                window[1],
                pool.extent()
            );
            problems.push(Problem::refused("outside-pool", words, cure).at(at("pool_window")));
        }
    }
    o.avoid.iter().enumerate().filter_map(|(k, r)| avoid(r, at(&format!("avoid[{k}]")), problems)).collect()
}

fn avoid(r: &RawAvoid, path: String, problems: &mut Vec<Problem>) -> Option<Avoid> {
    let (what, key) = match (r.openings, r.flows_m3s) {
        (Some((from, to)), None) => (Avoided::Openings(from, to), "open"),
        (None, Some((from, to))) => (Avoided::Flows(from, to), "flow"),
        _ => {
            let words = "either openings or flows are avoided";
            problems.push(
                Problem::refused("avoid", words, "give open: [from, to], or flow: [from, to]").at(path),
            );
            return None;
        }
    };
    let (Avoided::Openings(from, to) | Avoided::Flows(from, to)) = what;
    let path = format!("{path}.{key}");
    if from >= to {
        let words = "the stretch to avoid ends where it begins or below";
        problems.push(Problem::refused("avoid", words, "write [from, to], rising").at(path.clone()));
    }
    if from < 0.0 || (key == "open" && to > 1.0) {
        let words = "the stretch to avoid holds what cannot be set";
        problems.push(Problem::refused("avoid", words, "openings go from 0 to 100 %, flows from 0").at(path));
    }
    Some(Avoid { what, reason: r.reason.clone() })
}

/// Index of an outlet and what is set there.
type Gates = Vec<(usize, SetNow)>;
/// Index of a well and its flow, m3/s.
type Totals = Vec<(usize, f64)>;

/// What is set now: outlets, and totals of wells.
pub(super) fn now(raw: &Raw, outlets: &[Option<Outlet>], problems: &mut Vec<Problem>) -> (Gates, Totals) {
    let (mut gates, mut totals) = (Vec::new(), Vec::new());
    for (name, set) in &raw.now {
        let path = format!("now.{name}");
        if let RawNow::Flow(flow) = set {
            not_negative(Some(*flow), path.clone(), "flow", problems);
        }
        if let Some(index) = raw.outlets.iter().position(|o| o.name.as_deref() == Some(name)) {
            let set = match set {
                RawNow::Flow(flow) => Some(SetNow::Flow(*flow)),
                _ => outlets[index].as_ref().and_then(|o| opening(o, set, path, problems)),
            };
            gates.extend(set.map(|set| (index, set)));
        } else if let Some(index) = raw.wells.iter().position(|w| w.name.as_deref() == Some(name)) {
            if let RawNow::Flow(flow) = set {
                totals.push((index, *flow));
            } else {
                let (words, cure) = (format!("well `{name}` has no opening"), "give its total as a flow");
                problems.push(Problem::refused("now-well", words, cure).at(path));
            }
        } else {
            problems.push(
                Problem::refused(
                    "unknown-outlet",
                    format!("no outlet or well is named `{name}`"),
                    "correct the name",
                )
                .at(path),
            );
        }
    }
    for (index, set) in &gates {
        let total = |w: &usize| totals.iter().any(|(well, _)| well == w);
        let outlet = outlets[*index].as_ref().filter(|o| o.well.as_ref().is_some_and(total));
        if let (Some(outlet), SetNow::Flow(flow)) = (outlet, set)
            && *flow > 0.0
        {
            let words = format!("the flow of `{}` and the total of its well are both given", outlet.name);
            let cure = "give the total with openings, or flows alone";
            problems.push(Problem::refused("now-well", words, cure).at(format!("now.{}", outlet.name)));
        }
    }
    (gates, totals)
}

/// An opening now, which must be one of the outlet's positions.
fn opening(outlet: &Outlet, set: &RawNow, path: String, problems: &mut Vec<Problem>) -> Option<SetNow> {
    let positions = &outlet.positions;
    let (found, called) = match set {
        RawNow::Flow(_) => return None,
        RawNow::Opening(share) => {
            let stands =
                positions.is_empty() || positions.iter().any(|p| (p.opening - share).abs() < SAME_OPENING);
            let found = Some(*share).filter(|s| stands && (0.0..=1.0).contains(s));
            (found, format!("{:.0} %", share * 100.0))
        }
        RawNow::Position(called) => {
            (positions.iter().find(|p| p.name == *called).map(|p| p.opening), format!("`{called}`"))
        }
    };
    if found.is_none() {
        let names: Vec<&str> = positions.iter().map(|p| p.name.as_str()).collect();
        let cure = if names.is_empty() {
            "give a flow, or percent of the full opening".to_owned()
        } else {
            format!("use one of its positions: {}", names.join(", "))
        };
        let words = format!("`{}` has no position {called}", outlet.name);
        problems.push(Problem::refused("position", words, cure).at(path));
    }
    found.map(SetNow::Opening)
}
