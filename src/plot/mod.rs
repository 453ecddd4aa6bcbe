//! Arithmetic of pictures: round ticks, scales, where a value falls, curves as dots, labels that do not overlap.
//! Terminals and pages share it; the only characters here are those of the dots.

mod dots;
mod labels;
mod scale;

pub use dots::{Dots, Grain, Spot, Stroke};
pub use labels::{along, on_rows};
pub use scale::{Marks, Scale, ticks};
