//! The built program in a pseudo-terminal: keys go in, bytes come out and are shown as a terminal would.
//! Everything waits for what is to be seen, with a limit; nothing sleeps.

#![allow(dead_code, reason = "the tests and the bench each use a part")]

use std::io::{Read, Write};
use std::num::NonZeroU16;
use std::process::Command;
use std::sync::mpsc::{Receiver, RecvTimeoutError, channel};
use std::thread;
use std::time::{Duration, Instant};

use expectrl::process::Process;
use expectrl::process::unix::{PtyStream, UnixProcess};
use vt100::{Parser, Screen};

/// Longest wait for what must come.
pub(crate) const LIMIT: Duration = Duration::from_secs(20);

/// A program in a terminal.
pub(crate) struct Terminal {
    process: UnixProcess,
    keys: PtyStream,
    output: Receiver<Vec<u8>>,
    parser: Parser,
    /// Everything it wrote.
    pub(crate) bytes: Vec<u8>,
}

fn cells(count: u16) -> NonZeroU16 {
    NonZeroU16::new(count).unwrap_or(NonZeroU16::MIN)
}

impl Terminal {
    /// Starts a program in a terminal of so many columns and rows.
    pub(crate) fn start(command: Command, size: (u16, u16)) -> Self {
        let mut process = UnixProcess::spawn_command(command).unwrap();
        process.set_window_size(size.0, size.1).unwrap();
        let (mut reader, keys) = (process.open_stream().unwrap(), process.open_stream().unwrap());
        let (send, output) = channel();
        thread::spawn(move || {
            let mut buffer = vec![0; 65536];
            while let Ok(count @ 1..) = reader.read(&mut buffer) {
                if send.send(buffer[..count].to_vec()).is_err() {
                    return;
                }
            }
        });
        Self {
            process,
            keys,
            output,
            parser: Parser::new(cells(size.1), cells(size.0), 0),
            bytes: Vec::new(),
        }
    }

    /// Sends bytes as the keyboard would.
    pub(crate) fn send(&mut self, bytes: &str) {
        self.keys.write_all(bytes.as_bytes()).unwrap();
    }

    /// Columns and rows change.
    pub(crate) fn resize(&mut self, size: (u16, u16)) {
        self.process.set_window_size(size.0, size.1).unwrap();
        self.parser.set_size(cells(size.1), cells(size.0));
    }

    pub(crate) fn pid(&self) -> i32 {
        self.process.pid().as_raw()
    }

    pub(crate) fn screen(&self) -> &Screen {
        self.parser.screen()
    }

    pub(crate) fn text(&self) -> String {
        self.parser.screen().contents()
    }

    /// Takes in what comes next, if anything does before the end of the wait.
    fn take(&mut self, wait: Duration) -> Result<(), RecvTimeoutError> {
        let bytes = self.output.recv_timeout(wait)?;
        self.parser.process(&bytes);
        self.bytes.extend(bytes);
        Ok(())
    }

    /// Waits until the screen is as wanted.
    pub(crate) fn wait(&mut self, what: &str, wanted: impl Fn(&Screen) -> bool) {
        let begun = Instant::now();
        while !wanted(self.parser.screen()) {
            let left = LIMIT.saturating_sub(begun.elapsed());
            if let Err(error) = self.take(left) {
                panic!("{what} did not come ({error}):\n{}", self.text());
            }
        }
    }

    /// Waits for a text.
    pub(crate) fn wait_for(&mut self, piece: &str) {
        self.wait(piece, |screen| screen.contents().contains(piece));
    }

    /// Takes in what is there already.
    pub(crate) fn drain(&mut self) {
        while self.take(Duration::ZERO).is_ok() {}
    }

    /// Waits until more is written than so many bytes.
    pub(crate) fn wait_for_bytes(&mut self, written: usize) {
        let begun = Instant::now();
        while self.bytes.len() <= written {
            let left = LIMIT.saturating_sub(begun.elapsed());
            assert!(self.take(left).is_ok(), "nothing was drawn:\n{}", self.text());
        }
    }

    /// Sends bytes again and again until the program is gone.
    pub(crate) fn send_until_end(&mut self, bytes: &str) {
        let begun = Instant::now();
        while begun.elapsed() < LIMIT {
            self.send(bytes);
            let pushed = Instant::now();
            while pushed.elapsed() < LIMIT / 10 {
                if let Err(RecvTimeoutError::Disconnected) = self.take(LIMIT / 10) {
                    return;
                }
                if !self.screen().alternate_screen() {
                    return;
                }
            }
        }
    }

    /// Waits until the program is gone.
    pub(crate) fn wait_for_end(&mut self) {
        let begun = Instant::now();
        loop {
            match self.take(LIMIT.saturating_sub(begun.elapsed())) {
                Ok(()) => {}
                Err(RecvTimeoutError::Disconnected) => return,
                Err(RecvTimeoutError::Timeout) => panic!("it did not end:\n{}", self.text()),
            }
        }
    }
}

impl Drop for Terminal {
    /// Whatever a failed test leaves running ends with it.
    fn drop(&mut self) {
        _ = self.process.exit(true);
    }
}
