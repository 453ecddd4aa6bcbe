//! Checks of wells and outlets.

use crate::problem::Problem;
use crate::site::{Kind, Outlet, Pool, Position, Raw, RawOutlet, RawWell, Shape, Well};
use crate::units::say;

use super::aeration::aeration;
use super::operation;

/// Least head a leak can be told at, m (choice).
const LEAK_HEAD_M: f64 = 1e-3;
/// How far a conduit may lie below the bed of the pool table, m (a tower's foot stands deeper than silt).
const CONDUIT_SLACK_M: f64 = 5.0;

pub(super) fn positive(
    value: Option<f64>,
    path: String,
    what: &str,
    problems: &mut Vec<Problem>,
) -> Option<f64> {
    if value.is_some_and(|v| v <= 0.0) {
        problems.push(
            Problem::refused("not-positive", format!("{what} must be above zero"), "correct the figure")
                .at(path),
        );
    }
    value
}

pub(super) fn not_negative(
    value: Option<f64>,
    path: String,
    what: &str,
    problems: &mut Vec<Problem>,
) -> Option<f64> {
    if value.is_some_and(|v| v < 0.0) {
        problems.push(
            Problem::refused("negative", format!("{what} cannot be negative"), "correct the figure").at(path),
        );
    }
    value
}

pub(super) fn wells(raw: &Raw, pool: Option<&Pool>, problems: &mut Vec<Problem>) -> Vec<Option<Well>> {
    let build = |(i, w): (usize, &RawWell)| {
        let at = |key: &str| format!("wells[{i}].{key}");
        if let (Some(conduit), Some(pool)) = (w.conduit_m, pool)
            && !(pool.bed_m - CONDUIT_SLACK_M..=pool.top_m()).contains(&conduit)
        {
            problems.push(
                Problem::refused(
                    "outside-pool",
                    format!("conduit {} lies outside the pool ({})", say::m(conduit, 2), pool.extent()),
                    "check the elevation, its unit and its datum",
                )
                .at(at("conduit")),
            );
        }
        let max_open = w.max_open.and_then(|n| {
            let count = (1..=1000_u16).find(|&k| f64::from(k).total_cmp(&n).is_eq());
            if count.is_none() {
                problems.push(
                    Problem::refused(
                        "max-open",
                        "max_open must count gates",
                        "give a whole number, 1 or more",
                    )
                    .at(at("max_open")),
                );
            }
            count.map(usize::from)
        });
        operation::well(w, i, problems);
        Some(Well {
            name: w.name.clone()?,
            conduit_m: w.conduit_m?,
            max_open,
            max_head_loss_m: positive(w.max_head_loss_m, at("max_head_loss"), "max_head_loss", problems),
            min_flow_m3s: w.min_flow_m3s.unwrap_or(0.0),
            max_flow_m3s: positive(w.max_flow_m3s, at("max_flow"), "max_flow", problems),
            plan_area_m2: w.plan_area_m2,
            aeration: aeration(w.aeration.as_ref(), &format!("wells[{i}]"), problems),
        })
    };
    raw.wells.iter().enumerate().map(build).collect()
}

