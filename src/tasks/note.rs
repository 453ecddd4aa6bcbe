//! The note: a change made ready for those who carry it out and those who must agree to it.

use chrono::{DateTime, FixedOffset};

use crate::order::{NoOrder, Order};

use super::rank::{RankAnswer, RankAsked};
use super::river::RiverAnswer;
use super::season::SeasonAnswer;
use super::{MixAnswer, Word};

/// What a note is asked, as typed.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct NoteAsked<'a> {
    /// The gates; empty for the last decision that holds, else the first ranked mix.
    pub words: Vec<Word<'a>>,
    /// What the ranking beside it is asked.
    pub ranked: RankAsked,
    /// When the change begins; the next full hour after the date of the answer where it is not said.
    pub at: Option<String>,
    /// Plan of the season; the first by file name where it is not said.
    pub plan: Option<String>,
    /// Why, in the user's words; those of the decision where it is not said.
    pub why: Option<String>,
    /// Anything else, in the user's words.
    pub remarks: Option<String>,
}

/// What a note is of.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Subject {
    /// A decision of the log, by its number.
    Decision(u64),
    /// The first ranked mix.
    FirstRanked,
    /// Gates named by the user.
    Named,
}

/// Everything a note says.
#[derive(Debug, Clone)]
pub struct NoteAnswer {
    /// What it is of.
    pub subject: Subject,
    /// The mix, with the setting now beside it.
    pub mix: MixAnswer,
    /// The ranking beside it.
    pub ranked: RankAnswer,
    /// What arrives down the river.
    pub river: RiverAnswer,
    /// The season in its cases, or why there is none.
    pub season: Result<SeasonAnswer, String>,
    /// When the change begins.
    pub begins: DateTime<FixedOffset>,
    /// The order of the moves, or why none is written; `None` where nobody knows what is set now.
    pub order: Option<Result<Order, NoOrder>>,
    /// What keeps it from being ready for signature, in words; empty where nothing does.
    pub not_ready: Vec<String>,
    /// Why, in the user's words.
    pub why: Option<String>,
    /// Anything else, in the user's words.
    pub remarks: Option<String>,
}
