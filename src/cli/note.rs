//! What can be typed to have a note written, and the writing of it.

use std::fs;
use std::io;
use std::path::{Path, PathBuf};

use clap::{Args, ValueEnum};

use crate::files::atomic;
use crate::problem::{Problem, harmless};
use crate::report::page;
use crate::tasks::Failure;
use crate::tasks::note::NoteAsked;
use crate::tasks::rank::RankAsked;

use super::arguments::Setting;
use super::endings::Stop;

/// The formats a piece can be written in.
#[derive(Debug, Clone, Copy, PartialEq, Eq, ValueEnum)]
pub(super) enum Format {
    /// Markdown.
    Md,
    /// Plain text.
    Txt,
    /// One HTML file with pictures.
    Html,
}

impl From<Format> for page::Format {
    fn from(format: Format) -> Self {
        match format {
            Format::Md => Self::Markdown,
            Format::Txt => Self::Text,
            Format::Html => Self::Html,
        }
    }
}

/// In what format a piece is written, and where to.
#[derive(Debug, Args)]
pub(super) struct Piece {
    /// Format; without it by the ending of --out, else plain text.
    #[arg(long, value_enum, conflicts_with = "json")]
    format: Option<Format>,
    /// File to write into, instead of the terminal. One that is there with other contents is left alone.
    #[arg(long, value_name = "FILE", conflicts_with = "json")]
    out: Option<PathBuf>,
    /// Write over a file that is there with other contents.
    #[arg(long, requires = "out")]
    replace: bool,
}

impl Piece {
    /// A piece in its format, and what the terminal shows of it.
    pub(super) fn written(&self, page: &page::Page) -> Result<String, Stop> {
        let ending = self.out.as_deref().and_then(Path::extension).and_then(|ending| ending.to_str());
        let by_ending = ending.and_then(|ending| Format::from_str(ending, true).ok());
        if let (None, None, Some(ending)) = (self.format, by_ending, ending) {
            let words = format!(
                "--out: nothing is written as .{}; end it in .md, .txt or .html, or name --format",
                harmless(ending)
            );
            return Err(Failure::Usage(words).into());
        }
        let format = self.format.or(by_ending).unwrap_or(Format::Txt);
        let text = page::written(page, format.into());
        let Some(path) = &self.out else { return Ok(text) };
        let shown = harmless(&path.display().to_string());
        if fs::read(path).is_ok_and(|there| there == text.as_bytes()) {
            return Ok(format!("{shown} holds it already\n"));
        }
        if self.replace {
            atomic::write(path, text.as_bytes()).map_err(Stop::Machine)?;
        } else {
            atomic::create(path, text.as_bytes()).map_err(|problem| Stop::Machine(told(problem, path)))?;
        }
        Ok(format!("wrote {shown}\n"))
    }
}

/// That a file is there, with what to do about it.
fn told(problem: Problem, path: &Path) -> Problem {
    let there = fs::symlink_metadata(path).map_or_else(|e| e.kind() != io::ErrorKind::NotFound, |_| true);
    if there && problem.kind == "exists" {
        let words = "a file with other contents is there; it was left alone";
        return Problem::refused("exists", words, "name another, or write over it with --replace")
            .in_file(path.display().to_string());
    }
    problem
}

/// What a note is of, and what the user says in it.
#[derive(Debug, Args)]
pub(super) struct Noted {
    /// What the well of the gates opened carries; without a setting, the total release the mixes are ranked at.
    #[arg(long, value_name = "FLOW")]
    release: Option<String>,
    /// When the change begins; without it when the decision does, else the next full hour.
    #[arg(long, value_name = "TIME")]
    at: Option<String>,
    /// Plan of the season; without it the first by file name.
    #[arg(long, value_name = "FILE|NAME")]
    plan: Option<String>,
    /// Why, in your words; without it those of the decision.
    #[arg(long, value_name = "TEXT")]
    why: Option<String>,
    /// Anything else, in your words.
    #[arg(long, value_name = "TEXT")]
    remarks: Option<String>,
}

impl Noted {
    pub(super) fn asked<'a>(&'a self, setting: &'a Setting) -> NoteAsked<'a> {
        let alone = setting.set.is_empty() && setting.open.is_empty();
        let release = self.release.as_deref();
        NoteAsked {
            words: if alone { Vec::new() } else { setting.words(release) },
            ranked: RankAsked {
                release: release.filter(|_| alone).map(str::to_owned),
                ..RankAsked::default()
            },
            at: self.at.clone(),
            plan: self.plan.clone(),
            why: self.why.clone(),
            remarks: self.remarks.clone(),
        }
    }
}
