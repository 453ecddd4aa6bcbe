//! Pictures: pure drawing of plain data into a buffer; nothing here knows the model.

mod boxed;
pub mod along;
pub mod column;
pub mod gauge;
mod pen;
pub mod trade;

pub use boxed::boxed;
