//! A site folder, on disk or inside the binary: its site file, its casts, the fingerprint of what was read.

use std::path::{Path, PathBuf};
use std::sync::{Arc, OnceLock};

use chrono::{DateTime, FixedOffset};
use sha2::{Digest, Sha256};

use crate::problem::Problem;
use crate::profile::{Profile, Raw};
use crate::site::Site;
use crate::units::System;

use super::cast::{Told, cast};
use super::text::{self, Format, Source};
use super::yaml::Document;
use inside::inside;

mod around;
mod found;
mod inside;
mod plans;

pub use around::Around;
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

/// A cast read against the site, with its bytes.
#[derive(Debug, Clone)]
pub struct Read {
    /// The profile, with its flags.
    pub profile: Profile,
    /// The bytes it came from, and their name.
    pub source: Source,
}

/// One cast of the folder: its file, the raw cast if it could be read, and everything said of it.
#[derive(Debug, Clone)]
pub struct Listed {
    /// File as shown.
    pub file: String,
    /// What was read.
    pub raw: Option<Raw>,
    /// Problems, flags and notes.
    pub problems: Vec<Problem>,
    /// The bytes it came from.
    pub source: Option<Source>,
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

    /// Every cast of the folder, ordered by time and file name; casts without a time come first. They are read once:
    /// this folder and what is cloned from it know them as they were then.
    pub fn casts(&self) -> &[Listed] {
        self.casts.get_or_init(|| {
            let listed = |(name, source)| match source {
                Err(problem) => Listed { file: name, raw: None, problems: vec![problem], source: None },
                Ok(source) => {
                    let (raw, problems) = cast(&source, &self.site, &self.told(&name));
                    Listed { file: name, raw, problems, source: Some(source) }
                }
            };
            let mut casts: Vec<Listed> =
                self.csv_sources(PROFILES, |_| true).into_iter().map(listed).collect();
            casts.sort_by(|a, b| {
                let taken = |l: &Listed| l.raw.as_ref().and_then(|r| r.taken);
                taken(a).cmp(&taken(b)).then_with(|| a.file.cmp(&b.file))
            });
            casts
        })
    }

