//! Writing a file whole or not at all.

use std::fs::{self, File, Permissions};
use std::io::{self, Write};
use std::path::{Path, PathBuf};

use tempfile::{Builder, NamedTempFile};

use crate::problem::Problem;

/// Links followed from one name to the next before giving up (choice, as most systems do).
const MOST_LINKS: usize = 40;

/// Writes `bytes` to `path` so that a reader sees the old file or the new one, never a part.
///
/// The bytes go to a temporary file in the same folder, are forced to disk, and take the name in one
/// step. A symbolic link is followed and stays; an existing file keeps its permissions.
///
/// # Errors
/// `cannot-write` naming the file and the cause; the old file is then untouched and nothing is left
/// behind.
pub fn write(path: &Path, bytes: &[u8]) -> Result<(), Problem> {
    let named = |problem: Problem| problem.in_file(path.display().to_string());
    let target = follow(path).map_err(|e| failed(&e)).map_err(named)?;
    let kept = match fs::metadata(&target) {
        Ok(about) if !about.is_file() => {
            let words = "cannot be written: this is a folder, a pipe or a device";
            return Err(named(Problem::refused("cannot-write", words, "name an ordinary file")));
        }
        Ok(about) if about.permissions().readonly() => {
            let words = "cannot be written: the file is write-protected";
            let cure = "lift the protection or name another file";
            return Err(named(Problem::refused("cannot-write", words, cure)));
        }
        Ok(about) => Some(about.permissions()),
        Err(error) if error.kind() == io::ErrorKind::NotFound => None,
        Err(error) => return Err(named(failed(&error))),
    };
    replace(&target, bytes, kept).map_err(|e| failed(&e)).map_err(named)
}

/// Writes `bytes` to `path` as [`write()`] does, but only where nothing has that name, not even a broken link.
///
/// # Errors
/// `exists` where something has, `cannot-write` otherwise; nothing is left behind.
pub fn create(path: &Path, bytes: &[u8]) -> Result<(), Problem> {
    let made = temporary(path, bytes, None).and_then(|temporary| {
        temporary.persist_noclobber(path).map_err(|error| error.error)?;
        sync_folder(path);
        Ok(())
    });
    made.map_err(|error| {
        let problem = if error.kind() == io::ErrorKind::AlreadyExists {
            Problem::refused("exists", "a file of this name is there; it was left alone", "name another")
        } else {
            failed(&error)
        };
        problem.in_file(path.display().to_string())
    })
}

/// Makes a folder and those above it, where they are missing.
///
/// # Errors
/// `cannot-write` naming the folder.
pub fn folder(path: &Path) -> Result<(), Problem> {
    fs::create_dir_all(path).map_err(|error| {
        Problem::refused("cannot-write", error.to_string(), "name a folder you may write to")
            .in_file(path.display().to_string())
    })
}

fn failed(error: &io::Error) -> Problem {
    let cure = "check that the folder exists, has room and may be written to";
    Problem::refused("cannot-write", format!("cannot be written: {error}"), cure)
}

fn replace(target: &Path, bytes: &[u8], kept: Option<Permissions>) -> io::Result<()> {
    temporary(target, bytes, kept)?.persist(target).map_err(|error| error.error)?;
    sync_folder(target);
    Ok(())
}

/// The folder that holds a file.
fn above(target: &Path) -> &Path {
    target.parent().filter(|folder| !folder.as_os_str().is_empty()).unwrap_or(Path::new("."))
}

/// The bytes on disk beside their target, not yet under its name.
fn temporary(target: &Path, bytes: &[u8], kept: Option<Permissions>) -> io::Result<NamedTempFile> {
    let mut builder = Builder::new();
    builder.prefix(".gatemix-");
    // asked for at creation, so that the user's umask cuts it as for any new file
    #[cfg(unix)]
    builder.permissions(std::os::unix::fs::PermissionsExt::from_mode(0o666));
    let mut temporary = builder.tempfile_in(above(target))?;
    temporary.write_all(bytes)?;
    if let Some(permissions) = kept {
        temporary.as_file().set_permissions(permissions)?;
    }
    temporary.as_file().sync_all()?;
    Ok(temporary)
}

/// Forces a new name to disk.
pub(super) fn sync_folder(target: &Path) {
    // the file stands by now; where a network share cannot sync a folder there is nothing to undo
    #[cfg(unix)]
    let _ = File::open(above(target)).and_then(|folder| folder.sync_all());
}

/// The file that a chain of symbolic links leads to, whether it exists or not.
fn follow(path: &Path) -> io::Result<PathBuf> {
    let mut target = path.to_owned();
    for _ in 0..MOST_LINKS {
        match fs::read_link(&target) {
            Ok(next) => target = target.parent().unwrap_or(Path::new("")).join(next),
            Err(_) => return Ok(target),
        }
    }
    Err(io::Error::other("too many symbolic links"))
}
