//! The days ahead, and when a change must leave the dam.

use std::fmt::Write as _;

use unicode_width::UnicodeWidthStr;

use crate::problem::harmless;
use crate::tasks::Context;
use crate::tasks::river::{Arriving, RiverAnswer, Timely};
use crate::units::{Dimension, System, figure};

use super::amounts;

/// Columns of the date, of the air, and between figures.
const DATE: usize = 17;
const AIR: usize = 8;
const GAP: usize = 2;

/// What arrives day by day, a line a day under a heading: of each point the mean of every release, and in brackets the
/// greatest where hours are known. Points that have no room in a width follow below.
pub fn days(context: &Context, answer: &RiverAnswer, system: System, width: usize) -> Vec<String> {
    let Some(river) = &context.site().river else {
        return vec!["The site file tells nothing of the river.".to_owned()];
    };
    if answer.days.iter().all(|d| d.ways.iter().all(Vec::is_empty)) {
        return vec!["What arrives is not known: see what is said of the river.".to_owned()];
    }
    let unit = system.unit(Dimension::Temperature);
    // a column for every release at every point: its heading and its figures
    let column = |point: usize, way: usize| {
        let head = answer.ways.get(way).map_or("", |w| w.which.word());
        let figures = answer.days.iter().map(|day| figures(day, way, point, system));
        std::iter::once(format!("{} {head}", point + 1)).chain(figures).collect::<Vec<String>>()
    };
    let columns = |points: std::ops::Range<usize>| {
        let all = points.flat_map(|point| (0..answer.ways.len()).map(move |way| (point, way)));
        all.map(|(point, way)| column(point, way)).collect::<Vec<_>>()
    };
    let count = river.points.len();
    let wide = columns(0..count).iter().flatten().map(|cell| cell.width() + GAP).max().unwrap_or(GAP);
    let each = (width.saturating_sub(DATE + AIR) / (wide * answer.ways.len()).max(1)).max(1);
    let date = |day: &Arriving| {
        let air = day.air_c.map_or_else(|| "-".to_owned(), |c| figure(c, unit, 1));
        let mark = match (day.repeated, day.forecast) {
            (true, _) => "repeated",
            (false, true) => "forecast",
            (false, false) => "",
        };
        format!("{:<DATE$}{air:<AIR$}", format!("{} {mark}", day.date.format("%m-%d")))
    };
    let mut out = Vec::new();
    for first in (0..count).step_by(each) {
        let columns = columns(first..(first + each).min(count));
        let heads = std::iter::once(format!("{:<DATE$}{:<AIR$}", "leaves the dam", "air"));
        for (row, mut line) in heads.chain(answer.days.iter().map(date)).enumerate() {
            for cell in columns.iter().filter_map(|column| column.get(row)) {
                let _ = write!(line, "{cell:<wide$}");
            }
            out.push(line.trim_end().to_owned());
        }
    }
    let names = river.points.iter().enumerate().map(|(i, p)| format!("{} {}", i + 1, harmless(&p.name)));
    let names: Vec<String> = names.collect();
    let repeated = if answer.days.iter().any(|d| d.repeated) {
        "; repeated: the weather ends, that of the day before runs on"
    } else {
        ""
    };
    out.push(format!("{}; {}, mean (greatest){repeated}", names.join(", "), unit.symbol()));
    out
}

fn figures(day: &Arriving, way: usize, point: usize, system: System) -> String {
    let unit = system.unit(Dimension::Temperature);
    let Some(f) = day.ways.get(way).and_then(|points| points.get(point)) else { return "-".to_owned() };
    match f.range_c {
        Some((greatest, _)) => format!("{} ({})", figure(f.mean_c, unit, 1), figure(greatest, unit, 1)),
        None => figure(f.mean_c, unit, 1),
    }
}

/// When a change must leave the dam to be in time, by point.
pub fn timely_words(context: &Context, answer: &RiverAnswer, system: System) -> Vec<String> {
    let site = context.site();
    let points = site.river.as_ref().map_or(&[][..], |r| &r.points);
    let words = |t: &Timely| {
        let (point, rule) = (points.get(t.point)?, site.targets.get(t.target)?);
        let (on, value, by) = t.worst;
        let late = if t.late { ", which is past" } else { "" };
        Some(format!(
            "{}: if this release is held, `{}` is missed for {} from {} (on {} {}, by {}); a change must leave the dam \
             by {}{late}: its water takes {:.1} h, its rise can be there after {:.1} h, in bulk after {:.1} h",
            harmless(&point.name),
            harmless(&rule.name),
            super::record::days_of(t.days as f64),
            t.day.format("%m-%d"),
            on.format("%m-%d"),
            amounts::value(rule, value, system),
            amounts::by(rule, by, system),
            t.leave_by.format("%m-%d %H:%M"),
            t.travel_h,
            t.rise_first_h,
            t.rise_h
        ))
    };
    answer.timely.iter().filter_map(words).collect()
}
