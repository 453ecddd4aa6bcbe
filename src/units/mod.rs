//! Quantities and customary units.
//!
//! Inside the program every number is SI (m, m2, m3, m3/s, C, mg/L) and a plain `f64`; customary units
//! exist only where text comes in ([`parse`], [`Folder`]) and goes out ([`System`], [`show`]). A sentence
//! carries its quantities unshown ([`say`]) until its reader's system is known ([`in_system`]).

mod datum;
mod folder;
mod parse;
pub mod say;
mod show;
mod unit;

#[cfg(test)]
mod tests;

pub use datum::{Datum, DatumError};
pub use folder::Folder;
pub use parse::{UnitError, parse};
pub use say::in_system;
pub use show::{System, figure, show};
pub use unit::{Dimension, Unit};
