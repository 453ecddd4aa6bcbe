//! The curves of the casts, each with its letter at its ends.

use crate::plot::{Dots, Scale, Stroke};
use crate::tui::Role;
use crate::units::Dimension;

use super::layout::{Layout, waters};
use super::pen::{Pen, cells};
use super::{Picture, Water};

/// Numbers of the curves in the dots.
const TEMPERATURE: usize = 0;
const OXYGEN: usize = 1;

pub(super) fn draw(picture: &Picture, layout: &Layout, pen: &mut Pen) {
    let area = layout.curves;
    let letters = [["t", "o"], ["T", "O2"]];
    for water in waters(picture, layout.wide) {
        let own = std::ptr::eq(water, &picture.water);
        let stroke = if own { [Stroke::Heavy, Stroke::Thin] } else { [Stroke::Dotted; 2] };
        let marks = if own { ["*", "o"] } else { [",", "."] };
        let mut dots = Dots::new(pen.grain(), usize::from(area.width), usize::from(area.height));
        let lines = lines(picture, layout, water);
        // temperature last: where both meet, the cell takes its colour
        for (curve, points, scale) in &lines {
            dots.curve(*curve, stroke[*curve], points, scale, &layout.elevation);
        }
        pen.dots(&dots, area, |curve| (role(curve), marks[curve]));
        if own {
            letter_ends(layout, &lines, letters[1], pen);
        } else {
            letter_ends(layout, &lines, letters[0], pen);
        }
    }
}

type Line = (usize, Vec<(f64, f64)>, Scale);

/// Stretches of a cast as points of value (in the unit shown) and elevation (m), oxygen first.
fn lines(picture: &Picture, layout: &Layout, water: &Water) -> Vec<Line> {
    let unit = picture.system.unit(Dimension::Temperature);
    let mut out = Vec::new();
    if let Some(scale) = layout.oxygen {
        let turned = |stretch: &Vec<(f64, f64)>| stretch.iter().map(|&(z, o)| (o, z)).collect();
        out.extend(water.oxygen.iter().map(|stretch| (OXYGEN, turned(stretch), scale)));
    }
    if let Some(scale) = layout.temperature {
        let turned = water.temperature.iter().map(|&(z, t)| (unit.from_si(t), z)).collect();
        out.push((TEMPERATURE, turned, scale));
    }
    out
}

fn role(curve: usize) -> Role {
    if curve == OXYGEN { Role::Oxygen } else { Role::Temperature }
}

/// The letters of the curves beside their highest and lowest points.
fn letter_ends(layout: &Layout, lines: &[Line], letters: [&str; 2], pen: &mut Pen) {
    for curve in [TEMPERATURE, OXYGEN] {
        let own = || lines.iter().filter(|l| l.0 == curve);
        let shown =
            |l: &Line| l.1.iter().copied().filter(|p| layout.row_inside(p.1).is_some()).collect::<Vec<_>>();
        let points = || own().flat_map(shown);
        let ends = [points().max_by(|a, b| a.1.total_cmp(&b.1)), points().min_by(|a, b| a.1.total_cmp(&b.1))];
        let Some(scale) = own().map(|l| l.2).next() else { continue };
        let mut rows = Vec::new();
        for (value, elevation_m) in ends.into_iter().flatten() {
            let row = layout.row(elevation_m);
            let Some(cell) = scale.cell(value, usize::from(layout.curves.width)) else { continue };
            let at = layout.curves.x + u16::try_from(cell).unwrap_or(0);
            if !rows.contains(&row) {
                rows.push(row);
                beside(layout, at, row, letters[curve], role(curve), pen);
            }
        }
    }
}

/// A letter in the nearest blank cells of the row; over the curve itself where there are none.
fn beside(layout: &Layout, at: u16, row: u16, letter: &str, role: Role, pen: &mut Pen) {
    let (left, right) = (layout.curves.left(), layout.curves.right());
    let width = cells(letter);
    let free = |x: &u16| (*x..*x + width).all(|x| x < right && pen.blank(x, row));
    // a cell further right than left counts as near: the letter stands after its curve as a word does
    let far = |x: &u16| if *x > at { 2 * (*x - at) - 1 } else { 2 * (at + 1 - (*x + width).min(at)) };
    let place = (left..right).filter(free).min_by_key(far).filter(|x| far(x) <= 8);
    pen.text(place.unwrap_or_else(|| at.min(right.saturating_sub(width))), row, width, letter, role);
}

/// Value at an elevation, linear between points that rise or fall in elevation; `None` beyond them.
pub(super) fn at(points: &[(f64, f64)], elevation_m: f64) -> Option<f64> {
    points.windows(2).find_map(|pair| {
        let share = Scale::new(pair[0].0.min(pair[1].0), pair[0].0.max(pair[1].0))?.share(elevation_m)?;
        let share = if pair[0].0 < pair[1].0 { share } else { 1.0 - share };
        (0.0..=1.0).contains(&share).then(|| pair[0].1 + share * (pair[1].1 - pair[0].1))
    })
}

/// Elevations where a curve passes a value, m.
pub(super) fn crossings_m(points: &[(f64, f64)], value: f64) -> Vec<f64> {
    points
        .windows(2)
        .filter_map(|pair| {
            let share = (value - pair[0].1) / (pair[1].1 - pair[0].1);
            // the far end belongs to the next pair
            (0.0..1.0).contains(&share).then(|| pair[0].0 + share * (pair[1].0 - pair[0].0))
        })
        .collect()
}
