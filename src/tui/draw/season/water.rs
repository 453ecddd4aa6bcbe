//! The water of the pool through time: bands from dense (cold) to light (warm), gates, the limits of what is drawn,
//! surface, thermocline.
//!
//! Figures of the layout are choices.

use unicode_width::UnicodeWidthStr;

use crate::plot::Scale;
use crate::tui::draw::pen::{Pen, cut};
use crate::tui::draw::through;
use crate::tui::{Look, Role, Symbols};
use crate::units::Dimension;

use super::axes::{BANDS, Frame, edges, elevations, names_on_rows};
use super::{GateDay, GateThrough, SeasonPicture, WaterDay};

/// Characters of the bands, the lowest first.
const DENSE: [&str; BANDS] = ["█", "▓", "▒", "░", ":", "·"];
const PLAIN: [&str; BANDS] = ["@", "#", "%", "o", ":", "."];
/// Columns from one mark of a limit to the next: the water is to be seen between them.
const GAPS: usize = 4;
/// Water of which nothing is known.
const UNKNOWN: &str = "?";

/// The characters of marks.
struct Marks {
    fill: [&'static str; BANDS],
    surface: &'static str,
    thermocline: &'static str,
    open: &'static str,
    limit: &'static str,
}

fn marks(look: Look) -> Marks {
    if look.symbols == Symbols::Ascii {
        Marks { fill: PLAIN, surface: "_", thermocline: "~", open: "=", limit: "-" }
    } else {
        Marks { fill: DENSE, surface: "▁", thermocline: "~", open: "━", limit: "╌" }
    }
}

/// What each mark over the water means.
pub(super) fn meanings(look: Look) -> [(&'static str, &'static str); 5] {
    let marks = marks(look);
    [
        (marks.open, "open"),
        (marks.limit, "zone limit"),
        ("x", "lost"),
        ("+", "usable again"),
        (marks.thermocline, "thermocline"),
    ]
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

/// A cell of the water.
#[derive(Clone, Copy, Default)]
struct Cell {
    /// Its character, if any, and what it means.
    drawn: Option<(&'static str, Role)>,
    /// The band of the water in it.
    band: Option<usize>,
}

/// The cells of the water: what is put last is drawn.
struct Cells<'a> {
    frame: &'a Frame,
    scale: Scale,
    all: Vec<Cell>,
}

impl<'a> Cells<'a> {
    fn new(frame: &'a Frame, scale: Scale) -> Self {
        Self { frame, scale, all: vec![Cell::default(); frame.time.cols * frame.water.1] }
    }

    /// Row of an elevation, from the top of the water's part.
    fn row(&self, elevation_m: f64) -> usize {
        through::row(&self.scale, elevation_m, self.frame.water.1)
    }

    /// Elevation of the middle of a row, m.
    fn middle_m(&self, row: usize) -> f64 {
        through::middle(&self.scale, row, self.frame.water.1)
    }

    fn cell(&mut self, col: usize, row: usize) -> Option<&mut Cell> {
        self.all.get_mut(row * self.frame.time.cols + col)
    }

    fn put(&mut self, col: usize, row: usize, glyph: &'static str, role: Role) {
        if let Some(cell) = self.cell(col, row) {
            cell.drawn = Some((glyph, role));
        }
    }

    /// A mark over the water, which is seen behind it.
    fn mark(&mut self, col: usize, row: usize, glyph: &'static str) {
        if let Some(cell) = self.cell(col, row) {
            let role = if cell.band.is_some() { Role::Mark } else { Role::Strong };
            cell.drawn = Some((glyph, role));
        }
    }

    fn draw(&self, pen: &mut Pen) {
        for (i, cell) in self.all.iter().enumerate() {
            let Some((glyph, role)) = cell.drawn else { continue };
            let (row, col) = (i / self.frame.time.cols, i % self.frame.time.cols);
            let (col, row) = (self.frame.time.side + col, self.frame.water.0 + row);
            pen.put(col, row, glyph, role);
            if let (Role::Mark, Some(band)) = (role, cell.band) {
                pen.behind(col, row, Role::Band(band));
            }
        }
    }
}

pub(super) fn draw(picture: &SeasonPicture, frame: &Frame, pen: &mut Pen, look: Look) {
    let water = &picture.water;
    let Some(scale) = elevations(picture) else { return };
    let marks = marks(look);
    let edges = edges(water.span, water.threshold, water.dimension, picture.system);
    let mut cells = Cells::new(frame, scale);
    for col in 0..frame.time.cols {
        if let Some(day) = water.days.get(frame.time.day_of(col)) {
            column(picture, day, col, &edges, &marks, &mut cells);
        }
    }
    for col in (0..frame.time.cols).step_by(GAPS) {
        limits(picture, col, &marks, &mut cells);
    }
    for col in 0..frame.time.cols {
        let steepest_m = water.days.get(frame.time.day_of(col)).and_then(|day| day.thermocline_m);
        if let Some(elevation_m) = steepest_m {
            cells.mark(col, cells.row(elevation_m), marks.thermocline);
        }
    }
    picture.gates.iter().for_each(|gate| open(gate, &marks, &mut cells));
    cells.draw(pen);
    side(picture, &cells, pen, look);
    legend(picture, frame, pen, look, &edges);
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
        let band = value.map(|v| band(edges, unit.from_si(v)).min(BANDS - 1));
        if let Some(cell) = cells.cell(col, row) {
            let drawn = band.map(|band| (marks.fill[band], Role::Band(band)));
            *cell = Cell { drawn: drawn.or(Some((UNKNOWN, Role::Quiet))), band };
        }
    }
    if let Some((surface_m, _)) = day.layers.last() {
        let row = cells.row(*surface_m);
        let row = if cells.middle_m(row) <= *surface_m { row.checked_sub(1) } else { Some(row) };
        if let Some(row) = row {
            cells.put(col, row, marks.surface, Role::Plain);
        }
    }
}

/// The limits of what the open gates draw on the day of a column: zones that overlap are one.
fn limits(picture: &SeasonPicture, col: usize, marks: &Marks, cells: &mut Cells) {
    let day = cells.frame.time.day_of(col);
    let zones = picture.gates.iter().filter_map(|gate| match gate.days.get(day) {
        Some(GateDay::Open(zone)) => *zone,
        _ => None,
    });
    for limit_m in joined(zones.collect()).into_iter().flatten() {
        cells.mark(col, cells.row(limit_m), marks.limit);
    }
}

/// Stretches with those that overlap made one, from the lowest.
pub(super) fn joined(mut zones: Vec<[f64; 2]>) -> Vec<[f64; 2]> {
    zones.sort_by(|a, b| a[0].total_cmp(&b[0]));
    let mut out: Vec<[f64; 2]> = Vec::new();
    for [low, high] in zones {
        match out.last_mut().filter(|last| low <= last[1]) {
            Some(last) => last[1] = last[1].max(high),
            None => out.push([low, high]),
        }
    }
    out
}

/// An open gate, and where it is lost and comes back.
fn open(gate: &GateThrough, marks: &Marks, cells: &mut Cells) {
    let row = cells.row(gate.elevation_m);
    for col in 0..cells.frame.time.cols {
        if let Some(GateDay::Open(_)) = gate.days.get(cells.frame.time.day_of(col)) {
            cells.mark(col, row, marks.open);
        }
    }
    for (day, lost) in turns(&gate.days) {
        cells.put(cells.frame.time.col_of(day), row, if lost { "x" } else { "+" }, Role::Outside);
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
    let end = cells.frame.time.side - 1;
    (top..top + rows).for_each(|row| pen.put(end, row, line, Role::Quiet));
    for gate in &picture.gates {
        pen.put(end, top + cells.row(gate.elevation_m), tick, Role::Quiet);
    }
    let unit = picture.system.unit(Dimension::Length);
    let mut numbered = false;
    for (row, names) in names_on_rows(picture, rows).into_iter().enumerate() {
        // every second row without a gate is enough
        numbered = names.is_empty() && !numbered;
        let text = match names.is_empty() {
            true if numbered => format!("{:.0} ", unit.from_si(cells.middle_m(row))),
            true => continue,
            false => names,
        };
        let role = if numbered { Role::Quiet } else { Role::Plain };
        pen.put_before(end, top + row, &cut(&text, end), role);
    }
}

/// The bands with their values; over them, where there is a row for it, what the marks mean.
fn legend(picture: &SeasonPicture, frame: &Frame, pen: &mut Pen, look: Look, edges: &[f64]) {
    let unit = picture.system.unit(picture.water.dimension);
    // a threshold may not be round
    let edge = |v: f64| if (v - v.round()).abs() < 0.05 { format!("{v:.0}") } else { format!("{v:.1}") };
    let wide = if frame.titles { 2 } else { 1 };
    let (mut col, mut end) = (0, 0);
    for (i, glyph) in marks(look).fill.iter().enumerate().take(edges.len() + 1) {
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
    if frame.titles {
        let title = format!("pool, {}", picture.system.unit(Dimension::Length).symbol());
        pen.put(0, 0, &title, Role::Strong);
        let entries = meanings(look).map(|(glyph, word)| (glyph, word, Role::Strong));
        frame.time.entries(title.width() + 3, 0, &entries, pen);
    }
}
