//! Outlets and cold water: in columns where they fit, else as sentences.

use unicode_width::UnicodeWidthStr;

use crate::problem::harmless;
use crate::report::{fitted, text};
use crate::tasks::{ColdWater, Context, OutletState};
use crate::tui::draw::column::GateState;
use crate::tui::look::Role;
use crate::units::{Dimension, System, figure};

use super::super::water;
use super::{Line, filled};

/// Cells of the column of names from which it is one.
const NAMES: usize = 6;

/// Width of a column of figures, two blanks before it.
fn column<'a>(heading: &str, figures: impl Iterator<Item = &'a String>) -> usize {
    figures.map(String::len).max().unwrap_or(0).max(heading.len()) + 2
}

/// What is told of an outlet: elevation, water above its top, how that stands to what is asked for.
struct Row {
    name: String,
    told: [String; 3],
    role: Role,
    out: bool,
}

fn row(context: &Context, s: &OutletState, system: System) -> Row {
    let o = &context.site().outlets[s.outlet];
    let length = |m: f64| figure(m, system.unit(Dimension::Length), 1);
    let asked = length(o.min_submergence_m.unwrap_or(0.0));
    let (state, role) = match (s.wet, s.kept) {
        (false, _) => ("DRY".to_owned(), Role::Warn),
        (true, Some(false)) => (format!("SHORT of {asked}"), Role::Outside),
        (true, Some(true)) => (format!("keeps {asked}"), Role::Plain),
        (true, None) => ("not checked".to_owned(), Role::Plain),
    };
    let out = water::is_out(context.site(), s.outlet, context.on.date_naive());
    let name = format!(
        "{}{}",
        if out { GateState::Out.sign().to_string() } else { String::new() },
        harmless(&o.name)
    );
    Row { name, told: [length(o.centre_m), length(s.submergence_m), state], role, out }
}

/// Names of outlets side by side.
fn joined(rows: &[Row]) -> String {
    rows.iter().map(|r| r.name.as_str()).collect::<Vec<_>>().join(" ")
}

/// The outlets from the highest down, those alike together.
pub(super) fn outlets(context: &Context, outlets: &[OutletState], system: System, width: usize) -> Vec<Line> {
    let rows: Vec<Row> = outlets.iter().map(|s| row(context, s, system)).collect();
    let headings = ["centre", "above", "least"];
    let wide = [0, 1, 2].map(|i| column(headings[i], rows.iter().map(|r| &r.told[i])));
    let alike: Vec<&[Row]> = rows.chunk_by(|a, b| a.told == b.told).collect();
    let longest = alike.iter().map(|rows| joined(rows).width()).max().unwrap_or(0);
    // figures far from their names are read off the wrong line
    let names = width.saturating_sub(wide.iter().sum()).min(longest + 1);
    let figures = |told: [&str; 3]| {
        let [centre, above, state] = told;
        format!("{centre:>0$}{above:>1$}  {state}", wide[0], wide[1])
    };
    let mut out = Vec::new();
    if names >= NAMES {
        out.push((format!("{:names$}{}", "", figures(headings)), Role::Quiet));
    }
    for alike in alike {
        let name = joined(alike);
        let Row { told: [centre, above, state], role, .. } = &alike[0];
        if names < NAMES {
            let words = format!("{name}: centre {centre}, water above {above}, {state}");
            out.extend(filled(&words, width, 2).into_iter().map(|line| (line, *role)));
            continue;
        }
        let mut told = figures([centre, above, state]);
        if name.width() < names {
            told = format!("{}{told}", fitted(&name, names));
        } else {
            // names too long for their column stand above the figures
            out.extend(filled(&name, width, 1).into_iter().map(|line| (line, *role)));
            told = format!("{:names$}{told}", "");
        }
        out.push((told, *role));
    }
    if rows.iter().any(|r| r.out) {
        out.push((format!("{} out of use on the date", GateState::Out.sign()), Role::Quiet));
    }
    out
}

/// Volumes colder than each threshold, and whether it was typed.
pub(super) fn cold(volumes: &[(ColdWater, bool)], system: System, width: usize) -> Vec<Line> {
    if volumes.is_empty() {
        return vec![("no threshold in the site file; c types one".into(), Role::Plain)];
    }
    let degrees = system.unit(Dimension::Temperature);
    let unit = text::volume(0.0, system).split(' ').nth(1).unwrap_or_default().to_owned();
    let rows: Vec<([String; 4], Role)> = volumes
        .iter()
        .map(|(c, typed)| {
            let bare = |m3: f64| text::volume(m3, system).split(' ').next().unwrap_or_default().to_owned();
            let of = |m3: Option<f64>| m3.map_or_else(|| "none".to_owned(), bare);
            let beyond = c.usable_m3.map_or(c.total_m3, |usable| c.total_m3 - usable);
            let (mark, role) = if *typed { ("*", Role::Tried) } else { ("<", Role::Plain) };
            let below = format!("{mark}{} {degrees}", figure(c.threshold_c, degrees, 1));
            ([below, of(c.usable_m3), bare(beyond), bare(c.total_m3)], role)
        })
        .collect();
    let headings = [unit.as_str(), "usable", "unreachable", "total"];
    let wide = [0, 1, 2, 3].map(|i| column(headings[i], rows.iter().map(|r| &r.0[i])));
    // one blank is enough between columns where room is short, and none before the first
    let spare = width.saturating_sub(wide.iter().sum::<usize>().saturating_sub(5));
    let mut out = Vec::new();
    if wide.iter().sum::<usize>().saturating_sub(5) <= width {
        let gap = spare.min(9) / 3;
        let line = |told: [&str; 4]| {
            let [below, usable, beyond, total] = told;
            let at = [wide[0] - 2, wide[1] - 1 + gap, wide[2] - 1 + gap, wide[3] - 1 + gap];
            format!("{below:<0$}{usable:>1$}{beyond:>2$}{total:>3$}", at[0], at[1], at[2], at[3])
        };
        out.push((line(headings), Role::Quiet));
        out.extend(rows.iter().map(|(told, role)| (line(told.each_ref().map(String::as_str)), *role)));
    } else {
        for ([below, usable, beyond, total], role) in &rows {
            let words = format!("{below}: usable {usable}, unreachable {beyond}, total {total} {unit}");
            out.extend(filled(&words, width, 2).into_iter().map(|line| (line, *role)));
        }
    }
    if volumes.iter().any(|v| v.1) {
        out.extend(
            filled("* below the temperature typed with c", width, 2).into_iter().map(|l| (l, Role::Quiet)),
        );
    }
    out
}
