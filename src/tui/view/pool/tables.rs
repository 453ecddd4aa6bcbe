//! Outlets and cold water in columns.

use unicode_width::UnicodeWidthStr;

use crate::problem::harmless;
use crate::report::{fitted, text};
use crate::site::Site;
use crate::tasks::{ColdWater, OutletState};
use crate::units::{Dimension, System, figure};

use super::super::super::look::Role;
use super::{Line, filled};

/// Cells of elevation and water above an outlet; its state follows.
const FIGURES: [usize; 2] = [9, 7];
/// Cells of the longest state, such as `SHORT of 10.0`.
const STATE: usize = 14;

/// The outlets from the highest down, those alike together.
pub(super) fn outlets(site: &Site, outlets: &[OutletState], system: System, width: usize) -> Vec<Line> {
    let length = system.unit(Dimension::Length);
    let row = |s: &OutletState| {
        let o = &site.outlets[s.outlet];
        let asked = figure(o.min_submergence_m.unwrap_or(0.0), length, 1);
        let (state, role) = match (s.wet, s.kept) {
            (false, _) => ("DRY".to_owned(), Role::Warn),
            (true, Some(false)) => (format!("SHORT of {asked}"), Role::Outside),
            (true, Some(true)) => (format!("keeps {asked}"), Role::Plain),
            (true, None) => ("not checked".to_owned(), Role::Plain),
        };
        let [z, over] = [o.centre_m, s.submergence_m].map(|m| figure(m, length, 1));
        (format!("{z:>0$}{over:>1$}  {state}", FIGURES[0], FIGURES[1]), role)
    };
    let names = width.saturating_sub(FIGURES[0] + FIGURES[1] + 2 + STATE);
    let heading = format!("{0:names$}{1:>3$}{2:>4$}  least", "", "centre", "above", FIGURES[0], FIGURES[1]);
    let mut out = vec![(heading, Role::Quiet)];
    let rows: Vec<(&str, Line)> =
        outlets.iter().map(|s| (site.outlets[s.outlet].name.as_str(), row(s))).collect();
    for alike in rows.chunk_by(|a, b| a.1 == b.1) {
        let (figures, role) = &alike[0].1;
        let all = alike.iter().map(|r| harmless(r.0)).collect::<Vec<_>>().join(" ");
        let mut lines = filled(&all, width, 1);
        // names that are too long for their column stand above the figures
        let last = match lines.pop() {
            Some(last) if last.width() <= names && lines.is_empty() => last,
            last => {
                lines.extend(last);
                String::new()
            }
        };
        out.extend(lines.into_iter().map(|line| (line, Role::Plain)));
        out.push((format!("{}{figures}", fitted(&last, names)), *role));
    }
    out
}

/// Volumes colder than each threshold; a figure for each meaning, its unit in the heading.
pub(super) fn cold(volumes: &[(ColdWater, bool)], system: System, width: usize) -> Vec<Line> {
    if volumes.is_empty() {
        return vec![("no threshold in the site file; c types one".into(), Role::Plain)];
    }
    let column = (width.saturating_sub(9) / 3).min(14);
    let unit = if system == System::Us { system.unit(Dimension::Volume).symbol() } else { "hm3" };
    let heading = |a: &str, b: &str, c: &str| format!("{unit:<9}{a:>column$}{b:>column$}{c:>column$}");
    let beyond = if column > 11 { "unreachable" } else { "not" };
    let mut out = vec![(heading("usable", beyond, "total"), Role::Quiet)];
    let degrees = system.unit(Dimension::Temperature);
    for (c, typed) in volumes {
        let bare = |m3: f64| {
            let shown = text::volume(m3, system);
            shown.split(' ').next().unwrap_or_default().to_owned()
        };
        let of = |m3: Option<f64>| m3.map_or_else(|| "none".to_owned(), bare);
        let (mark, role) = if *typed { ("*", Role::Tried) } else { ("", Role::Plain) };
        let below = format!("<{} {degrees}{mark}", figure(c.threshold_c, degrees, 1));
        let (usable, beyond) =
            (of(c.usable_m3), of(c.usable_m3.map(|u| c.total_m3 - u).or(Some(c.total_m3))));
        let total = bare(c.total_m3);
        out.push((format!("{below:<9}{usable:>column$}{beyond:>column$}{total:>column$}"), role));
    }
    if volumes.iter().any(|v| v.1) {
        out.push(("* as typed with c".into(), Role::Quiet));
    }
    out
}
