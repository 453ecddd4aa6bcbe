//! Where the parts of the picture lie, the axis of time, the bands of the water.
//!
//! Figures of the layout are choices.

use chrono::{Datelike, Days};
use ratatui::layout::Rect;
use unicode_width::UnicodeWidthStr;

use crate::plot::{Scale, on_rows};
use crate::tui::draw::pen::Pen;
use crate::tui::{Look, Role, Symbols};
use crate::units::{Dimension, System, Unit};

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
/// Values of an axis from which on volumes are counted in thousands.
const LARGE: f64 = 5000.0;
const THOUSAND: f64 = 1000.0;
/// Days of a season so short that weeks are marked instead of months.
const SHORT: usize = 45;
/// A threshold this near to an edge of a band, in bands, takes its place.
const TOUCHES: f64 = 0.2;
/// Room over and under curves, as a share of what they span.
const MARGIN: f64 = 0.04;
/// Least rows of curves.
const CURVE: usize = 3;
/// Most rows of days outside.
const OUTSIDE: usize = 2;

/// Rows of a part: the first, and how many.
pub(super) type Rows = (usize, usize);

/// Where the parts lie.
pub(super) struct Frame {
    /// Row of the bands.
    pub(super) legend: usize,
    /// Columns left of the plot.
    pub(super) side: usize,
    /// Columns of the plot.
    pub(super) cols: usize,
    /// Whether the parts have titles in the row over them.
    pub(super) titles: bool,
    pub(super) water: Rows,
    pub(super) release: Rows,
    pub(super) cold: Option<Rows>,
    pub(super) moves: usize,
    pub(super) outside: Rows,
    pub(super) gates: Rows,
    pub(super) axis: usize,
    pub(super) days: usize,
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
            side,
            cols: width - side,
            titles,
            water,
            release,
            cold,
            moves,
            outside: (moves + 1, outside),
            gates: (moves + 1 + outside, gates),
            axis: height - 1,
            days: picture.days,
        })
    }

    /// The day that a column of the plot shows.
    pub(super) fn day_of(&self, col: usize) -> usize {
        day_of(col, self.cols, self.days)
    }

    /// Column of the plot of a day.
    pub(super) fn col_of(&self, day: usize) -> usize {
        col_of(day, self.cols, self.days)
    }

    /// Months, or weeks of a short season, and the day read.
    pub(super) fn time(&self, picture: &SeasonPicture, pen: &mut Pen, look: Look) {
        let ascii = look.symbols == Symbols::Ascii;
        let mut free = 0;
        for day in 0..self.days {
            let Some(date) = picture.first.checked_add_days(Days::new(day as u64)) else { return };
            let text = match (day, self.days < SHORT) {
                (0, _) => date.format("%b %-d").to_string(),
                (_, true) if day.is_multiple_of(7) => date.format("%b %-d").to_string(),
                (_, false) if date.day() == 1 => date.format("%b").to_string(),
                _ => continue,
            };
            let col = self.col_of(day);
            if col < free || col + 1 + text.len() > self.cols {
                continue;
            }
            pen.put(self.side + col, self.axis, if ascii { "|" } else { "╷" }, Role::Quiet);
            pen.put(self.side + col + 1, self.axis, &text, Role::Quiet);
            free = col + text.len() + 2;
        }
        if let Some(day) = picture.cursor.filter(|d| *d < self.days) {
            pen.put(self.side + self.col_of(day), self.axis, "^", Role::Chosen);
        }
    }

    /// A line down the pictures at the day read, where nothing stands yet.
    pub(super) fn cursor(&self, picture: &SeasonPicture, pen: &mut Pen, look: Look) {
        let Some(day) = picture.cursor.filter(|d| *d < self.days) else { return };
        let line = if look.symbols == Symbols::Ascii { "|" } else { "│" };
        let strips = (self.moves, 1 + self.outside.1 + self.gates.1);
        let parts = [Some(self.water), Some(self.release), self.cold, Some(strips)];
        for row in parts.into_iter().flatten().flat_map(|(from, rows)| from..from + rows) {
            pen.fill(self.side + self.col_of(day), row, line, Role::Strong);
        }
    }

    /// Signs with what they mean from a cell on, as far as there is room.
    pub(super) fn entries(&self, mut col: usize, row: usize, of: &[(&str, &str, Role)], pen: &mut Pen) {
        for (glyph, word, role) in of {
            let wide = word.width() + 4;
            if col + wide > self.side + self.cols {
                return;
            }
            pen.put(col, row, glyph, *role);
            pen.put(col + 2, row, word, Role::Quiet);
            col += wide;
        }
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

/// Row of a value, from the top of so many.
pub(super) fn row(scale: &Scale, value: f64, rows: usize) -> usize {
    rows.saturating_sub(1 + scale.cell(value, rows).unwrap_or(0))
}

/// Value in the middle of a row, counted from the top of so many.
pub(super) fn middle(scale: &Scale, row: usize, rows: usize) -> f64 {
    scale.value(1.0 - (row as f64 + 0.5) / rows as f64)
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

/// The day that a column shows: the one in its middle.
fn day_of(col: usize, cols: usize, days: usize) -> usize {
    ((2 * col + 1) * days / (2 * cols.max(1))).min(days.saturating_sub(1))
}

/// The column of a day: that of its middle.
fn col_of(day: usize, cols: usize, days: usize) -> usize {
    ((2 * day + 1) * cols / (2 * days.max(1))).min(cols.saturating_sub(1))
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

/// How a value is counted on an axis, and the name of that: volumes in what leaves few digits.
pub(super) fn counted(dimension: Dimension, system: System, greatest: f64) -> (f64, String) {
    let unit = system.unit(dimension);
    let large = unit.from_si(greatest).abs() >= LARGE;
    match (dimension, system) {
        (Dimension::Volume, System::Si) => {
            (Unit::CubicHectometre.to_si(1.0), Unit::CubicHectometre.symbol().to_owned())
        }
        (Dimension::Volume, System::Us) if large => (THOUSAND, format!("{THOUSAND:.0} {}", unit.symbol())),
        _ => (1.0, unit.symbol().to_owned()),
    }
}

/// The scale of values in the unit shown: as narrow as they allow, so that little of the picture is empty.
pub(super) fn scale(low: f64, high: f64) -> Option<Scale> {
    let room = (MARGIN * (high - low)).max(1e-6 * high.abs().max(1.0));
    Scale::new(low - room, high + room)
}

/// Ticks that so many rows have room for.
pub(super) fn steps(rows: usize) -> u32 {
    u32::try_from(rows / 2).unwrap_or(4).clamp(2, 5)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn law_a_column_and_its_day_find_each_other() {
        for days in 1..250 {
            for cols in [1, 2, 17, 36, 80, 210, 300] {
                let (mut before, mut seen) = (0, 0);
                for col in 0..cols {
                    let day = day_of(col, cols, days);
                    assert!(day < days && day >= before);
                    before = day;
                    if days >= cols {
                        assert_eq!(col_of(day, cols, days), col, "{days} days on {cols} columns");
                    }
                }
                for day in 0..days {
                    let col = col_of(day, cols, days);
                    assert!(col < cols && col >= seen);
                    seen = col;
                    if days <= cols {
                        assert_eq!(day_of(col, cols, days), day, "{days} days on {cols} columns");
                    }
                }
            }
        }
    }

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

    #[test]
    fn scenario_volumes_are_counted_in_what_is_read_at_a_glance() {
        let of = |m3, system| counted(Dimension::Volume, system, m3);
        assert_eq!(of(5e7, System::Si), (1e6, "hm3".into()));
        assert_eq!(of(5e7, System::Us), (1e3, "1000 acre-ft".into()));
        assert_eq!(of(9e5, System::Us), (1.0, "acre-ft".into()));
        assert_eq!(counted(Dimension::Temperature, System::Us, 2e7), (1.0, "F".into()));
    }
}
