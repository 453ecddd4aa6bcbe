//! A problem or flag: where it stands, what it says, how to cure it, how much it weighs.
//!
//! Every check of the program collects these in full and in order; "is it sound" is the absence of
//! [`Weight::Refused`] in the same list, so the two can never part.

use std::fmt;
use std::fmt::Write as _;

use crate::units::{System, in_system};

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
    /// What is wrong, in words; quantities as [`say`](crate::units::say) marks them.
    pub words: String,
    /// What to do about it, in the same manner; empty where nothing needs doing.
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

    /// `site.yaml:12: refused: outlets[3].width: words; cure`, quantities in the reader's units, made
    /// harmless for a terminal.
    pub fn text(&self, system: System) -> String {
        let mut out = String::new();
        match (&self.place.file, self.place.line) {
            (Some(file), Some(line)) => _ = write!(out, "{}:{line}: ", harmless(file)),
            (Some(file), None) => _ = write!(out, "{}: ", harmless(file)),
            (None, Some(line)) => _ = write!(out, "line {line}: "),
            (None, None) => {}
        }
        _ = write!(out, "{}: ", self.weight.word());
        if let Some(path) = self.place.path.as_deref().filter(|p| !p.is_empty()) {
            _ = write!(out, "{}: ", harmless(path));
        }
        out + &self.advice(system)
    }

    /// The words with their cure, quantities in the reader's units, made harmless for a terminal.
    pub fn advice(&self, system: System) -> String {
        let words = self.sentence(system);
        if self.cure.is_empty() { words } else { format!("{words}; {}", shown(&self.cure, system)) }
    }

    /// The words alone, quantities in the reader's units, made harmless for a terminal.
    pub fn sentence(&self, system: System) -> String {
        shown(&self.words, system)
    }
}

/// The line in SI.
impl fmt::Display for Problem {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(&self.text(System::Si))
    }
}

fn shown(text: &str, system: System) -> String {
    harmless(&in_system(text, system))
}

/// Whether any problem of the list stops the answer.
pub fn any_refused(problems: &[Problem]) -> bool {
    problems.iter().any(|p| p.weight == Weight::Refused)
}

/// Whether a terminal may obey a character rather than show it: control characters (escape codes, line breaks,
/// the C1 range) and the marks that turn writing direction round.
pub fn is_harmful(c: char) -> bool {
    let turns = matches!(c, '\u{200e}' | '\u{200f}' | '\u{202a}'..='\u{202e}' | '\u{2066}'..='\u{2069}');
    c.is_control() || turns || c == '\u{feff}'
}

/// Text from a file made harmless for a terminal: what it may obey becomes a visible `\u{1b}`; the rest stays.
pub fn harmless(text: &str) -> String {
    let mut out = String::with_capacity(text.len());
    for c in text.chars() {
        if is_harmful(c) {
            out.extend(c.escape_unicode());
        } else {
            out.push(c);
        }
    }
    out
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::units::say;
    use proptest::prelude::*;

    #[test]
    fn scenario_only_words_and_cure_hold_quantities() {
        let mark = say::m(1.0, 1);
        let problem = Problem::flag("k", format!("{mark} of it"), format!("use {mark}"))
            .in_file(format!("a{mark}.yaml"))
            .at(format!("now.{mark}"));
        assert_eq!(
            problem.text(System::Us),
            "a\\u{2}L1=1e0\\u{3}.yaml: flag: now.\\u{2}L1=1e0\\u{3}: 3 ft of it; use 3 ft"
        );
        assert_eq!(Problem::note("k", "words").on_line(3).text(System::Si), "line 3: note: words");
    }

    proptest! {

        #![proptest_config(crate::units::law_config())]
        #[test]
        fn law_no_control_character_reaches_the_reader(
            pieces in proptest::collection::vec("[\u{2}\u{3}\u{1b}\n\u{9b}LT29=+e.é]{0,6}", 4)
        ) {
            let problem = Problem::refused("k", format!("{}{}", pieces[0], say::c(8.0, 1)), pieces[1].clone())
                .in_file(pieces[2].clone())
                .at(pieces[3].clone());
            for (system, end) in [(System::Si, "8.0 C"), (System::Us, "46.4 F")] {
                prop_assert!(!problem.text(system).chars().any(char::is_control));
                prop_assert!(problem.sentence(system).ends_with(end));
            }
        }
    }
}
