//! The water of the pool through time: bands from dense (cold) to light (warm), gates, open zones, surface, thermocline.
//!
//! Figures of the layout are choices.

use unicode_width::UnicodeWidthStr;

use crate::plot::{Scale, on_rows};
use crate::tui::draw::pen::{Pen, cut};
use crate::tui::{Look, Role, Symbols};
use crate::units::Dimension;

use super::axes::{BANDS, Frame, edges};
use super::{GateDay, GateThrough, SeasonPicture, WaterDay};

/// Characters of the bands, the lowest first.
const DENSE: [&str; BANDS] = ["█", "▓", "▒", "░", ":", "·"];
const PLAIN: [&str; BANDS] = ["@", "#", "%", "o", ":", "."];
/// Columns from one mark of a zone to the next.
const GAPS: usize = 2;
/// Water of which nothing is known.
const UNKNOWN: &str = "?";

/// The characters of marks.
struct Marks {
    fill: [&'static str; BANDS],
    surface: &'static str,
    thermocline: &'static str,
    open: &'static str,
    zone: &'static str,
}

fn marks(look: Look) -> Marks {
    if look.symbols == Symbols::Ascii {
        Marks { fill: PLAIN, surface: "_", thermocline: "~", open: "=", zone: "-" }
    } else {
        Marks { fill: DENSE, surface: "▁", thermocline: "~", open: "━", zone: "╌" }
    }
}

/// The band of a value in the unit shown, from 0: how many edges it does not lie under.
fn band(edges: &[f64], shown: f64) -> usize {
    edges.iter().take_while(|edge| shown >= **edge).count()
}

/// The layer at an elevation on a day, its top and its value: `None` over the surface and below the bed.
fn at(day: &WaterDay, bed_m: f64, elevation_m: f64) -> Option<(f64, Option<f64>)> {
    if elevation_m < bed_m {
        return None;
    }
    day.layers.iter().find(|layer| elevation_m <= layer.0).copied()
}

/// The cells of the water: what is put last is drawn.
struct Cells<'a> {
    frame: &'a Frame,
    scale: Scale,
    put: Vec<Option<(&'static str, Role)>>,
}

impl<'a> Cells<'a> {
    fn new(frame: &'a Frame, scale: Scale) -> Self {
        Self { frame, scale, put: vec![None; frame.cols * frame.water.1] }
    }

    /// Row of an elevation, from the top of the water's part.
    fn row(&self, elevation_m: f64) -> usize {
        let rows = self.frame.water.1;
        rows - 1 - self.scale.cell(elevation_m, rows).unwrap_or(0)
    }

    /// Elevation of the middle of a row, m.
    fn middle_m(&self, row: usize) -> f64 {
        self.scale.value(1.0 - (row as f64 + 0.5) / self.frame.water.1 as f64)
    }

    fn put(&mut self, col: usize, row: usize, glyph: &'static str, role: Role) {
        if let Some(cell) = self.put.get_mut(row * self.frame.cols + col) {
            *cell = Some((glyph, role));
        }
    }

    /// A mark where no water is.
    fn over(&mut self, col: usize, row: usize, glyph: &'static str, role: Role) {
        if self.put.get(row * self.frame.cols + col).is_some_and(Option::is_none) {
            self.put(col, row, glyph, role);
        }
    }

