//! Results to text, JSON, CSV and written pieces, as pure functions.

pub mod annual;
mod column;
pub mod csv;
pub mod json;
pub mod note;
pub mod page;
mod pooled;
mod sentence;
pub mod text;

pub use column::{drawn_column, fitted};
pub use sentence::{caution, caution_within, days, flags_of};
