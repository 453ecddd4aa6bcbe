//! gatemix: which gates, how far open, so that the river below a dam gets the water it needs.

pub mod cli;
pub mod files;
pub mod intake;
pub mod mix;
pub mod order;
pub mod plot;
pub mod problem;
pub mod profile;
pub mod rank;
pub mod record;
pub mod report;
pub mod river;
pub mod season;
pub mod series;
pub mod site;
pub mod target;
pub mod tasks;
pub mod tui;
pub mod units;
pub mod water;
pub mod weather;
pub mod withdrawal;
