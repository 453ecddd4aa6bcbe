//! How a run ends: its exit code, and the words of a failure.

use std::io::Write;
use std::process::ExitCode;

use crate::problem::{Problem, harmless};
use crate::tasks::Failure;
use crate::tasks::log::NotLogged;

/// How a run ended.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum End {
    Answered,
    Failed,
    Usage,
    Refused,
    Missed,
}

impl From<End> for ExitCode {
    fn from(end: End) -> Self {
        Self::from(match end {
            End::Answered => 0_u8,
            End::Failed => 1,
            End::Usage => 2,
            End::Refused => 3,
            End::Missed => 4,
        })
    }
}

/// Writes the answer. A closed pipe is no error; anything else that stops the writing is.
pub(super) fn finished(bytes: &[u8], end: End, out: &mut dyn Write, err: &mut dyn Write) -> ExitCode {
    match out.write_all(bytes).and_then(|()| out.flush()) {
        Err(error) if error.kind() != std::io::ErrorKind::BrokenPipe => {
            said(&format!("gatemix: the answer cannot be written: {error}\n"), End::Failed, err)
        }
        _ => end.into(),
    }
}

/// Writes why there is none. Where even that cannot be written, the exit code is all that is left.
pub(super) fn said(words: &str, end: End, err: &mut dyn Write) -> ExitCode {
    _ = err.write_all(words.as_bytes());
    end.into()
}

/// Why there is no answer: of the command line, of the files, or of the machine.
pub(super) enum Stop {
    Task(Failure),
    Machine(Problem),
}

impl From<Failure> for Stop {
    fn from(failure: Failure) -> Self {
        Self::Task(failure)
    }
}

impl From<NotLogged> for Stop {
    fn from(failure: NotLogged) -> Self {
        match failure {
            NotLogged::Task(failure) => Self::Task(failure),
            NotLogged::Machine(problem) => Self::Machine(problem),
        }
    }
}

pub(super) fn failed(stop: &Stop) -> (String, End) {
    match stop {
        Stop::Task(Failure::Usage(words)) => (format!("gatemix: {}\n", harmless(words)), End::Usage),
        Stop::Task(Failure::Refused(problems, system)) => {
            let lines: Vec<String> = problems.iter().map(|p| p.text(*system)).collect();
            (lines.join("\n") + "\n", End::Refused)
        }
        Stop::Task(Failure::Stopped) => ("gatemix: stopped\n".to_owned(), End::Failed),
        Stop::Machine(problem) => (format!("{problem}\n"), End::Failed),
    }
}
