//! gatemix: which gates, how far open, so that the river below a dam gets the water it needs.

pub mod files;
pub mod intake;
pub mod mix;
pub mod problem;
pub mod profile;
pub mod site;
pub mod target;
pub mod units;
pub mod water;
pub mod withdrawal;
