//! How far a long task is, as a percentage on one line of the terminal.

use std::io::{IsTerminal, Write, stderr};
use std::ops::ControlFlow;
use std::sync::atomic::{AtomicU8, Ordering};
use std::time::{Duration, Instant};

/// A task shorter than this shows nothing (choice: what still feels at once).
const AT_ONCE: Duration = Duration::from_millis(200);

/// The percentage shown last. In a pipe nothing is shown.
pub(super) struct Progress {
    begun: Instant,
    percent: AtomicU8,
    terminal: bool,
}

impl Progress {
    pub(super) fn on_terminal() -> Self {
        Self { begun: Instant::now(), percent: AtomicU8::new(0), terminal: stderr().is_terminal() }
    }

    /// Tells the share done, 0 to 1; never asks to stop.
    #[expect(clippy::cast_possible_truncation, clippy::cast_sign_loss, reason = "held within 0 to 100")]
    pub(super) fn tell(&self, done: f64) -> ControlFlow<()> {
        if self.terminal && self.begun.elapsed() > AT_ONCE {
            let percent = (100.0 * done).clamp(0.0, 100.0) as u8;
            if self.percent.fetch_max(percent, Ordering::Relaxed) < percent {
                // what cannot be shown is no reason to stop
                _ = write!(stderr(), "\r{percent:>3} %");
            }
        }
        ControlFlow::Continue(())
    }
}

/// Nothing of it stays on the line.
impl Drop for Progress {
    fn drop(&mut self) {
        if self.percent.load(Ordering::Relaxed) > 0 {
            _ = write!(stderr(), "\r     \r");
        }
    }
}
