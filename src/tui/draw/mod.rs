//! Pictures: pure drawing of plain data into a buffer; nothing here knows the model.

mod boxed;
pub mod column;

pub use boxed::boxed;
