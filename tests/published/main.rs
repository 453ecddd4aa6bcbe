//! Values printed by others, or computed by named general-purpose libraries, against this program.
//! The numbers stand in `tests/data/*.csv`, with where they come from.

#![allow(clippy::unwrap_used, reason = "a test stops at its first surprise")]

mod layering;
mod mix;
mod pool;
mod table;
mod targets;
mod units;
mod water;
mod withdrawal;
