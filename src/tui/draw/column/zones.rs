//! Withdrawal zones, a lane for each: the velocity as a filled shape, a bracket over its extent, its peak.

use crate::plot::Dots;
use crate::problem::harmless;
use crate::tui::Role;

use super::layout::Layout;
use super::pen::{Pen, cells};
use super::{Picture, ZoneMark};

pub(super) fn draw(picture: &Picture, layout: &Layout, pen: &mut Pen) {
    let mut hidden = 0;
    for (zone, lane) in picture.zones.iter().zip(&layout.lane_of) {
        let Some(lane) = layout.lanes.get(*lane) else {
            hidden += 1;
            continue;
        };
        let mut shape = *lane;
        // the bracket, and a gap behind it where there is room
        shape.width = lane.width.saturating_sub(if lane.width > 4 { 2 } else { 1 });
        let mut dots = Dots::new(pen.grain(), usize::from(shape.width), usize::from(shape.height));
        let (low, high) = (layout.elevation.low(), layout.elevation.high());
        dots.fill(0, |share| velocity(zone, low + share * (high - low)));
        pen.dots(&dots, shape, |_| (Role::Zone, "#"));
        let bracket = shape.right();
        let (upper, lower) = (layout.row(zone.upper_m), layout.row(zone.lower_m));
        for row in upper..=lower {
            pen.text(bracket, row, 1, pen.lines.extent, Role::Zone);
        }
        let end =
            |free: bool, end: usize| if free { pen.lines.ends_free[end] } else { pen.lines.ends_cut[end] };
        let ends = [(upper, end(zone.upper_free, 0)), (lower, end(zone.lower_free, 1))];
        for (row, end) in ends {
            pen.text(bracket, row, 1, end, Role::Zone);
        }
        pen.text(bracket, layout.row(zone.peak_m), 1, "<", Role::Strong);
        // the row above the water is there for one that reaches the surface
        pen.text(lane.x, upper - 1, lane.width, &label(zone, lane.width.saturating_sub(1)), Role::Zone);
    }
    if hidden > 0 {
        let words = format!("+{hidden} zone{}", if hidden > 1 { "s" } else { "" });
        let x = layout.gates.right().saturating_sub(cells(&words));
        pen.text(x, layout.top + layout.rows, cells(&words), &words, Role::Warn);
    }
}

/// The gates of a zone; where they do not fit, the first with a `+`, and nothing rather than half a name.
fn label(zone: &ZoneMark, width: u16) -> String {
    let whole = harmless(&zone.label);
    if cells(&whole) <= width {
        return whole;
    }
    let first = whole.split(' ').next().unwrap_or("");
    let short = format!("{first}+");
    if first.len() < whole.len() && cells(&short) <= width { short } else { String::new() }
}

/// Velocity at an elevation as a share of the greatest; 0 outside the zone.
fn velocity(zone: &ZoneMark, elevation_m: f64) -> f64 {
    if !(zone.lower_m..=zone.upper_m).contains(&elevation_m) {
        return 0.0;
    }
    super::curves::at(&zone.velocity, elevation_m).unwrap_or(0.0)
}
