//! The release held against every target that applies, on one axis: ranges, what is tried, what is set now, and what
//! is attainable.
//!
//! Figures of the layout are choices.

mod bar;
mod fill;
mod lines;
#[cfg(test)]
mod tests;

use ratatui::buffer::Buffer;
use ratatui::layout::Rect;

use crate::target::Standing;
use crate::tui::Look;
use crate::units::{Dimension, System};

pub use fill::Release;

/// A value with its band, both SI.
#[derive(Debug, Clone, Copy, Default, PartialEq)]
pub struct Reading {
    /// The value; `None` where it was not measured.
    pub value: Option<f64>,
    /// Its 10-90 % band.
    pub band: Option<[f64; 2]>,
}

/// A rule and how the release tried stands against it.
#[derive(Debug, Clone, PartialEq)]
pub struct Held {
    /// Name of the target, with its point where it has one.
    pub name: String,
    /// The point down the river where it applies: what arrives there is held against it, not the release.
    pub point: Option<String>,
    /// Lower end of the range, SI; `None` where the range is open.
    pub low: Option<f64>,
    /// Upper end, SI.
    pub high: Option<f64>,
    /// Preferred value, SI.
    pub preferred: Option<f64>,
    /// Distance kept from both ends, SI.
    pub buffer: f64,
    /// What is held against it, SI, and by which statistic: another value than the one tried in a day of blocks.
    pub value: Option<f64>,
    /// Name of the statistic.
    pub statistic: String,
    /// Standing of that value.
    pub standing: Standing,
    /// How far outside it lies, SI.
    pub by: Option<f64>,
    /// Share of the perturbed cases inside, 0 to 1.
    pub share: Option<f64>,
    /// Share inside in temperature and oxygen both, where it is told here.
    pub share_both: Option<f64>,
    /// Whether it is the strictest of several.
    pub governs: bool,
    /// Its values are an example.
    pub example: bool,
}

/// The coldest to warmest, or least to most oxygen, that any allowed mix gives.
#[derive(Debug, Clone, Copy, Default, PartialEq)]
pub enum Attainable {
    /// Not asked: no row is drawn.
    #[default]
    NotAsked,
    /// Not there yet.
    Computing,
    /// Known, SI.
    Known([f64; 2]),
    /// Known for what was set before, SI.
    Before([f64; 2]),
}

/// What one gauge shows.
#[derive(Debug, Clone, PartialEq)]
pub struct Gauge {
    /// Heading.
    pub title: &'static str,
    /// [`Dimension::Temperature`] or [`Dimension::Concentration`].
    pub dimension: Dimension,
    /// Units shown.
    pub system: System,
    /// A word on what it holds for, such as `at 1,200 cfs`.
    pub note: Option<String>,
    /// Targets with a bound of this kind, the governing one first.
    pub targets: Vec<Held>,
    /// What is said where there are none.
    pub no_target: &'static str,
    /// The release tried.
    pub tried: Reading,
    /// The release of the setting now, where there is one.
    pub now: Option<Reading>,
    /// What is attainable.
    pub attainable: Attainable,
}

/// Columns from which on two gauges stand side by side.
const SIDE_BY_SIDE: u16 = 74;
/// Columns between them.
const BETWEEN: u16 = 2;

/// Draws one gauge.
///
/// ```text
/// Temperature F                              at 1,200 cfs
/// summer rearing and holding, 92 % of cases inside
/// 55 % in oxygen too, 48.0 to 56.0 F, P preferred 52.0 F
/// range      [=======P=======]     inside
/// tried      :          |-o--|     54.6 F (53.5 to 56.1)
/// now        :          |-o--|     54.6 F (53.5 to 56.1)
/// attainable :    <--------------> 50.6 to 58.6 F
///            48      52      56      60
/// ```
/// A rule of a point down the river has what arrives there as `o` on its own row, which is headed `there`.
///
/// Where it is narrow the words stand over the bars if there are rows for it, else they are shortened; where it is low
/// details, the axis, what is attainable and now are left out in that order, never the standing and the value tried.
pub fn gauge(gauge: &Gauge, area: Rect, buf: &mut Buffer, look: Look) {
    lines::draw(gauge, area, buf, look);
}

/// Rows a gauge takes at a width when nothing is left out.
pub fn gauge_rows(gauge: &Gauge, width: u16) -> u16 {
    lines::rows(gauge, width)
}

/// Draws two gauges side by side, or one above the other where it is narrow.
pub fn gauges(pair: [&Gauge; 2], area: Rect, buf: &mut Buffer, look: Look) {
    let [first, second] = pair;
    if area.width >= SIDE_BY_SIDE {
        let half = (area.width - BETWEEN) / 2;
        let right = half.saturating_add(BETWEEN);
        gauge(first, Rect { width: half, ..area }, buf, look);
        let x = area.x.saturating_add(right);
        gauge(second, Rect { x, width: area.width - right, ..area }, buf, look);
    } else {
        // what both want where that fits, else in proportion
        let [a, b] = pair.map(|g| u32::from(gauge_rows(g, area.width)));
        let height = u32::from(area.height);
        let top = if a + b <= height { a } else { (height * a).div_ceil((a + b).max(1)) };
        let top = u16::try_from(top).unwrap_or(area.height).min(area.height);
        gauge(first, Rect { height: top, ..area }, buf, look);
        let y = area.y.saturating_add(top);
        gauge(second, Rect { y, height: area.height - top, ..area }, buf, look);
    }
}

/// Rows both gauges take at a width when nothing is left out.
pub fn gauges_rows(pair: [&Gauge; 2], width: u16) -> u16 {
    if width >= SIDE_BY_SIDE {
        let half = (width - BETWEEN) / 2;
        gauge_rows(pair[0], half).max(gauge_rows(pair[1], width - half - BETWEEN))
    } else {
        gauge_rows(pair[0], width).saturating_add(gauge_rows(pair[1], width))
    }
}
