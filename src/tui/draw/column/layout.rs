//! Where each part of the picture lies.

use ratatui::layout::Rect;

use crate::plot::Scale;
use crate::units::{Dimension, Unit, figure};

use super::pen::cells;
use super::{Picture, Water, below, gates};

// Every number here is a choice, made by looking at screens of many sizes.

/// Below this nothing of use can be drawn.
const LEAST: (u16, u16) = (26, 7);
/// Rows from which the oxygen axis has its own.
const OXYGEN_AXIS: u16 = 10;
/// Rows from which the readout has its own.
const READOUT: u16 = 17;
/// Rows beyond which every fourth may be one of the legend.
const LEGEND: u16 = 20;
/// Columns from which surface and bed have decimals, overlays are drawn and the curves have a wall.
const WIDE: u16 = 44;
/// Columns from which the gates have notes.
const NOTES: u16 = 60;
/// Columns of the curves that zones never take.
const CURVES: u16 = 9;
/// Columns of a zone at most and at least.
const LANE: (u16, u16) = (10, 3);
/// Share of the water that the air above it may take, for gates above the surface.
const AIR: f64 = 0.25;
/// Least span of the temperature scale, C: less would draw the sensor's noise.
const LEAST_C: f64 = 4.0;

pub(super) struct Layout {
    pub(super) area: Rect,
    /// First row of the water and the number of rows.
    pub(super) top: u16,
    pub(super) rows: u16,
    /// Column of the dam's face.
    pub(super) wall: u16,
    pub(super) gates: Rect,
    pub(super) notes: bool,
    /// Lanes of the zones, and which of them each zone of the picture has.
    pub(super) lanes: Vec<Rect>,
    pub(super) lane_of: Vec<usize>,
    pub(super) curves: Rect,
    pub(super) wide: bool,
    /// Rows of the oxygen axis, the readout and the legend.
    pub(super) oxygen_axis: Option<u16>,
    pub(super) readout: Option<u16>,
    pub(super) legend: Rect,
    pub(super) elevation: Scale,
    pub(super) temperature: Option<Scale>,
    pub(super) oxygen: Option<Scale>,
}

impl Layout {
    pub(super) fn of(picture: &Picture, area: Rect) -> Option<Self> {
        if area.width < LEAST.0 || area.height < LEAST.1 {
            return None;
        }
        let elevation = elevation_scale(picture)?;
        let wide = area.width >= WIDE;
        let mut rows = area.height - 3;
        let mut foot = area.bottom();
        let mut take = |number: u16| {
            foot -= number;
            rows -= number;
            (number > 0).then_some(foot)
        };
        let legend_rows = below::legend_rows(picture, area.width).min(area.height.saturating_sub(LEGEND) / 4);
        let legend_y = take(legend_rows).unwrap_or(area.bottom());
        let legend = Rect { y: legend_y, height: legend_rows, ..area };
        let own_readout = take(u16::from(area.height >= READOUT && picture.cursor_m.is_some()));
        let bottom = take(u16::from(area.height >= OXYGEN_AXIS));
        // where the readout has no row of its own it takes that of the oxygen axis, whose number it tells
        let readout = own_readout.or(bottom.filter(|_| picture.cursor_m.is_some()));
        let oxygen_axis = bottom.filter(|row| readout != Some(*row));

        let labels = [elevation.low(), elevation.high(), picture.surface_m]
            .map(|z| cells(&figure(z, picture.system.unit(Dimension::Length), u8::from(wide))));
        let wall = area.x + labels.into_iter().max().unwrap_or(0).min(12);
        let top = area.y + 2;
        let part = |x: u16, width: u16| Rect { x, y: top, width, height: rows };
        let notes = area.width >= NOTES;
        let most = if notes { area.width / 3 } else { area.width * 3 / 10 + 1 };
        let mut layout = Self {
            area,
            top,
            rows,
            wall,
            gates: part(wall + 1, most),
            notes,
            lanes: Vec::new(),
            lane_of: Vec::new(),
            curves: part(wall, 0),
            wide,
            oxygen_axis,
            readout,
            legend,
            elevation,
            temperature: temperature_scale(picture, wide),
            oxygen: oxygen_scale(picture, wide),
        };
        layout.gates.width = gates::width(picture, &layout).clamp(3, most);
        let lanes_x = layout.gates.right();
        // a gap or wall before the curves, and the two columns of marks behind them
        let rest = area.right().saturating_sub(lanes_x + 3 + u16::from(wide));
        layout.lane_of = layout.shared(picture);
        let number =
            layout.lane_of.iter().max().map_or(0, |lane| u16::try_from(lane + 1).unwrap_or(u16::MAX));
        let lane = (rest * 2 / 5 / number.max(1)).clamp(LANE.1, LANE.0);
        let shown = number.min(rest.saturating_sub(CURVES) / lane);
        layout.lanes = (0..shown).map(|k| part(lanes_x + k * lane, lane)).collect();
        let x = lanes_x + shown * lane + 1 + u16::from(wide);
        layout.curves = part(x, area.right().saturating_sub(x + 2));
        Some(layout)
    }

