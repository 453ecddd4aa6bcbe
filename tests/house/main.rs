//! The house: levels, map, docs and README against the sources they speak of.

#![allow(clippy::unwrap_used, reason = "a test stops at its first surprise")]

mod docs;
mod levels;
mod readme;

use std::fs;
use std::path::{Path, PathBuf};

/// The root of the project.
fn root() -> PathBuf {
    PathBuf::from(env!("CARGO_MANIFEST_DIR"))
}

fn read(path: &str) -> String {
    fs::read_to_string(root().join(path)).unwrap()
}

/// Every Rust file below a folder, with its path from the root, in order.
fn sources(below: &str) -> Vec<(String, String)> {
    fn gather(dir: &Path, out: &mut Vec<PathBuf>) {
        for entry in fs::read_dir(dir).unwrap() {
            let path = entry.unwrap().path();
            if path.is_dir() {
                gather(&path, out);
            } else if path.extension().is_some_and(|e| e == "rs") {
                out.push(path);
            }
        }
    }
    let mut paths = Vec::new();
    gather(&root().join(below), &mut paths);
    paths.sort();
    paths
        .into_iter()
        .map(|p| {
            let name = p.strip_prefix(root()).unwrap().display().to_string();
            let text = fs::read_to_string(&p).unwrap();
            (name, text)
        })
        .collect()
}