pub(super) fn outlet(
    o: &RawOutlet,
    i: usize,
    raw: &Raw,
    pool: Option<&Pool>,
    problems: &mut Vec<Problem>,
) -> Option<Outlet> {
    let at = |key: &str| format!("outlets[{i}].{key}");
    let well = o.well.as_deref().and_then(|name| {
        let found = raw.wells.iter().position(|w| w.name.as_deref() == Some(name));
        if found.is_none() {
            problems.push(
                Problem::refused(
                    "unknown-well",
                    format!("no well is named `{name}`"),
                    "list it under `wells`, or correct the name",
                )
                .at(at("well")),
            );
        }
        found
    });
    for (value, key) in [
        (o.height_m, "height"),
        (o.width_m, "width"),
        (o.diameter_m, "diameter"),
        (o.loss, "loss"),
        (o.discharge, "discharge"),
    ] {
        positive(value, at(key), key, problems);
    }
    not_negative(o.min_submergence_m, at("min_submergence"), "min_submergence", problems);
    not_negative(o.flow_min_m3s, at("flow.min"), "flow.min", problems);
    positive(o.flow_max_m3s, at("flow.max"), "flow.max", problems);
    if let (Some(min), Some(max)) = (o.flow_min_m3s, o.flow_max_m3s)
        && min > max
    {
        problems.push(
            Problem::refused(
                "flow-order",
                format!("flow.min {} is above flow.max {}", say::m3s(min, 2), say::m3s(max, 2)),
                "swap them",
            )
            .at(at("flow.min")),
        );
    }
    if o.angle_deg.is_some_and(|a| !(0.0..=360.0).contains(&a) || a == 0.0) {
        problems.push(
            Problem::refused(
                "angle",
                "the withdrawal angle must be above 0 and at most 360 degrees",
                "give 180 for a straight face, 360 for a free-standing tower, 90 in a corner",
            )
            .at(at("angle")),
        );
    }
    if let Some(leak) = &o.leakage {
        not_negative(Some(leak.flow_m3s), at("leakage.flow"), "leakage.flow", problems);
        positive(Some(leak.head_m), at("leakage.head"), "leakage.head", problems);
        if (0.0..LEAK_HEAD_M).contains(&leak.head_m) && leak.head_m > 0.0 {
            problems.push(
                Problem::refused(
                    "leak-head",
                    "leakage.head is less than a millimetre",
                    "give the head at which the leak was measured",
                )
                .at(at("leakage.head")),
            );
        }
        if leak.range_m3s.is_some_and(|(low, high)| low < 0.0 || low > leak.flow_m3s || high < leak.flow_m3s)
        {
            problems.push(
                Problem::refused(
                    "leak-range",
                    "leakage.flow lies outside leakage.range",
                    "give the range as [least, most] around the flow",
                )
                .at(at("leakage.range")),
            );
        }
    }
    let crest = match o.kind.as_deref() {
        None | Some("orifice") => false,
        Some("crest") => true,
        Some(other) => {
            problems.push(
                Problem::refused(
                    "kind",
                    format!("`{other}` is not a kind of outlet"),
                    "use `orifice` or `crest`",
                )
                .at(at("kind")),
            );
            return None;
        }
    };
    positions(o, i, crest, pool, problems);
    let avoid = operation::outlet(o, i, pool, problems);
    let aeration = aeration(o.aeration.as_ref(), &format!("outlets[{i}]"), problems);
    let kind = if crest { crest_kind(o, i, problems) } else { orifice_kind(o, i, problems) };
    // fully open is the lowest edge the crew can set
    let edges = o.positions.iter().filter_map(|p| p.crest_m);
    let (centre_m, kind) = (edges.reduce(f64::min).or(o.centre_m)?, kind?);
    let built = Outlet {
        name: o.name.clone()?,
        well,
        kind,
        centre_m,
        angle_rad: o.angle_deg.unwrap_or(180.0).to_radians(),
        loss: o.loss,
        discharge: o.discharge,
        opens: o.opens,
        positions: leaves_by_crest(&o.positions),
        min_submergence_m: o.min_submergence_m,
        flow_min_m3s: o.flow_min_m3s.unwrap_or(0.0),
        flow_max_m3s: o.flow_max_m3s,
        leakage: o.leakage,
        aeration,
        pool_window_m: o.pool_window_m,
        avoid,
        max_entrance_m_s: o.max_entrance_m_s,
        moves_under_flow: o.moves_under_flow,
        crew: o.crew,
        generation_lost: o.generation_lost,
        uncertain: o.uncertain,
    };
    if let Some(pool) = pool
        && (built.sill_m() < pool.bed_m - 1e-9 || centre_m > pool.top_m())
    {
        problems.push(
            Problem::refused(
                "outside-pool",
                format!(
                    "`{}` (sill {}, centre {}) lies outside the pool ({})",
                    built.name,
                    say::m(built.sill_m(), 2),
                    say::m(centre_m, 2),
                    pool.extent()
                ),
                "check the elevation, its unit and its datum",
            )
            .at(at("centre")),
        );
    }
    Some(built)
}

fn orifice_kind(o: &RawOutlet, i: usize, problems: &mut Vec<Problem>) -> Option<Kind> {
    let mut refuse = |key: &str, words: &str, cure: &str| {
        problems.push(Problem::refused("shape", words, cure).at(format!("outlets[{i}].{key}")));
        None
    };
    if o.gated.is_some() || !o.rating.is_empty() {
        return refuse("kind", "`gated` and `rating` belong to a crest", "add `kind: crest`, or drop them");
    }
    match (o.height_m, o.width_m, o.diameter_m) {
        (Some(height_m), Some(width_m), None) => Some(Kind::Orifice(Shape::Rectangle { height_m, width_m })),
        (None, None, Some(diameter_m)) => Some(Kind::Orifice(Shape::Circle { diameter_m })),
        (_, _, Some(_)) => refuse(
            "diameter",
            "the outlet has a diameter and a height or width",
            "give the diameter alone, or height and width",
        ),
        (None, _, None) => refuse("height", "height is missing", "give height and width, or a diameter"),
        (_, None, None) => refuse("width", "width is missing", "give height and width, or a diameter"),
    }
}

