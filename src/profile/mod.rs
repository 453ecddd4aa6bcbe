//! The profile: one cast held against its site.

mod cast;
mod column;
mod finder;
mod layering;
mod levelled;
mod moved;
mod pressure;
mod quality;
mod raw;
mod rows;
mod samples;
mod slices;
mod stretch;

pub use cast::Profile;
pub use column::{Column, OXYGEN_LOW_MG_L, Reading, Source, Widths};
pub use layering::{
    LAYERED_C, Layering, Thermocline, buoyancy_s2, colder_m3, greatest_buoyancy, mixed_base_m,
    schmidt_stability_j_m2, thermocline,
};
pub use levelled::levelled;
pub(crate) use pressure::HEAD_KG_M3;
pub use raw::{Raw, RawRow};
pub use rows::{ABOVE_SURFACE_M, WATER_C};
pub use samples::{OXYGEN_CARRY_M, OxygenSample, Sample};
pub use slices::Slices;
pub use stretch::Stretch;
