//! A site folder, on disk or inside the binary: its site file, its casts, the fingerprint of what was read.

use std::path::{Path, PathBuf};
use std::sync::{Arc, OnceLock};

use sha2::{Digest, Sha256};

use crate::problem::Problem;
use crate::site::Site;
use crate::units::System;

use super::text::{self, Format, Source};
use super::yaml::Document;
use inside::inside;

mod around;
mod casts;
mod found;
mod inside;
mod log;
mod plans;

pub use around::Around;
pub use casts::{Listed, Read};
pub use found::{Found, Stamps, sites_in, stamps};
pub use inside::{demonstration_files, demonstrations};
pub use plans::{ListedPlan, ReadSchedule, Years};

/// The file that makes a folder a site.
const SITE_FILE: &str = "site.yaml";

/// Where the casts of a site are.
const PROFILES: &str = "profiles";

/// Where a site's files are.
#[derive(Debug, Clone)]
enum Root {
    Disk(PathBuf),
    Inside(String),
}

/// An opened site folder: the checked site and everything said while reading it.
#[derive(Debug, Clone)]
pub struct Folder {
    root: Root,
    /// The checked site.
    pub site: Site,
    /// Flags and notes on the site file.
    pub notes: Vec<Problem>,
    source: Source,
    /// Every cast, once they were asked for.
    casts: Arc<OnceLock<Vec<Listed>>>,
    /// The files beside them, once they were asked for.
    around: Arc<OnceLock<Around>>,
    /// Every plan, once they were asked for.
    plans: Arc<OnceLock<Vec<ListedPlan>>>,
    /// The weather of years, once it was asked for.
    years: Arc<OnceLock<Years>>,
}

/// Why a site cannot be opened, and the units its user reads.
#[derive(Debug, Clone)]
pub struct Refused {
    /// Every problem of the site file.
    pub problems: Vec<Problem>,
    /// The units of its user, as far as they are known.
    pub system: System,
}

impl From<Problem> for Refused {
    fn from(problem: Problem) -> Self {
        Self { problems: vec![problem], system: System::default() }
    }
}

impl Folder {
    /// Opens a site: a folder, its `site.yaml`, or the name of a demonstration site where no such path exists.
    ///
    /// # Errors
    /// Every problem of the site file, with lines.
    pub fn open(named: &str) -> Result<Self, Refused> {
        let path = Path::new(named);
        if !path.exists() && demonstrations().contains(&named) {
            return Self::demonstration(named);
        }
        let (root, file) = places(path);
        if path.is_dir() && !file.exists() {
            let cure = "name a site folder, or write the demonstration sites with `gatemix demo`";
            return Err(Problem::refused("no-site", "the folder has no site.yaml", cure)
                .in_file(named)
                .into());
        }
        Self::from_source(Root::Disk(root), text::read(&file, Format::Yaml)?)
    }

    /// Opens a demonstration site from inside the binary.
    ///
    /// # Errors
    /// Its problems; there are none in a released binary, which a test holds.
    pub fn demonstration(name: &str) -> Result<Self, Refused> {
        let file = format!("{name}/{SITE_FILE}");
        let source = inside(&file).ok_or_else(|| {
            Problem::refused(
                "no-demonstration",
                format!("no demonstration site is named `{name}`"),
                format!("there are: {}", demonstrations().join(", ")),
            )
        })?;
        Self::from_source(Root::Inside(name.to_owned()), source?)
    }

    fn from_source(root: Root, source: Source) -> Result<Self, Refused> {
        let read = super::site::site(&source.text, &source.name);
        let mut notes = read.problems;
        notes.extend(source.note());
        match read.site {
            Some(site) => Ok(Self {
                root,
                site,
                notes,
                source,
                casts: Arc::default(),
                around: Arc::default(),
                plans: Arc::default(),
                years: Arc::default(),
            }),
            None => Err(Refused { problems: notes, system: read.system }),
        }
    }

    /// Whether the data are held in memory rather than on disk.
    pub fn in_memory(&self) -> bool {
        matches!(self.root, Root::Inside(_))
    }

