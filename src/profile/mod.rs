//! The profile: one cast held against its site.

mod column;
mod levelled;
mod slices;

pub use column::{Column, OXYGEN_CARRY_M, OXYGEN_LOW_MG_L, OxygenSample, Reading, Sample, Source, Widths};
pub use levelled::levelled;
pub use slices::Slices;
