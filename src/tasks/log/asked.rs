//! What is to be logged, as typed.

use chrono::{DateTime, FixedOffset, NaiveDate};

use crate::files::cast::{TIME_CURE, parse_time};
use crate::record::Log;
use crate::record::line::{Decision, Event};
use crate::tasks::rank::RankAsked;
use crate::tasks::{Context, Failure, Word};

/// Longest text of a user that is logged, characters (choice: a page).
const LONGEST: usize = 4000;
/// What `--until` says of what has no end yet.
const OPEN: &str = "open";

/// A decision to be logged, as typed.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct DecisionAsked<'a> {
    /// By whom.
    pub by: Option<String>,
    /// Why.
    pub why: Option<String>,
    /// The gates; empty for the first ranked mix, or for those of the decision that is amended.
    pub words: Vec<Word<'a>>,
    /// What the ranking beside it is asked.
    pub ranked: RankAsked,
    /// The day by which it is to be decided again.
    pub until: Option<String>,
    /// What would end it earlier.
    pub trigger: Option<String>,
    /// The decision that it amends.
    pub amends: Option<u64>,
    /// Whether that one is taken back.
    pub withdrawn: bool,
}

/// An event to be logged, as typed.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct EventAsked {
    /// By whom.
    pub by: Option<String>,
    /// What happened.
    pub text: String,
    /// From when; the date of the answer where it is not said.
    pub from: Option<String>,
    /// Its last day, or `open`; the day it begins where it is not said.
    pub until: Option<String>,
    /// The event that it amends.
    pub amends: Option<u64>,
}

/// What the user says of a decision, understood.
pub(super) struct Told {
    by: String,
    why: Option<String>,
    until: Option<NaiveDate>,
    trigger: Option<String>,
    pub(super) amends: Option<u64>,
    withdrawn: bool,
    /// Whether the gates are those of the decision that is amended.
    pub(super) keeps_gates: bool,
}

impl DecisionAsked<'_> {
    pub(super) fn told(&self, context: &Context) -> Result<Told, Failure> {
        let why = self.why.as_deref().map(|text| said(text, "--why", "why")).transpose()?;
        if why.is_none() && self.amends.is_none() {
            return Err(Failure::Usage("a decision needs --why TEXT: why it is taken, in your words".into()));
        }
        let until = self.until.as_deref().map(|text| date(context, text, "--until")).transpose()?;
        let on = context.on.date_naive();
        if until.is_some_and(|until| until < on) {
            return Err(Failure::Usage(format!("--until lies before the day from which it holds, {on}")));
        }
        Ok(Told {
            by: by(self.by.as_deref())?,
            why,
            until,
            trigger: self
                .trigger
                .as_deref()
                .map(|text| said(text, "--trigger", "what would end it earlier"))
                .transpose()?,
            amends: self.amends,
            withdrawn: self.withdrawn,
            keeps_gates: self.amends.is_some() && self.words.is_empty(),
        })
    }
}

impl Told {
    /// Puts it into a decision. An amendment keeps what is not said anew, and names the line that was first written.
    pub(super) fn put(&self, decision: &mut Decision, log: &Log) {
        let before = self.amends.and_then(|id| log.decision(id));
        decision.by.clone_from(&self.by);
        decision.amends = before.map(|decided| decided.id);
        decision.withdrawn = self.withdrawn;
        let before = before.map(|decided| decided.decision);
        decision.why = self.why.clone().or_else(|| before.map(|d| d.why.clone())).unwrap_or_default();
        decision.until = self.until.or_else(|| before.and_then(|d| d.until));
        decision.trigger = self.trigger.clone().or_else(|| before.and_then(|d| d.trigger.clone()));
    }
}

impl EventAsked {
    pub(super) fn event(&self, context: &Context, at: DateTime<FixedOffset>) -> Result<Event, Failure> {
        let from = match &self.from {
            None => context.on,
            Some(text) => time(context, text, "--from")?,
        };
        let until = match self.until.as_deref() {
            None => Some(from.date_naive()),
            Some(OPEN) => None,
            Some(text) => Some(date(context, text, "--until")?),
        };
        if until.is_some_and(|until| until < from.date_naive()) {
            return Err(Failure::Usage("--until lies before --from".into()));
        }
        if let Some(id) = self.amends
            && !context.log.log.events().iter().any(|event| event.id == id)
        {
            return Err(Failure::Usage(format!("--amend {id}: no event has that number")));
        }
        Ok(Event {
            id: 0,
            at,
            by: by(self.by.as_deref())?,
            text: said(&self.text, "--event", "what happened")?,
            from,
            until,
            amends: self.amends,
        })
    }
}

fn by(name: Option<&str>) -> Result<String, Failure> {
    name.map_or_else(
        || Err(Failure::Usage("the log needs --by NAME: who says so".into())),
        |name| said(name, "--by", "a name"),
    )
}

fn said(text: &str, option: &str, what: &str) -> Result<String, Failure> {
    let text = text.trim();
    if text.is_empty() {
        return Err(Failure::Usage(format!("{option} is empty: give {what}")));
    }
    if text.chars().count() > LONGEST {
        return Err(Failure::Usage(format!("{option} is longer than {LONGEST} characters")));
    }
    Ok(text.to_owned())
}

fn time(context: &Context, text: &str, option: &str) -> Result<DateTime<FixedOffset>, Failure> {
    parse_time(text, context.site().offset)
        .map_err(|words| Failure::Usage(format!("{option}: {words}; {TIME_CURE}")))
}

pub(in crate::tasks) fn date(context: &Context, text: &str, option: &str) -> Result<NaiveDate, Failure> {
    Ok(time(context, text, option)?.date_naive())
}
