//! The trade of temperature against oxygen: the mixes no other beats in both, the ranked ones, and the setting now.

mod axes;
mod fill;
mod marks;
#[cfg(test)]
mod tests;

use ratatui::buffer::Buffer;
use ratatui::layout::Rect;

use crate::tui::Look;
use crate::units::{Dimension, System, figure};

use super::pen::Pen;

/// The water of a mix.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct TradePoint {
    /// Temperature, C.
    pub temperature_c: f64,
    /// Oxygen, mg/L; `None` where it was not measured.
    pub oxygen_mg_l: Option<f64>,
}

/// What the picture shows.
#[derive(Debug, Clone, PartialEq)]
pub struct TradePicture {
    /// Units shown.
    pub system: System,
    /// Ranked mixes, the first first; each is drawn as its place in the list.
    pub mixes: Vec<TradePoint>,
    /// Mixes no other beats in both.
    pub unbeaten: Vec<TradePoint>,
    /// The setting now.
    pub now: Option<TradePoint>,
    /// Index of the selected mix.
    pub selected: Option<usize>,
    /// Least temperature that keeps every target, C.
    pub low_c: Option<f64>,
    /// Greatest, C.
    pub high_c: Option<f64>,
    /// The temperature preferred, C.
    pub preferred_c: Option<f64>,
    /// Least oxygen that keeps every target, mg/L.
    pub floor_mg_l: Option<f64>,
    /// Whether values are means over a day of blocks.
    pub of_day: bool,
}

/// Draws the trade curve.
///
/// ```text
/// [1] 52.9 F, 7.0 mg/L                    N now, o unbeaten
/// mg/L <from 48.0      P 52.0                     to 56.0>
///  8.5 |          o    :
///  8.0 |           ..o :
///  7.5 |               :    2,9
/// 7.0> |---------------:---[1]----------------N- floor 7.0
///      +---------+---------+---------+---------+
///     51        52      ^52.9       54        55  F
/// ```
/// The selected mix stands in brackets, and lines lead from it to its values on both axes. Mixes that would cover one
/// another stand together, commas between. Where no oxygen is known each mix has a row of its own.
pub fn trade(picture: &TradePicture, area: Rect, buf: &mut Buffer, look: Look) {
    let mut pen = Pen::new(buf, area, look);
    let Some(frame) = axes::Frame::of(picture, area) else {
        picture.in_words(&mut pen, area);
        return;
    };
    let marks = marks::clusters(picture, &frame);
    frame.draw(picture, &marks::taken(&marks, &frame), &mut pen, look);
    marks::draw(picture, &frame, &marks, &mut pen, look);
}

/// The ranked mix drawn at a cell of the buffer, for the mouse.
pub fn mix_at(picture: &TradePicture, area: Rect, col: u16, row: u16) -> Option<usize> {
    let frame = axes::Frame::of(picture, area)?;
    let col = usize::from(col.checked_sub(area.x)?);
    let row = usize::from(row.checked_sub(area.y)?);
    marks::at(picture, &frame, col, row)
}

impl TradePicture {
    fn temperature(&self, c: f64) -> String {
        figure(c, self.system.unit(Dimension::Temperature), 1)
    }

    /// Temperature in the unit shown.
    fn shown(&self, c: f64) -> f64 {
        self.system.unit(Dimension::Temperature).from_si(c)
    }

    /// `[1] 52.9 F, 7.0 mg/L`
    fn selected_words(&self) -> String {
        self.selected().map_or_else(
            || "no mix selected".to_owned(),
            |(i, point)| format!("[{}] {}", i + 1, self.words(point)),
        )
    }

    /// `52.9 F, 7.0 mg/L`; what is known of none is not said of each.
    fn words(&self, point: &TradePoint) -> String {
        let unit = self.system.unit(Dimension::Temperature).symbol();
        if self.airless() {
            return format!("{} {unit}", self.temperature(point.temperature_c));
        }
        let oxygen =
            point.oxygen_mg_l.map_or_else(|| "oxygen unknown".to_owned(), |o| format!("{o:.1} mg/L"));
        format!("{} {unit}, {oxygen}", self.temperature(point.temperature_c))
    }

    fn selected(&self) -> Option<(usize, &TradePoint)> {
        self.selected.and_then(|i| Some((i, self.mixes.get(i)?)))
    }

    /// Every point there is.
    fn points(&self) -> impl Iterator<Item = &TradePoint> {
        self.mixes.iter().chain(&self.unbeaten).chain(&self.now)
    }

    /// Whether no oxygen is known at all.
    fn airless(&self) -> bool {
        self.points().all(|p| p.oxygen_mg_l.is_none())
    }
}
