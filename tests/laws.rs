//! Laws that hold whatever the water: limits, symmetry, conservation, continuity.

#![allow(
    clippy::unwrap_used,
    clippy::float_cmp,
    reason = "a test stops at its first surprise; some laws are exact"
)]

#[path = "laws/causes.rs"]
mod causes;
#[path = "laws/columns.rs"]
mod columns;
#[path = "laws/continuity.rs"]
mod continuity;
#[path = "laws/crest.rs"]
mod crest;
#[path = "laws/learning/mod.rs"]
mod learning;
#[path = "laws/levelling.rs"]
mod levelling;
#[path = "laws/mix/mod.rs"]
mod mix;
#[path = "laws/order/mod.rs"]
mod order;
#[path = "laws/pages/mod.rs"]
mod pages;
#[path = "laws/rank/mod.rs"]
mod rank;
#[path = "laws/river/mod.rs"]
mod river;
#[path = "laws/season/mod.rs"]
mod season;
#[path = "laws/series.rs"]
mod series;
#[path = "laws/shape.rs"]
mod shape;
#[path = "laws/skies.rs"]
mod skies;
#[path = "laws/thrift/mod.rs"]
mod thrift;
#[path = "laws/weather.rs"]
mod weather;
#[path = "laws/wells/mod.rs"]
mod wells;
#[path = "laws/withdrawal.rs"]
mod withdrawal;
