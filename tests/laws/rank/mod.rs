//! Laws of the ranking: against every mix tried one by one, and of its own.

mod afar;
mod brute;
mod curves;
pub(crate) mod dice;
mod laws;
mod limits;
mod mixes;
mod parts;
mod rivers;
mod scenarios;
mod sites;
mod skips;
