//! The record: what was decided, how it turned out against the gauge, and what can be learned from it.
//!
//! Methods: `docs/methods.md`, section 9.

mod causes;
mod learn;
pub mod line;
mod log;
mod pairs;
mod scores;

pub use causes::{Cause, Clue, Clues, Step, causes, otherwise, range, swing_h};
pub use learn::{
    Candidate, Effect, Figure, LEAST_DAYS, LEAST_STRETCHES, Learning, Sensor, Suspect, Verdict, learn,
};
pub use log::{Decided, Log, Placed};
pub use pairs::{Curve, Day, Left, Pair, Paired, Why, ZONE_FACTORS, pairs};
pub use scores::{Class, Misfit, Row, Score, Scores, scores};

pub use crate::site::{Learned, WINDOW_DAYS};

/// How the figures are made: told with every answer, and written down with every decision.
pub const METHOD: &str = "point-sink withdrawal (Bohan and Grace 1973, with the withdrawal angle and a factor where surface or bed bounds the zone), samples as measured, levelled density; 10-90 % of seeded perturbed cases";
