//! The demonstration sites inside the binary.

use std::path::{Path, PathBuf};

use include_dir::{Dir, include_dir};

use crate::files::text::{self, Format, Source};
use crate::problem::Problem;

use super::is_csv;

static DEMONSTRATIONS: Dir<'static> = include_dir!("$CARGO_MANIFEST_DIR/sites");

/// The demonstration sites that travel inside the binary, by name; the first one opens when nothing is named.
pub fn demonstrations() -> Vec<&'static str> {
    let mut names: Vec<&str> = DEMONSTRATIONS.dirs().filter_map(|d| d.path().file_name()?.to_str()).collect();
    names.sort_unstable();
    names
}

/// Every file of the demonstration sites, path below the sites folder and bytes, in order.
pub fn demonstration_files() -> Vec<(PathBuf, &'static [u8])> {
    fn gather(dir: &Dir<'static>, out: &mut Vec<(PathBuf, &'static [u8])>) {
        out.extend(dir.files().map(|f| (f.path().to_owned(), f.contents())));
        dir.dirs().for_each(|d| gather(d, out));
    }
    let mut out = Vec::new();
    gather(&DEMONSTRATIONS, &mut out);
    out.sort();
    out
}

/// The bytes of one file of them.
pub(super) fn bytes_inside(file: &str) -> Option<&'static [u8]> {
    Some(DEMONSTRATIONS.get_file(file)?.contents())
}

/// One file of them, read as if it were on disk.
pub(super) fn inside(file: &str) -> Option<Result<Source, Problem>> {
    let contents = bytes_inside(file)?;
    let format = if is_csv(Path::new(file)) { Format::Csv } else { Format::Yaml };
    Some(text::read_from(file, contents, format))
}
