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

/// What stands at an elevation on a day: `None` over the surface and below the bed.
fn at(day: &WaterDay, bed_m: f64, elevation_m: f64) -> Option<Option<f64>> {
    if elevation_m < bed_m {
        return None;
    }
    day.layers.iter().find(|layer| elevation_m <= layer.0).map(|layer| layer.1)
}

pub(super) fn draw(picture: &SeasonPicture, frame: &Frame, pen: &mut Pen, look: Look) {
    let water = &picture.water;
    let (top, rows) = frame.water;
    let Some(scale) = Scale::new(water.elevations_m.0, water.elevations_m.1) else { return };
    let marks = marks(look);
    let edges = edges(water.span, water.threshold, water.dimension, picture.system);
    let unit = picture.system.unit(water.dimension);
    let row_of = |elevation_m: f64| top + rows - 1 - scale.cell(elevation_m, rows).unwrap_or(0);
    for col in 0..frame.cols {
        let Some(day) = water.days.get(frame.day_of(col)) else { continue };
        let surface_m = day.layers.last().map(|l| l.0);
        for row in 0..rows {
            // a cell shows the water in its middle
            let elevation_m = scale.value(1.0 - (row as f64 + 0.5) / rows as f64);
            let Some(value) = at(day, water.elevations_m.0, elevation_m) else { continue };
            let (glyph, role) = value.map_or((UNKNOWN, Role::Quiet), |v| {
                let band = band(&edges, unit.from_si(v));
                (marks.fill[band.min(marks.fill.len() - 1)], Role::Band(band))
            });
            pen.put(frame.side + col, top + row, glyph, role);
        }
        if let Some(surface_m) = surface_m {
            // over the cells that show water
            let middle = |row: usize| scale.value(1.0 - ((row - top) as f64 + 0.5) / rows as f64);
            let row = row_of(surface_m);
            let row =
                if middle(row) <= surface_m { row.checked_sub(1).filter(|r| *r >= top) } else { Some(row) };
            row.into_iter().for_each(|row| pen.fill(frame.side + col, row, marks.surface, Role::Plain));
        }
    }
    picture.gates.iter().for_each(|gate| zone(gate, frame, pen, &marks, &row_of));
    for col in 0..frame.cols {
        let steepest_m = water.days.get(frame.day_of(col)).and_then(|day| day.thermocline_m);
        if let Some(elevation_m) = steepest_m {
            pen.put(frame.side + col, row_of(elevation_m), marks.thermocline, Role::Strong);
        }
    }
    picture.gates.iter().for_each(|gate| open(gate, frame, pen, &marks, &row_of));
    side(picture, frame, pen, look, &row_of);
    legend(picture, frame, pen, &marks, &edges);
}

/// The limits of the zone of an open gate, with gaps through which the water is seen.
fn zone(gate: &GateThrough, frame: &Frame, pen: &mut Pen, marks: &Marks, row_of: &dyn Fn(f64) -> usize) {
    for col in (0..frame.cols).step_by(GAPS) {
        let Some(GateDay::Open(Some(zone))) = gate.days.get(frame.day_of(col)) else { continue };
        for limit_m in zone {
            pen.put(frame.side + col, row_of(*limit_m), marks.zone, Role::Zone);
        }
    }
}

/// An open gate, and where it is lost and comes back.
fn open(gate: &GateThrough, frame: &Frame, pen: &mut Pen, marks: &Marks, row_of: &dyn Fn(f64) -> usize) {
    let row = row_of(gate.elevation_m);
    for col in 0..frame.cols {
        if let Some(GateDay::Open(_)) = gate.days.get(frame.day_of(col)) {
            pen.put(frame.side + col, row, marks.open, Role::Strong);
        }
    }
    for (day, lost) in turns(&gate.days) {
        pen.put(frame.side + frame.col_of(day), row, if lost { "x" } else { "+" }, Role::Outside);
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
fn side(picture: &SeasonPicture, frame: &Frame, pen: &mut Pen, look: Look, row_of: &dyn Fn(f64) -> usize) {
    let ascii = look.symbols == Symbols::Ascii;
    let (top, rows) = frame.water;
    let (line, tick) = if ascii { ("|", ">") } else { ("│", "┤") };
    let end = frame.side - 1;
    (top..top + rows).for_each(|row| pen.put(end, row, line, Role::Quiet));
    let mut gates: Vec<&GateThrough> = picture.gates.iter().collect();
    gates.sort_by(|a, b| b.elevation_m.total_cmp(&a.elevation_m));
    let wants: Vec<usize> = gates.iter().map(|g| row_of(g.elevation_m) - top).collect();
    let mut taken: Vec<Vec<&str>> = vec![Vec::new(); rows];
    for (gate, row) in gates.iter().zip(on_rows(&wants, rows)) {
        if let Some(names) = taken.get_mut(row) {
            names.push(&gate.name);
        }
        pen.put(end, row_of(gate.elevation_m), tick, Role::Quiet);
    }
    let unit = picture.system.unit(Dimension::Length);
    for (row, names) in taken.iter().enumerate() {
        let text = match names[..] {
            [] => {
                let Some(scale) = Scale::new(picture.water.elevations_m.0, picture.water.elevations_m.1)
                else {
                    continue;
                };
                // every second row is enough
                if row > 0 && taken.get(row - 1).is_none_or(|above| above.is_empty()) && row % 2 == 1 {
                    continue;
                }
                let shown = unit.from_si(scale.value(1.0 - (row as f64 + 0.5) / rows as f64));
                pen.put_before(end, top + row, &format!("{shown:.0} "), Role::Quiet);
                continue;
            }
            [name] => name.to_owned(),
            [name, ..] if names.join(" ").width() > end => {
                let more = format!("+{}", names.len() - 1);
                format!("{}{more}", cut(name, end.saturating_sub(more.len() + 1)))
            }
            _ => names.join(" "),
        };
        pen.put_before(end, top + row, &cut(&text, end), Role::Plain);
    }
}

/// The bands with their values, and what the marks mean as far as there is room: after them, or in a row of its own.
fn legend(picture: &SeasonPicture, frame: &Frame, pen: &mut Pen, marks: &Marks, edges: &[f64]) {
    let unit = picture.system.unit(picture.water.dimension);
    // a threshold may not be round
    let edge = |v: f64| if (v - v.round()).abs() < 0.05 { format!("{v:.0}") } else { format!("{v:.1}") };
    let mut col = 0;
    for (i, glyph) in marks.fill.iter().enumerate().take(edges.len() + 1) {
        let low = i.checked_sub(1).and_then(|i| edges.get(i));
        let text = match (low, edges.get(i)) {
            (Some(low), Some(high)) => format!("{}-{}", edge(*low), edge(*high)),
            (None, Some(high)) => format!("<{}", edge(*high)),
            (Some(low), None) => format!(">{}", edge(*low)),
            (None, None) => "all".to_owned(),
        };
        pen.put(col, frame.legend, &glyph.repeat(2), Role::Band(i));
        pen.put(col + 3, frame.legend, &text, Role::Quiet);
        col += text.width() + 5;
    }
    pen.put(col.saturating_sub(1), frame.legend, unit.symbol(), Role::Quiet);
    col += unit.symbol().width() + 1;
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
