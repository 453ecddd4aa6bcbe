//! Where the parts of the picture lie, the bands of the water.
//!
//! Figures of the layout are choices.

use ratatui::layout::Rect;
use unicode_width::UnicodeWidthStr;

use crate::plot::{Scale, on_rows};
use crate::tui::Look;
use crate::tui::draw::pen::Pen;
use crate::tui::draw::through::{Rows, Time, row};
use crate::units::{Dimension, System};

use super::{GateThrough, SeasonPicture};

/// Least and most columns left of the plot, the axis counted in.
const SIDE: (usize, usize) = (13, 18);
/// Least columns and rows there can be a picture in.
const LEAST: (usize, usize) = (36, 10);
/// Rows from which every part has its title, and gates rows of their own.
const TALL: usize = 26;
/// Most rows of gates.
const GATES: usize = 8;
/// Most bands of the water: as many as there are characters for.
pub(super) const BANDS: usize = 6;
/// Least span of the bands, units shown.
const LEAST_SPAN: f64 = 1.0;
/// A threshold this near to an edge of a band, in bands, takes its place.
const TOUCHES: f64 = 0.2;
/// Least rows of curves.
const CURVE: usize = 3;
/// Most rows of days outside.
const OUTSIDE: usize = 2;

/// Where the parts lie.
pub(super) struct Frame {
    /// Row of the bands.
    pub(super) legend: usize,
    /// The axis of time.
    pub(super) time: Time,
    /// Whether the parts have titles in the row over them.
    pub(super) titles: bool,
    pub(super) water: Rows,
    pub(super) release: Rows,
    pub(super) cold: Option<Rows>,
    pub(super) moves: usize,
    pub(super) outside: Rows,
    pub(super) gates: Rows,
    pub(super) axis: usize,
}

impl Frame {
    /// `None` where there is nothing to draw or no room for it.
    pub(super) fn of(picture: &SeasonPicture, area: Rect) -> Option<Self> {
        let (width, height) = (usize::from(area.width), usize::from(area.height));
        if width < LEAST.0 || height < LEAST.1 || picture.days == 0 {
            return None;
        }
        let titles = has_titles(area);
        let gates = if titles { picture.gates.len().min(GATES) } else { 0 };
        let outside = picture.outside.len().min(if titles { OUTSIDE } else { 1 });
        // legend, moves and the axis stand always
        let title = usize::from(titles);
        let room = height - 3 - outside - gates - title;
        let curves = 1 + usize::from(picture.cold.is_some());
        let room = room - if titles { curves } else { 0 };
        let mut release = (room * 35 / 100).max(CURVE);
        let mut cold = if picture.cold.is_some() { (room * 17 / 100).max(CURVE - 1) } else { 0 };
        if room < release + cold + CURVE {
            (release, cold) = (room / 2, 0);
        }
        let water = (1 + title, room - release - cold);
        let names = names_on_rows(picture, water.1);
        let names = names.iter().chain(picture.gates.iter().map(|g| &g.name));
        let names = names.map(|name| name.width() + 1).max().unwrap_or(0);
        let side = names.clamp(SIDE.0, SIDE.1.min(width / 4).max(SIDE.0));
        let release = (water.0 + water.1 + title, release);
        let below = release.0 + release.1;
        let cold = (cold > 0).then_some((below + title, cold));
        let moves = cold.map_or(below, |(from, rows)| from + rows);
        Some(Self {
            legend: title,
            time: Time { side, cols: width - side, days: picture.days },
            titles,
            water,
            release,
            cold,
            moves,
            outside: (moves + 1, outside),
            gates: (moves + 1 + outside, gates),
            axis: height - 1,
        })
    }

