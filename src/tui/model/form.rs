//! What is to be logged, as a form: lines typed, checked one by one.

use std::sync::Arc;

use crate::tasks::log::{DecisionAsked, EventAsked};
use crate::tasks::rank::RankAsked;
use crate::tasks::{Context, Word};

use super::field::{Field, Line, Typed};
use super::words::AsTyped;

/// What a form logs.
#[derive(Debug, Clone, PartialEq)]
pub enum Logs {
    /// A decision: the gates, none for the first ranked mix; what the ranking beside it is asked.
    Decision(AsTyped, Box<RankAsked>),
    /// Other words of a decision.
    Amendment(u64),
    /// That a decision is taken back.
    Withdrawal(u64),
    /// Something that nobody planned.
    Event,
}

/// A form.
#[derive(Debug, Clone)]
pub struct Form {
    /// What it logs.
    pub logs: Logs,
    /// What that is, in words.
    pub what: Vec<String>,
    /// The files with what is changed.
    pub context: Arc<Context>,
    /// Its lines.
    pub fields: Vec<Field>,
    /// The one typed into.
    pub at: usize,
    /// Why it could not be logged.
    pub wrong: Option<String>,
}

/// What is to be written.
#[derive(Debug, Clone)]
pub struct Entry {
    /// The files with what is changed.
    pub context: Arc<Context>,
    /// What to write.
    pub what: EntryOf,
}

/// A decision or an event.
#[derive(Debug, Clone)]
pub enum EntryOf {
    /// A decision, its gates apart.
    Decision(AsTyped, Box<DecisionAsked<'static>>),
    /// An event.
    Event(EventAsked),
}

impl Form {
    /// A form with some lines, each with what stands in it already; typing begins with the name, or after it where that is
    /// known.
    pub fn new(logs: Logs, what: Vec<String>, context: Arc<Context>, lines: &[(Line, &str)]) -> Self {
        let fields: Vec<Field> = lines
            .iter()
            .map(|(line, text)| {
                let mut field = Field::new(Typed::Line(*line), (*text).to_owned());
                // words are edited, not replaced
                field.untouched = false;
                field
            })
            .collect();
        let named = lines.first().is_some_and(|(line, text)| *line == Line::By && !text.is_empty());
        let at = usize::from(named && lines.len() > 1);
        Self { logs, what, context, fields, at, wrong: None }
    }

    /// What stands in a line; `None` where nothing does.
    pub fn text(&self, line: Line) -> Option<String> {
        let field = self.fields.iter().find(|field| field.typed == Typed::Line(line))?;
        Some(field.input.value().trim().to_owned()).filter(|text| !text.is_empty())
    }

    /// What it comes to.
    pub fn entry(&self) -> Entry {
        let decision = |ranked: RankAsked, amends, withdrawn| DecisionAsked {
            by: self.text(Line::By),
            why: self.text(Line::Why),
            words: Vec::new(),
            ranked,
            until: self.text(Line::Until),
            trigger: self.text(Line::Trigger),
            amends,
            withdrawn,
        };
        let what = match &self.logs {
            Logs::Decision(gates, ranked) => {
                EntryOf::Decision(gates.clone(), Box::new(decision((**ranked).clone(), None, false)))
            }
            Logs::Amendment(id) | Logs::Withdrawal(id) => {
                let withdrawn = matches!(self.logs, Logs::Withdrawal(_));
                let asked = decision(RankAsked::default(), Some(*id), withdrawn);
                EntryOf::Decision(AsTyped::default(), Box::new(asked))
            }
            Logs::Event => EntryOf::Event(EventAsked {
                by: self.text(Line::By),
                text: self.text(Line::Happened).unwrap_or_default(),
                from: self.text(Line::From),
                until: self.text(Line::Ended),
                amends: None,
            }),
        };
        Entry { context: Arc::clone(&self.context), what }
    }
}

impl EntryOf {
    /// The decision with its gates.
    pub fn decision<'a>(gates: &'a AsTyped, asked: &DecisionAsked<'static>) -> DecisionAsked<'a> {
        let words: Vec<Word<'a>> = gates.words();
        DecisionAsked { words, ..asked.clone() }
    }
}
