//! A problem or flag: where it stands, what it says, how to cure it, how much it weighs.
//!
//! Every check of the program collects these in full and in order; "is it sound" is the absence of
//! [`Weight::Refused`] in the same list, so the two can never part.

use std::fmt;

/// How much a problem weighs.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub enum Weight {
    /// What was smoothed, pooled or assumed, and by how much.
    Note,
    /// Answered all the same; the reader must know.
    Flag,
    /// No answer can be computed, or the units cannot be right.
    Refused,
}

impl Weight {
    /// The word printed before the problem.
    pub fn word(self) -> &'static str {
        match self {
            Self::Note => "note",
            Self::Flag => "flag",
            Self::Refused => "refused",
        }
    }
}

/// Where a problem stands. `path` is a place inside a document, such as `outlets[3].width`;
/// the reader of the document turns it into a line.
#[derive(Debug, Clone, Default, PartialEq, Eq)]
pub struct Place {
    /// File as the user named it, or `standard input`.
    pub file: Option<String>,
    /// Line in that file, from 1.
    pub line: Option<usize>,
    /// Path inside the document.
    pub path: Option<String>,
}

/// One problem, flag or note.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Problem {
    /// How much it weighs.
    pub weight: Weight,
    /// Short fixed word for programs to match on, such as `gap` or `unknown-key`.
    pub kind: &'static str,
    /// Where it stands.
    pub place: Place,
    /// What is wrong, in words.
    pub words: String,
    /// What to do about it; empty where nothing needs doing.
    pub cure: String,
}

impl Problem {
    /// A problem that stops the answer.
    pub fn refused(kind: &'static str, words: impl Into<String>, cure: impl Into<String>) -> Self {
        Self::new(Weight::Refused, kind, words, cure)
    }

    /// A flag: answered, but the reader must know.
    pub fn flag(kind: &'static str, words: impl Into<String>, cure: impl Into<String>) -> Self {
        Self::new(Weight::Flag, kind, words, cure)
    }

    /// A note on what was done with the input.
    pub fn note(kind: &'static str, words: impl Into<String>) -> Self {
        Self::new(Weight::Note, kind, words, String::new())
    }

    fn new(weight: Weight, kind: &'static str, words: impl Into<String>, cure: impl Into<String>) -> Self {
        Self { weight, kind, place: Place::default(), words: words.into(), cure: cure.into() }
    }

    /// The same problem at a path inside its document.
    #[must_use]
    pub fn at(mut self, path: impl Into<String>) -> Self {
        self.place.path = Some(path.into());
        self
    }

    /// The same problem on a line of its file.
    #[must_use]
    pub fn on_line(mut self, line: usize) -> Self {
        self.place.line = Some(line);
        self
    }

    /// The same problem in a file.
    #[must_use]
    pub fn in_file(mut self, file: impl Into<String>) -> Self {
        self.place.file = Some(file.into());
        self
    }
}

/// `site.yaml:12: refused: outlets[3].width: words; cure`, made harmless for a terminal.
impl fmt::Display for Problem {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        if let Some(file) = &self.place.file {
            write!(f, "{}:", harmless(file))?;
            if let Some(line) = self.place.line {
                write!(f, "{line}:")?;
            }
            f.write_str(" ")?;
        } else if let Some(line) = self.place.line {
            write!(f, "line {line}: ")?;
        }
        write!(f, "{}: ", self.weight.word())?;
        if let Some(path) = self.place.path.as_deref().filter(|p| !p.is_empty()) {
            write!(f, "{}: ", harmless(path))?;
        }
        f.write_str(&harmless(&self.words))?;
        if !self.cure.is_empty() {
            write!(f, "; {}", harmless(&self.cure))?;
        }
        Ok(())
    }
}

/// Whether any problem of the list stops the answer.
pub fn any_refused(problems: &[Problem]) -> bool {
    problems.iter().any(|p| p.weight == Weight::Refused)
}

/// Text from a file made harmless for a terminal: control characters (escape codes, line breaks, the
/// C1 range, the marks that turn writing direction round) become a visible `\u{1b}`; the rest stays.
pub fn harmless(text: &str) -> String {
    let mut out = String::with_capacity(text.len());
    for c in text.chars() {
        let turns = matches!(c, '\u{200e}' | '\u{200f}' | '\u{202a}'..='\u{202e}' | '\u{2066}'..='\u{2069}');
        if c.is_control() || turns || c == '\u{feff}' {
            out.extend(c.escape_unicode());
        } else {
            out.push(c);
        }
    }
    out
}
