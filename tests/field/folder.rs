//! The folder of measurements and its files.
#![expect(clippy::unwrap_used, reason = "helpers of tests, outside a test function")]

use std::io::Write;
use std::path::{Path, PathBuf};

use gatemix::problem::Problem;
use serde::de::DeserializeOwned;

/// The folder, or a word on the error stream that `test` was not run. A variable that names no folder is a
/// mistake and fails.
pub(crate) fn folder(test: &str) -> Option<PathBuf> {
    let Some(folder) = std::env::var_os("GATEMIX_FIELD").map(PathBuf::from) else {
        // straight to the stream: what a passing test prints is kept from sight
        let words = "was NOT run: the folder of field measurements is absent (set GATEMIX_FIELD to it)";
        let _ = writeln!(std::io::stderr(), "{test} {words}");
        return None;
    };
    assert!(folder.is_dir(), "GATEMIX_FIELD names no folder");
    Some(folder)
}

/// All rows of a file; their number is given so that none can go missing.
pub(crate) fn rows<T: DeserializeOwned>(folder: &Path, file: &str, count: usize) -> Vec<T> {
    let mut reader = csv::ReaderBuilder::new().comment(Some(b'#')).from_path(folder.join(file)).unwrap();
    let rows: Vec<T> = reader.deserialize().map(|row| row.unwrap()).collect();
    assert_eq!(rows.len(), count, "rows of {file}");
    rows
}

/// What a check returned, or a failed test that prints every problem it found.
pub(crate) fn sound<T>(checked: Option<T>, problems: &[Problem]) -> T {
    checked.unwrap_or_else(|| {
        panic!("{}", problems.iter().map(ToString::to_string).collect::<Vec<_>>().join("\n"))
    })
}
