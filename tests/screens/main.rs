//! The screens: whole screens as text, a storm of keys, the same numbers as the command, a real terminal.

#![allow(clippy::unwrap_used, reason = "a test stops at its first surprise")]

mod ahead;
mod arriving;
mod asking;
mod coming;
mod downstream;
mod driver;
mod held;
mod kept;
mod keys;
mod logged;
mod noted;
mod numbers;
mod pooled;
mod prices;
#[cfg(unix)]
mod pty;
mod ranked;
mod record;
mod screens;
mod seasons;
mod sites;
mod storm;
#[cfg(unix)]
mod terminal;
mod turned;
