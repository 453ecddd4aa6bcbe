//! What can be typed to be logged.

use clap::Args;

use crate::tasks::log::{DecisionAsked, EventAsked};
use crate::tasks::rank::RankAsked;

use super::arguments::Setting;

#[derive(Debug, Args)]
pub(super) struct Entry {
    /// Log a decision: the gates set, else the first ranked mix.
    #[arg(long)]
    pub(super) decide: bool,
    /// Log something that nobody planned, such as a gate that failed.
    #[arg(long, value_name = "TEXT", conflicts_with = "decide")]
    pub(super) event: Option<String>,
    /// By whom.
    #[arg(long, value_name = "NAME")]
    by: Option<String>,
    /// Why it is decided so.
    #[arg(long, value_name = "TEXT")]
    why: Option<String>,
    /// The day by which it is to be decided again; of an event its last day, or `open`.
    #[arg(long, value_name = "DATE")]
    until: Option<String>,
    /// What would end it earlier, in words.
    #[arg(long, value_name = "TEXT", conflicts_with = "event")]
    trigger: Option<String>,
    /// When the event began; without it the date of the answer.
    #[arg(long, value_name = "DATE", requires = "event")]
    from: Option<String>,
    /// The decision (or, with --event, the event) that this amends; what is not said anew stays.
    #[arg(long, value_name = "NUMBER")]
    amend: Option<u64>,
    /// Take the decision back that --amend names.
    #[arg(long, requires = "amend", conflicts_with = "event")]
    withdraw: bool,
}

impl Entry {
    /// Whether a decision is to be logged.
    pub(super) fn decides(&self) -> bool {
        self.decide || (self.amend.is_some() && self.event.is_none())
    }

    /// What was typed that means nothing without something to log.
    pub(super) fn idle(&self, setting: &Setting) -> Option<&'static str> {
        let typed = [
            (self.by.is_some(), "--by"),
            (self.why.is_some(), "--why"),
            (self.until.is_some(), "--until"),
            (self.trigger.is_some(), "--trigger"),
            (!setting.set.is_empty(), "--set"),
            (!setting.open.is_empty(), "--open"),
        ];
        typed.into_iter().find_map(|(is, name)| is.then_some(name))
    }

    pub(super) fn decision<'a>(&self, setting: &'a Setting, release: Option<&'a str>) -> DecisionAsked<'a> {
        let alone = setting.set.is_empty() && setting.open.is_empty();
        DecisionAsked {
            by: self.by.clone(),
            why: self.why.clone(),
            words: if alone { Vec::new() } else { setting.words(release) },
            ranked: RankAsked {
                release: release.filter(|_| alone).map(str::to_owned),
                ..RankAsked::default()
            },
            until: self.until.clone(),
            trigger: self.trigger.clone(),
            amends: self.amend,
            withdrawn: self.withdraw,
        }
    }

    pub(super) fn event(&self, text: &str) -> EventAsked {
        EventAsked {
            by: self.by.clone(),
            text: text.to_owned(),
            from: self.from.clone(),
            until: self.until.clone(),
            amends: self.amend,
        }
    }
}
