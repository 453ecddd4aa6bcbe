//! The record: what was decided, how it turned out against the gauge, and what can be learned from it.
//!
//! Methods: `docs/methods.md`, section 9.

pub mod line;
mod log;

pub use log::{Decided, Log, Placed};

/// How the figures are made: told with every answer, and written down with every decision.
pub const METHOD: &str = "point-sink withdrawal (WES H-73-4, E-87-2), samples as measured, levelled density; 10-90 % of seeded perturbed cases";
