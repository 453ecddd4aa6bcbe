//! Values printed by others, or computed by named general-purpose libraries, against this program.
//! The numbers stand in `tests/data/*.csv`, with where they come from.

mod layering;
mod pool;
mod table;
mod targets;
mod units;
mod water;
mod withdrawal;
