//! The pool drawn with elevation up the side: gates, withdrawal zones and the cast line up across it.

mod axes;
mod below;
mod curves;
mod gates;
mod layout;
mod marks;
mod pen;
#[cfg(test)]
mod tests;
mod zones;

use ratatui::buffer::Buffer;
use ratatui::layout::Rect;

use crate::tui::{Look, Role};
use crate::units::System;

use layout::Layout;
use pen::Pen;

/// Curves of one cast.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct Water {
    /// Elevation (m) and temperature (C), in order of elevation.
    pub temperature: Vec<(f64, f64)>,
    /// Elevation (m) and dissolved oxygen (mg/L), in order of elevation; one list for each stretch without a gap, none
    /// where it was not measured.
    pub oxygen: Vec<Vec<(f64, f64)>>,
}

/// How a gate stands.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum GateState {
    /// Water passes.
    Drawing,
    /// Open, yet nothing passes.
    OpenNoFlow,
    /// Shut.
    Shut,
    /// Under water; whether it is open is not told.
    Wet,
    /// Under less water than it asks for; whether it is open is not told.
    Short,
    /// Above the water.
    Dry,
    /// Out of use.
    Out,
}

impl GateState {
    /// Each with its sign in the picture and what the legend says.
    pub const SIGNS: [(Self, char, &str); 7] = [
        (Self::Drawing, '>', "draws"),
        (Self::OpenNoFlow, '=', "open, no flow"),
        (Self::Shut, '|', "shut"),
        (Self::Wet, ' ', "under water"),
        (Self::Short, '!', "too little water above"),
        (Self::Dry, '^', "above water"),
        (Self::Out, 'x', "out"),
    ];

    /// The sign in the picture.
    pub fn sign(self) -> char {
        Self::SIGNS.iter().find(|s| s.0 == self).map_or(' ', |s| s.1)
    }
}

/// A gate in the face of the dam.
#[derive(Debug, Clone, PartialEq)]
pub struct GateMark {
    /// Its name, made harmless here.
    pub name: String,
    /// Centre-line, or the crest, m.
    pub centre_m: f64,
    /// Top of the opening, m.
    pub top_m: f64,
    /// Bottom of the opening, m.
    pub bottom_m: f64,
    /// How it stands.
    pub state: GateState,
    /// Whether it is the one chosen.
    pub chosen: bool,
    /// What is said beside it where there is room, such as its submergence; empty for nothing.
    pub note: String,
}

/// The withdrawal zone of a level.
#[derive(Debug, Clone, PartialEq)]
pub struct ZoneMark {
    /// Gates of the level.
    pub label: String,
    /// Lower limit, m.
    pub lower_m: f64,
    /// Upper limit, m.
    pub upper_m: f64,
    /// Where the velocity peaks, m.
    pub peak_m: f64,
    /// Elevation (m) and velocity as a share of the greatest, in rising order; linear between.
    pub velocity: Vec<(f64, f64)>,
    /// Whether density, not the bed, ends it below.
    pub lower_free: bool,
    /// Whether density, not the surface, ends it above.
    pub upper_free: bool,
}

/// Ends of scales, fixed so that two pictures compare.
#[derive(Debug, Clone, Copy, Default, PartialEq)]
pub struct Fixed {
    /// Temperature, C.
    pub temperature_c: Option<(f64, f64)>,
    /// Oxygen, mg/L.
    pub oxygen_mg_l: Option<(f64, f64)>,
    /// Elevation, m.
    pub elevation_m: Option<(f64, f64)>,
}

/// What the picture shows.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct Picture {
    /// Units shown.
    pub system: System,
    /// Bed at the dam, m.
    pub bed_m: f64,
    /// Water surface, m.
    pub surface_m: f64,
    /// The cast.
    pub water: Water,
    /// Other casts, drawn quieter; numbered from 1 where there are several.
    pub overlays: Vec<Water>,
    /// Elevation of the thermocline, m.
    pub thermocline_m: Option<f64>,
    /// Elevation down to which the water is mixed, m.
    pub mixed_base_m: Option<f64>,
    /// Threshold of cold water, C.
    pub cold_c: Option<f64>,
    /// Gates, in any order.
    pub gates: Vec<GateMark>,
    /// Zones of the levels that draw.
    pub zones: Vec<ZoneMark>,
    /// Elevation (m) and words of each flag.
    pub flags: Vec<(f64, String)>,
    /// Elevation read out, m.
    pub cursor_m: Option<f64>,
    /// Scales fixed by the caller; the others follow from the data.
    pub fixed: Fixed,
}

/// Draws the picture.
///
/// ```text
///      ft  gates               T 50    60    70   F   units, temperature axis
/// 1,471.5┤~~~~~~~~~~~~~~~~~~~~~~~~┴~~~~~┴~~~~~┴~~~~   water surface
///   1,450┤ |N1 |S1     N3 S3  │       ⢸O2    ⢸⡇T  !   a zone's gates; at the edge a flag at its row
///        │             ⣷⣄ ┐   │╌ thermocline ╌╌╌╌     extent of the zone, ending free
///   1,400╢[>N3]>S3     ⣿⣿⣷<   │  ┊  ⢀⡇  ⣀⠴⠚⠁          opening of the chosen gate; velocity of its zone, peak
///        │             ⡟⠁ ┘   │  ┊⢀⠼⠒⠒⠊⠁          c   c where the water passes the threshold of the dotted line
/// 1,180.0┤═════════════════════╤═════╤═════╤═══════   bed
///                      O2 mg/L 0     5     10         oxygen axis
/// 1,395.0 ft  54.1 F  7.1 mg/L                        readout at the cursor
/// > draws  | shut  < peak  ┐ free end                 legend
/// ```
///
/// `┐ ┘` end a zone that density ends, `╕ ╛` one that the surface or the bed cuts; `<` marks its peak. Gates above
/// the water stand above the surface, which is then drawn at its row. As the space shrinks there go: the legend, the
/// notes of the gates, the row of the readout (it then takes that of the oxygen axis), the overlays, the decimals of
/// surface and bed, the oxygen axis, zones beyond those that fit (their number is told). The gates and the curves stay.
pub fn column(picture: &Picture, area: Rect, buf: &mut Buffer, look: Look) {
    let area = area.intersection(buf.area);
    let mut pen = Pen::new(buf, area, look);
    pen.clear();
    let Some(layout) = Layout::of(picture, area) else {
        pen.text(area.x, area.y, area.width, "picture too small", Role::Quiet);
        return;
    };
    gates::draw(picture, &layout, &mut pen);
    zones::draw(picture, &layout, &mut pen);
    curves::draw(picture, &layout, &mut pen);
    axes::elevations(picture, &layout, &mut pen);
    axes::values(picture, &layout, &mut pen);
    marks::draw(picture, &layout, &mut pen);
    below::cursor(picture, &layout, &mut pen);
    below::legend(picture, &layout, &mut pen);
}

/// Elevation (m) in the middle of a row of the screen, where the picture in `area` shows water or air there.
pub fn elevation_at(picture: &Picture, area: Rect, row: u16) -> Option<f64> {
    Layout::of(picture, area)?.elevation_m(row)
}

/// Index of the gate whose name lies at a cell of the screen.
pub fn gate_at(picture: &Picture, area: Rect, column: u16, row: u16) -> Option<usize> {
    let layout = Layout::of(picture, area)?;
    gates::spans(picture, &layout)
        .into_iter()
        .find(|s| s.row == row && s.columns.contains(&column))
        .map(|s| s.gate)
}