    /// What a folder lacks that its site file counts on: any cast at all, and each cast it lists.
    fn casts_said(&self, found: &[Listed]) -> Vec<Problem> {
        let mut out = Vec::new();
        if found.is_empty() {
            out.push(Problem::note("no-cast", "there is no cast in `profiles`"));
        }
        for (i, listed) in self.site.casts.iter().enumerate() {
            if !found.iter().any(|f| f.file == listed.file || base(&f.file) == listed.file) {
                let words = format!("there is no cast `{}` in `profiles`", listed.file);
                out.push(
                    Problem::flag("cast-missing", words, "correct the name, or take it out of the list")
                        .at(format!("casts[{i}].file")),
                );
            }
        }
        out.into_iter().map(|problem| self.located(problem)).collect()
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

    /// When the newest cast of the folder was taken.
    pub fn newest_time(&self) -> Option<DateTime<FixedOffset>> {
        self.casts().iter().filter_map(|l| l.raw.as_ref()?.taken).max()
    }

    /// What the site file says of a cast of that file name.
    fn told(&self, name: &str) -> Told {
        let listed = self.site.casts.iter().find(|c| c.file == name || c.file == base(name));
        listed.map_or_else(Told::default, |c| Told { taken: c.taken.clone(), pool_m: c.pool_m })
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

    /// The newest cast of the folder. Casts of one time: the last by file name, flagged. Casts that cannot be
    /// read are flagged and passed over.
    ///
    /// # Errors
    /// Its problems, or that there is none.
    pub fn newest(&self, pool_m: Option<f64>) -> Result<Read, Vec<Problem>> {
        let mut flags = Vec::new();
        for broken in self.casts().iter().filter(|c| c.raw.is_none()) {
            let first = broken.problems.iter().max_by_key(|p| p.weight);
            flags.push(
                Problem::flag(
                    "cast-unreadable",
                    first.map_or_else(String::new, |p| {
                        format!("{} cannot be read and is passed over: {}", broken.file, p.words)
                    }),
                    "run `gatemix check` on the site",
                )
                .in_file(&broken.file),
            );
        }
        let mut sound = self.casts().iter().rev().filter(|c| c.raw.is_some());
        let Some((newest, source)) = sound.next().and_then(|c| Some((c, c.source.clone()?))) else {
            let all_broken = !flags.is_empty();
            let problem = Problem::refused(
                "no-cast",
                if all_broken { "no cast of the site can be read" } else { "the site has no cast" },
                "put a cast into its `profiles` folder, or give --profile FILE",
            );
            return Err(self
                .casts()
                .iter()
                .flat_map(|c| c.problems.iter().cloned())
                .filter(|p| p.weight == crate::problem::Weight::Refused)
                .chain([problem])
                .collect());
        };
        let same = sound.take_while(|c| {
            c.raw.as_ref().and_then(|r| r.taken) == newest.raw.as_ref().and_then(|r| r.taken)
        });
        let same: Vec<&str> = same.map(|c| c.file.as_str()).collect();
        if !same.is_empty() {
            flags.push(
                Problem::flag(
                    "same-time",
                    format!("taken at the same time as {}; the last by file name is used", same.join(", ")),
                    "correct `# taken` of one of them",
                )
                .in_file(&newest.file),
            );
        }
        self.held(newest.raw.as_ref(), source, newest.problems.clone(), pool_m, flags)
    }

    /// Reads one cast: a path, a file name in `profiles`, or `-` for standard input.
    ///
    /// # Errors
    /// Every problem of it.
    pub fn cast(&self, named: &str, taken: Option<&str>, pool_m: Option<f64>) -> Result<Read, Vec<Problem>> {
        let within = |name: &str| base(name) == named && !Path::new(named).exists();
        let source = match self.csv_sources(PROFILES, within).pop() {
            Some((_, source)) => source,
            None => text::read(Path::new(named), Format::Csv),
        }
        .map_err(|p| vec![p])?;
        let mut told = self.told(named);
        if let Some(taken) = taken {
            told.taken = Some(taken.to_owned());
        }
        let (raw, problems) = cast(&source, &self.site, &told);
        self.held(raw.as_ref(), source, problems, pool_m, Vec::new())
    }

    /// Reads one cast of the folder under its own pool, by its file as listed or the last part of it.
    ///
    /// # Errors
    /// Every problem of it, or that there is none.
    pub fn own_cast(&self, file: &str) -> Result<Read, Vec<Problem>> {
        let own = self.csv_sources(PROFILES, |name| name == file || base(name) == file).pop();
        let (name, source) = own.ok_or_else(|| {
            vec![Problem::refused("missing-file", "there is no such cast in `profiles`", "").in_file(file)]
        })?;
        let source = source.map_err(|p| vec![p])?;
        let (raw, problems) = cast(&source, &self.site, &self.told(&name));
        self.held(raw.as_ref(), source, problems, None, Vec::new())
    }

    /// Holds a raw cast against the site and moves it to the pool asked for.
    fn held(
        &self,
        raw: Option<&Raw>,
        source: Source,
        mut problems: Vec<Problem>,
        pool_m: Option<f64>,
        flags: Vec<Problem>,
    ) -> Result<Read, Vec<Problem>> {
        let Some(raw) = raw else { return Err(problems) };
        let (profile, found) = Profile::build(raw, &self.site, pool_m);
        problems.extend(found);
        let Some(mut profile) = profile else { return Err(problems) };
        problems.extend(flags);
        profile.flags = problems;
        match pool_m.filter(|p| (p - profile.pool_m).abs() > 1e-9) {
            None => Ok(Read { profile, source }),
            Some(pool) => match profile.at_pool(&self.site, pool) {
                Ok(profile) => Ok(Read { profile, source }),
                Err(problem) => Err(vec![problem]),
            },
        }
    }

    /// Holds a listed cast against the site under its own pool, with everything said of it.
    pub fn profile_of(&self, listed: &Listed) -> (Option<Profile>, Vec<Problem>) {
        let mut problems = listed.problems.clone();
        let Some(raw) = &listed.raw else { return (None, problems) };
        let (mut profile, found) = Profile::build(raw, &self.site, None);
        problems.extend(found);
        if let Some(profile) = &mut profile {
            profile.flags.clone_from(&problems);
        }
        (profile, problems)
    }

    /// Fingerprint of the site file and of further inputs: 12 hexadecimal digits of SHA-256 over lengths and bytes.
    pub fn fingerprint(&self, others: &[&Source]) -> String {
        let mut hash = Sha256::new();
        for source in std::iter::once(&self.source).chain(others.iter().copied()) {
            hash.update((source.bytes.len() as u64).to_le_bytes());
            hash.update(&source.bytes);
        }
        let digits = |b: &u8| [b >> 4, b & 15].map(|d| char::from_digit(d.into(), 16).unwrap_or('0'));
        hash.finalize().iter().take(6).flat_map(digits).collect()
    }
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

/// Every problem of a site folder: the site file, each cast, the files beside them, each plan, the weather of years; and the units its user reads.
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
            problems.extend(folder.plans().iter().flat_map(|listed| listed.problems.iter().cloned()));
            problems.extend(folder.years().iter().flat_map(|years| years.problems.iter().cloned()));
            (problems, folder.site.units.system())
        }
    }
}
