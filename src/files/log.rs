//! The log of a site: a line of JSON for each decision and event, only ever appended to.
//!
//! A line counts once it is on the disk; whoever is stopped before leaves at most a torn line, which the next writer
//! closes and every reader tells.

use std::fs::{File, OpenOptions, TryLockError};
use std::io::{self, Read, Seek, SeekFrom, Write};
use std::path::{Path, PathBuf};
#[cfg(unix)]
use std::sync::Arc;
use std::thread::sleep;
use std::time::{Duration, Instant};

use serde_json::Value;

use crate::problem::Problem;
use crate::record::line::Line;
use crate::record::{Log, Placed};

use super::atomic::sync_folder;

/// The file of a site that holds its log.
pub const LOG_FILE: &str = "log.jsonl";
/// Largest log read, bytes (choice: a line is some kilobytes, so this is tens of thousands of decisions).
pub const LOG_CAP: u64 = 256 << 20;
/// How long another writer is waited for (choice: one needs milliseconds).
const PATIENCE: Duration = Duration::from_secs(3);
/// How long between two tries (choice).
const BETWEEN: Duration = Duration::from_millis(1);

/// A log as read.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct ReadLog {
    /// What of it can be read.
    pub log: Log,
    /// Lines that cannot, and everything else said of it.
    pub problems: Vec<Problem>,
    /// Its bytes; empty where there is no log.
    pub bytes: Vec<u8>,
}

/// What was appended.
#[derive(Debug, Clone, PartialEq)]
pub struct Appended {
    /// What was written, with its number.
    pub line: Line,
    /// Where it is.
    pub path: PathBuf,
    /// What was mended on the way.
    pub mended: Option<Problem>,
}

/// Reads a log; one that is not there is empty.
///
/// # Errors
/// It is no ordinary file, is too large, or the machine cannot read it.
pub fn read(path: &Path) -> Result<ReadLog, Problem> {
    match File::open(path) {
        Err(error) if error.kind() == io::ErrorKind::NotFound => Ok(ReadLog::default()),
        Err(error) => Err(unreadable(path, &error)),
        Ok(mut file) => Ok(read_from(path, bytes(path, &mut file)?)),
    }
}

/// Appends one line: locked against other writers, written at once, and on the disk before this returns. `make` is
/// told the log as it stands, and makes the line of its next number.
///
/// # Errors
/// The log cannot be locked, read or written; nothing is left behind then, and nothing lost. What `make` says.
pub fn append(path: &Path, make: &dyn Fn(&Log) -> Result<Line, Problem>) -> Result<Appended, Problem> {
    outlive_size_limit();
    let is_new = !path.exists();
    let mut file = OpenOptions::new()
        .read(true)
        .append(true)
        .create(true)
        .open(path)
        .map_err(|error| unwritable(path, &error))?;
    lock(path, &file)?;
    let there = bytes(path, &mut file)?;
    let torn = there.last().is_some_and(|&byte| byte != b'\n');
    let size = there.len() as u64;
    let known = read_from(path, there);
    let line = make(&known.log)?;
    let json = serde_json::to_string(&line).map_err(|error| {
        Problem::refused("cannot-write", format!("the line cannot be told: {error}"), "")
            .in_file(path.display().to_string())
    })?;
    let mut text = String::with_capacity(json.len() + 2);
    // what another left unfinished becomes a line of its own, which every reader tells
    text.push_str(if torn { "\n" } else { "" });
    text.push_str(&json);
    text.push('\n');
    if let Err(error) = file.write_all(text.as_bytes()).and_then(|()| file.sync_all()) {
        // nobody was told of these bytes, and the lock is still ours
        _ = file.set_len(size).and_then(|()| file.sync_all());
        return Err(unwritable(path, &error));
    }
    if is_new {
        sync_folder(path);
    }
    let mended = torn.then(|| {
        let words = "the last line had no end: whoever wrote it was stopped; it was closed and left as it is";
        let line = known.problems.iter().filter_map(|p| p.place.line).max().unwrap_or(1);
        Problem::flag("log-torn", words, "see whether that decision has to be logged again")
            .in_file(path.display().to_string())
            .on_line(line)
    });
    Ok(Appended { line, path: path.to_owned(), mended })
}

/// A limit of the size of files then fails the write, and does not end the program.
fn outlive_size_limit() {
    #[cfg(unix)]
    {
        // where it cannot be heeded the write is cut off all the same, and the next reader tells
        _ = signal_hook::flag::register(signal_hook::consts::SIGXFSZ, Arc::default());
    }
}

