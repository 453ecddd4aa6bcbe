//! Axes, surface and bed, what is written into the water, and the rows below the picture.

use ratatui::layout::Rect;

use crate::plot::{Scale, along};
use crate::problem::harmless;
use crate::tui::Role;
use crate::units::{Dimension, figure, show};

use super::curves::{at, crossings_m};
use super::layout::Layout;
use super::pen::{Pen, cells, front};
use super::{GateState, Picture};

/// Share of an axis's labels that would crowd it: one for so many cells at most.
const LABEL: u16 = 5;

pub(super) fn draw(picture: &Picture, layout: &Layout, pen: &mut Pen) {
    elevations(picture, layout, pen);
    values(picture, layout, pen);
    marks(picture, layout, pen);
    water_lines(picture, layout, pen);
    cursor(picture, layout, pen);
    legend(picture, layout, pen);
}

/// The face of the dam with the openings in it, and the elevations beside it.
fn elevations(picture: &Picture, layout: &Layout, pen: &mut Pen) {
    let unit = picture.system.unit(Dimension::Length);
    let (low, high) = (layout.elevation.low(), layout.elevation.high());
    let (top, bed) = (layout.top - 1, layout.top + layout.rows);
    pen.text_before(layout.wall, layout.area.y, unit.symbol(), Role::Quiet);
    let surface = figure(picture.surface_m, unit, u8::from(layout.wide));
    let surface_row = layout.surface_row(picture);
    let mut taken: Vec<u16> = surface_row.into_iter().collect();
    pen.text_before(layout.wall, surface_row.unwrap_or(top), &surface, Role::Strong);
    pen.text_before(layout.wall, bed, &figure(low, unit, u8::from(layout.wide)), Role::Strong);
    if let Some(scale) = Scale::new(unit.from_si(low), unit.from_si(high)) {
        let marks = scale.marks(u32::from(layout.rows / 2).max(1));
        for value in marks.values {
            let elevation_m = unit.to_si(value);
            let row = layout.row(elevation_m);
            if !taken.contains(&row) {
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
    pen.behind(layout.wall, layout.area.right(), top, line, Role::Plain);
    pen.behind(layout.wall, layout.area.right(), bed, pen.lines.bed, Role::Plain);
}

/// The axes of temperature above and of oxygen below.
fn values(picture: &Picture, layout: &Layout, pen: &mut Pen) {
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

/// Thermocline, mixed base, cold water and flags.
fn marks(picture: &Picture, layout: &Layout, pen: &mut Pen) {
    let area = layout.curves;
    let inside = |z: f64| layout.row_inside(z).filter(|_| z <= picture.surface_m);
    for (z, _) in &picture.flags {
        if let Some(row) = layout.row_inside(*z) {
            pen.text(layout.area.right() - 1, row, 1, "!", Role::Warn);
        }
    }
    if let Some((cold_c, column)) = picture.cold_c.and_then(|c| Some((c, cold_column(picture, layout, c)?))) {
        let length = picture.system.unit(Dimension::Length);
        let name = show(cold_c, Dimension::Temperature, picture.system, 1);
        for z in crossings_m(&picture.water.temperature, cold_c) {
            let Some(row) = inside(z) else { continue };
            pen.text(area.right(), row, 1, "c", Role::Cold);
            let short = figure(z, length, 0);
            written(
                area,
                row,
                &[format!("{name} at {short} {length}"), format!("{name} at {short}"), short],
                Role::Cold,
                pen,
            );
        }
        let width = cells(&name);
        let rows = (layout.top..area.bottom()).rev();
        let free = |x: u16, row| {
            x >= area.x && x + width <= area.right() && (x..x + width).all(|x| pen.blank(x, row))
        };
        let place = rows
            .flat_map(|row| [(column + 1, row), (column.saturating_sub(width), row)])
            .find(|p| free(p.0, p.1));
        if let Some((x, row)) = place {
            pen.text(x, row, width, &name, Role::Cold);
        }
        for row in layout.row(picture.surface_m)..area.bottom() {
            pen.behind(column, column + 1, row, pen.lines.threshold, Role::Cold);
        }
    }
    let levels = [
        (picture.thermocline_m, ["thermocline", "thermocl.", "TC"]),
        (picture.mixed_base_m, ["mixed above", "mixed", "mix"]),
    ];
    for (z, words) in levels {
        let Some(row) = z.and_then(inside) else { continue };
        written(area, row, &words.map(str::to_owned), Role::Quiet, pen);
        pen.behind(area.x, area.right(), row, pen.lines.level, Role::Quiet);
    }
}

/// Column of the threshold of cold water.
fn cold_column(picture: &Picture, layout: &Layout, cold_c: f64) -> Option<u16> {
    let value = picture.system.unit(Dimension::Temperature).from_si(cold_c);
    let scale = layout.temperature?;
    let cell = scale
        .share(value)
        .filter(|s| (0.0..=1.0).contains(s))
        .and(scale.cell(value, usize::from(layout.curves.width)))?;
    Some(layout.curves.x + u16::try_from(cell).ok()?)
}

/// The first of some words that fits into the blank cells of a row, as far right as it goes.
fn written(area: Rect, row: u16, words: &[String], role: Role, pen: &mut Pen) {
    for text in words {
        let width = cells(text);
        // a blank on either side, lest it run into a curve
        let fits = |x: &u16| {
            let (first, last) = (x.saturating_sub(1).max(area.x), (*x + width + 1).min(area.right()));
            *x + width <= area.right() && (first..last).all(|x| pen.blank(x, row))
        };
        if let Some(x) = (area.x..area.right()).rev().find(fits) {
            pen.text(x, row, width, text, role);
            return;
        }
    }
}

/// The surface where air is drawn above it.
fn water_lines(picture: &Picture, layout: &Layout, pen: &mut Pen) {
    if let Some(row) = layout.surface_row(picture) {
        pen.behind(layout.wall, layout.area.right(), row, pen.lines.surface, Role::Plain);
    }
}

fn cursor(picture: &Picture, layout: &Layout, pen: &mut Pen) {
    let Some(z) = picture.cursor_m.filter(|z| layout.row_inside(*z).is_some()) else { return };
    let row = layout.row(z);
    let system = picture.system;
    let length = system.unit(Dimension::Length);
    pen.behind(layout.wall + 1, layout.area.right(), row, pen.lines.cursor, Role::Plain);
    pen.text(
        layout.area.x,
        row,
        layout.wall - layout.area.x,
        &" ".repeat(usize::from(layout.wall)),
        Role::Plain,
    );
    pen.text_before(layout.wall, row, &figure(z, length, u8::from(layout.wide)), Role::Chosen);
    let Some(line) = layout.readout else { return };
    let mut x = layout.area.x;
    let mut say = |text: &str, role: Role| {
        pen.text(x, line, layout.area.right().saturating_sub(x), text, role);
        x = x.saturating_add(cells(text)).saturating_add(2);
    };
    say(&show(z, Dimension::Length, system, 1), Role::Strong);
    if z > picture.surface_m {
        say("above the water", Role::Plain);
        return;
    }
    match at(&picture.water.temperature, z) {
        Some(t) => say(&show(t, Dimension::Temperature, system, 1), Role::Temperature),
        None => say("no temperature", Role::Temperature),
    }
    match picture.water.oxygen.iter().find_map(|s| at(s, z)) {
        Some(o) => say(&show(o, Dimension::Concentration, system, 1), Role::Oxygen),
        None => say("no oxygen here", Role::Oxygen),
    }
    for (_, words) in picture.flags.iter().filter(|(z, _)| layout.row_inside(*z) == Some(row)) {
        say(&format!("! {}", harmless(words)), Role::Warn);
    }
}

/// What the signs mean, as many as find room.
fn legend(picture: &Picture, layout: &Layout, pen: &mut Pen) {
    let Some(row) = layout.legend else { return };
    let present = |state: GateState| picture.gates.iter().any(|g| g.state == state);
    let mut items: Vec<String> = GateState::SIGNS
        .iter()
        .filter(|s| present(s.0))
        .map(|(_, sign, words)| format!("{sign} {words}"))
        .collect();
    if !layout.lanes.is_empty() {
        let (free, cut) = (pen.lines.ends_free[0], pen.lines.ends_cut[0]);
        items.push("< peak".into());
        items.push(format!("{free} free end"));
        items.push(format!("{cut} cut by surface or bed"));
    }
    if picture.cold_c.is_some() {
        items.push("c cold line".into());
    }
    let mut x = layout.area.x;
    for item in items {
        if x + cells(&item) <= layout.area.right() {
            pen.text(x, row, cells(&item), front(&item, layout.area.width), Role::Quiet);
            x += cells(&item) + 2;
        }
    }
}
