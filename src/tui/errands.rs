//! Small things done on disk, one after the other on a thread of their own: a slow disk must not hold the screens.

use std::ops::ControlFlow;
use std::panic::{AssertUnwindSafe, catch_unwind};
use std::sync::mpsc::{Sender, channel};
use std::thread::{self, JoinHandle};
use std::time::{Duration, Instant};

use chrono::{DateTime, Utc};

use crate::files::atomic;
use crate::problem::Problem;
use crate::tasks::log::{decide, event};

use super::model::{Entry, EntryOf, Saved};
use super::update::Event;

/// Longest wait at the end for what is still to be written, and how often it is looked at (choices).
const LAST: Duration = Duration::from_secs(2);
const LOOK: Duration = Duration::from_millis(5);

/// Writes something to the log.
pub fn log(entry: &Entry, clock: DateTime<Utc>) -> Event {
    let context = &entry.context;
    let logged = match &entry.what {
        EntryOf::Decision(gates, asked) => {
            decide(context, &EntryOf::decision(gates, asked), clock, &|_| ControlFlow::Continue(()))
        }
        EntryOf::Event(asked) => event(context, asked, clock),
    };
    Event::Logged(logged.map(Box::new))
}

/// Saves something in a file, whole or not at all; one that is there gives way only where it is to.
pub fn save(saved: Saved) -> Event {
    let made = saved.path.parent().map_or(Ok(()), atomic::folder);
    let written = made.and_then(|()| {
        let bytes = saved.text.as_bytes();
        if saved.replace { atomic::write(&saved.path, bytes) } else { atomic::create(&saved.path, bytes) }
    });
    Event::Saved(Box::new(saved), written.err())
}

type Errand = Box<dyn FnOnce() -> Option<Event> + Send>;

/// The thread; when dropped it finishes what was asked of it, if that takes no longer than a wait at the end may.
pub(super) struct Errands {
    queue: Option<Sender<Errand>>,
    thread: JoinHandle<()>,
}

impl Errands {
    /// Starts the thread; what is to be told goes to `send`.
    pub(super) fn start(send: impl Fn(Event) + Send + 'static) -> Self {
        let (queue, errands) = channel::<Errand>();
        let thread = thread::spawn(move || {
            for errand in errands {
                let told = catch_unwind(AssertUnwindSafe(errand)).unwrap_or_else(|_| {
                    let words = "this could not be done: a fault of the program";
                    Some(Event::Said(Problem::refused("fault", words, "please report it")))
                });
                if let Some(event) = told {
                    send(event);
                }
            }
        });
        Self { queue: Some(queue), thread }
    }

    /// Does something after what was asked before.
    pub(super) fn run(&self, errand: impl FnOnce() -> Option<Event> + Send + 'static) {
        if let Some(queue) = &self.queue {
            // the thread lives as long as the queue
            _ = queue.send(Box::new(errand));
        }
    }
}

impl Drop for Errands {
    fn drop(&mut self) {
        self.queue = None;
        let begun = Instant::now();
        while !self.thread.is_finished() && begun.elapsed() < LAST {
            thread::sleep(LOOK);
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use std::sync::mpsc::RecvTimeoutError;

    #[test]
    fn scenario_errands_keep_their_order_outlive_a_fault_and_are_finished_at_the_end() {
        let (send, told) = channel();
        let errands = Errands::start(move |event| _ = send.send(format!("{event:?}")));
        let said = |word: &'static str| {
            move || {
                thread::sleep(LOOK);
                Some(Event::Said(Problem::note("test", word)))
            }
        };
        errands.run(said("first"));
        errands.run(|| None);
        errands.run(|| panic!("a fault, as the test wants it"));
        errands.run(said("last"));
        drop(errands);
        let next = || told.recv_timeout(Duration::ZERO);
        for word in ["first", "fault", "last"] {
            let event = next().unwrap();
            assert!(event.contains(word), "{event}");
        }
        assert_eq!(next(), Err(RecvTimeoutError::Disconnected));
    }
}
