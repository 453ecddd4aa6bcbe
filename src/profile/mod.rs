//! The profile: one cast held against its site.

mod cast;
mod column;
mod layering;
mod levelled;
mod moved;
mod quality;
mod slices;

pub use cast::{ABOVE_SURFACE_M, Profile, Raw, RawRow, WATER_C};
pub use column::{Column, OXYGEN_CARRY_M, OXYGEN_LOW_MG_L, OxygenSample, Reading, Sample, Source, Widths};
pub use layering::{
    Layering, Thermocline, buoyancy_s2, colder_m3, greatest_buoyancy, mixed_base_m, schmidt_stability_j_m2,
    thermocline,
};
pub use levelled::levelled;
pub use slices::Slices;
