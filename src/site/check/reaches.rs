//! Checks of reaches, what joins them, and the names along the river.

use std::collections::HashMap;

use crate::problem::Problem;
use crate::site::{Inflow, MOST_TRAVEL_H, ROUGHNESS, RawInflow, RawReach, RawRiver, Reach, Seepage, Yearly};
use crate::target::DAM;
use crate::units::say;

use super::outlets::{not_negative, positive};

/// Distances that differ by less are one, m (choice).
pub(super) const SLACK_M: f64 = 0.5;

/// Factor by which the width that hours and depth make may differ from the one given (choice).
const WIDTHS: f64 = 4.0;

/// Water temperatures that can be, C (choice, as for casts).
pub(super) const WATER_C: std::ops::RangeInclusive<f64> = -1.0..=45.0;

/// The reaches end to end; `None` for one that is not sound.
pub(super) fn reaches(river: &RawRiver, problems: &mut Vec<Problem>) -> Vec<Option<Reach>> {
    let mut from_m = Some(0.0);
    let mut out = Vec::new();
    for (i, r) in river.reaches.iter().enumerate() {
        let built = reach(r, &format!("river.reaches[{i}]"), from_m, problems);
        from_m = from_m.zip(r.length_m.filter(|l| *l > 0.0)).map(|(from, length)| from + length);
        out.push(built);
    }
    out
}

fn reach(r: &RawReach, path: &str, from_m: Option<f64>, problems: &mut Vec<Problem>) -> Option<Reach> {
    let at = |key: &str| format!("{path}.{key}");
    let sizes = [
        (r.length_m, "length_km", "the length"),
        (r.width_m, "width", "width"),
        (r.depth_m, "depth", "depth"),
        (r.slope, "slope", "slope"),
        (r.roughness, "roughness", "roughness"),
        (r.reaeration_per_day, "reaeration_per_day", "reaeration_per_day"),
    ];
    for (value, key, what) in sizes {
        positive(value, at(key), what, problems);
    }
    if r.shade.is_some_and(|s| !(0.0..=1.0).contains(&s)) {
        let words = "shade lies outside 0 to 100 %";
        problems.push(Problem::refused("share", words, "give percent of the sun kept off").at(at("shade")));
    }
    let tables =
        falls(&r.travel_h, at("travel_hours"), problems) & falls(&r.rise_h, at("rise_hours"), problems);
    if r.travel_h.is_empty() && r.slope.is_none() {
        problems.push(
            Problem::refused(
                "travel",
                "nothing tells how long the water takes through it",
                "give travel_hours: [[flow, hours], ...], or the slope of the bed",
            )
            .at(path),
        );
        return None;
    }
    let inflows: Vec<Option<Inflow>> = r
        .inflows
        .iter()
        .enumerate()
        .map(|(k, w)| inflow(w, &at(&format!("inflows[{k}]")), r, from_m, problems))
        .collect();
    let seepage = r.seepage.as_ref().map(|s| {
        let at = |key: &str| format!("{path}.seepage.{key}");
        figures(s.flow_m3s.as_ref(), s.temperature_c.as_ref(), s.oxygen_mg_l.as_ref(), at, problems);
        Some(Seepage {
            flow_m3s: s.flow_m3s.clone()?,
            temperature_c: s.temperature_c.clone()?,
            oxygen_mg_l: s.oxygen_mg_l.clone(),
        })
    });
    if sizes.iter().any(|(value, ..)| value.is_some_and(|v| v <= 0.0)) {
        return None;
    }
    let mut inflows = inflows.into_iter().collect::<Option<Vec<_>>>()?;
    inflows.sort_by(|a, b| a.at_m.total_cmp(&b.at_m));
    let built = Reach {
        name: r.name.clone()?,
        from_m: from_m?,
        length_m: r.length_m?,
        width_m: r.width_m?,
        depth_m: r.depth_m?,
        slope: r.slope,
        roughness: r.roughness.unwrap_or(ROUGHNESS),
        travel_h: r.travel_h.clone(),
        rise_h: r.rise_h.clone(),
        shade: r.shade.unwrap_or(0.0),
        inflows,
        seepage: match seepage {
            Some(found) => Some(found?),
            None => None,
        },
        reaeration_per_day: r.reaeration_per_day,
    };
    if tables {
        geometry(&built, path, problems);
        rise(&built, at("rise_hours"), problems);
    }
    Some(built)
}

