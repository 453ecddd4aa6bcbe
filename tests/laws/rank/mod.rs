//! Laws of the ranking: against every mix tried one by one, and of its own.

mod brute;
mod curves;
mod dice;
mod laws;
mod limits;
mod mixes;
mod parts;
mod scenarios;
mod sites;
mod skips;
