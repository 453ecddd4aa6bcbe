//! What is written into the water: flags, the cold threshold, thermocline, mixed base, surface and bed inside the picture.

use ratatui::layout::Rect;

use crate::tui::Role;
use crate::units::{Dimension, figure};

use super::Picture;
use super::curves::crossings_m;
use super::layout::Layout;
use super::pen::{Pen, cells};

/// Words before lines: lines go behind whatever stands.
pub(super) fn draw(picture: &Picture, layout: &Layout, pen: &mut Pen) {
    for (elevation_m, _) in &picture.flags {
        if let Some(row) = layout.row_inside(*elevation_m) {
            pen.text(layout.area.right() - 1, row, 1, "!", Role::Warn);
        }
    }
    let cold = picture.cold_c.and_then(|c| Some((c, cold_column(picture, layout, c)?)));
    if let Some((cold_c, column)) = cold {
        cold_words(picture, layout, cold_c, column, pen);
    }
    let levels = [
        (picture.thermocline_m, ["thermocline", "thermocl."]),
        (picture.mixed_base_m, ["mixed above", "mixed"]),
    ];
    let mut told = Vec::new();
    for (elevation_m, words) in levels {
        let row = elevation_m.and_then(|z| under_water(picture, layout, z));
        let Some(row) = row else { continue };
        if written(layout.curves, row, &words.map(str::to_owned), Role::Quiet, pen) {
            told.push(row);
        }
    }
    if let Some((_, column)) = cold {
        let foot = layout.bed_row(picture).unwrap_or(layout.curves.bottom());
        for row in layout.row(picture.surface_m)..foot {
            pen.behind(column, column + 1, row, pen.lines.threshold, Role::Cold);
        }
    }
    // a line without its word would be a riddle
    for row in told {
        pen.behind(layout.curves.x, layout.curves.right(), row, pen.lines.level, Role::Quiet);
    }
    let ends = [(layout.surface_row(picture), pen.lines.surface), (layout.bed_row(picture), pen.lines.bed)];
    for (row, line) in ends {
        if let Some(row) = row {
            pen.behind(layout.wall, layout.area.right(), row, line, Role::Plain);
        }
    }
}

fn under_water(picture: &Picture, layout: &Layout, elevation_m: f64) -> Option<u16> {
    layout.row_inside(elevation_m).filter(|_| elevation_m <= picture.surface_m)
}

/// Where the water passes the threshold, and the name of its line as low as it finds room.
fn cold_words(picture: &Picture, layout: &Layout, cold_c: f64, column: u16, pen: &mut Pen) {
    let area = layout.curves;
    let length = picture.system.unit(Dimension::Length);
    let unit = picture.system.unit(Dimension::Temperature);
    let shown = unit.from_si(cold_c);
    let name = format!("{} {unit}", figure(cold_c, unit, u8::from((shown - shown.round()).abs() > 0.05)));
    for z in crossings_m(&picture.water.temperature, cold_c) {
        let Some(row) = under_water(picture, layout, z) else { continue };
        pen.text(area.right(), row, 1, "c", Role::Cold);
        let at = figure(z, length, 0);
        let words = [format!("{name} at {at} {length}"), format!("{name} at {at}"), format!("at {at}")];
        written(area, row, &words, Role::Cold, pen);
    }
    let width = cells(&name);
    let free = |x: u16, row| x >= area.x && (x..=x + width).all(|x| x < area.right() && pen.blank(x, row));
    let places = |row| [(column + 1, row), (column.saturating_sub(width), row)];
    let place = (layout.top..area.bottom()).rev().flat_map(places).find(|p| free(p.0, p.1));
    if let Some((x, row)) = place {
        pen.text(x, row, width, &name, Role::Cold);
    }
}

/// Column of the threshold of cold water, where it is on the scale.
fn cold_column(picture: &Picture, layout: &Layout, cold_c: f64) -> Option<u16> {
    let value = picture.system.unit(Dimension::Temperature).from_si(cold_c);
    let scale = layout.temperature?;
    scale.share(value).filter(|s| (0.0..=1.0).contains(s))?;
    let cell = scale.cell(value, usize::from(layout.curves.width))?;
    Some(layout.curves.x + u16::try_from(cell).ok()?)
}

/// Writes the first of some words that fits into the blank cells of a row, as far right as it goes, and whether one
/// did.
fn written(area: Rect, row: u16, words: &[String], role: Role, pen: &mut Pen) -> bool {
    for text in words {
        let width = cells(text);
        // a blank on either side, lest it run into a curve
        let fits =
            |x: &u16| (*x - 1..=*x + width).all(|x| (area.x..area.right()).contains(&x) && pen.blank(x, row));
        if let Some(x) = (area.x + 1..area.right()).rev().find(fits) {
            pen.text(x, row, width, text, role);
            pen.take(x - 1, row);
            pen.take(x + width, row);
            return true;
        }
    }
    false
}
