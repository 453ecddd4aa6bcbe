//! The water's way down the river: travel, warming, side streams, oxygen, and the way back from a point to the dam.
//!
//! Methods: `docs/methods.md`, section 6.

mod conditions;
mod course;
mod link;

pub use conditions::Conditions;
pub use course::{AtPoint, Course, Figures, Part, Place, course};
pub use link::{Curve, Link, links};