    /// A problem at a key of the site file, on its line.
    fn located(&self, problem: Problem) -> Problem {
        let mut one = [problem];
        if let Ok(document) = Document::parse(&self.source.text) {
            document.locate(&mut one, &self.source.name);
        }
        let [problem] = one;
        problem
    }

    /// The CSV files of a folder of the site whose names are wanted, as they are now.
    fn csv_sources(
        &self,
        below: &str,
        wanted: impl Fn(&str) -> bool,
    ) -> Vec<(String, Result<Source, Problem>)> {
        match &self.root {
            Root::Inside(name) => demonstration_files()
                .into_iter()
                .filter_map(|(path, _)| Some(path.to_str()?.to_owned()))
                .filter(|path| path.starts_with(&format!("{name}/{below}/")) && is_csv(Path::new(path)))
                .filter(|path| wanted(path))
                .filter_map(|path| Some((path.clone(), inside(&path)?)))
                .collect(),
            Root::Disk(root) => csv_paths(root, below)
                .into_iter()
                .map(|path| (path.display().to_string(), path))
                .filter(|(name, _)| wanted(name))
                .map(|(name, path)| (name, text::read(&path, Format::Csv)))
                .collect(),
        }
    }

    /// Fingerprint of the site file and of further inputs: 12 hexadecimal digits of SHA-256 over lengths and bytes.
    pub fn fingerprint(&self, others: &[&Source]) -> String {
        self.fingerprint_of(others.iter().map(|source| source.bytes.as_slice()))
    }

    /// The same of inputs as bytes.
    pub fn fingerprint_of<'a>(&'a self, others: impl Iterator<Item = &'a [u8]>) -> String {
        fingerprint(std::iter::once(self.source.bytes.as_slice()).chain(others))
    }
}

/// Fingerprint of some bytes: 12 hexadecimal digits of SHA-256 over lengths and bytes.
pub fn fingerprint<'a>(parts: impl Iterator<Item = &'a [u8]>) -> String {
    let mut hash = Sha256::new();
    for bytes in parts {
        hash.update((bytes.len() as u64).to_le_bytes());
        hash.update(bytes);
    }
    let digits = |b: &u8| [b >> 4, b & 15].map(|d| char::from_digit(d.into(), 16).unwrap_or('0'));
    hash.finalize().iter().take(6).flat_map(digits).collect()
}

/// The folder and the site file that a path on disk names: either of them.
fn places(path: &Path) -> (PathBuf, PathBuf) {
    if path.is_dir() {
        (path.to_owned(), path.join(SITE_FILE))
    } else {
        (path.parent().map(Path::to_owned).unwrap_or_default(), path.to_owned())
    }
}

/// The CSV files of a folder of a site, in order.
fn csv_paths(root: &Path, below: &str) -> Vec<PathBuf> {
    let entries = std::fs::read_dir(root.join(below)).into_iter().flatten();
    let mut paths: Vec<PathBuf> =
        entries.filter_map(|e| Some(e.ok()?.path())).filter(|p| is_csv(p)).collect();
    paths.sort();
    paths
}

/// The last part of a path, as the user lists it.
fn base(name: &str) -> &str {
    Path::new(name).file_name().and_then(|n| n.to_str()).unwrap_or(name)
}

fn is_csv(path: &Path) -> bool {
    path.extension().is_some_and(|e| e.eq_ignore_ascii_case("csv"))
}

/// Every problem of a site folder: the site file, each cast, the files beside them, each plan and gate schedule, the
/// weather of years; and the units its user reads.
pub fn check(named: &str) -> (Vec<Problem>, System) {
    match Folder::open(named) {
        Err(refused) => (refused.problems, refused.system),
        Ok(folder) => {
            let mut problems = folder.notes.clone();
            let casts = folder.casts();
            problems.extend(folder.casts_said(casts));
            for listed in casts {
                problems.extend(folder.profile_of(listed).1);
            }
            problems.extend(folder.around().problems.iter().cloned());
            problems.extend(folder.plans_said());
            problems.extend(folder.schedules_said());
            problems.extend(folder.log().problems);
            problems.extend(folder.years().iter().flat_map(|years| years.problems.iter().cloned()));
            (problems, folder.site.units.system())
        }
    }
}
