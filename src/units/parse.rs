//! Text to numbers: `1250cfs`, `58 F`, `-1.5e3 m`, or a bare `12` in the unit of its folder.

use super::unit::{Dimension, Unit};

/// Longest piece of the user's text repeated in a sentence, characters.
const QUOTED: usize = 40;

/// Why a text is no quantity; the sentence says what is accepted. The user's own text is quoted with its
/// control characters escaped.
#[derive(Debug, Clone, PartialEq, Eq, thiserror::Error)]
pub enum UnitError {
    /// No number where one was expected.
    #[error("{text:?} is not a number; write the {dimension} as a plain number, or with {} after it", dimension.accepted())]
    NotANumber {
        /// The text.
        text: String,
        /// What was asked for.
        dimension: Dimension,
    },
    /// A comma may mean thousands or tenths, so neither is guessed.
    #[error("{text:?} has a comma; write 1250 for thousands and 12.5 for tenths")]
    Comma {
        /// The text.
        text: String,
    },
    /// Beyond what a number can hold.
    #[error("{text:?} is too large; the {dimension} must be finite, in {}", dimension.accepted())]
    NotFinite {
        /// The text.
        text: String,
        /// What was asked for.
        dimension: Dimension,
    },
    /// A word that is no unit at all.
    #[error("{unit:?} is not a unit of {dimension}; accepted: {}", dimension.accepted())]
    UnknownUnit {
        /// The word.
        unit: String,
        /// What was asked for.
        dimension: Dimension,
    },
    /// A unit, but of something else.
    #[error("{unit:?} is a unit of {measures}, not of {dimension}; accepted: {}", dimension.accepted())]
    OtherDimension {
        /// The word.
        unit: String,
        /// What that word measures.
        measures: Dimension,
        /// What was asked for.
        dimension: Dimension,
    },
}

impl Unit {
    /// The unit a word names within a dimension: `ft3/s`, `m^3/s`, `m³/s`, `acre-ft`, `deg F`, `°F`.
    ///
    /// # Errors
    /// [`UnitError::OtherDimension`] or [`UnitError::UnknownUnit`], which list what is accepted.
    pub fn parse(word: &str, dimension: Dimension) -> Result<Self, UnitError> {
        let plain = plain(word);
        if let Some(unit) = dimension.units().find(|unit| unit.is_spelled(&plain)) {
            return Ok(unit);
        }
        let unit = quoted(word);
        Err(match Self::ALL.iter().find(|unit| unit.is_spelled(&plain)) {
            Some(other) => UnitError::OtherDimension { unit, measures: other.dimension(), dimension },
            None => UnitError::UnknownUnit { unit, dimension },
        })
    }
}

/// A quantity in SI from text: a number, and after it a unit of `dimension`; without one the number is in
/// `default`. The result is finite.
///
/// # Errors
/// No number, a comma, a number without end, a unit unknown or of another dimension (`default` included),
/// anything after the unit.
pub fn parse(text: &str, dimension: Dimension, default: Unit) -> Result<f64, UnitError> {
    let trimmed = text.trim();
    if trimmed.contains(',') {
        return Err(UnitError::Comma { text: quoted(trimmed) });
    }
    let (number, word) = trimmed.split_at(number_length(trimmed));
    let value: f64 =
        number.parse().map_err(|_| UnitError::NotANumber { text: quoted(trimmed), dimension })?;
    let unit = match word.trim() {
        "" if default.dimension() == dimension => default,
        "" => {
            let (unit, measures) = (default.symbol().to_owned(), default.dimension());
            return Err(UnitError::OtherDimension { unit, measures, dimension });
        }
        word => Unit::parse(word, dimension)?,
    };
    let si = unit.to_si(value);
    if si.is_finite() { Ok(si) } else { Err(UnitError::NotFinite { text: quoted(trimmed), dimension }) }
}

/// Bytes of the leading number. An `e` counts only with digits after it, so that a unit may begin with one.
fn number_length(text: &str) -> usize {
    let bytes = text.as_bytes();
    let digits = |from: usize| bytes.iter().skip(from).take_while(|b| b.is_ascii_digit()).count();
    let sign = |at: usize| usize::from(matches!(bytes.get(at), Some(b'+' | b'-')));
    let mut end = sign(0);
    end += digits(end);
    if bytes.get(end) == Some(&b'.') {
        end += 1 + digits(end + 1);
    }
    if matches!(bytes.get(end), Some(b'e' | b'E')) {
        let exponent = end + 1 + sign(end + 1);
        if digits(exponent) > 0 {
            end = exponent + digits(exponent);
        }
    }
    end
}

fn plain(word: &str) -> String {
    let typed = |c: char| match c {
        '^' => None,
        '²' => Some('2'),
        '³' => Some('3'),
        // the ordinal mark, which keyboards offer beside the degree sign
        'º' => Some('°'),
        other => Some(other),
    };
    word.trim().chars().filter_map(typed).collect()
}

fn quoted(text: &str) -> String {
    let mut short: String = text.chars().take(QUOTED).collect();
    if short.len() < text.len() {
        short.push_str("...");
    }
    short
}
