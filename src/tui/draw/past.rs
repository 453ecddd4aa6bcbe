//! The record as a time line: what was expected, the gauge over it, decisions and days that tell nothing.
//!
//! Figures of the layout are choices.

#[cfg(test)]
mod tests;

use chrono::NaiveDate;
use ratatui::buffer::Buffer;
use ratatui::layout::Rect;

use crate::tui::{Look, Role};
use crate::units::System;

use super::pen::Pen;
use super::through::{Curves, CurvesThrough, Rows, Time};

/// Columns left of the plot, the axis counted in.
const SIDE: usize = 11;
/// Least columns and rows there can be a picture in.
const LEAST: (usize, usize) = (30, 6);
/// Rows from which on the curves have their title.
const TALL: usize = 8;
/// Rows below the curves: decisions, days, the axis of time.
const BELOW: usize = 3;

/// How a day stands.
#[derive(Debug, Clone, Copy, Default, PartialEq, Eq)]
pub enum DayMark {
    /// As expected, or nobody knows.
    #[default]
    None,
    /// The gauge lies outside the band.
    Outside,
    /// Left out of scores and learning.
    LeftOut,
    /// Left out because of something that nobody planned.
    Event,
}

impl DayMark {
    /// Each with its sign and its meaning, but for the one that has none.
    pub const SIGNS: [(Self, &'static str, &'static str); 3] = [
        (Self::Outside, "!", "outside the day's band"),
        (Self::LeftOut, "x", "left out"),
        (Self::Event, "E", "event"),
    ];

    /// How it is drawn.
    pub fn role(self) -> Role {
        match self {
            Self::None => Role::Plain,
            Self::Outside => Role::Outside,
            Self::LeftOut => Role::Quiet,
            Self::Event => Role::Warn,
        }
    }
}

/// What the picture shows. Days count from 0.
#[derive(Debug, Clone, PartialEq)]
pub struct PastPicture {
    /// Units shown.
    pub system: System,
    /// The first day.
    pub first: NaiveDate,
    /// How many days there are.
    pub days: usize,
    /// The day read.
    pub cursor: Option<usize>,
    /// The gauge and what was expected, its band shaded.
    pub curves: CurvesThrough,
    /// Decisions: the first day on which each stands, its number, whether it is the one chosen.
    pub decided: Vec<(usize, u64, bool)>,
    /// How each day stands.
    pub marks: Vec<DayMark>,
}

struct Frame {
    time: Time,
    curves: Rows,
    titled: bool,
}

impl Frame {
    fn of(picture: &PastPicture, area: Rect) -> Option<Self> {
        let (width, height) = (usize::from(area.width), usize::from(area.height));
        if width < LEAST.0 || height < LEAST.1 || picture.days == 0 {
            return None;
        }
        let titled = height >= TALL;
        let top = usize::from(titled);
        Some(Self {
            time: Time { side: SIDE, cols: width - SIDE, days: picture.days },
            curves: (top, height - top - BELOW),
            titled,
        })
    }

    /// Row of the decisions; the days and the axis follow.
    fn decided(&self) -> usize {
        self.curves.0 + self.curves.1
    }
}

/// Draws the record.
///
/// ```text
/// release, F   * gauge  - expected  : band
///      56   |:::::::***::::::|::::
///           |---****---***---|**--
///      54   |***:::::::::::***::::
/// decided    1      2       3
/// days         xx     !!!    EE
///            |Apr 14    |May ^
/// ```
/// Lower pictures have the name beside the axis in place of the title.
pub fn past(picture: &PastPicture, area: Rect, buf: &mut Buffer, look: Look) {
    let mut pen = Pen::new(buf, area, look);
    let Some(frame) = Frame::of(picture, area) else {
        pen.put(0, 0, "the time line needs more room", Role::Quiet);
        return;
    };
    let titled = (frame.time, frame.titled);
    let curves = Curves::of(picture.system, &picture.curves, frame.curves, titled, look);
    if let Some(curves) = &curves {
        curves.draw(&mut pen);
    }
    let axis = frame.decided() + 2;
    strips(picture, &frame, &mut pen);
    frame.time.draw(picture.first, picture.cursor, axis, &mut pen, look);
    frame.time.line(picture.cursor, frame.curves.0..axis, &mut pen, look);
    if let Some(curves) = &curves {
        curves.shade(&mut pen);
    }
}

fn strips(picture: &PastPicture, frame: &Frame, pen: &mut Pen) {
    let (time, row) = (frame.time, frame.decided());
    pen.put(0, row, "decided", Role::Strong);
    let mut free = 0;
    for (day, id, chosen) in &picture.decided {
        let (col, text) = (time.col_of(*day), id.to_string());
        // where numbers would run into each other a point tells that there is one more
        let text = if col < free || col + text.len() > time.cols { "." } else { text.as_str() };
        let role = if *chosen { Role::Chosen } else { Role::Key };
        if col >= free {
            pen.put(time.side + col, row, text, role);
            free = col + text.len() + 1;
        } else {
            pen.fill(time.side + col, row, text, role);
        }
    }
    pen.put(0, row + 1, "days", Role::Strong);
    for (day, mark) in picture.marks.iter().enumerate() {
        if let Some((_, sign, _)) = DayMark::SIGNS.iter().find(|(of, ..)| of == mark) {
            pen.put(time.side + time.col_of(day), row + 1, sign, mark.role());
        }
    }
}

/// The day under a cell of the buffer, for the mouse.
pub fn day_at(picture: &PastPicture, area: Rect, col: u16, row: u16) -> Option<usize> {
    Frame::of(picture, area)?.time.day_at(area, col, row)
}
