//! gatemix: which gates, how far open, so that the river below a dam gets the water it needs.

pub mod files;
pub mod problem;
