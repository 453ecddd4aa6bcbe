//! The dam and every point side by side: when water arrives there, what it is, what would be asked of the release.

use crate::mix::limits::change_times;
use crate::problem::harmless;
use crate::river::AtPoint;
use crate::site::{Point, River};
use crate::tasks::Context;
use crate::tasks::river::{RiverAnswer, Way, Which, Window};
use crate::units::{Dimension, System, figure, show};

use super::super::{length, oxygen, temperature};

/// A row of the table of places: a label, and a cell for the dam and for each point.
#[derive(Debug, Clone, PartialEq)]
pub struct PlaceRow {
    /// What it tells.
    pub label: String,
    /// The same where room is scarce.
    pub short: String,
    /// What is left out first where room is scarce: the larger, the sooner; 0 never.
    pub spare: u8,
    /// Of which release, where it is of one.
    pub of: Option<Which>,
    /// The cells, the dam first.
    pub cells: Vec<String>,
}

/// A change of stage smaller than this is none, m: the figure shown would be zero (choice).
const SAME_STAGE_M: f64 = 0.05;

/// Oxygen that would be shown as none, mg/L (half of the digit shown).
const LEAST_SHOWN_MG_L: f64 = 0.05;

/// Where nothing is to be told.
const NONE: &str = "-";

/// The table of places; the first row names them.
pub fn places(context: &Context, answer: &RiverAnswer, system: System) -> Vec<PlaceRow> {
    let points = points(context);
    let distance = |p: &Point| show(p.at_m, Dimension::Distance, system, 1);
    let row =
        |(label, short, spare): (&str, &str, u8), dam: &str, of: &dyn Fn(usize, &Point) -> String| PlaceRow {
            label: label.to_owned(),
            short: short.to_owned(),
            spare,
            of: None,
            cells: std::iter::once(dam.to_owned())
                .chain(points.iter().enumerate().map(|(i, p)| of(i, p)))
                .collect(),
        };
    let mut out = vec![
        row(("", "", 0), "dam", &|i, p| format!("{} {}", i + 1, harmless(&p.name))),
        row(("from the dam", "distance", 1), NONE, &|_, p| distance(p)),
    ];
    if let Some(course) = answer.spoken().and_then(|w| w.course.as_ref()) {
        let hours = |of: fn(&AtPoint) -> f64| {
            move |i: usize, _: &Point| {
                course.points.get(i).map_or_else(|| NONE.into(), |a| format!("{:.1} h", of(a)))
            }
        };
        out.push(row(("water takes", "water", 1), NONE, &hours(|a| a.travel_h)));
        out.push(row(("first rise possible", "rise from", 2), NONE, &hours(|a| a.rise_first_h)));
        out.push(row(("bulk of a rise", "rise bulk", 2), NONE, &hours(|a| a.rise_h)));
        out.push(row(("warning time", "warning", 5), NONE, &|_, p| {
            p.warning_h.map_or_else(|| NONE.into(), |h| format!("{h:.1} h"))
        }));
    }
    for way in &answer.ways {
        out.extend(of_way(way, points.len(), system));
        if way.which == Which::Tried {
            out.extend(against_now(answer, points.len(), system));
        }
    }
    out
}

/// The points of the site's river.
fn points(context: &Context) -> &[Point] {
    context.site().river.as_ref().map_or(&[], |r: &River| &r.points)
}

fn of_way(way: &Way, points: usize, system: System) -> Vec<PlaceRow> {
    let name = way.which.word();
    let at = |i: usize| way.course.as_ref().and_then(|c| c.points.get(i));
    let unit = system.unit(Dimension::Temperature);
    let row = |(what, spare): (&str, u8), dam: String, of: &dyn Fn(usize) -> Option<String>| PlaceRow {
        label: format!("{name} {what}"),
        short: what.to_owned(),
        spare,
        of: Some(way.which),
        cells: std::iter::once(dam)
            .chain((0..points).map(|i| of(i).unwrap_or_else(|| NONE.into())))
            .collect(),
    };
    let band = |band: Option<(f64, f64)>| {
        band.map(|(low, high)| format!("{} to {}", figure(low, unit, 1), figure(high, unit, 1)))
    };
    let of_day = way.at_dam();
    let greatest = way.parts.iter().map(|p| p.release.temperature_c).fold(f64::NEG_INFINITY, f64::max);
    let mut out = vec![
        row(("mean", 0), temperature(way.temperature_c(), system), &|i| {
            Some(temperature(at(i)?.figures.mean_c, system))
        }),
        row(("10-90 %", 4), band(of_day.band_c()).unwrap_or_else(|| NONE.into()), &|i| {
            band(way.spreads.get(i)?.band_c())
        }),
        row(("greatest", 3), temperature(greatest, system), &|i| {
            let (greatest, _) = at(i)?.figures.range_c?;
            Some(temperature(greatest, system))
        }),
        row(("oxygen", 0), oxygen(way.oxygen_mg_l()), &|i| Some(oxygen(at(i)?.figures.oxygen_mean_mg_l))),
    ];
    if way.course.is_none() {
        out.truncate(2);
    }
    out
}

