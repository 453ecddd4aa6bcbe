//! SI numbers to text, with the unit that belongs to them.

use super::unit::{Dimension, Unit};

/// The units on screens and in reports; data for programs stays SI.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default)]
pub enum System {
    /// ft, mi, acre, acre-ft, cfs, ft/s, F.
    Us,
    /// m, km, m2, m3, m3/s, m/s, C.
    #[default]
    Si,
}

impl System {
    /// The unit in which this system shows a dimension.
    pub fn unit(self, dimension: Dimension) -> Unit {
        match (dimension, self) {
            (Dimension::Length, Self::Us) => Unit::Foot,
            (Dimension::Length, Self::Si) => Unit::Metre,
            (Dimension::Distance, Self::Us) => Unit::Mile,
            (Dimension::Distance, Self::Si) => Unit::Kilometre,
            (Dimension::Area, Self::Us) => Unit::Acre,
            (Dimension::Area, Self::Si) => Unit::SquareMetre,
            (Dimension::Volume, Self::Us) => Unit::AcreFoot,
            (Dimension::Volume, Self::Si) => Unit::CubicMetre,
            (Dimension::Flow, Self::Us) => Unit::CubicFootPerSecond,
            (Dimension::Flow, Self::Si) => Unit::CubicMetrePerSecond,
            (Dimension::Velocity, Self::Us) => Unit::FootPerSecond,
            (Dimension::Velocity, Self::Si) => Unit::MetrePerSecond,
            (Dimension::Temperature, Self::Us) => Unit::Fahrenheit,
            (Dimension::Temperature, Self::Si) => Unit::Celsius,
            (Dimension::TemperatureDifference, Self::Us) => Unit::FahrenheitDifference,
            (Dimension::TemperatureDifference, Self::Si) => Unit::CelsiusDifference,
            (Dimension::Concentration, _) => Unit::MilligramPerLitre,
            (Dimension::Percent, _) => Unit::Percent,
        }
    }
}

/// `1,250 cfs`, `58.1 F`, `50%`: an SI value in the system's unit, rounded, with the unit.
pub fn show(value_si: f64, dimension: Dimension, system: System, decimals: u8) -> String {
    let unit = system.unit(dimension);
    let gap = if unit == Unit::Percent { "" } else { " " };
    format!("{}{gap}{unit}", figure(value_si, unit, decimals))
}

/// `1,250`: an SI value in `unit`, rounded, for a column whose heading carries the unit. Thousands are
/// grouped, and what rounds to zero has no sign.
pub fn figure(value_si: f64, unit: Unit, decimals: u8) -> String {
    let text = format!("{:.*}", usize::from(decimals), unit.from_si(value_si));
    let (negative, digits) = match text.strip_prefix('-') {
        Some(digits) => (digits.bytes().any(|b| matches!(b, b'1'..=b'9')), digits),
        None => (false, text.as_str()),
    };
    let whole = digits.bytes().take_while(u8::is_ascii_digit).count();
    let mut out = String::with_capacity(text.len() + whole / 3);
    if negative {
        out.push('-');
    }
    for (at, c) in digits.chars().enumerate() {
        if at > 0 && at < whole && (whole - at).is_multiple_of(3) {
            out.push(',');
        }
        out.push(c);
    }
    out
}
