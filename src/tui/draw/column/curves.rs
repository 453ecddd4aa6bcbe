//! The curves of the casts, each with its letter at its ends.
//!
//! Figures of the layout are choices.

use crate::plot::{Dots, Scale, Stroke};
use crate::tui::Role;
use crate::units::Dimension;

use super::layout::{Layout, waters};
use super::pen::{Pen, cells};
use super::{Picture, Water};

/// Numbers of the curves in the dots.
const TEMPERATURE: usize = 0;
const OXYGEN: usize = 1;
/// Rows from the end of a curve in which its letter may stand.
const ROWS: usize = 3;

pub(super) fn draw(picture: &Picture, layout: &Layout, pen: &mut Pen) {
    let area = layout.curves;
    let several = picture.overlays.len() > 1;
    let mut drawn = Vec::new();
    for (number, (own, water)) in (1..).zip(waters(picture, layout.wide)) {
        let stroke = if own { [Stroke::Heavy, Stroke::Thin] } else { [Stroke::Dotted; 2] };
        let marks = if own { ["*", "o"] } else { [",", "."] };
        let mut dots = Dots::new(pen.grain(), usize::from(area.width), usize::from(area.height));
        let lines = lines(picture, layout, water);
        // temperature last: where both meet, the cell takes its colour
        for (curve, points, scale) in &lines {
            dots.curve(*curve, stroke[*curve], points, scale, &layout.elevation);
        }
        pen.dots(&dots, area, |curve| (role(curve), marks[curve]));
        let names = match (own, several) {
            (true, _) => ["T".to_owned(), "O2".to_owned()],
            (false, false) => ["t".to_owned(), "o".to_owned()],
            (false, true) => ["t", "o"].map(|letter| format!("{letter}{number}")),
        };
        drawn.push((own, dots, names));
    }
    // the cast itself first, so that it has the best places; no curve may hide a letter
    for (own, dots, names) in drawn.iter().rev() {
        letters(layout, dots, names.each_ref().map(String::as_str), *own, pen);
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

/// The letters of the curves, beside their highest and lowest rows; where there is no room, over the curve if always.
fn letters(layout: &Layout, dots: &Dots, letters: [&str; 2], always: bool, pen: &mut Pen) {
    let rows = layout.curves.height;
    for curve in [TEMPERATURE, OXYGEN] {
        let drawn = |row: &u16| reach(layout, dots, curve, *row).is_some();
        let (Some(top), Some(foot)) = ((0..rows).find(drawn), (0..rows).rev().find(drawn)) else { continue };
        let inward = [(top..=foot).take(ROWS).collect::<Vec<_>>(), (top..=foot).rev().take(ROWS).collect()];
        let ends = if foot - top < 2 * rows / 3 { &inward[..1] } else { &inward[..] };
        for near in ends {
            let places: Vec<(u16, u16)> =
                near.iter().flat_map(|row| beside(layout, dots, curve, *row, letters[curve])).collect();
            let free = |&&(x, y): &&(u16, u16)| (x..x + cells(letters[curve])).all(|x| pen.blank(x, y));
            // over the curve itself where there is no room at all; that of another cast would cover other letters
            let over =
                near.first().and_then(|row| Some((reach(layout, dots, curve, *row)?.0, layout.top + row)));
            if let Some((x, y)) = places.iter().find(free).copied().or(over.filter(|_| always)) {
                pen.text(x, y, cells(letters[curve]), letters[curve], role(curve));
            }
        }
    }
}

/// First and last column of a curve in a row of the water.
fn reach(layout: &Layout, dots: &Dots, curve: usize, row: u16) -> Option<(u16, u16)> {
    let own = |x: &u16| dots.spot(usize::from(*x), usize::from(row)).is_some_and(|s| s.curve == curve);
    let x = layout.curves.x;
    Some((x + (0..layout.curves.width).find(own)?, x + (0..layout.curves.width).rev().find(own)?))
}

/// Where a letter touches its curve in a row: after it, as a word stands, or before it. No other curve lies between.
fn beside(layout: &Layout, dots: &Dots, curve: usize, row: u16, letter: &str) -> Vec<(u16, u16)> {
    let Some((first, last)) = reach(layout, dots, curve, row) else { return Vec::new() };
    let y = layout.top + row;
    let before = first.checked_sub(cells(letter)).filter(|x| *x >= layout.curves.x);
    // the first column of the marks may hold a letter
    let after = Some(last + 1).filter(|x| x + cells(letter) <= layout.curves.right() + 1);
    after.into_iter().chain(before).map(|x| (x, y)).collect()
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
