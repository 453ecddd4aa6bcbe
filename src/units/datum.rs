//! The zero of elevations, by name. There is no conversion: two datums are never mixed.

use std::fmt;

/// Name of the vertical datum of a folder's elevations; `local` unless the site says otherwise.
#[derive(Debug, Clone)]
pub struct Datum(String);

/// Why two elevations cannot be used together, or a name is none.
#[derive(Debug, Clone, PartialEq, Eq, thiserror::Error)]
pub enum DatumError {
    /// Elevations of two datums met.
    #[error(
        "elevations above {one:?} and above {other:?} cannot be mixed; give both in one datum, under one name"
    )]
    Differ {
        /// One name.
        one: String,
        /// The other.
        other: String,
    },
    /// A name with nothing in it.
    #[error("the datum has no name; write its name, or leave it out for \"local\"")]
    Blank,
}

impl Datum {
    /// A datum by its name.
    ///
    /// # Errors
    /// [`DatumError::Blank`] for an empty name.
    pub fn new(name: &str) -> Result<Self, DatumError> {
        match name.trim() {
            "" => Err(DatumError::Blank),
            name => Ok(Self(name.to_owned())),
        }
    }

    /// The name as written.
    pub fn name(&self) -> &str {
        &self.0
    }

    /// Nothing when both are the same datum; case and spaces of the name do not count.
    ///
    /// # Errors
    /// [`DatumError::Differ`] names both.
    pub fn agree(&self, other: &Self) -> Result<(), DatumError> {
        if self == other {
            Ok(())
        } else {
            Err(DatumError::Differ { one: self.0.clone(), other: other.0.clone() })
        }
    }

    fn letters(&self) -> impl Iterator<Item = char> {
        self.0.chars().filter(|c| !c.is_whitespace()).flat_map(char::to_lowercase)
    }
}

impl PartialEq for Datum {
    fn eq(&self, other: &Self) -> bool {
        self.letters().eq(other.letters())
    }
}

impl Eq for Datum {}

impl Default for Datum {
    fn default() -> Self {
        Self("local".to_owned())
    }
}

/// The name.
impl fmt::Display for Datum {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(&self.0)
    }
}
