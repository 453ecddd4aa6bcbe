//! Laws of the way from one setting to another: what it keeps, and that it is found wherever there is one.

mod brute;
mod kept;
mod sites;
mod states;
