//! Strategies of a season: thrift against every way to set the gates, and against the best of each day.

mod brute;
mod called;
mod closed;
mod many;
mod planned;
mod strategies;
pub(crate) mod tiny;