/// Locks against other writers, with some patience; closing the file lets go.
fn lock(path: &Path, file: &File) -> Result<(), Problem> {
    let begun = Instant::now();
    loop {
        match file.try_lock() {
            Ok(()) => return Ok(()),
            Err(TryLockError::WouldBlock) if begun.elapsed() < PATIENCE => sleep(BETWEEN),
            Err(TryLockError::WouldBlock) => {
                let words = "another program holds the log; nothing was written";
                let cure = "close what else has it open, then try again";
                return Err(Problem::refused("log-locked", words, cure).in_file(path.display().to_string()));
            }
            Err(TryLockError::Error(error)) => return Err(unwritable(path, &error)),
        }
    }
}

/// The bytes of a log from its beginning.
fn bytes(path: &Path, file: &mut File) -> Result<Vec<u8>, Problem> {
    let about = file.metadata().map_err(|error| unreadable(path, &error))?;
    let named = |problem: Problem| problem.in_file(path.display().to_string());
    if !about.is_file() {
        let words = "this is a folder, a pipe or a device, not a log";
        return Err(named(Problem::refused("log-unreadable", words, "move it away")));
    }
    if about.len() > LOG_CAP {
        let words = format!("the log is larger than {} MB", LOG_CAP >> 20);
        return Err(named(Problem::refused(
            "log-unreadable",
            words,
            "keep it under another name and begin a new one",
        )));
    }
    let mut bytes = Vec::new();
    let read = file.seek(SeekFrom::Start(0)).and_then(|_| file.take(LOG_CAP).read_to_end(&mut bytes));
    read.map_err(|error| unreadable(path, &error))?;
    Ok(bytes)
}

/// The lines of a log from its bytes; what cannot be read is told and left.
pub fn read_from(path: &Path, bytes: Vec<u8>) -> ReadLog {
    let mut problems = Vec::new();
    let mut lines = Vec::new();
    let ends = bytes.last().is_none_or(|&byte| byte == b'\n');
    let count = bytes.split(|&byte| byte == b'\n').count();
    for (at, text) in bytes.split(|&byte| byte == b'\n').enumerate() {
        let number = at + 1;
        if text.iter().all(u8::is_ascii_whitespace) {
            continue;
        }
        if number == count && !ends && one(text).is_ok() {
            let words =
                "the last line has no end: whoever wrote it was stopped before it was confirmed; it counts";
            problems
                .push(Problem::flag("log-unended", words, "amend it where it should not").on_line(number));
        }
        match one(text) {
            Ok(line) => lines.push(Placed { number, line }),
            Err(problem) => problems.push(problem.on_line(number)),
        }
    }
    let (log, said) = Log::of(lines);
    problems.extend(said);
    problems.sort_by_key(|problem| problem.place.line);
    let problems = problems.into_iter().map(|p| p.in_file(path.display().to_string())).collect();
    ReadLog { log, problems, bytes }
}

fn one(text: &[u8]) -> Result<Line, Problem> {
    let error = match serde_json::from_slice::<Line>(text) {
        Ok(line) => return Ok(line),
        Err(error) => error,
    };
    match serde_json::from_slice::<Value>(text) {
        Ok(Value::Object(told))
            if told.get("line").and_then(Value::as_str).is_some_and(|kind| !KINDS.contains(&kind)) =>
        {
            Err(Problem::note(
                "log-newer",
                "a line of a kind that this version does not know: kept, not used",
            ))
        }
        Ok(_) => {
            Err(Problem::flag("log-line", format!("the line cannot be used: {error}"), "it is left as it is"))
        }
        Err(ends) if ends.is_eof() && text.starts_with(b"{") => Err(torn()),
        Err(_) => {
            let words = "the line is no JSON, so nothing in this log";
            Err(Problem::flag("log-line", words, "take it out, or mend it; it is left as it is"))
        }
    }
}

/// The kinds of line that are known, as they are written.
const KINDS: [&str; 2] = ["decision", "event"];

fn torn() -> Problem {
    let cure = "see whether that decision has to be logged again; the line is left as it is";
    Problem::flag("log-torn", "the line is torn: whoever wrote it was stopped", cure)
}

fn unreadable(path: &Path, error: &io::Error) -> Problem {
    let cure = "check that the file may be read";
    Problem::refused("log-unreadable", format!("cannot be read: {error}"), cure)
        .in_file(path.display().to_string())
}

fn unwritable(path: &Path, error: &io::Error) -> Problem {
    let cure = "check that the folder exists, has room and may be written to; nothing was lost";
    Problem::refused("cannot-write", format!("cannot be written: {error}; nothing was logged"), cure)
        .in_file(path.display().to_string())
}
