//! What arrives downstream, in words.

mod places;

use crate::mix::Spread;
use crate::problem::{Problem, harmless};
use crate::tasks::Context;
use crate::tasks::river::{RiverAnswer, Way, Which};
use crate::units::System;

use super::{flow, labelled, list, setting_words, wrapped};

pub use places::{PlaceRow, places, stage_words, window_words};

/// Columns of a label of the table of places, and of each place.
const LABEL: usize = 20;
const CELL: usize = 19;

/// Everything but head and caution.
pub(super) fn body(context: &Context, answer: &RiverAnswer) -> String {
    let system = context.system;
    let mut out = String::new();
    for way in &answer.ways {
        out.push_str(&labelled(title(way.which), &set_words(context, way, system)));
    }
    out.push('\n');
    out.push_str(&table(&places(context, answer, system)));
    out.push('\n');
    let notes: Vec<&Problem> = answer.notes.iter().collect();
    out.push_str(&list("The river", &notes, false, system));
    out
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
            let cells: String = cells.map(|c| format!("{:<CELL$}", super::fitted(c, CELL - 1))).collect();
            out.push_str(format!("{:<LABEL$}{cells}", row.label).trim_end());
            out.push('\n');
        }
    }
    out
}

/// The perturbed cases of a way at the dam, as time means.
fn over_day(way: &Way) -> Spread {
    way.at_dam()
}

/// Names of the places that rules speak of.
pub fn point_words(point: &str) -> String {
    harmless(point)
}
