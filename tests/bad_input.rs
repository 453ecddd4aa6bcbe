//! What the readers do with input that is wrong, hostile or merely odd.

#![expect(clippy::unwrap_used, reason = "helpers of tests stand outside test functions")]

#[path = "bad_input/aeration.rs"]
mod aeration;
#[path = "bad_input/around.rs"]
mod around;
#[path = "bad_input/atomic.rs"]
mod atomic;
#[path = "bad_input/cursor.rs"]
mod cursor;
#[path = "bad_input/docs.rs"]
mod docs;
#[path = "bad_input/found.rs"]
mod found;
#[path = "bad_input/laws.rs"]
mod laws;
#[path = "bad_input/learned.rs"]
mod learned;
#[path = "bad_input/limits.rs"]
mod limits;
#[path = "bad_input/mutated.rs"]
mod mutated;
#[path = "bad_input/order_texts.rs"]
mod order_texts;
#[path = "bad_input/plans.rs"]
mod plans;
#[path = "bad_input/river.rs"]
mod river;
#[path = "bad_input/schedules.rs"]
mod schedules;
#[path = "bad_input/season.rs"]
mod season;
#[path = "bad_input/settings.rs"]
mod settings;
#[path = "bad_input/site.rs"]
mod site;
#[path = "bad_input/station.rs"]
mod station;
#[path = "bad_input/table.rs"]
mod table;
#[path = "bad_input/targets.rs"]
mod targets;
#[path = "bad_input/text.rs"]
mod text;
#[path = "bad_input/weather.rs"]
mod weather;
#[path = "bad_input/yaml.rs"]
mod yaml;

use gatemix::problem::Problem;

/// Every problem as the user reads it.
fn said(problems: &[Problem]) -> Vec<String> {
    problems.iter().map(ToString::to_string).collect()
}
