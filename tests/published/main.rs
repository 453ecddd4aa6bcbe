//! Values printed by others, or computed by named general-purpose libraries, against this program.
//! The numbers stand in `tests/data/*.csv`, with where they come from.

#![allow(clippy::unwrap_used, reason = "a test stops at its first surprise")]

mod beware;
mod decided;
mod gas;
mod gates;
mod layering;
mod mix;
mod observed;
mod order;
mod outcome;
mod pool;
mod rejected;
mod river;
mod scores;
mod season;
mod series;
mod series_pandas;
mod table;
mod targets;
mod today;
mod units;
mod water;
mod weather;
mod wells;
mod withdrawal;

/// How the property tests beside the published values run; cases that fail are kept with those of the laws.
fn law_config() -> proptest::test_runner::Config {
    let kept = proptest::test_runner::FileFailurePersistence::Direct("tests/laws/regressions.txt");
    proptest::test_runner::Config { failure_persistence: Some(Box::new(kept)), ..Default::default() }
}