fn crest_kind(o: &RawOutlet, i: usize, problems: &mut Vec<Problem>) -> Option<Kind> {
    let at = |key: &str| format!("outlets[{i}].{key}");
    if o.diameter_m.is_some() || o.height_m.is_some() {
        problems.push(
            Problem::refused(
                "shape",
                "a crest has neither height nor diameter",
                "give its length as `width`",
            )
            .at(at("kind")),
        );
    }
    let rises = o.rating.windows(2).all(|w| w[1].0 > w[0].0 && w[1].1 >= w[0].1);
    if !rises || o.rating.len() == 1 {
        problems.push(
            Problem::refused(
                "rating",
                "the rating needs at least two rows, with head and flow rising",
                "list rows [head, flow] from the lowest head up",
            )
            .at(at("rating")),
        );
    }
    let Some(length_m) = o.width_m else {
        problems.push(
            Problem::refused("shape", "width is missing", "give the crest's length as `width`")
                .at(at("width")),
        );
        return None;
    };
    Some(Kind::Crest { length_m, gated: o.gated.unwrap_or(false), rating: o.rating.clone() })
}

fn positions(o: &RawOutlet, i: usize, crest: bool, pool: Option<&Pool>, problems: &mut Vec<Problem>) {
    for (k, p) in o.positions.iter().enumerate() {
        let path = format!("outlets[{i}].positions[{k}]");
        if !(0.0..=1.0).contains(&p.opening) {
            problems.push(
                Problem::refused(
                    "position",
                    format!("position `{}` lies outside 0 to 100 %", p.name),
                    "give percent of the full opening",
                )
                .at(path.clone()),
            );
        }
        if let (Some(edge), Some(pool)) = (p.crest_m, pool)
            && !(pool.bed_m..=pool.top_m()).contains(&edge)
        {
            problems.push(
                Problem::refused(
                    "outside-pool",
                    format!(
                        "position `{}`: its crest {} lies outside the pool table ({})",
                        p.name,
                        say::m(edge, 2),
                        pool.extent()
                    ),
                    "check the elevation and its datum",
                )
                .at(path.clone()),
            );
        }
        if p.crest_m.is_some() && !crest {
            problems.push(
                Problem::refused(
                    "position",
                    "a position with a crest needs an outlet of `kind: crest`",
                    "add `kind: crest`",
                )
                .at(path.clone()),
            );
        }
        if o.positions[..k].iter().any(|q| q.name == p.name) {
            problems.push(
                Problem::refused(
                    "position",
                    format!("position `{}` is listed twice", p.name),
                    "list each position once",
                )
                .at(path),
            );
        }
    }
}

/// A well in which some ports give a loss and others do not cannot be split.
pub(super) fn mixed_losses(raw: &Raw, problems: &mut Vec<Problem>) {
    for (i, well) in raw.wells.iter().enumerate() {
        let Some(name) = well.name.as_deref() else { continue };
        let ports: Vec<&RawOutlet> = raw.outlets.iter().filter(|o| o.well.as_deref() == Some(name)).collect();
        let given = ports.iter().filter(|o| o.loss.is_some()).count();
        if given != 0 && given != ports.len() {
            problems.push(
                Problem::refused(
                    "mixed-loss",
                    format!("{given} of {} gates of well `{name}` give a loss", ports.len()),
                    "give `loss` for all gates of the well, or for none",
                )
                .at(format!("wells[{i}]")),
            );
        }
        if ports.is_empty() {
            problems.push(
                Problem::flag(
                    "empty-well",
                    format!("no outlet belongs to well `{name}`"),
                    "name it in an outlet's `well`, or drop the well",
                )
                .at(format!("wells[{i}]")),
            );
        }
    }
}

/// Positions as given, those with crests of their own opened in equal parts from the highest crest to the lowest.
fn leaves_by_crest(positions: &[Position]) -> Vec<Position> {
    let mut crests: Vec<f64> = positions.iter().filter_map(|p| p.crest_m).collect();
    crests.sort_by(|a, b| b.total_cmp(a));
    let opening = |p: &Position| {
        let place = crests.iter().position(|c| p.crest_m.is_some_and(|own| own.total_cmp(c).is_eq()))?;
        Some((place + 1) as f64 / crests.len() as f64)
    };
    positions.iter().map(|p| Position { opening: opening(p).unwrap_or(p.opening), ..p.clone() }).collect()
}
