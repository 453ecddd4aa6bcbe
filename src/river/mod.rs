//! The water's way down the river: travel, warming, side streams, oxygen, and the way back from a point to the dam.
//!
//! Methods: `docs/methods.md`, section 6.

mod afterbay;
mod back;
mod conditions;
mod course;
mod figures;
mod hours;
mod legs;
mod link;
mod run;
mod sky;
mod slices;
mod stream;
mod water;

#[cfg(test)]
mod tests;

pub use back::{
    Figure, Floor, LeastOxygen, MOST_OXYGEN_MG_L, RELEASES_C, Wanted, Window, latest, least_oxygen, window,
};
pub use conditions::Conditions;
pub use course::{AtPoint, By, Course, Part, Place, course};
pub use figures::Figures;
pub use link::{Curve, Link, links};
pub use water::HEAT_J_M3_C;
