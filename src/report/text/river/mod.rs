//! What arrives downstream, in words.

mod ahead;
pub(super) mod amounts;
mod places;
pub(super) mod record;
pub(super) mod rules;

use std::fmt::Write as _;

use crate::problem::{Problem, Weight, harmless};
use crate::report::flags_of;
use crate::site::Surface;
use crate::tasks::Context;
use crate::tasks::river::{RiverAnswer, Way, Which, Window};
use crate::units::System;

use super::learned::applied;
use super::{flow, labelled, list, release_words, setting_words, wrapped};

pub use ahead::{days, timely_words};
pub use amounts::unit_si;
pub(in crate::report) use amounts::{by, degree_days};
pub use places::{PlaceRow, places, stage_words, window_words};
pub use record::{PROVISIONAL, REVIEWED, SIGNS, calendar, record};
pub use rules::{RuleRow, RuleStanding, conflicts, rules};

/// Columns of a label of the table of places, and of each place.
const LABEL: usize = 20;
const CELL: usize = 19;

/// Everything but head and caution.
pub(super) fn body(context: &Context, answer: &RiverAnswer) -> String {
    let system = context.system;
    let mut out = String::new();
    for way in &answer.ways {
        let misses = way.targets.iter().filter(|s| s.missed()).count();
        let nearest = match (way.which, misses) {
            (Which::Best, 1..) => {
                "; no mix examined is known to keep every target, this is the first in the order"
            }
            _ => "",
        };
        out.push_str(&labelled(title(way.which), &format!("{}{nearest}", set_words(context, way, system))));
    }
    out.extend(learned(context, answer, system).map(|words| labelled("Learned", &words)));
    let leaves = context.on.format("%Y-%m-%d");
    let of = format!("{}; at points the water that leaves the dam on {leaves}", weather_words(context));
    out.push_str(&labelled("River", &of));
    out.push('\n');
    out.push_str(&table(&places(context, answer, system)));
    out.push('\n');
    out.push_str(&needed(context, answer, system));
    out.push_str(&standings(context, answer, system));
    for (i, line) in days(context, answer, system, super::WIDTH - 2).into_iter().enumerate() {
        out.push_str(if i == 0 { "Day by day, each release held\n  " } else { "  " });
        out.push_str(&line);
        out.push('\n');
    }
    out.push('\n');
    let mut recorded = String::from("Recorded\n");
    for (line, _) in record(context, answer, system, super::WIDTH - 2) {
        let _ = writeln!(recorded, "  {line}");
    }
    out.push_str(&recorded);
    out.push('\n');
    // what is said of a file beside the casts is a note of the river already
    let mut cast = flags_of(&context.profile.flags);
    cast.retain(|flag| flag.weight != Weight::Note && !answer.notes.contains(flag));
    out.push_str(&list("The cast", &cast, true, system));
    let notes: Vec<&Problem> = answer.notes.iter().collect();
    out.push_str(&list("The river", &notes, false, system));
    out
}

/// What was learned and is applied, and the release of each way without it; `None` where nothing was.
pub fn learned(context: &Context, answer: &RiverAnswer, system: System) -> Option<String> {
    let mut out = applied(context.site(), system)?;
    for way in &answer.ways {
        let Some(without) = &way.without else { continue };
        let words = release_words((without.temperature_c, without.oxygen_mg_l), &without.spread, system);
        let _ = write!(out, "; without it {} {words}", way.which.word());
    }
    Some(out)
}

/// What the way down is computed with.
pub fn weather_words(context: &Context) -> String {
    let site = context.site();
    let weather = &context.conditions.weather;
    let Some(river) = &site.river else { return "nothing is told of it".to_owned() };
    match &river.surface {
        None => "what it trades with the air is not given".to_owned(),
        Some(Surface::Given { .. }) => {
            "given equilibrium temperature and exchange: means of the day".to_owned()
        }
        Some(Surface::Monthly(_)) => "mean weather of the month: means of the day".to_owned(),
        Some(Surface::File(file)) if weather.last_day().is_none() => {
            format!("nothing could be read from {}: see below", harmless(file))
        }
        Some(Surface::File(file)) => {
            let step = if weather.is_hourly() { "hour by hour" } else { "means of the day" };
            let forecast = weather.forecast_from.map_or_else(String::new, |from| {
                format!(", forecast from {}", from.with_timezone(&site.offset).format("%Y-%m-%d %H:%M"))
            });
            format!("weather of {}: {step}{forecast}", harmless(file))
        }
    }
}

