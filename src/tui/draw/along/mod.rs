//! The river along its length: what the water is from the dam down, what each point asks of it, and what the release
//! would have to be for that.

mod axes;
mod marks;
#[cfg(test)]
mod tests;

use ratatui::buffer::Buffer;
use ratatui::layout::Rect;

use crate::plot::{Dots, Stroke};
use crate::tui::{Look, Role};
use crate::units::{Dimension, System};

use super::pen::Pen;

/// A release on its way down.
#[derive(Debug, Clone, PartialEq)]
pub struct AlongWay {
    /// The letter that marks its line.
    pub letter: char,
    /// What it is, such as `now`.
    pub name: String,
    /// How its line is drawn.
    pub role: Role,
    /// How strong its line is.
    pub stroke: Stroke,
    /// Distance from the dam (m) and value, C or mg/L, from the dam down.
    pub places: Vec<(f64, f64)>,
    /// Distance and the 10-90 % band there, where one is drawn.
    pub bands: Vec<(f64, [f64; 2])>,
}

/// A bound below and one above, where there are any.
pub type Ends = (Option<f64>, Option<f64>);

/// A point with what is asked there.
#[derive(Debug, Clone, PartialEq)]
pub struct AlongPoint {
    /// Its name.
    pub name: String,
    /// Distance from the dam, m.
    pub at_m: f64,
    /// The range asked there, C or mg/L.
    pub range: Ends,
    /// The release that gives it; `None` where no release does.
    pub window: Option<Ends>,
}

/// What the picture shows.
#[derive(Debug, Clone, PartialEq)]
pub struct AlongPicture {
    /// Its title.
    pub title: String,
    /// Temperature or concentration.
    pub dimension: Dimension,
    /// Units shown.
    pub system: System,
    /// Length of the river, m.
    pub length_m: f64,
    /// Releases, the one drawn on top last.
    pub ways: Vec<AlongWay>,
    /// Points, from the dam down.
    pub points: Vec<AlongPoint>,
    /// The range asked of the release at the dam.
    pub dam: Ends,
    /// Streams that join: distance and name.
    pub joins: Vec<(f64, String)>,
    /// The point chosen.
    pub chosen: Option<usize>,
    /// Whether distances and names stand below.
    pub foot: bool,
}

/// Draws the river along its length.
///
/// ```text
/// Temperature, C                  N now  T tried  B best  [ asked  ( needed
///  20 |                                  [
///     |                           ..N....[.N
///  15 | (              [   .......       [
///     | (   ...........[.T
///  10 | T...
///     +-^------+-------^-----+-----------^---
///     dam     10     Mill Br 20       Lower Ford  km
/// ```
/// `[` spans the range asked at a point, and at the dam (`d`); `(` beside the dam spans the release that a point needs,
/// each under the number of its point.
pub fn along(picture: &AlongPicture, area: Rect, buf: &mut Buffer, look: Look) {
    let mut pen = Pen::new(buf, area, look);
    let Some(frame) = axes::Frame::of(picture, area) else {
        pen.put(0, 0, &picture.title, Role::Strong);
        return;
    };
    frame.draw(picture, &mut pen, look);
    marks::asked(picture, &frame, &mut pen, look);
    // the thin one is what might be: it must not hide what is
    let thin = |way: &&AlongWay| way.stroke == Stroke::Thin;
    let above = picture.ways.iter().filter(|way| !thin(way));
    for way in picture.ways.iter().filter(thin).chain(above) {
        let mut dots = Dots::new(look.symbols.grain(), frame.cols, frame.rows);
        let points: Vec<(f64, f64)> = way.places.iter().map(|p| (p.0, picture.shown(p.1))).collect();
        dots.curve(0, way.stroke, &points, &frame.x, &frame.y);
        for row in 0..frame.rows {
            for col in 0..frame.cols {
                if let Some(spot) = dots.spot(col, row) {
                    pen.put(axes::SIDE + col, axes::OVER + row, &spot.glyph.to_string(), way.role);
                }
            }
        }
    }
    marks::ways(picture, &frame, &mut pen, look);
}

/// The point nearest to a cell of the buffer, for the mouse.
pub fn point_at(picture: &AlongPicture, area: Rect, col: u16, row: u16) -> Option<usize> {
    let frame = axes::Frame::of(picture, area)?;
    let col = usize::from(col.checked_sub(area.x)?);
    let row = usize::from(row.checked_sub(area.y)?);
    if row >= axes::OVER + frame.rows + axes::UNDER {
        return None;
    }
    let far = |p: &AlongPoint| frame.col(p.at_m).abs_diff(col);
    (0..picture.points.len()).min_by_key(|&i| far(&picture.points[i]))
}

impl AlongPicture {
    /// A value in the unit shown.
    fn shown(&self, value: f64) -> f64 {
        self.system.unit(self.dimension).from_si(value)
    }

    /// Every value there is, asked for or not.
    fn values(&self) -> Vec<f64> {
        let ways = self.ways.iter();
        ways.flat_map(|w| w.places.iter().map(|p| p.1).chain(w.bands.iter().flat_map(|b| b.1))).collect()
    }
}
