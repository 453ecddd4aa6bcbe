//! The casts of a folder: listed, the newest, one that is named; each held against the site.

use std::path::Path;

use chrono::{DateTime, FixedOffset};

use crate::files::cast::{Told, cast};
use crate::files::text::{self, Format, Source};
use crate::problem::{Problem, Weight};
use crate::profile::{Profile, Raw};

use super::{Folder, PROFILES, base};

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
    pub(super) fn casts_said(&self, found: &[Listed]) -> Vec<Problem> {
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

    /// When the newest cast of the folder was taken.
    pub fn newest_time(&self) -> Option<DateTime<FixedOffset>> {
        self.casts().iter().filter_map(|l| l.raw.as_ref()?.taken).max()
    }

    /// What the site file says of a cast of that file name.
    fn told(&self, name: &str) -> Told {
        let listed = self.site.casts.iter().find(|c| c.file == name || c.file == base(name));
        listed.map_or_else(Told::default, |c| Told { taken: c.taken.clone(), pool_m: c.pool_m })
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
                .filter(|p| p.weight == Weight::Refused)
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
}
