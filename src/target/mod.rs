//! Targets: rules the user enters, valid over a span of dates, and how a release stands against them.
//!
//! Methods: `docs/methods.md`, section 7.

mod observed;
mod rule;
mod span;
mod standing;
mod statistic;
mod tally;
mod today;

pub use observed::{Observed, observed};
pub use rule::{DAM, Reference, Target};
pub use span::{Span, YearDay};
pub use standing::Standing;
pub use statistic::{OxygenFigure, OxygenStatistic, Statistic};
pub use tally::{Held, Mark, Tally};
pub use today::{Air, Basis, Count, Figure, Known, Today, today};
