//! The note screen: what the note is of, the words of the user, and the note there is.

use std::path::{Path, PathBuf};
use std::sync::Arc;

use crate::report::note::page;
use crate::report::page::{Block, Format, Page, written};
use crate::tasks::note::{NoteAnswer, NoteAsked};
use crate::tasks::rank::RankAsked;
use crate::tasks::{Changed, Context, Given};
use crate::units::System;

use super::session::Session;
use super::words::AsTyped;

/// Formats with the ends of the names of their files.
pub const FORMATS: [(Format, &str); 3] =
    [(Format::Html, "html"), (Format::Markdown, "md"), (Format::Text, "txt")];
/// Folder for notes, in that of the site.
const FOLDER: &str = "notes";
/// Longest part of the name of a file that names gates (choice).
const GATES: usize = 60;

/// The format that the name of a file asks for.
///
/// # Errors
/// It ends in none of those there are.
pub fn format_of(file: &str) -> Result<Format, String> {
    let end = Path::new(file).extension().map(|end| end.to_string_lossy().to_lowercase());
    let found = FORMATS.iter().find(|(_, name)| end.as_deref() == Some(*name));
    found.map(|found| found.0).ok_or_else(|| "end its name in .html, .md or .txt".to_owned())
}

/// A question for a note, the words of the user apart.
#[derive(Debug, Clone)]
pub struct NoteQuestion {
    /// The files as opened.
    pub base: Arc<Context>,
    /// What the user had changed.
    pub changed: Changed,
    /// The candidate; `None` for the last decision that holds, else the first ranked mix.
    pub candidate: Option<Given>,
    /// What the ranking beside it is asked.
    pub ranked: RankAsked,
    /// When the change begins.
    pub begins: Option<String>,
    /// Units that come first.
    pub system: System,
}

impl NoteQuestion {
    /// Whether another asks the same.
    pub fn is(&self, other: &Self) -> bool {
        Arc::ptr_eq(&self.base, &other.base)
            && (&self.changed, &self.candidate, &self.ranked)
                == (&other.changed, &other.candidate, &other.ranked)
            && (&self.begins, self.system) == (&other.begins, other.system)
    }

    /// The same with the gates as they are typed to the command.
    pub fn asked<'a>(&self, gates: &'a AsTyped) -> NoteAsked<'a> {
        NoteAsked {
            words: gates.words(),
            ranked: self.ranked.clone(),
            at: self.begins.clone(),
            plan: None,
            why: None,
            remarks: None,
        }
    }
}

/// A note with what it was made for.
#[derive(Debug, Clone)]
pub struct Noted {
    /// The question.
    pub question: NoteQuestion,
    /// The files with what was changed, in the units shown.
    pub context: Arc<Context>,
    /// The answer, with the words of the user.
    pub answer: Box<NoteAnswer>,
    /// What it says.
    pub page: Page,
    /// Its sheets as plain text, line by line.
    pub sheets: Vec<Vec<String>>,
    /// Why, as the answer itself has it.
    own_why: Option<String>,
}

impl Noted {
    /// A note as it is answered.
    pub fn new(question: NoteQuestion, context: Arc<Context>, answer: NoteAnswer) -> Self {
        let own_why = answer.why.clone();
        let nothing = Page { title: String::new(), blocks: Vec::new() };
        let answer = Box::new(answer);
        let mut out = Self { question, context, answer, page: nothing, sheets: Vec::new(), own_why };
        out.say(None, None);
        out
    }

    /// Puts the words of the user into it.
    pub fn say(&mut self, why: Option<&str>, remarks: Option<&str>) {
        self.answer.why = why.map(str::to_owned).or_else(|| self.own_why.clone());
        self.answer.remarks = remarks.map(str::to_owned);
        self.page = page(&self.context, &self.answer);
        self.sheets = sheets(&self.page);
    }

    /// A name for its file, in a format: `notes/2026-07-14-N3-N5.html`.
    pub fn file(&self, format: Format) -> String {
        let site = self.context.site();
        let open = self.answer.mix.setting.gates.iter().filter(|gate| gate.flow_m3s > 0.0);
        let names = open.filter_map(|gate| Some(plain(&site.outlets.get(gate.outlet)?.name)));
        let mut name = String::new();
        for gate in names.filter(|gate| !gate.is_empty()) {
            if name.len() + gate.len() < GATES {
                name = format!("{name}-{gate}");
            }
        }
        let date = self.answer.begins.with_timezone(&site.offset).date_naive();
        let end = FORMATS.iter().find(|(of, _)| *of == format).map_or("txt", |f| f.1);
        format!("{FOLDER}/{date}{name}.{end}")
    }
}

/// Letters, digits and strokes of a name: what every disk takes.
fn plain(name: &str) -> String {
    let kept = name.chars().map(|c| if c.is_alphanumeric() { c } else { '-' });
    kept.collect::<String>().trim_matches('-').to_owned()
}

/// The sheets of a piece as plain text.
fn sheets(page: &Page) -> Vec<Vec<String>> {
    let parts = page.blocks.split(|block| matches!(block, Block::Sheet));
    let sheet = |(at, blocks): (usize, &[Block])| {
        // the title stands over the first, as it is printed
        let title = if at == 0 { page.title.clone() } else { String::new() };
        let text = written(&Page { title, blocks: blocks.to_vec() }, Format::Text);
        text.lines().skip_while(|line| line.is_empty()).map(str::to_owned).collect()
    };
    parts.enumerate().map(sheet).collect()
}

/// What is to be saved.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Saved {
    /// The file.
    pub path: PathBuf,
    /// The name as it was typed.
    pub typed: String,
    /// What is to stand in it.
    pub text: String,
    /// Whether a file of that name gives way.
    pub replace: bool,
}

/// Where the user is on the note screen.
#[derive(Debug, Clone)]
pub struct NoteView {
    /// Whether the note is of the candidate.
    pub candidate: bool,
    /// The sheet shown, from 0.
    pub sheet: usize,
    /// First line shown.
    pub scroll: usize,
    /// Why, as the user says it.
    pub why: Option<String>,
    /// Anything else.
    pub remarks: Option<String>,
    /// When the change begins, as typed.
    pub begins: Option<String>,
    /// The format that is saved.
    pub format: Format,
}

impl Default for NoteView {
    fn default() -> Self {
        Self {
            candidate: false,
            sheet: 0,
            scroll: 0,
            why: None,
            remarks: None,
            begins: None,
            format: Format::Html,
        }
    }
}

impl Session {
    /// What the note screen would ask now.
    pub fn note_question(&self, system: System) -> NoteQuestion {
        let site = self.base.site();
        let tried = self.draft().tried().filter(|_| self.note.candidate);
        NoteQuestion {
            base: Arc::clone(&self.base),
            changed: self.draft().changed.clone(),
            candidate: tried.map(|given| super::tries::asked(site, given)),
            ranked: self.rank_asked(),
            begins: self.note.begins.clone(),
            system,
        }
    }

    /// Whether the note there is is of what is set now.
    pub fn notes_now(&self, system: System) -> bool {
        self.noted.as_ref().is_some_and(|noted| noted.question.is(&self.note_question(system)))
    }

    /// Takes a note, with the words of the user in it.
    pub fn take_note(&mut self, mut noted: Noted) {
        noted.say(self.note.why.as_deref(), self.note.remarks.as_deref());
        self.note.sheet = self.note.sheet.min(noted.sheets.len().saturating_sub(1));
        self.noted = Some(noted);
    }
}