    /// A line down the pictures at the day read, where nothing stands yet.
    pub(super) fn cursor(&self, picture: &SeasonPicture, pen: &mut Pen, look: Look) {
        let strips = (self.moves, 1 + self.outside.1 + self.gates.1);
        let parts = [Some(self.water), Some(self.release), self.cold, Some(strips)];
        let rows = parts.into_iter().flatten().flat_map(|(from, rows)| from..from + rows);
        self.time.line(picture.cursor, rows, pen, look);
    }
}

/// Whether the parts of a picture have titles.
pub(super) fn has_titles(area: Rect) -> bool {
    usize::from(area.height) >= TALL
}

/// The scale of elevations.
pub(super) fn elevations(picture: &SeasonPicture) -> Option<Scale> {
    let (low_m, high_m) = picture.water.elevations_m;
    Scale::new(low_m, high_m)
}

/// Names of the gates on rows of the water: each on its own or one beside it, several together where they must.
pub(super) fn names_on_rows(picture: &SeasonPicture, rows: usize) -> Vec<String> {
    let mut out = vec![String::new(); rows];
    let Some(scale) = elevations(picture) else { return out };
    let mut gates: Vec<&GateThrough> = picture.gates.iter().collect();
    gates.sort_by(|a, b| b.elevation_m.total_cmp(&a.elevation_m));
    let wants: Vec<usize> = gates.iter().map(|g| row(&scale, g.elevation_m, rows)).collect();
    for (gate, row) in gates.iter().zip(on_rows(&wants, rows)) {
        if let Some(names) = out.get_mut(row) {
            let between = if names.is_empty() { "" } else { " " };
            *names = format!("{names}{between}{}", gate.name);
        }
    }
    out
}

/// Edges between the bands of a picture, rising, in the unit shown: round, and no more than there are characters for.
/// A threshold inside is an edge too, in place of one it would all but touch; warm water gives up an edge for it.
pub(super) fn edges(
    span: (f64, f64),
    threshold: Option<f64>,
    dimension: Dimension,
    system: System,
) -> Vec<f64> {
    let unit = system.unit(dimension);
    let (low, high) = (unit.from_si(span.0), unit.from_si(span.1));
    let Some(scale) = Scale::new(low, high.max(low + LEAST_SPAN)) else { return Vec::new() };
    let most = u32::try_from(BANDS - 1).unwrap_or(1);
    let mut edges = scale.marks(most).values;
    let step = edges.windows(2).next().map_or(1.0, |pair| pair[1] - pair[0]);
    if let Some(at) = threshold.map(|v| unit.from_si(v)).filter(|at| low < *at && *at < high) {
        edges.retain(|edge| (edge - at).abs() > TOUCHES * step);
        edges.push(at);
        edges.sort_by(f64::total_cmp);
        edges.truncate(BANDS - 1);
    }
    edges
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn scenario_bands_are_round_and_few() {
        let c = |low, high, at| edges((low, high), at, Dimension::Temperature, System::Si);
        assert_eq!(c(4.2, 23.8, None), [5.0, 10.0, 15.0, 20.0]);
        assert_eq!(c(4.2, 23.8, Some(12.0)), [5.0, 10.0, 12.0, 15.0, 20.0]);
        assert_eq!(c(4.2, 26.0, Some(12.0)), [5.0, 10.0, 12.0, 15.0, 20.0]);
        assert_eq!(c(4.2, 23.8, Some(10.5)), [5.0, 10.5, 15.0, 20.0]);
        assert_eq!(c(4.2, 23.8, Some(30.0)), [5.0, 10.0, 15.0, 20.0]);
        let f = edges((5.0, 24.0), Some(12.0), Dimension::Temperature, System::Us);
        assert!(
            f.len() == 4 && f.iter().zip([50.0, 53.6, 60.0, 70.0]).all(|(a, b)| (a - b).abs() < 1e-9),
            "{f:?}"
        );
        for k in 0..60 {
            let edges = c(3.3, 3.3 + 0.7 * f64::from(k), Some(5.1));
            assert!(edges.len() < BANDS && edges.is_sorted(), "{edges:?}");
        }
    }
}
