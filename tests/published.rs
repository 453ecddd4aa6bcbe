//! Published values.

#[path = "published/withdrawal.rs"]
mod withdrawal;