/// How much warmer than now, and how much richer in oxygen, the setting tried is at every place.
fn against_now(answer: &RiverAnswer, points: usize, system: System) -> Vec<PlaceRow> {
    let of = |which: Which| answer.ways.iter().find(|w| w.which == which);
    let Some((tried, now)) = of(Which::Tried).zip(of(Which::Now)) else { return Vec::new() };
    let warmth = |way: &Way, place: usize| match place.checked_sub(1) {
        None => Some(way.temperature_c()),
        Some(point) => Some(way.course.as_ref()?.points.get(point)?.figures.mean_c),
    };
    let air = |way: &Way, place: usize| match place.checked_sub(1) {
        None => way.oxygen_mg_l(),
        Some(point) => way.course.as_ref()?.points.get(point)?.figures.oxygen_mean_mg_l,
    };
    let unit = system.unit(Dimension::TemperatureDifference);
    let row = |label: &str, short: &str, spare: u8, cell: &dyn Fn(usize) -> Option<String>| PlaceRow {
        label: label.to_owned(),
        short: short.to_owned(),
        spare,
        of: Some(Which::Tried),
        cells: (0..=points).map(|place| cell(place).unwrap_or_else(|| NONE.into())).collect(),
    };
    vec![
        row("tried minus now", "minus N", 0, &|place| {
            let by = unit.from_si(warmth(tried, place)? - warmth(now, place)?);
            Some(format!("{} {}", signed(by), unit.symbol()))
        }),
        row("oxygen, tried - now", "O2 minus N", 2, &|place| {
            Some(format!("{} mg/L", signed(air(tried, place)? - air(now, place)?)))
        }),
    ]
}

/// With its sign; what rounds to nothing has none.
fn signed(value: f64) -> String {
    if value.abs() < 0.05 { "0.0".to_owned() } else { format!("{value:+.1}") }
}

/// The release a point would need, in words: `50.0 to 57.0 F, oxygen from 5.1 mg/L`.
pub fn window_words(window: &Window, system: System) -> String {
    let unit = system.unit(Dimension::Temperature);
    let shown = |c: f64| temperature(c, system);
    let mut parts = Vec::new();
    if window.out_of_reach[0] {
        parts.push("OUT OF REACH: no release temperature keeps its rules".to_owned());
    } else {
        match (window.low_c, window.high_c) {
            (Some(low), Some(high)) => parts.push(format!("{} to {}", figure(low, unit, 1), shown(high))),
            (Some(low), None) => parts.push(format!("from {}", shown(low))),
            (None, Some(high)) => parts.push(format!("to {}", shown(high))),
            (None, None) if window.ranged && window.unknown.is_empty() => {
                parts.push("any temperature".to_owned());
            }
            (None, None) => {}
        }
    }
    if window.out_of_reach[1] {
        parts.push("OUT OF REACH: no oxygen of the release keeps its floor".to_owned());
    }
    match window.oxygen_min_mg_l {
        Some(least) if least < LEAST_SHOWN_MG_L => parts.push("any oxygen".to_owned()),
        Some(least) => {
            let above = window.saturation_mg_l.is_some_and(|s| least > s);
            let words = if above { ", above saturation there" } else { "" };
            parts.push(format!("oxygen from {least:.1} mg/L{words}"));
        }
        None => {}
    }
    let unknown = window.unknown.iter().map(|words| harmless(words)).collect::<Vec<_>>().join(", ");
    match (parts.is_empty(), unknown.is_empty()) {
        (true, true) => "nothing is asked".to_owned(),
        (true, false) => format!("UNKNOWN: {unknown}"),
        (false, true) => parts.join(", "),
        (false, false) => format!("{}; UNKNOWN in part: {unknown}", parts.join(", ")),
    }
}

/// How the stage at a point differs from now, in words; that it is not computed where no rating is given.
pub fn stage_words(context: &Context, answer: &RiverAnswer, point: usize, system: System) -> Option<String> {
    let point_at = points(context).get(point)?;
    if point_at.rating.is_empty() {
        return Some("stage rise not computed: no rating given".to_owned());
    }
    // of a day in blocks the greatest flow: that is what floods
    let flow = |which: Which| {
        let way = answer.ways.iter().find(|w| w.which == which)?;
        let there = way.course.as_ref()?.points.iter().find(|p| p.point == point)?;
        Some(there.flow_range_m3s.1)
    };
    let now_m3s = flow(Which::Now)?;
    let words = [Which::Tried, Which::Best].into_iter().filter_map(|which| {
        let stages = point_at.stage_m(now_m3s).zip(point_at.stage_m(flow(which)?));
        let Some((now, stage)) = stages else {
            return Some(format!("stage of {} not computed: a flow lies outside the rating", which.word()));
        };
        let by = stage - now;
        if by.abs() < SAME_STAGE_M {
            return Some(format!("{} leaves the stage as it is now", which.word()));
        }
        let change = if by < 0.0 { "lowers" } else { "raises" };
        let fall = point_at.stage_fall_m_per_hour.filter(|_| by < 0.0);
        let against = fall.map_or_else(String::new, |most_m| {
            // the river spreads a change out: it falls no faster than it is made at the dam
            let (hours, _) = change_times(context.site());
            let word = if -by / hours > most_m { "MORE THAN THE" } else { "of" };
            let [fastest, most] = [-by / hours, most_m].map(|m| length(m, system));
            format!(", by up to {fastest} in an hour, {word} {most} allowed")
        });
        Some(format!("{} {change} the stage by {}{against}", which.word(), length(by.abs(), system)))
    });
    let words: Vec<String> = words.collect();
    (!words.is_empty()).then(|| words.join(", "))
}
