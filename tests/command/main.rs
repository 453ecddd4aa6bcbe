//! The built program, as a user meets it: exit codes, standard output, standard error.

#![expect(clippy::unwrap_used, reason = "helpers of tests stand outside test functions")]

mod aerated;
mod ahead;
mod answered;
mod applied;
mod casts;
mod cautions;
mod demo;
mod escapes;
mod exits;
mod learn;
mod left;
mod limits;
mod log;
mod log_kept;
mod loggers;
mod new;
mod note;
mod past;
mod prices;
mod rank;
mod rank_answers;
mod records;
mod refused;
mod report;
mod river;
mod season;
mod season_days;
mod season_table;
mod season_told;
mod since;
mod sorrel;
mod stories;
mod targets;
mod typed_back;
mod units;
mod wells;

use std::fs;
use std::path::{Path, PathBuf};

use assert_cmd::Command;
use serde_json::Value;
use tempfile::TempDir;

/// A small invented site in metres. Tests change single words of it.
const SITE: &str = r#"name: Test Dam (invented)
demonstration: true
units: { length: m, area: m2, volume: m3, flow: m3/s, temperature: C }
datum: local
utc_offset: "-07:00"
place: { altitude: 410, latitude: 44.1 }
pool:
  bed: 0
  full: 62
  table:
    - [0, 0, 0]
    - [20, 2.0e6, 2.0e7]
    - [40, 5.0e6, 9.0e7]
    - [62, 9.0e6, 2.44e8]
outlets:
  - { name: N1, centre: 45, height: 3, width: 4, min_submergence: 4, flow: { min: 2, max: 80 } }
  - { name: Sluice, centre: 8, height: 2, width: 2, flow: { max: 40 } }
now: { N1: 30, Sluice: 5 }
targets:
  - { name: holding, from: 05-01, to: 09-15, low: 9, preferred: 12, high: 14, oxygen_min: 7, source: "example only" }
cold_water: [12]
"#;

/// A summer cast of it.
const CAST: &str = "\
# taken: 2025-07-14T10:30
# pool: 60
depth_m,temperature_C,oxygen_mg_l
0.5,22.0,8.5
5,21.8,8.4
9,18.0,8.0
14,12.5,7.0
20,9.5,6.5
30,7.5,5.5
45,6.5,4.5
59,6.2,3.5
";

/// A site folder on disk, gone when dropped.
struct Folder {
    dir: TempDir,
}

impl Folder {
    fn new(site: &str, casts: &[(&str, &[u8])]) -> Self {
        let folder = Self { dir: tempfile::tempdir().unwrap() };
        fs::write(folder.site_file(), site).unwrap();
        fs::create_dir(folder.path().join("profiles")).unwrap();
        for (name, bytes) in casts {
            fs::write(folder.profile(name), bytes).unwrap();
        }
        folder
    }

    fn usual() -> Self {
        Self::new(SITE, &[("2025-07-14.csv", CAST.as_bytes())])
    }

    fn path(&self) -> &Path {
        self.dir.path()
    }

    fn named(&self) -> &str {
        self.path().to_str().unwrap()
    }

    fn site_file(&self) -> PathBuf {
        self.path().join("site.yaml")
    }

    fn profile(&self, name: &str) -> PathBuf {
        self.path().join("profiles").join(name)
    }
}

/// How a run ended.
#[derive(Debug, PartialEq, Eq)]
struct Run {
    code: Option<i32>,
    out: String,
    err: String,
}

impl Run {
    fn json(&self) -> Value {
        assert_eq!(self.code, Some(0), "{}", self.err);
        serde_json::from_str(&self.out).unwrap()
    }

    /// Nothing on standard output, something on standard error that is no panic.
    fn failed_with(&self, code: i32) -> &str {
        assert_eq!((self.code, self.out.as_str()), (Some(code), ""), "{}", self.err);
        assert!(!self.err.trim().is_empty() && !self.err.contains("panicked"), "{}", self.err);
        &self.err
    }
}

/// The program, in an empty working directory of its own unless the test names one.
fn program() -> Command {
    Command::new(env!("CARGO_BIN_EXE_gatemix"))
}

fn run_with(arguments: &[&str], input: impl Into<Vec<u8>>) -> Run {
    let elsewhere = tempfile::tempdir().unwrap();
    let output = program().args(arguments).current_dir(elsewhere.path()).write_stdin(input).output().unwrap();
    Run {
        code: output.status.code(),
        out: String::from_utf8(output.stdout).unwrap(),
        err: String::from_utf8(output.stderr).unwrap(),
    }
}

fn run(arguments: &[&str]) -> Run {
    run_with(arguments, "")
}

/// A text with one piece of it changed; the piece must be there.
fn with(text: &str, from: &str, to: &str) -> String {
    assert!(text.contains(from), "{from}");
    text.replacen(from, to, 1)
}

/// Line, from 1, that holds a piece of text.
fn line_of(text: &str, piece: &str) -> usize {
    text.lines().position(|line| line.contains(piece)).unwrap() + 1
}
