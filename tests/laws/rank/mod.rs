//! Laws of the ranking: against every mix tried one by one, and of its own.

mod brute;
mod dice;
mod limits;
mod mixes;
mod parts;
mod sites;
