//! The face of the dam with its elevations, and the axes of temperature and oxygen.
//!
//! Figures of the layout are choices.

use ratatui::layout::Rect;

use crate::plot::{Scale, along};
use crate::tui::Role;
use crate::units::{Dimension, figure};

use super::Picture;
use super::layout::Layout;
use super::pen::{Pen, cells};

/// Cells of an axis for each label.
const LABEL: u16 = 5;

/// The face of the dam with the openings in it, and the elevations beside it.
pub(super) fn elevations(picture: &Picture, layout: &Layout, pen: &mut Pen) {
    let unit = picture.system.unit(Dimension::Length);
    let (low, high) = (layout.elevation.low(), layout.elevation.high());
    let (top, bed) = (layout.top - 1, layout.top + layout.rows);
    pen.text_before(layout.wall, layout.area.y, unit.symbol(), Role::Quiet);
    let surface = figure(picture.surface_m, unit, u8::from(layout.wide));
    let surface_row = layout.surface_row(picture);
    let bed_row = layout.bed_row(picture);
    let mut taken: Vec<u16> = surface_row.into_iter().chain(bed_row).collect();
    pen.text_before(layout.wall, surface_row.unwrap_or(top), &surface, Role::Strong);
    let bottom = figure(picture.bed_m, unit, u8::from(layout.wide));
    pen.text_before(layout.wall, bed_row.unwrap_or(bed), &bottom, Role::Strong);
    let row_m = (high - low) / f64::from(layout.rows);
    if let Some(scale) = Scale::new(unit.from_si(low), unit.from_si(high)) {
        let marks = scale.marks(u32::from(layout.rows / 2).max(1));
        for value in marks.values {
            let elevation_m = unit.to_si(value);
            let row = layout.row(elevation_m);
            // surface and bed have their own
            let ends = [picture.surface_m, picture.bed_m].iter().any(|z| (elevation_m - z).abs() < row_m);
            if !ends && !taken.contains(&row) {
                taken.push(row);
                pen.text_before(layout.wall, row, &figure(elevation_m, unit, marks.decimals), Role::Quiet);
            }
        }
    }
    for row in layout.top..bed {
        let opens = picture.gates.iter().any(|g| {
            let inside = |z: f64| layout.elevation.share(z).is_some_and(|s| (0.0..=1.0).contains(&s));
            (inside(g.top_m) || inside(g.bottom_m))
                && (layout.row(g.top_m)..=layout.row(g.bottom_m)).contains(&row)
        });
        let line = match (opens, taken.contains(&row)) {
            (true, true) => pen.lines.opening_tick,
            (true, false) => pen.lines.opening,
            (false, true) => pen.lines.tick,
            (false, false) => pen.lines.wall,
        };
        pen.text(layout.wall, row, 1, line, Role::Plain);
        if layout.wide && layout.curves.x > 0 {
            pen.text(layout.curves.x - 1, row, 1, pen.lines.wall, Role::Quiet);
        }
    }
    let line = if surface_row.is_some() { pen.lines.rule } else { pen.lines.surface };
    let foot = if bed_row.is_some() { pen.lines.rule } else { pen.lines.bed };
    for (row, line) in [(top, line), (bed, foot)] {
        pen.text(layout.wall, row, 1, pen.lines.tick, Role::Plain);
        pen.behind(layout.wall, layout.area.right(), row, line, Role::Plain);
    }
}

/// The axes of temperature above and of oxygen below.
pub(super) fn values(picture: &Picture, layout: &Layout, pen: &mut Pen) {
    let unit = picture.system.unit(Dimension::Temperature);
    let before = layout.curves.x.saturating_sub(1);
    let (top, bed) = (layout.top - 1, layout.top + layout.rows);
    if let Some(scale) = &layout.temperature {
        let row = layout.area.y;
        pen.text_before(before, row, "T", Role::Temperature);
        pen.text_before(layout.area.right(), row, unit.symbol(), Role::Temperature);
        axis(layout.curves, scale, (row, top, pen.lines.axis_tick), Role::Temperature, pen);
    }
    if let Some(scale) = &layout.oxygen {
        let Some(row) = layout.oxygen_axis else { return };
        pen.text_before(before, row, "O2 mg/L", Role::Oxygen);
        axis(layout.curves, scale, (row, bed, pen.lines.bed_tick), Role::Oxygen, pen);
    } else {
        let row = layout.oxygen_axis.or(layout.readout.is_none().then_some(bed));
        if let Some(row) = row {
            pen.text_before(layout.area.right(), row, "oxygen not measured", Role::Oxygen);
        }
    }
}

/// Labels in one row and their ticks in another.
fn axis(area: Rect, scale: &Scale, (row, rule, tick): (u16, u16, &str), role: Role, pen: &mut Pen) {
    let marks = scale.marks(u32::from(area.width / LABEL).max(2));
    let width = usize::from(area.width);
    let texts: Vec<String> =
        marks.values.iter().map(|v| format!("{v:.*}", usize::from(marks.decimals))).collect();
    let places: Vec<usize> = marks.values.iter().filter_map(|v| scale.cell(*v, width)).collect();
    let labels: Vec<(usize, usize)> = places.iter().zip(&texts).map(|(at, t)| (*at, t.len())).collect();
    let x = |cell: usize| area.x + u16::try_from(cell).unwrap_or(0);
    for (i, first) in along(&labels, width) {
        pen.text(x(first), row, cells(&texts[i]), &texts[i], role);
        pen.text(x(places[i]), rule, 1, tick, Role::Plain);
    }
}
