//! The log screen: the past there is, and what of it is looked at.

use std::ops::Range;
use std::sync::Arc;

use chrono::{DateTime, Datelike, FixedOffset, NaiveDate};

use crate::record::Decided;
use crate::tasks::log::{Past, PastDay, Turned};
use crate::tasks::{Changed, Context};

use super::session::Session;

/// Days to either side of the one read in the narrowest span (choice: six weeks, a decision a week in sight).
const WEEKS_DAYS: usize = 21;

/// A past with what it was computed for.
#[derive(Debug, Clone)]
pub struct Passed {
    /// The files as opened.
    pub base: Arc<Context>,
    /// What was changed of what the past depends on.
    pub changed: Changed,
    /// Both together.
    pub context: Arc<Context>,
    /// The answer.
    pub past: Past,
}

/// What the log screen shows.
#[derive(Debug, Clone, Copy, Default, PartialEq, Eq)]
pub enum LogPage {
    /// The time line, the decisions, the day read.
    #[default]
    Line,
    /// The decision chosen, in full.
    Decision,
    /// How far off: all, by level, flow and month.
    Scores,
    /// Days in a row outside the band, with what may be why.
    Spells,
    /// What can be learned, and what the site file applies.
    Learned,
    /// The season gone through again.
    Hindcast,
}

/// How much of the past the time line shows.
#[derive(Debug, Clone, Copy, Default, PartialEq, Eq)]
pub enum LogSpan {
    /// All of it.
    #[default]
    Whole,
    /// The season of the day read: its calendar year.
    Season,
    /// Six weeks around it.
    Weeks,
}

/// Where the user is on the log screen.
#[derive(Debug, Clone, Default)]
pub struct LogView {
    /// The day read; when absent the last of the past that can be held against the gauge, else the last.
    pub day: Option<NaiveDate>,
    /// The decision chosen, by the number it was first written under; the newest when absent.
    pub decision: Option<u64>,
    /// How much of the past is shown.
    pub span: LogSpan,
    /// Whether oxygen is looked at.
    pub oxygen: bool,
    /// What is shown.
    pub page: LogPage,
    /// First line shown of what scrolls there.
    pub scroll: usize,
}

impl Session {
    /// What is changed of what the past depends on: no pool and no cast that is tried.
    pub fn past_changed(&self) -> Changed {
        Changed { cast: None, pool_m: None, ..self.draft().changed.clone() }
    }

    /// Whether the past there is was computed of these files and changes.
    pub fn past_now(&self) -> bool {
        let of = |p: &Passed| Arc::ptr_eq(&p.base, &self.base) && p.changed == self.past_changed();
        self.past.as_ref().is_some_and(of)
    }

    /// The days of the past there is.
    pub fn past_days(&self) -> &[PastDay] {
        self.past.as_ref().map_or(&[], |passed| &passed.past.days)
    }

    /// The day read, from 0.
    pub fn past_read(&self) -> Option<usize> {
        let days = self.past_days();
        let last = days.len().checked_sub(1)?;
        let of = |date: NaiveDate| days.iter().position(|day| day.date >= date).unwrap_or(last);
        let told = |day: &PastDay| day.expected_c.is_some() && day.measured_c.is_some();
        let newest = || days.iter().rposition(told).unwrap_or(last);
        Some(self.log.day.map_or_else(newest, of))
    }

    /// The days that the time line shows.
    pub fn past_span(&self) -> Range<usize> {
        let days = self.past_days();
        let Some((at, read)) = self.past_read().and_then(|i| Some((i, days.get(i)?))) else { return 0..0 };
        match self.log.span {
            LogSpan::Whole => 0..days.len(),
            LogSpan::Season => {
                let before = days.partition_point(|day| day.date.year() < read.date.year());
                before..days.partition_point(|day| day.date.year() <= read.date.year())
            }
            LogSpan::Weeks => {
                let from = at.saturating_sub(WEEKS_DAYS).min(days.len().saturating_sub(2 * WEEKS_DAYS));
                from..(from + 2 * WEEKS_DAYS).min(days.len())
            }
        }
    }

    /// Every decision that was not withdrawn, the newest first.
    pub fn decisions(&self) -> Vec<Decided<'_>> {
        let mut all = self.context().log.log.decisions();
        all.reverse();
        all
    }

    /// The place of the decision chosen among them.
    pub fn decision_at(&self) -> Option<usize> {
        let all = self.decisions();
        let chosen = self.log.decision.and_then(|id| all.iter().position(|d| d.id == id));
        chosen.or_else(|| (!all.is_empty()).then_some(0))
    }

    /// What became of a decision.
    pub fn turned(&self, id: u64) -> Option<&Turned> {
        self.past.as_ref()?.past.decisions.iter().find(|turned| turned.id == id)
    }

    /// The moment from which a decision stands, in the site's own time.
    pub fn stands_from(&self, decided: &Decided) -> DateTime<FixedOffset> {
        decided.decision.from.with_timezone(&self.context().site().offset)
    }
}
