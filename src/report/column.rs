//! The pool drawn as text: elevation up the side, outlets at their elevations, zones with their velocity, and the
//! profile. Plain characters, so that it reads the same in a mail, a log and a terminal.
//!
//! ```text
//!   ft    outlets        zones   temperature * 40 to 75 F, oxygen o 4 to 9 mg/L
//!  1,470 |              | .    |                  o                     *    |
//!  1,455 |   N1 S1      | +    |               o                     *       |
//!  1,395 | >N3 >S3      | #    |       *    o                                |
//! ```

use std::fmt::Write as _;

use unicode_width::UnicodeWidthChar;

use crate::mix::Drawn;
use crate::plot::Scale;
use crate::problem::harmless;
use crate::profile::Profile;
use crate::site::Site;
use crate::units::{Dimension, System, Unit, figure};

/// Rows of the picture.
const ROWS: usize = 22;
/// Width of the outlet names.
const NAMES: usize = 18;
/// Width of a row.
const WIDTH: usize = 80;
/// What of a row is neither names, zones nor curves: the elevation, the rules and their blanks.
const FRAME: usize = 18;
/// Least span of the temperature scale, C: less would draw the sensor's noise.
const LEAST_C: f64 = 4.0;
/// Zones drawn beside each other.
const ZONES: usize = 6;

/// Draws the column of a profile, with the zones of levels that draw.
pub fn drawn_column(site: &Site, profile: &Profile, drawn: &[Drawn], system: System) -> String {
    let (bed, surface) = (profile.column.bed_m(), profile.column.surface_m());
    let step = (surface - bed) / ROWS as f64;
    let zones: Vec<&Drawn> = drawn.iter().filter(|d| d.zone.is_some()).take(ZONES).collect();
    let temperature = temperature_scale(profile, system);
    let oxygen = oxygen_scale(profile);
    let length = system.unit(Dimension::Length);
    let zones_width = zones.len().max(1) * 2;
    let width = WIDTH - FRAME - NAMES - zones_width;
    let mut out = format!(
        "{:>7}   {:<NAMES$} {:<zones_width$}   {}\n",
        length.symbol(),
        "outlets",
        if zones.is_empty() { "" } else { "zones" },
        heading(&temperature, oxygen.as_ref(), system)
    );
    for row in 0..ROWS {
        let top = surface - step * row as f64;
        let (bottom, middle) = (top - step, top - 0.5 * step);
        let within = |z: f64| z <= top && (z > bottom || (row + 1 == ROWS && z >= bed));
        let label = if row == 0 {
            figure(surface, length, 1)
        } else if row + 1 == ROWS {
            figure(bed, length, 1)
        } else {
            figure(middle, length, 0)
        };
        let _ = writeln!(
            out,
            "{label:>7} | {} | {} | {} |",
            names(site, drawn, within),
            bars(profile, &zones, middle, within),
            curves(profile, middle, width, &temperature, oxygen.as_ref(), system)
        );
    }
    let dry: Vec<String> =
        site.outlets.iter().filter(|o| o.centre_m > surface).map(|o| harmless(&o.name)).collect();
    if !dry.is_empty() {
        let _ = writeln!(out, "{:>7}   above the water: {}", "", dry.join(", "));
    }
    if !zones.is_empty() {
        let _ = writeln!(out, "{:>7}   zones: @ peak, # strong, + middling, . weak; > draws", "");
    }
    out
}

fn temperature_scale(profile: &Profile, system: System) -> Scale {
    let unit = system.unit(Dimension::Temperature);
    let values = || profile.samples.iter().map(|s| unit.from_si(s.temperature_c));
    let (low, high) = (values().fold(f64::INFINITY, f64::min), values().fold(f64::NEG_INFINITY, f64::max));
    let least = Unit::of_difference(unit).from_si(LEAST_C);
    Scale::round(low, high, least, 8)
}

fn oxygen_scale(profile: &Profile) -> Option<Scale> {
    let values = || profile.oxygen.iter().map(|o| o.oxygen_mg_l);
    let (low, high) = (values().reduce(f64::min)?, values().reduce(f64::max)?);
    Some(Scale::round(low.min(0.0), high, 1.0, 8))
}

fn heading(temperature: &Scale, oxygen: Option<&Scale>, system: System) -> String {
    let unit = system.unit(Dimension::Temperature);
    let mut out = format!("* {} to {} {}", temperature.low(), temperature.high(), unit.symbol());
    if let Some(oxygen) = oxygen {
        let _ = write!(out, "   o {} to {} mg/L oxygen", oxygen.low(), oxygen.high());
    }
    out
}

/// Names of the outlets in a row, those that draw marked.
fn names(site: &Site, drawn: &[Drawn], within: impl Fn(f64) -> bool) -> String {
    let mut here: Vec<(&str, bool)> = site
        .outlets
        .iter()
        .enumerate()
        .filter(|(_, o)| within(o.centre_m))
        .map(|(i, o)| {
            let draws = drawn.iter().any(|d| d.level.outlets.contains(&i) && d.level.sink.flow_m3s > 0.0);
            (o.name.as_str(), draws)
        })
        .collect();
    here.sort_unstable();
    let words: Vec<String> = here
        .iter()
        .map(|(name, draws)| format!("{}{}", if *draws { ">" } else { "" }, harmless(name)))
        .collect();
    fitted(&words.join(" "), NAMES)
}

fn bars(profile: &Profile, zones: &[&Drawn], middle: f64, within: impl Fn(f64) -> bool) -> String {
    let mut out = String::new();
    for drawn in zones {
        let mark = drawn.zone.map_or(' ', |zone| {
            let velocity = zone.velocity(&profile.column, middle);
            if within(zone.peak_m) {
                '@'
            } else if velocity > 2.0 / 3.0 {
                '#'
            } else if velocity > 1.0 / 3.0 {
                '+'
            } else if velocity > 0.0 {
                '.'
            } else {
                ' '
            }
        });
        out.push(mark);
        out.push(' ');
    }
    if zones.is_empty() { "  ".into() } else { out }
}

fn curves(
    profile: &Profile,
    middle: f64,
    width: usize,
    temperature: &Scale,
    oxygen: Option<&Scale>,
    system: System,
) -> String {
    let unit = system.unit(Dimension::Temperature);
    let reading = profile.column.reading(middle);
    let mut cells = vec![' '; width];
    if let Some(at) = oxygen.zip(reading.oxygen_mg_l).and_then(|(s, o)| s.cell(o, width)) {
        cells[at] = 'o';
    }
    if let Some(at) = temperature.cell(unit.from_si(reading.temperature_c), width) {
        cells[at] = if cells[at] == 'o' { '8' } else { '*' };
    }
    cells.into_iter().collect()
}

/// Text cut or padded to a width in terminal cells.
pub fn fitted(text: &str, width: usize) -> String {
    let mut out = String::new();
    let mut used = 0;
    for c in text.chars() {
        let wide = c.width().unwrap_or(0);
        if used + wide > width {
            break;
        }
        used += wide;
        out.push(c);
    }
    out.extend(std::iter::repeat_n(' ', width - used));
    out
}
