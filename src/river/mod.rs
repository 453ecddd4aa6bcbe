//! The water's way down the river: travel, warming, side streams, oxygen, and the way back from a point to the dam.
//!
//! Methods: `docs/methods.md`, section 6.

mod afterbay;
mod conditions;
mod course;
mod figures;
mod legs;
mod link;
mod run;
mod sky;
mod slices;
mod stream;
mod water;

pub use conditions::Conditions;
pub use course::{AtPoint, Course, Part, Place, course};
pub use figures::Figures;
pub use link::{Curve, Link, links};
pub use water::HEAT_J_M3_C;
