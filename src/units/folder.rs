//! The units in which the bare numbers of a site's folder are written.

use super::parse::{UnitError, parse};
use super::show::System;
use super::unit::{Dimension, Unit};

/// The units of a folder's bare numbers; m, m2, m3, m3/s and C unless set otherwise.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Folder {
    length: Unit,
    area: Unit,
    volume: Unit,
    flow: Unit,
    temperature: Unit,
}

impl Default for Folder {
    fn default() -> Self {
        Self {
            length: Unit::Metre,
            area: Unit::SquareMetre,
            volume: Unit::CubicMetre,
            flow: Unit::CubicMetrePerSecond,
            temperature: Unit::Celsius,
        }
    }
}

impl Folder {
    /// Takes the unit a word names for one dimension. Temperature and its difference are set together;
    /// a velocity is that length in a
    /// second; distances follow it to km or miles; concentrations and percentages have one unit only.
    ///
    /// # Errors
    /// The word names no unit of that dimension.
    pub fn set(&mut self, dimension: Dimension, word: &str) -> Result<(), UnitError> {
        let unit = Unit::parse(word, dimension)?;
        match dimension {
            Dimension::Length => self.length = unit,
            Dimension::Area => self.area = unit,
            Dimension::Volume => self.volume = unit,
            Dimension::Flow => self.flow = unit,
            Dimension::Temperature | Dimension::TemperatureDifference => {
                self.temperature = Unit::parse(word, Dimension::Temperature)?;
            }
            Dimension::Distance | Dimension::Velocity | Dimension::Concentration | Dimension::Percent => {}
        }
        Ok(())
    }

    /// The units in which a user of this folder reads: customary where lengths are in feet.
    pub fn system(&self) -> System {
        if self.length == Unit::Foot { System::Us } else { System::Si }
    }

    /// The unit of a bare number.
    pub fn unit(&self, dimension: Dimension) -> Unit {
        match dimension {
            Dimension::Length => self.length,
            Dimension::Area => self.area,
            Dimension::Volume => self.volume,
            Dimension::Flow => self.flow,
            Dimension::Distance | Dimension::Velocity => self.system().unit(dimension),
            Dimension::Temperature => self.temperature,
            Dimension::TemperatureDifference => self.temperature.of_difference(),
            Dimension::Concentration => Unit::MilligramPerLitre,
            Dimension::Percent => Unit::Percent,
        }
    }

    /// [`parse`](super::parse()) with this folder's unit for a bare number; SI.
    ///
    /// # Errors
    /// As [`parse`](super::parse()).
    pub fn parse(&self, text: &str, dimension: Dimension) -> Result<f64, UnitError> {
        parse(text, dimension, self.unit(dimension))
    }

    /// A bare number in SI, where the file already gave a number and no text.
    pub fn to_si(&self, value: f64, dimension: Dimension) -> f64 {
        self.unit(dimension).to_si(value)
    }
}
