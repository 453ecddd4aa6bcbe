//! The log of a site folder.

use std::path::PathBuf;

use crate::files::log::{LOG_FILE, ReadLog, read};
use crate::problem::{Problem, Weight};

use super::{Folder, Root};

impl Folder {
    /// Where the log of the site is, or is to be; `None` for a site inside the binary.
    pub fn log_path(&self) -> Option<PathBuf> {
        match &self.root {
            Root::Disk(root) => Some(root.join(LOG_FILE)),
            Root::Inside(_) => None,
        }
    }

    /// The log of the site as it is now; empty where there is none. What keeps it from being read is said in it.
    pub fn log(&self) -> ReadLog {
        self.log_path().map_or_else(ReadLog::default, |path| {
            read(&path).unwrap_or_else(|problem| {
                // answers go on without it, and say so
                let words = format!("the log is passed over: {}", problem.words);
                let passed = Problem { weight: Weight::Flag, words, ..problem };
                ReadLog { problems: vec![passed], ..ReadLog::default() }
            })
        })
    }
}
