//! What runs by days: the axis of time, and curves over it with a shaded range behind them.

mod curves;
mod time;
mod values;

use crate::plot::Stroke;
use crate::tui::Role;
use crate::units::Dimension;

pub(super) use curves::Curves;
pub use curves::{shade, sign};
pub(super) use time::Time;
#[cfg(test)]
pub(super) use values::scale;
pub(super) use values::{middle, row};

/// Rows of a part: the first, and how many.
pub(super) type Rows = (usize, usize);

/// Curves over one time, with a shaded range behind them.
#[derive(Debug, Clone, PartialEq)]
pub struct CurvesThrough {
    /// What they are of.
    pub name: String,
    /// Their dimension.
    pub dimension: Dimension,
    /// Least and greatest value of all that is to be compared, SI.
    pub span: (f64, f64),
    /// What is shaded, and its range by day, SI.
    pub shaded: (String, Vec<Option<[f64; 2]>>),
    /// Curves, the one drawn on top last.
    pub lines: Vec<LineThrough>,
}

/// One curve.
#[derive(Debug, Clone, PartialEq)]
pub struct LineThrough {
    /// Its name.
    pub name: String,
    /// What it means.
    pub role: Role,
    /// How strong it is.
    pub stroke: Stroke,
    /// Its plain character.
    pub mark: &'static str,
    /// By day, SI.
    pub values: Vec<Option<f64>>,
}
