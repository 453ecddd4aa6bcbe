//! A station's record as a file.

use std::fmt::Write;

use chrono::NaiveDateTime;

/// One reading, local standard time.
pub(crate) struct Reading {
    pub(crate) time: NaiveDateTime,
    pub(crate) temperature_c: f64,
    pub(crate) oxygen_mg_l: Option<f64>,
}

/// The scale of the thermometer.
#[derive(Clone, Copy, PartialEq)]
pub(crate) enum Unit {
    Celsius,
    Fahrenheit,
}

/// The file.
pub(crate) fn text(of: &str, unit: Unit, readings: &[Reading]) -> String {
    let letter = if unit == Unit::Celsius { 'C' } else { 'F' };
    let mut text = format!("# {of}: invented readings of an invented place.\n# data: provisional\n");
    writeln!(text, "time,temperature_{letter},oxygen_mg_l").unwrap();
    for reading in readings {
        let c = reading.temperature_c;
        let shown = if unit == Unit::Celsius { c } else { 32.0 + 1.8 * c };
        let oxygen = reading.oxygen_mg_l.map(|oxygen| format!("{oxygen:.2}")).unwrap_or_default();
        writeln!(text, "{},{shown:.2},{oxygen}", reading.time.format("%Y-%m-%dT%H:%M")).unwrap();
    }
    text
}
