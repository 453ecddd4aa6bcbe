//! Which sites a folder holds, and whether the files of one have changed.

use std::fs::{self, DirEntry};
use std::path::{Path, PathBuf};
use std::time::SystemTime;

use crate::files::log::LOG_FILE;
use crate::files::text::YAML_CAP;

use super::around::{TAILWATER, stays_within};
use super::plans::{PLANS, SCHEDULES};
use super::{PROFILES, SITE_FILE, csv_paths, demonstrations, is_csv, places};

/// A site among others.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Found {
    /// Name of its folder, as it is: not yet made harmless for a terminal.
    pub name: String,
    /// Its folder.
    pub path: PathBuf,
}

/// The sites in the direct subfolders of a folder, ordered by name; hidden ones are passed over, links are followed.
/// None in a folder that is a site itself, or that cannot be read.
pub fn sites_in(path: &Path) -> Vec<Found> {
    if path.join(SITE_FILE).exists() {
        return Vec::new();
    }
    let site = |entry: DirEntry| {
        let name = entry.file_name().to_string_lossy().into_owned();
        let path = entry.path();
        (!name.starts_with('.') && path.join(SITE_FILE).is_file()).then_some(Found { name, path })
    };
    let entries = fs::read_dir(path).into_iter().flatten();
    let mut sites: Vec<Found> = entries.filter_map(|entry| site(entry.ok()?)).collect();
    sites.sort_by(|a, b| a.name.cmp(&b.name).then_with(|| a.path.cmp(&b.path)));
    sites
}

/// Files, when each was last written, and its length in bytes.
pub type Stamps = Vec<(PathBuf, SystemTime, u64)>;

/// When each file that an answer on a site can come from was last written, and its length in bytes: the site file,
/// sound or not, every cast, plan and gate schedule of the folder, the tailwater record, and what else the site file
/// names. Two lists differ where a file changed, came or went. Empty for a demonstration held in memory.
pub fn stamps(named: &str) -> Stamps {
    let path = Path::new(named);
    if !path.exists() && demonstrations().contains(&named) {
        return Vec::new();
    }
    let (root, file) = places(path);
    let named = named_in(&file).into_iter().map(|name| root.join(name));
    [file, root.join(LOG_FILE)]
        .into_iter()
        .chain(csv_paths(&root, PROFILES))
        .chain(csv_paths(&root, PLANS))
        .chain(csv_paths(&root, SCHEDULES))
        .chain(named)
        .filter_map(|path| {
            let about = fs::metadata(&path).ok()?;
            // where a file system keeps no times the length has to do
            Some((path, about.modified().unwrap_or(SystemTime::UNIX_EPOCH), about.len()))
        })
        .collect()
}

/// Names of files beside the casts: the tailwater record, and every word of a site file that ends like one. The site
/// need not be sound for that, and a name too many only means one file more to watch.
fn named_in(site_file: &Path) -> Vec<String> {
    let mut names = vec![TAILWATER.to_owned()];
    let size = fs::metadata(site_file).map_or(0, |about| about.len());
    let text = if size <= YAML_CAP { fs::read(site_file).unwrap_or_default() } else { Vec::new() };
    let text = String::from_utf8_lossy(&text);
    let words = text.split(['\n', '\r', '"', '\'', '{', '}', '[', ']', ',', ':', '#']).map(str::trim);
    for word in words.filter(|word| is_csv(Path::new(word)) && stays_within(word)) {
        if !names.iter().any(|name| name == word) {
            names.push(word.to_owned());
        }
    }
    names
}
