//! A station's record as a file.

use std::fmt::Write;

use chrono::NaiveDateTime;

/// One reading, local standard time.
pub(crate) struct Reading {
    pub(crate) time: NaiveDateTime,
    pub(crate) temperature_c: f64,
    pub(crate) oxygen_mg_l: Option<f64>,
    pub(crate) mark: Option<&'static str>,
}

/// The scale of the thermometer.
#[derive(Clone, Copy, PartialEq)]
pub(crate) enum Unit {
    Celsius,
    Fahrenheit,
}

/// The file; the column of marks stands where any reading has one.
pub(crate) fn text(of: &str, unit: Unit, readings: &[Reading]) -> String {
    let marked = readings.iter().any(|reading| reading.mark.is_some());
    let mut text = format!("# {of}: invented readings of an invented place.\n# data: provisional\n");
    text.push_str(if unit == Unit::Celsius {
        "time,temperature_C,oxygen_mg_l"
    } else {
        "time,temperature_F,oxygen_mg_l"
    });
    text.push_str(if marked { ",mark\n" } else { "\n" });
    for reading in readings {
        let c = reading.temperature_c;
        let shown = if unit == Unit::Celsius { c } else { 32.0 + 1.8 * c };
        write!(text, "{},{shown:.2},", reading.time.format("%Y-%m-%dT%H:%M")).unwrap();
        if let Some(oxygen) = reading.oxygen_mg_l {
            write!(text, "{oxygen:.2}").unwrap();
        }
        if marked {
            write!(text, ",{}", reading.mark.unwrap_or_default()).unwrap();
        }
        text.push('\n');
    }
    text
}
