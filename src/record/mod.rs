//! The record: what was decided, how it turned out against the gauge, and what can be learned from it.
//!
//! Methods: `docs/methods.md`, section 9.
