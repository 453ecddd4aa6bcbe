//! The screens. A key becomes a message, a message changes the model, the model is drawn.

pub mod draw;
mod look;

pub use look::{Look, Role, Symbols, Theme};
