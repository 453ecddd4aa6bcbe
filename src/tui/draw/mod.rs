//! Pictures: pure drawing of plain data into a buffer; nothing here knows the model.

pub mod gauge;
mod pen;
pub mod trade;