    /// A lane for each zone: zones that keep apart, a row for a name between them, share one.
    fn shared(&self, picture: &Picture) -> Vec<usize> {
        let mut lanes: Vec<Vec<(u16, u16)>> = Vec::new();
        let mut out = Vec::new();
        for zone in &picture.zones {
            let (upper, lower) = (self.row(zone.upper_m), self.row(zone.lower_m));
            let apart = |lane: &Vec<(u16, u16)>| lane.iter().all(|&(u, l)| upper > l + 1 || lower + 1 < u);
            let lane = lanes.iter().position(apart).unwrap_or(lanes.len());
            if lane == lanes.len() {
                lanes.push(Vec::new());
            }
            lanes[lane].push((upper, lower));
            out.push(lane);
        }
        out
    }

    /// Row of an elevation, the nearest outside.
    pub(super) fn row(&self, elevation_m: f64) -> u16 {
        self.top + self.row_of(elevation_m, self.rows)
    }

    fn row_of(&self, elevation_m: f64, rows: u16) -> u16 {
        // counted from the top, as the dots are, so that marks and curves round alike
        let below = Scale::new(0.0, 1.0).zip(self.elevation.share(elevation_m));
        let row = below.and_then(|(s, share)| s.cell(1.0 - share, usize::from(rows)));
        u16::try_from(row.unwrap_or(0)).unwrap_or(0)
    }

    /// Row of an elevation where it is inside the picture.
    pub(super) fn row_inside(&self, elevation_m: f64) -> Option<u16> {
        let inside = self.elevation.share(elevation_m).is_some_and(|s| (0.0..=1.0).contains(&s));
        inside.then(|| self.row(elevation_m))
    }

    /// Elevation in the middle of a row, m.
    pub(super) fn elevation_m(&self, row: u16) -> Option<f64> {
        let down = row.checked_sub(self.top).filter(|d| *d < self.rows)?;
        Some(self.elevation.value(1.0 - (f64::from(down) + 0.5) / f64::from(self.rows)))
    }

    /// Row of the water surface where air is drawn above it; without, the surface is the rule above the water.
    pub(super) fn surface_row(&self, picture: &Picture) -> Option<u16> {
        (self.elevation.high() > picture.surface_m).then(|| self.row(picture.surface_m))
    }

    /// Row of the bed where the picture reaches below it; without, the bed is the rule below the water.
    pub(super) fn bed_row(&self, picture: &Picture) -> Option<u16> {
        (self.elevation.low() < picture.bed_m).then(|| self.row(picture.bed_m))
    }
}

fn elevation_scale(picture: &Picture) -> Option<Scale> {
    if let Some((low, high)) = picture.fixed.elevation_m {
        return Scale::new(low, high);
    }
    let (bed, surface) = (picture.bed_m, picture.surface_m);
    let most = surface + AIR * (surface - bed);
    let dry = picture.gates.iter().map(|g| g.centre_m).filter(|z| *z > surface);
    let highest = dry.fold(surface, f64::max);
    // a little above the highest gate, lest it stand on the edge
    let high = if highest > surface { (highest + 0.02 * (surface - bed)).min(most) } else { surface };
    Scale::new(bed, high)
}

fn temperature_scale(picture: &Picture, wide: bool) -> Option<Scale> {
    let unit = picture.system.unit(Dimension::Temperature);
    if let Some((low, high)) = picture.fixed.temperature_c {
        return Scale::new(unit.from_si(low), unit.from_si(high));
    }
    let values = || {
        waters(picture, wide)
            .flat_map(|(_, w)| &w.temperature)
            .map(|t| t.1)
            .chain(picture.cold_c)
            .filter(|t| t.is_finite())
    };
    let low = unit.from_si(values().reduce(f64::min)?);
    let high = unit.from_si(values().reduce(f64::max)?);
    Some(Scale::round(low, high, Unit::of_difference(unit).from_si(LEAST_C), 8))
}

fn oxygen_scale(picture: &Picture, wide: bool) -> Option<Scale> {
    // oxygen of other casts alone would be taken for this one's
    if picture.water.oxygen.iter().all(Vec::is_empty) {
        return None;
    }
    if let Some((low, high)) = picture.fixed.oxygen_mg_l {
        return Scale::new(low, high);
    }
    let values = || {
        waters(picture, wide)
            .flat_map(|(_, w)| w.oxygen.iter().flatten())
            .map(|o| o.1)
            .filter(|o| o.is_finite())
    };
    let (low, high) = (values().reduce(f64::min)?, values().reduce(f64::max)?);
    Some(Scale::round(low.min(0.0), high, 1.0, 8))
}

/// The casts drawn, and whether it is the picture's own, which comes last.
pub(super) fn waters(picture: &Picture, wide: bool) -> impl Iterator<Item = (bool, &Water)> {
    let overlays = if wide { &picture.overlays[..] } else { &[] };
    overlays.iter().map(|w| (false, w)).chain([(true, &picture.water)])
}
