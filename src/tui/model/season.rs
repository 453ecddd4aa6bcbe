//! The season screen: what is asked, what is looked at, and the answers there are.

use std::sync::Arc;

use chrono::NaiveDate;

use crate::tasks::season::{NeededAnswer, Prices, SeasonAnswer, SeasonAsked, SeasonRun};
use crate::tasks::{Changed, Context};

use super::session::Session;

/// Answers kept, so that one may go back to a strategy without waiting (choice).
const KEPT: usize = 6;

/// A question about the season.
#[derive(Debug, Clone)]
pub struct SeasonQuestion {
    /// The files as opened.
    pub base: Arc<Context>,
    /// What the user had changed.
    pub changed: Changed,
    /// What is asked.
    pub asked: SeasonAsked,
}

impl SeasonQuestion {
    /// Whether another asks the same.
    pub fn is(&self, other: &Self) -> bool {
        self.asked == other.asked && self.is_beside(other)
    }

    /// Whether another asks of the same files under the same changes, decided as often and in the same order.
    pub fn is_beside(&self, other: &Self) -> bool {
        let (own, its) = (&self.asked, &other.asked);
        self.is_of(other) && own.every == its.every && own.order == its.order
    }

    /// Whether another asks of the same files under the same changes.
    fn is_of(&self, other: &Self) -> bool {
        Arc::ptr_eq(&self.base, &other.base) && self.changed == other.changed
    }
}

/// Seasons with what they were computed for.
#[derive(Debug, Clone)]
pub struct Ahead {
    /// The question.
    pub question: SeasonQuestion,
    /// The files with what was changed.
    pub context: Arc<Context>,
    /// The answer.
    pub answer: SeasonAnswer,
}

impl Ahead {
    /// The season that something asked speaks of, where it is among these.
    fn of(&self, asked: &SeasonAsked) -> Option<&SeasonRun> {
        let (main, own) = (&self.answer.main, &self.question.asked);
        // a name left open means what it meant when these were asked
        let name = |asked: &Option<String>, own: &Option<String>, main: &str| {
            if asked == own { Some(main.to_owned()) } else { asked.clone() }
        };
        let names = [
            name(&asked.plan, &own.plan, &main.plan.file)?,
            name(&asked.case, &own.case, &main.run.case)?,
            name(&asked.chooses(), &own.chooses(), &main.run.strategy)?,
        ];
        self.answer.runs().find(|r| [&r.plan.file, &r.run.case, &r.run.strategy] == names.each_ref())
    }

    /// The season that comes nearest to what is asked: of its plan, then of its strategy, then of its case.
    fn nearest(&self, asked: &SeasonAsked) -> &SeasonRun {
        let differs = |name: &Option<String>, own: &str| name.as_ref().is_some_and(|n| n != own);
        let chooses = asked.chooses();
        let far = |r: &&SeasonRun| {
            let run = &r.run;
            let of = [(&asked.plan, &r.plan.file), (&chooses, &run.strategy), (&asked.case, &run.case)];
            of.map(|(name, own)| differs(name, own))
        };
        self.answer.runs().min_by_key(far).unwrap_or(&self.answer.main)
    }
}

/// What the mixes of a ranking cost by the end of the season, with what it was computed for.
#[derive(Debug, Clone)]
pub struct Priced {
    /// The files and changes of the ranking.
    pub context: Arc<Context>,
    /// Plan and case as far as they were chosen.
    pub asked: SeasonAsked,
    /// The prices.
    pub prices: Prices,
}

/// The cold water needed on a date, with what it was sought for.
#[derive(Debug, Clone)]
pub struct Left {
    /// The question.
    pub question: SeasonQuestion,
    /// The files with what was changed.
    pub context: Arc<Context>,
    /// The answer.
    pub answer: NeededAnswer,
}

impl Left {
    /// Whether it answers a question about a date. Every case is told: which is spoken of matters to one that is solved
    /// alone.
    fn answers(&self, question: &SeasonQuestion, date: NaiveDate) -> bool {
        let of = |asked: &SeasonAsked| SeasonAsked { case: None, ..asked.clone() };
        let solved = self.answer.cases.iter().any(|case| case.foresight);
        let same = self.question.asked == question.asked
            || (!solved && of(&self.question.asked) == of(&question.asked));
        self.answer.date == date && same && self.question.is_of(question)
    }
}

/// What the season screen shows.
#[derive(Debug, Clone, Copy, Default, PartialEq, Eq)]
pub enum SeasonPage {
    /// The pictures with the readout of a date.
    #[default]
    Pictures,
    /// Cases, plans and strategies side by side.
    Beside,
    /// Moves, gates lost and gained, and what else has a date.
    Calendar,
}

