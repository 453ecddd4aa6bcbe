//! The profile: one cast held against its site.

mod column;
mod finder;
mod levelled;
mod samples;
mod slices;
mod stretch;

pub use column::{Column, OXYGEN_LOW_MG_L, Reading, Source, Widths};
pub use levelled::levelled;
pub use samples::{OXYGEN_CARRY_M, OxygenSample, Sample};
pub use slices::Slices;
pub use stretch::Stretch;
