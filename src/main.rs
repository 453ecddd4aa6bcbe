//! The gatemix command.
fn main() {}