/// Where the user is on the season screen.
#[derive(Debug, Clone, Default)]
pub struct SeasonView {
    /// Plan, case and strategy looked at, as far as they were chosen.
    pub chosen: SeasonAsked,
    /// The date read; the first of the season when absent.
    pub day: Option<NaiveDate>,
    /// Where the release is looked at: 0 the dam, then the points of the river.
    pub place: usize,
    /// Whether the picture is of oxygen.
    pub oxygen: bool,
    /// What is shown.
    pub page: SeasonPage,
    /// First line shown of what scrolls there.
    pub scroll: usize,
}

/// A season shown.
#[derive(Debug, Clone, Copy)]
pub struct SeasonShown<'a> {
    /// The answer it is of.
    pub ahead: &'a Ahead,
    /// The season.
    pub run: &'a SeasonRun,
    /// Whether it is not of what is set and chosen now.
    pub old: bool,
}

impl Session {
    /// What the season screen would ask now.
    pub fn season_question(&self) -> SeasonQuestion {
        SeasonQuestion {
            base: Arc::clone(&self.base),
            changed: self.draft().changed.clone(),
            asked: self.seasons_asked(),
        }
    }

    /// Plan, case and strategy as chosen, decided as often and in the order that is set.
    fn seasons_asked(&self) -> SeasonAsked {
        let draft = self.draft();
        SeasonAsked {
            every: draft.every.map(|days| days.to_string()),
            order: draft.order_words(),
            ..self.season.chosen.clone()
        }
    }

    /// The season shown: the one chosen, else the last there is.
    pub fn season_shown(&self) -> Option<SeasonShown<'_>> {
        let question = self.season_question();
        let newest = || self.ahead.iter().rev();
        let chosen = |ahead: &'_ Ahead| ahead.question.is_beside(&question);
        let now = newest().filter(|a| chosen(a)).find_map(|a| Some((a, a.of(&question.asked)?)));
        let before = || newest().next().map(|a| (a, a.nearest(&question.asked)));
        let old = now.is_none();
        now.or_else(before).map(|(ahead, run)| SeasonShown { ahead, run, old })
    }

    /// Whether the season shown is of what is set and chosen now.
    pub fn seasons_now(&self) -> bool {
        self.season_shown().is_some_and(|s| !s.old)
    }

    /// What prices of mixes are asked with: plan and case as chosen on the season screen.
    pub fn price_asked(&self) -> SeasonAsked {
        SeasonAsked { strategy: None, schedule: None, ..self.seasons_asked() }
    }

    /// The prices of the ranking there is, under the plan and the case chosen.
    pub fn prices_now(&self) -> Option<&Prices> {
        let (priced, ranked) = (self.priced.as_ref()?, self.ranked.as_ref()?);
        let is = Arc::ptr_eq(&priced.context, &ranked.context) && priced.asked == self.price_asked();
        is.then_some(&priced.prices)
    }

    /// The answers of the same files and changes as one of them, the newest first.
    pub fn seasons_beside(&self, ahead: &Ahead) -> Vec<&Ahead> {
        self.ahead.iter().rev().filter(|a| a.question.is_beside(&ahead.question)).collect()
    }

    /// Takes an answer; those of other files and changes are dropped.
    pub fn take_ahead(&mut self, ahead: Ahead) {
        self.ahead.retain(|a| a.question.is_of(&ahead.question) && !a.question.is(&ahead.question));
        if self.ahead.len() >= KEPT {
            self.ahead.remove(0);
        }
        self.ahead.push(ahead);
    }

    /// The day read, from 0, of the season shown.
    pub fn day_read(&self) -> Option<usize> {
        let days = &self.season_shown()?.run.run.days;
        let last = days.len().checked_sub(1)?;
        let of = |day: NaiveDate| days.iter().position(|d| d.date >= day).unwrap_or(last);
        Some(self.season.day.map_or(0, of))
    }

    /// The cold water needed on a date, where that was sought for what is chosen now.
    pub fn left_on(&self, date: NaiveDate) -> Option<&Left> {
        let question = self.season_question();
        self.left.iter().rev().find(|left| left.answers(&question, date))
    }

    /// Takes the cold water needed on a date.
    pub fn take_left(&mut self, left: Left) {
        self.left
            .retain(|l| l.question.is_of(&left.question) && !l.answers(&left.question, left.answer.date));
        if self.left.len() >= KEPT {
            self.left.remove(0);
        }
        self.left.push(left);
    }
}