fn title(which: Which) -> &'static str {
    match which {
        Which::Now => "Now",
        Which::Tried => "Tried",
        Which::Best => "Best",
    }
}

/// What a way sets and its total: `N3 600 cfs, S3 600 cfs = 1,200 cfs`; by part of the day where there are several.
pub fn set_words(context: &Context, way: &Way, system: System) -> String {
    let site = context.site();
    let part = |p: &crate::tasks::river::WayPart| {
        let hours = if way.parts.len() > 1 { format!("{:.1} h ", 24.0 * p.share) } else { String::new() };
        format!("{hours}{} = {}", setting_words(site, &p.setting, system), flow(p.release.flow_m3s, system))
    };
    way.parts.iter().map(part).collect::<Vec<_>>().join("; ")
}

/// The table of places in plain columns; places that have no room go into a second one below.
fn table(rows: &[PlaceRow]) -> String {
    let count = rows.first().map_or(0, |r| r.cells.len());
    let each = (super::WIDTH - LABEL) / CELL;
    let mut out = String::new();
    for first in (0..count).step_by(each) {
        for row in rows {
            let cells = row.cells.iter().skip(first).take(each);
            let cells: Vec<String> =
                cells.map(|c| format!("{:<CELL$}", super::fitted(c, CELL - 1))).collect();
            out.push_str(format!("{:<LABEL$}{}", row.label, cells.concat()).trim_end());
            out.push('\n');
        }
    }
    out
}

/// The release each place would need, the change in time for what is coming, the stage.
fn needed(context: &Context, answer: &RiverAnswer, system: System) -> String {
    let points = context.site().river.as_ref().map_or(&[][..], |r| &r.points);
    let mut out = String::from("Release needed today\n");
    if answer.windows.is_empty() {
        out.push_str("  no rule is valid on this date\n");
    }
    for window in &answer.windows {
        let name =
            window.point.and_then(|i| points.get(i)).map_or("the dam".to_owned(), |p| harmless(&p.name));
        let set = set_by(context, window);
        out.push_str(&wrapped(&format!("  {name}: {}{set}", window_words(window, system)), 4));
    }
    for words in timely_words(context, answer, system, None) {
        out.push_str(&wrapped(&format!("  ! {words}"), 4));
    }
    for (i, point) in points.iter().enumerate() {
        if let Some(words) = stage_words(context, answer, i, system) {
            out.push_str(&wrapped(&format!("  {}: {words}", harmless(&point.name)), 4));
        }
    }
    out.push('\n');
    out
}

/// Which rules set the ends of a window.
fn set_by(context: &Context, window: &Window) -> String {
    let name = |i: Option<usize>| context.site().targets.get(i?).map(|rule| harmless(&rule.name));
    let ends = [
        ("low end", name(window.set_by[0]).filter(|_| window.low_c.is_some())),
        ("high end", name(window.set_by[1]).filter(|_| window.high_c.is_some())),
        ("oxygen", name(window.oxygen_set_by)),
    ];
    let told = ends.into_iter().filter_map(|(end, rule)| Some(format!("{end} by `{}`", rule?)));
    let told: Vec<String> = told.collect();
    if told.is_empty() { String::new() } else { format!(" ({})", told.join(", ")) }
}

/// Every rule valid on the date with how each release stands.
fn standings(context: &Context, answer: &RiverAnswer, system: System) -> String {
    let mut out = String::from("Rules\n");
    let rows = rules(context, answer, system);
    if rows.is_empty() {
        out.push_str("  none is valid on this date\n");
    }
    for row in &rows {
        let governs = if row.governs { ": governs" } else { "" };
        out.push_str(&wrapped(&format!("  {} at {} ({}){governs}", row.name, row.point, row.asks), 4));
        for standing in &row.standings {
            let mark = if standing.missed { "!" } else { " " };
            out.push_str(&wrapped(&format!("  {mark} {}", standing.words), 6));
        }
        out.push_str(&wrapped(&format!("    {}", row.source), 6));
    }
    for words in conflicts(context, answer, system) {
        out.push_str(&wrapped(&format!("  ! {words}"), 4));
    }
    out.push('\n');
    out
}
