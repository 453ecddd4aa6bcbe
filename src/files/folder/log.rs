//! The log of a site folder.

use std::path::{Path, PathBuf};

use crate::files::log::{LOG_FILE, ReadLog, read, read_from};
use crate::problem::{Problem, Weight};

use super::inside::bytes_inside;
use super::{Folder, Root};

impl Folder {
    /// Where the log of the site is written; `None` for a site inside the binary, whose log is only read.
    pub fn log_path(&self) -> Option<PathBuf> {
        match &self.root {
            Root::Disk(root) => Some(root.join(LOG_FILE)),
            Root::Inside(_) => None,
        }
    }

    /// The log of the site as it is now; empty where there is none. What keeps it from being read is said in it.
    pub fn log(&self) -> ReadLog {
        let path = match &self.root {
            Root::Disk(root) => root.join(LOG_FILE),
            Root::Inside(name) => {
                let file = format!("{name}/{LOG_FILE}");
                return bytes_inside(&file)
                    .map_or_else(ReadLog::default, |bytes| read_from(Path::new(&file), bytes.to_vec()));
            }
        };
        read(&path).unwrap_or_else(|problem| {
            // answers go on without it, and say so
            let words = format!("the log is passed over: {}", problem.words);
            let passed = Problem { weight: Weight::Flag, words, ..problem };
            ReadLog { problems: vec![passed], ..ReadLog::default() }
        })
    }
}