/// Whether flows of a table rise and its hours do not.
fn falls(rows: &[(f64, f64)], path: String, problems: &mut Vec<Problem>) -> bool {
    let positive = rows.iter().all(|(flow, hours)| *flow > 0.0 && *hours > 0.0 && *hours <= MOST_TRAVEL_H);
    let ordered = rows.windows(2).all(|pair| match *pair {
        [(q0, h0), (q1, h1)] => q0 < q1 && h0 >= h1,
        _ => true,
    });
    if positive && ordered {
        return true;
    }
    problems.push(
        Problem::refused(
            "hours-table",
            "flows of the table must rise from above zero, and its hours, 100000 at most, fall: more water is not slower",
            "write [[20, 9], [60, 5]], the least flow first",
        )
        .at(path),
    );
    false
}

/// A rise comes before its water and not before a front on shallow water.
fn rise(reach: &Reach, path: String, problems: &mut Vec<Problem>) {
    let flows = || reach.rise_h.iter().chain(&reach.travel_h).map(|row| row.0);
    let hours = |flow: f64| crate::site::hours_at(&reach.rise_h, flow).map(|found| found.0);
    // round-off of the power between two rows is no contradiction
    let late = flows().find(|q| hours(*q).is_some_and(|h| h > reach.water_h(*q).0 * (1.0 + 1e-9)));
    let early = flows().find(|q| hours(*q).is_some_and(|h| h < reach.front_h(*q) * (1.0 - 1e-9)));
    if let Some(flow) = late {
        let words = format!(
            "at {} the rise would arrive after {:.2} h, later than its water after {:.2} h",
            say::m3s(flow, 1),
            hours(flow).unwrap_or_default(),
            reach.water_h(flow).0
        );
        let cure = "rise_hours is the sooner of the two tables; exchange them?";
        problems.push(Problem::refused("rise-late", words, cure).at(path));
    } else if let Some(flow) = early {
        let words = format!(
            "at {} the rise would arrive after {:.2} h, sooner than a front on water of this depth after {:.2} h",
            say::m3s(flow, 1),
            hours(flow).unwrap_or_default(),
            reach.front_h(flow)
        );
        problems.push(Problem::flag("rise-early", words, "check rise_hours, length and depth").at(path));
    }
}

fn inflow(
    w: &RawInflow,
    path: &str,
    reach: &RawReach,
    from_m: Option<f64>,
    problems: &mut Vec<Problem>,
) -> Option<Inflow> {
    if let (Some(at_m), Some(from_m), Some(length_m)) = (w.at_m, from_m, reach.length_m.filter(|l| *l > 0.0))
        && !(from_m - SLACK_M..=from_m + length_m + SLACK_M).contains(&at_m)
    {
        let words = format!(
            "it joins {} from the dam, outside its reach, {} to {}",
            say::along(at_m, 2),
            say::along(from_m, 2),
            say::along(from_m + length_m, 2)
        );
        let cure = "at_km counts from the dam; correct it, or list it in the reach it joins";
        problems.push(Problem::refused("outside-river", words, cure).at(path));
    }
    if w.series.is_none() && (w.flow_m3s.is_none() || w.temperature_c.is_none()) {
        problems.push(
            Problem::refused(
                "stream-figures",
                "neither its figures nor a series of them are given",
                "give flow and temperature, or series: a file of both",
            )
            .at(path),
        );
    }
    let at = |key: &str| format!("{path}.{key}");
    figures(w.flow_m3s.as_ref(), w.temperature_c.as_ref(), w.oxygen_mg_l.as_ref(), at, problems);
    let (from_m, length_m) = (from_m?, reach.length_m?);
    Some(Inflow {
        name: w.name.clone()?,
        at_m: w.at_m?.max(from_m).min(from_m + length_m),
        flow_m3s: w.flow_m3s.clone(),
        temperature_c: w.temperature_c.clone(),
        oxygen_mg_l: w.oxygen_mg_l.clone(),
        series: w.series.clone(),
        release: w.release,
    })
}

