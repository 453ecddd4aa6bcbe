//! Targets: rules the user enters, valid over a span of dates, and how a release stands against them.
//!
//! Methods: `docs/methods.md`, section 7.

mod rule;
mod span;
mod standing;
mod statistic;
mod today;

pub use rule::{DAM, Reference, Target};
pub use span::{Span, YearDay};
pub use standing::Standing;
pub use statistic::{OxygenFigure, OxygenStatistic, Statistic};
pub use today::{Air, Basis, Count, Figure, Known, Today, today};