    fn draw(&self, pen: &mut Pen) {
        for (i, cell) in self.put.iter().enumerate() {
            if let Some((glyph, role)) = cell {
                let (row, col) = (i / self.frame.cols, i % self.frame.cols);
                pen.put(self.frame.side + col, self.frame.water.0 + row, glyph, *role);
            }
        }
    }
}

pub(super) fn draw(picture: &SeasonPicture, frame: &Frame, pen: &mut Pen, look: Look) {
    let water = &picture.water;
    let Some(scale) = Scale::new(water.elevations_m.0, water.elevations_m.1) else { return };
    let marks = marks(look);
    let edges = edges(water.span, water.threshold, water.dimension, picture.system);
    let mut cells = Cells::new(frame, scale);
    for col in 0..frame.cols {
        if let Some(day) = water.days.get(frame.day_of(col)) {
            column(picture, day, col, &edges, &marks, &mut cells);
        }
    }
    picture.gates.iter().for_each(|gate| zone(gate, &marks, &mut cells));
    for col in 0..frame.cols {
        let steepest_m = water.days.get(frame.day_of(col)).and_then(|day| day.thermocline_m);
        if let Some(elevation_m) = steepest_m {
            cells.put(col, cells.row(elevation_m), marks.thermocline, Role::Strong);
        }
    }
    picture.gates.iter().for_each(|gate| open(gate, &marks, &mut cells));
    cells.draw(pen);
    side(picture, &cells, pen, look);
    legend(picture, frame, pen, &marks, &edges);
}

/// The water of a day, and the line of its surface over it.
fn column(
    picture: &SeasonPicture,
    day: &WaterDay,
    col: usize,
    edges: &[f64],
    marks: &Marks,
    cells: &mut Cells,
) {
    let unit = picture.system.unit(picture.water.dimension);
    for row in 0..cells.frame.water.1 {
        // a cell shows the water in its middle
        let layer = at(day, picture.water.elevations_m.0, cells.middle_m(row));
        let Some((_, value)) = layer else { continue };
        let (glyph, role) = value.map_or((UNKNOWN, Role::Quiet), |v| {
            let band = band(edges, unit.from_si(v)).min(BANDS - 1);
            (marks.fill[band], Role::Band(band))
        });
        cells.put(col, row, glyph, role);
    }
    if let Some((surface_m, _)) = day.layers.last() {
        let row = cells.row(*surface_m);
        let row = if cells.middle_m(row) <= *surface_m { row.checked_sub(1) } else { Some(row) };
        if let Some(row) = row {
            cells.over(col, row, marks.surface, Role::Plain);
        }
    }
}

/// The limits of the zone of an open gate, with gaps through which the water is seen.
fn zone(gate: &GateThrough, marks: &Marks, cells: &mut Cells) {
    for col in (0..cells.frame.cols).step_by(GAPS) {
        let Some(GateDay::Open(Some(zone))) = gate.days.get(cells.frame.day_of(col)) else { continue };
        for limit_m in zone {
            cells.put(col, cells.row(*limit_m), marks.zone, Role::Zone);
        }
    }
}

/// An open gate, and where it is lost and comes back.
fn open(gate: &GateThrough, marks: &Marks, cells: &mut Cells) {
    let row = cells.row(gate.elevation_m);
    for col in 0..cells.frame.cols {
        if let Some(GateDay::Open(_)) = gate.days.get(cells.frame.day_of(col)) {
            cells.put(col, row, marks.open, Role::Strong);
        }
    }
    for (day, lost) in turns(&gate.days) {
        cells.put(cells.frame.col_of(day), row, if lost { "x" } else { "+" }, Role::Outside);
    }
}

/// Days on which a gate is lost (true) or can be used again.
pub(super) fn turns(days: &[GateDay]) -> Vec<(usize, bool)> {
    let lost = |day: &GateDay| *day == GateDay::Lost;
    let turn = |(i, pair): (usize, &[GateDay])| match pair {
        [before, after] if lost(before) != lost(after) => Some((i + 1, lost(after))),
        _ => None,
    };
    let begins = days.first().filter(|day| lost(day)).map(|_| (0, true));
    begins.into_iter().chain(days.windows(2).enumerate().filter_map(turn)).collect()
}

/// Gates at their elevations, and elevations where no gate stands.
fn side(picture: &SeasonPicture, cells: &Cells, pen: &mut Pen, look: Look) {
    let (top, rows) = cells.frame.water;
    let (line, tick) = if look.symbols == Symbols::Ascii { ("|", ">") } else { ("│", "┤") };
    let end = cells.frame.side - 1;
    (top..top + rows).for_each(|row| pen.put(end, row, line, Role::Quiet));
    let mut gates: Vec<&GateThrough> = picture.gates.iter().collect();
    gates.sort_by(|a, b| b.elevation_m.total_cmp(&a.elevation_m));
    let wants: Vec<usize> = gates.iter().map(|g| cells.row(g.elevation_m)).collect();
    let mut names: Vec<Vec<&str>> = vec![Vec::new(); rows];
    for ((gate, row), own) in gates.iter().zip(on_rows(&wants, rows)).zip(&wants) {
        if let Some(names) = names.get_mut(row) {
            names.push(&gate.name);
        }
        pen.put(end, top + own, tick, Role::Quiet);
    }
    let unit = picture.system.unit(Dimension::Length);
    let mut numbered = false;
    for (row, names) in names.iter().enumerate() {
        // every second row without a gate is enough
        numbered = names.is_empty() && !numbered;
        let text = match names[..] {
            [] if numbered => format!("{:.0} ", unit.from_si(cells.middle_m(row))),
            [] => continue,
            [name] => name.to_owned(),
            [name, ..] if names.join(" ").width() > end => {
                let more = format!("+{}", names.len() - 1);
                format!("{}{more}", cut(name, end.saturating_sub(more.len() + 1)))
            }
            _ => names.join(" "),
        };
        let role = if numbered { Role::Quiet } else { Role::Plain };
        pen.put_before(end, top + row, &cut(&text, end), role);
    }
}

/// The bands with their values, and what the marks mean as far as there is room: after them, or in a row of its own.
fn legend(picture: &SeasonPicture, frame: &Frame, pen: &mut Pen, marks: &Marks, edges: &[f64]) {
    let unit = picture.system.unit(picture.water.dimension);
    // a threshold may not be round
    let edge = |v: f64| if (v - v.round()).abs() < 0.05 { format!("{v:.0}") } else { format!("{v:.1}") };
    let wide = if frame.titles { 2 } else { 1 };
    let (mut col, mut end) = (0, 0);
    for (i, glyph) in marks.fill.iter().enumerate().take(edges.len() + 1) {
        let low = i.checked_sub(1).and_then(|i| edges.get(i));
        let text = match (low, edges.get(i)) {
            (Some(low), Some(high)) => format!("{}-{}", edge(*low), edge(*high)),
            (None, Some(high)) => format!("<{}", edge(*high)),
            (Some(low), None) => format!(">{}", edge(*low)),
            (None, None) => "all".to_owned(),
        };
        pen.put(col, frame.legend, &glyph.repeat(wide), Role::Band(i));
        pen.put(col + wide + 1, frame.legend, &text, Role::Quiet);
        col += text.width() + 2 * wide + 1;
        end = col - wide;
    }
    pen.put(end + 1, frame.legend, unit.symbol(), Role::Quiet);
    col = end + unit.symbol().width() + 3;
    if frame.legend > 0 {
        let length = picture.system.unit(Dimension::Length);
        let title = format!("pool, {}", length.symbol());
        pen.put(0, 0, &title, Role::Strong);
        col = title.width() + 3;
    }
    let meanings = [
        (marks.thermocline, "thermocline"),
        (marks.open, "open"),
        (marks.zone, "its zone"),
        ("x", "lost"),
        ("+", "usable again"),
    ];
    for (glyph, word) in meanings {
        let wide = word.len() + 4;
        if col + wide > frame.side + frame.cols {
            return;
        }
        pen.put(col, 0, glyph, Role::Strong);
        pen.put(col + 2, 0, word, Role::Quiet);
        col += wide;
    }
}