/// The hours of a table, with depth and flow, make a width; where none is near the one given, a unit is wrong.
fn geometry(reach: &Reach, path: &str, problems: &mut Vec<Problem>) {
    let made = |row: &(f64, f64)| row.0 / (reach.velocity_m_s(row.0) * reach.depth_m);
    let far = |width: f64| !(1.0 / WIDTHS..=WIDTHS).contains(&(width / reach.width_m));
    let Some(nearest) = reach.travel_h.iter().map(made).min_by(|a, b| {
        let off = |w: &f64| (w / reach.width_m).ln().abs();
        off(a).total_cmp(&off(b))
    }) else {
        return;
    };
    if far(nearest) {
        let words = format!(
            "with its depth, the hours of `travel_hours` make a river {} wide at the nearest, and `width` says {}",
            say::m(nearest, 1),
            say::m(reach.width_m, 1)
        );
        let cure = "check length, width, depth and hours, and their units";
        problems.push(Problem::flag("reach-geometry", words, cure).at(path));
    }
}

/// Flow, temperature and oxygen of water that joins.
fn figures(
    flow: Option<&Yearly>,
    temperature: Option<&Yearly>,
    oxygen: Option<&Yearly>,
    at: impl Fn(&str) -> String,
    problems: &mut Vec<Problem>,
) {
    let any = |yearly: Option<&Yearly>, wrong: &dyn Fn(f64) -> bool| {
        yearly.is_some_and(|y| (1..=12).any(|month| wrong(y.in_month(month))))
    };
    if any(flow, &|q| q < 0.0) {
        not_negative(Some(-1.0), at("flow"), "flow", problems);
    }
    if any(oxygen, &|c| c < 0.0) {
        not_negative(Some(-1.0), at("oxygen"), "oxygen", problems);
    }
    if any(temperature, &|t| !WATER_C.contains(&t)) {
        let words =
            format!("no water of {} to {} is meant", say::c(*WATER_C.start(), 0), say::c(*WATER_C.end(), 0));
        problems.push(Problem::refused("stream-temperature", words, "check its unit").at(at("temperature")));
    }
}

/// Reaches have names of their own; points and streams too, together, since rules name both.
pub(super) fn names(river: &RawRiver, problems: &mut Vec<Problem>) {
    let reaches =
        river.reaches.iter().enumerate().map(|(i, r)| (format!("river.reaches[{i}]"), r.name.as_deref()));
    let points =
        river.points.iter().enumerate().map(|(i, p)| (format!("river.points[{i}]"), p.name.as_deref()));
    let streams = river.reaches.iter().enumerate().flat_map(|(i, r)| {
        r.inflows
            .iter()
            .enumerate()
            .map(move |(k, w)| (format!("river.reaches[{i}].inflows[{k}]"), w.name.as_deref()))
    });
    unlike(reaches, "reach", problems);
    unlike(points.chain(streams), "point and stream", problems);
}

fn unlike<'a>(
    named: impl Iterator<Item = (String, Option<&'a str>)>,
    what: &str,
    problems: &mut Vec<Problem>,
) {
    let mut seen: HashMap<&str, String> = HashMap::new();
    for (path, name) in named {
        let Some(name) = name else { continue };
        if name == DAM || name.trim().is_empty() {
            let words = format!("`{name}` cannot name a {what}: the dam itself goes by `{DAM}`");
            problems
                .push(Problem::refused("river-name", words, "give another name").at(format!("{path}.name")));
        } else if let Some(first) = seen.get(name) {
            let words = format!("the name `{name}` is already used by {first}");
            let cure = format!("give every {what} a name of its own");
            problems.push(Problem::refused("name-twice", words, cure).at(format!("{path}.name")));
        } else {
            seen.insert(name, path);
        }
    }
}
