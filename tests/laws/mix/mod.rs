//! Laws of a mix: order, balance, wells, leaks, overlaps, the band, limits and standings.

mod balance;
mod band;
mod checks;
mod gain;
mod judging;
mod leaks;
mod learned;
mod limits;
mod order;
mod overlaps;
mod rules;
pub(crate) mod sites;
mod wells;
