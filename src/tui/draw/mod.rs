//! Pictures: pure drawing of plain data into a buffer; nothing here knows the model.

pub mod along;
mod boxed;
pub mod column;
pub mod gauge;
pub mod past;
mod pen;
pub mod season;
pub mod through;
pub mod trade;

pub use boxed::boxed;
