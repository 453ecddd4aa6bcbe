//! A site to start from: a commented site file and a cast, in either system of units, never over files that exist.

use std::fs;
use std::path::{Path, PathBuf};

use crate::problem::Problem;
use crate::units::System;

use super::atomic;

/// What is written, below the folder: the cast first, so that a folder with a site file is whole.
fn files(system: System) -> [(&'static str, &'static str); 2] {
    let (cast, site) = match system {
        System::Us => (include_str!("template/us.csv"), include_str!("template/us.yaml")),
        System::Si => (include_str!("template/si.csv"), include_str!("template/si.yaml")),
    };
    [("profiles/example.csv", cast), ("site.yaml", site)]
}

/// Writes the template into a folder, which is made where there is none, and tells the files.
///
/// # Errors
/// `exists` where a file of one of these names is there, `cannot-write` naming what cannot be written. Nothing is
/// left behind then but empty folders.
pub fn write(folder: &Path, system: System) -> Result<Vec<PathBuf>, Problem> {
    let files = files(system).map(|(name, text)| (folder.join(name), text));
    if let Some((path, _)) = files.iter().find(|(path, _)| path.symlink_metadata().is_ok()) {
        return Err(exists(path));
    }
    let mut written: Vec<PathBuf> = Vec::new();
    for (path, text) in &files {
        let made = path.parent().map_or(Ok(()), atomic::folder);
        if let Err(problem) = made.and_then(|()| atomic::create(path, text.as_bytes())) {
            // they are our own: `create` takes no name that was there
            for path in written {
                _ = fs::remove_file(path);
            }
            return Err(problem);
        }
        written.push(path.clone());
    }
    Ok(written)
}

fn exists(path: &Path) -> Problem {
    let words = "this file is there already; nothing was written";
    Problem::refused("exists", words, "name another folder").in_file(path.display().to_string())
}
