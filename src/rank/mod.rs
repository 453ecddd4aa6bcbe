//! Every feasible mix judged, rejected with reasons, ordered.

mod choices;
mod curve;
mod goal;
mod search;

pub use curve::{Curve, Curves, Water};
pub use goal::Criterion;
pub use search::Progress;
