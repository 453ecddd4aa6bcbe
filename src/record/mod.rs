//! The record: what was decided, how it turned out against the gauge, and what can be learned from it.
//!
//! Methods: `docs/methods.md`, section 9.

mod learn;
mod pairs;
mod scores;

pub use learn::{
    Candidate, Effect, Figure, LEAST_DAYS, LEAST_STRETCHES, Learned, Learning, Sensor, Suspect, Verdict,
    WINDOW_DAYS, learn,
};
pub use pairs::{Curve, Day, Left, Pair, Paired, Why, ZONE_FACTORS, pairs};
pub use scores::{Class, Misfit, Row, Score, Scores, scores};
