//! Reading and writing of disk: the only part of the program that touches files.
//!
//! Every reader takes hostile bytes without panic, reads a bounded amount, and says what is wrong, on
//! which line, and what to do about it.

pub mod atomic;
pub mod cast;
pub mod cursor;
pub mod folder;
mod lines;
pub mod log;
pub mod plan;
pub mod schedule;
pub mod settings;
pub mod site;
pub mod station;
pub mod table;
pub mod template;
pub mod text;
pub mod weather;
pub mod yaml;
