//! A season: the water of the pool through time, what is released against what is asked, cold water, moves and gates.

mod axes;
mod strips;
#[cfg(test)]
mod tests;
mod water;

use chrono::NaiveDate;
use ratatui::buffer::Buffer;
use ratatui::layout::Rect;

use crate::tui::{Look, Role};
use crate::units::{Dimension, System};

use super::pen::Pen;
use super::through::Curves;

pub use super::through::{CurvesThrough, LineThrough, shade, sign};

/// What the picture shows. Days count from 0.
#[derive(Debug, Clone, PartialEq)]
pub struct SeasonPicture {
    /// Units shown.
    pub system: System,
    /// The first day.
    pub first: NaiveDate,
    /// How many days there are.
    pub days: usize,
    /// The day read.
    pub cursor: Option<usize>,
    /// The pool.
    pub water: WaterThrough,
    /// The release, or what arrives at a point.
    pub release: CurvesThrough,
    /// Cold water, where a threshold is given.
    pub cold: Option<CurvesThrough>,
    /// Gates, in the order of their rows.
    pub gates: Vec<GateThrough>,
    /// Days on which gates move, how many, and whether they had to.
    pub moves: Vec<(usize, usize, bool)>,
    /// Names of what is asked, each with the days outside it; the first where there is room for one.
    pub outside: Vec<(String, Vec<usize>)>,
}

/// The water of the pool through time.
#[derive(Debug, Clone, PartialEq)]
pub struct WaterThrough {
    /// Temperature or concentration.
    pub dimension: Dimension,
    /// Least and greatest value of all that is to be compared, SI.
    pub span: (f64, f64),
    /// A value that parts two bands, SI: the threshold of cold water, a floor of oxygen.
    pub threshold: Option<f64>,
    /// Lowest and highest elevation, m.
    pub elevations_m: (f64, f64),
    /// By day.
    pub days: Vec<WaterDay>,
}

/// The water of the pool on a day.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct WaterDay {
    /// From the bed up: top of a layer (m) and its value, SI; `None` where it is not known.
    pub layers: Vec<(f64, Option<f64>)>,
    /// Where it is steepest, m.
    pub thermocline_m: Option<f64>,
}

/// A gate through time.
#[derive(Debug, Clone, PartialEq)]
pub struct GateThrough {
    /// Its name.
    pub name: String,
    /// Its elevation, m.
    pub elevation_m: f64,
    /// By day.
    pub days: Vec<GateDay>,
}

/// A gate on a day.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum GateDay {
    /// It gives water, from between two elevations, m; `None` where its zone is not known.
    Open(Option<[f64; 2]>),
    /// It could be used and is not.
    Shut,
    /// It cannot be used.
    Lost,
}

/// Draws a season.
///
/// ```text
/// @@ <10  ## 10-15  %% 15-20  oo >20 C          ~ thermocline  = open  - its zone  x lost
///            ____
/// Upper 1410>::::____              water: cold is dense, warm is light
/// Lower 1380>oo==::::____
/// Sluice1320>%%%%oo==::::____
/// release, C 20|:::::.....
///            10|---**********                  asked -, attainable :
/// cold, kaf 100|**
///              |  ********
/// moves         1   2      !  1   (! where a limit forces it)
/// outside C            !!!!
///               |Jul 14  |Aug    |Sep  ^
/// ```
/// Taller pictures have titles with what each mark means, every row of days outside, and a row for every gate. The
/// cells of marks keep the colour of the water, those of curves the colour of the range behind them.
pub fn season(picture: &SeasonPicture, area: Rect, buf: &mut Buffer, look: Look) {
    let mut pen = Pen::new(buf, area, look);
    let Some(frame) = axes::Frame::of(picture, area) else {
        pen.put(0, 0, "the season needs more room", Role::Quiet);
        return;
    };
    water::draw(picture, &frame, &mut pen, look);
    let cold = picture.cold.as_ref().zip(frame.cold);
    let curves = [Some((&picture.release, frame.release)), cold].into_iter().flatten();
    let curves: Vec<Curves> = curves
        .filter_map(|(of, rows)| Curves::of(picture.system, of, rows, (frame.time, frame.titles), look))
        .collect();
    for curves in &curves {
        curves.draw(&mut pen);
    }
    strips::draw(picture, &frame, &mut pen, look);
    frame.time.draw(picture.first, picture.cursor, frame.axis, &mut pen, look);
    frame.cursor(picture, &mut pen, look);
    // behind everything
    for curves in &curves {
        curves.shade(&mut pen);
    }
}

/// Signs over the water with their meaning, where a picture in an area has no row for them.
pub fn untold(area: Rect, look: Look) -> Vec<(&'static str, &'static str)> {
    if axes::has_titles(area) { Vec::new() } else { water::meanings(look).to_vec() }
}

/// The day under a cell of the buffer, for the mouse.
pub fn day_at(picture: &SeasonPicture, area: Rect, col: u16, row: u16) -> Option<usize> {
    let frame = axes::Frame::of(picture, area)?;
    frame.time.day_at(area, col, row)
}
