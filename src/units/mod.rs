//! Quantities and customary units.
//!
//! Inside the program every number is SI (m, m2, m3, m3/s, m/s, C, mg/L) and a plain `f64`; customary units
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
pub use say::{in_both, in_system};
pub use show::{System, figure, show};
pub use unit::{DAY_S, Dimension, Unit};

/// How the property tests beside the sources run; cases that fail are kept with those of the other tests.
#[cfg(test)]
pub(crate) fn law_config() -> proptest::test_runner::Config {
    let kept = proptest::test_runner::FileFailurePersistence::Direct("tests/laws/regressions.txt");
    proptest::test_runner::Config { failure_persistence: Some(Box::new(kept)), ..Default::default() }
}
