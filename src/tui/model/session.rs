//! An open site: its files, what the user changed, and the answers to it.

use std::sync::Arc;

use chrono::NaiveDate;

use crate::tasks::rank::{RankAnswer, RankAsked, Shown as Mix};
use crate::tasks::river::RiverAnswer;
use crate::tasks::{Cast, Changed, Context, Failure, Given, MixAnswer, PoolAnswer};

use super::super::work::Anew;
use super::Screen;
use super::board::{Cell, Row, rows};
use super::draft::{Draft, History};
use super::log::{LogView, Passed};
use super::note::{NoteQuestion, NoteView, Noted};
use super::season::{Ahead, Left, Priced, SeasonQuestion, SeasonView};
use super::tries::taken;

/// Pool and settings as they were computed together.
#[derive(Debug, Clone)]
pub struct Shown {
    /// What they were computed on.
    pub on: Anew,
    /// Settings with their answers.
    pub mixes: Vec<(Given, Result<MixAnswer, Failure>)>,
}

/// A ranking with what it was made for.
#[derive(Debug, Clone)]
pub struct Ranked {
    /// The files as opened.
    pub base: Arc<Context>,
    /// What the user had changed.
    pub draft: Draft,
    /// Both together.
    pub context: Arc<Context>,
    /// The answer.
    pub answer: RankAnswer,
}

/// The best of the last ranking with every gate, to hold a drill against.
#[derive(Debug, Clone)]
pub struct Whole {
    /// The files as opened.
    pub base: Arc<Context>,
    /// What the user had changed.
    pub draft: Draft,
    /// The best mix; `None` where none is allowed.
    pub best: Option<Box<Mix>>,
}

/// Where the user is on the pool screen.
#[derive(Debug, Clone, Default)]
pub struct PoolView {
    /// Elevation read, m.
    pub cursor_m: Option<f64>,
    /// File of the cast looked at; the one worked with when absent.
    pub cast: Option<String>,
    /// Files of the casts laid over, in the order they were.
    pub over: Vec<String>,
    /// Threshold typed, C.
    pub colder_c: Option<f64>,
    /// First line of the words shown.
    pub scroll: usize,
}

/// Where the user is on the mix screen.
#[derive(Debug, Clone)]
pub struct MixView {
    /// The cell chosen.
    pub cell: Cell,
    /// First line of what is said shown.
    pub scroll: usize,
}

/// What the rank screen shows.
#[derive(Debug, Clone, Copy, Default, PartialEq, Eq)]
pub enum Page {
    /// The list, the mix chosen, and the trade curve.
    #[default]
    List,
    /// What is rejected.
    Rejected,
    /// The answers beyond the list.
    Others,
    /// What the mixes cost by the end of the season.
    Prices,
}

/// Where the user is on the rank screen.
#[derive(Debug, Clone, Default)]
pub struct RankView {
    /// The mix chosen, from 0.
    pub at: usize,
    /// What is shown.
    pub page: Page,
    /// First line shown of what scrolls there.
    pub scroll: usize,
}

/// What arrives downstream, with what it was computed for.
#[derive(Debug, Clone)]
pub struct Downstream {
    /// The files and what is changed.
    pub context: Arc<Context>,
    /// The setting tried.
    pub tried: Option<Given>,
    /// What the best of the ranking sets, where there was one.
    pub best: Option<Given>,
    /// The answer.
    pub answer: RiverAnswer,
}

/// What the river screen shows below its pictures.
#[derive(Debug, Clone, Copy, Default, PartialEq, Eq)]
pub enum RiverPage {
    /// The rules with their standings.
    #[default]
    Rules,
    /// What arrives day by day.
    Days,
    /// What stations recorded, against the rules.
    Record,
}

/// Where the user is on the river screen.
#[derive(Debug, Clone, Default)]
pub struct RiverView {
    /// The rule chosen, from 0, among those valid on the date.
    pub rule: usize,
    /// Its cell, from the left: low, preferred, high, oxygen.
    pub column: usize,
    /// What is shown below.
    pub page: RiverPage,
    /// First line shown of what scrolls there.
    pub scroll: usize,
}

/// An open site.
#[derive(Debug)]
pub struct Session {
    /// The files as opened.
    pub base: Arc<Context>,
    /// Casts of the season, as last read.
    pub casts: Option<Vec<Cast>>,
    /// Why they could not be.
    pub casts_wrong: Option<Failure>,
    /// What the user changed.
    pub history: History,
    /// Pool and settings: the last answer there is.
    pub shown: Option<Shown>,
    /// Why the newest question about them has no answer.
    pub wrong: Option<Failure>,
    /// The ranking: the last there is.
    pub ranked: Option<Ranked>,
    /// The best with every gate.
    pub whole: Option<Whole>,
    /// Why the newest question about it has no answer.
    pub rank_wrong: Option<Failure>,
    /// The screen.
    pub screen: Screen,
    /// The pool screen.
    pub pool: PoolView,
    /// The mix screen.
    pub mix: MixView,
    /// The rank screen.
    pub rank: RankView,
    /// What arrives downstream: the last there is.
    pub downstream: Option<Downstream>,
    /// Why the newest question about it has no answer.
    pub river_wrong: Option<Failure>,
    /// The river screen.
    pub river: RiverView,
    /// Seasons as far as they were asked, the newest last.
    pub ahead: Vec<Ahead>,
    /// The question about them that is under way.
    pub season_asked: Option<SeasonQuestion>,
    /// Why the newest question about them has no answer.
    pub season_wrong: Option<Failure>,
    /// The season screen.
    pub season: SeasonView,
    /// The cold water needed on dates, as far as it was asked, the newest last.
    pub left: Vec<Left>,
    /// The question about it that is under way.
    pub left_asked: Option<(SeasonQuestion, NaiveDate)>,
    /// What the mixes of a ranking cost by the end of the season: the last there is.
    pub priced: Option<Priced>,
    /// Why the newest question about it has no answer.
    pub price_wrong: Option<Failure>,
    /// The past there is.
    pub past: Option<Passed>,
    /// The files and changes it was asked of last.
    pub past_asked: Option<(Arc<Context>, Changed)>,
    /// Why the newest question about it has no answer.
    pub past_wrong: Option<Failure>,
    /// Where the user is on the log screen.
    pub log: LogView,
    /// The note there is.
    pub noted: Option<Noted>,
    /// The question for one asked last.
    pub note_asked: Option<NoteQuestion>,
    /// Why that has no answer.
    pub note_wrong: Option<Failure>,
    /// Where the user is on the note screen.
    pub note: NoteView,
}

impl Session {
    /// A site just opened: the setting now is tried first.
    pub fn begin(base: Arc<Context>) -> Self {
        let now = base.now_given().0;
        // what is open now is what is turned first
        let rows = rows(base.site(), base.on.date_naive());
        let opens = |row: &&Row| matches!(row, Row::Outlet(i) if now.names(*i));
        let row = rows.iter().find(opens).or(rows.first());
        let cell = row.and_then(|row| row.cells(base.site()).last().copied()).unwrap_or(Cell::Pool);
        Self {
            history: History::begin(Draft::begin(now)),
            base,
            casts: None,
            casts_wrong: None,
            shown: None,
            wrong: None,
            ranked: None,
            whole: None,
            rank_wrong: None,
            screen: Screen::Pool,
            pool: PoolView::default(),
            mix: MixView { cell, scroll: 0 },
            rank: RankView::default(),
            downstream: None,
            river_wrong: None,
            river: RiverView::default(),
            ahead: Vec::new(),
            season_asked: None,
            season_wrong: None,
            season: SeasonView::default(),
            left: Vec::new(),
            left_asked: None,
            priced: None,
            price_wrong: None,
            past: None,
            past_asked: None,
            past_wrong: None,
            log: LogView::default(),
            noted: None,
            note_asked: None,
            note_wrong: None,
            note: NoteView::default(),
        }
    }

    /// What the user changed.
    pub fn draft(&self) -> &Draft {
        self.history.now()
    }

    /// What the ranking is asked.
    pub fn rank_asked(&self) -> RankAsked {
        let (draft, site) = (self.draft(), self.base.site());
        RankAsked {
            release: draft.release_m3s.map(|flow| format!("{flow} m3/s")),
            order: Some(draft.order.iter().map(|c| c.name()).collect::<Vec<_>>().join(",")),
            without: draft.without.iter().map(|&i| site.outlets[i].name.clone()).collect(),
            ..RankAsked::default()
        }
    }

    /// The files with what is changed, as far as that is computed.
    pub fn context(&self) -> &Arc<Context> {
        self.shown.as_ref().map_or(&self.base, |s| &s.on.context)
    }

    /// A cast of the season.
    pub fn cast(&self, file: &str) -> Option<&Cast> {
        self.casts.as_ref()?.iter().find(|c| c.file == file)
    }

    /// The cast looked at instead of the one worked with.
    pub fn looked_at(&self) -> Option<&Cast> {
        self.pool
            .cast
            .as_deref()
            .filter(|file| *file != self.context().profile.file)
            .and_then(|file| self.cast(file))
    }

    /// What the pool screen speaks of: the cast looked at, else the one worked with; `None` where that cast cannot be
    /// read or nothing is computed yet.
    pub fn pool_shown(&self) -> Option<(&Arc<Context>, &PoolAnswer)> {
        match self.looked_at() {
            Some(cast) => cast.pool.as_ref().map(|(context, answer)| (context, answer)),
            None => self.shown.as_ref().map(|s| (&s.on.context, &s.on.pool)),
        }
    }

    /// The pool of the cast worked with, before any other is tried, m.
    pub fn own_pool_m(&self) -> f64 {
        let chosen = self.draft().changed.cast.as_deref().and_then(|file| self.cast(file));
        chosen.and_then(Cast::profile).unwrap_or(&self.base.profile).pool_m
    }

    /// Whether what is shown was computed on these files and with these changes.
    pub fn is_current(&self) -> bool {
        let of = |s: &Shown| Arc::ptr_eq(&s.on.base, &self.base) && s.on.changed == self.draft().changed;
        self.shown.as_ref().is_some_and(of)
    }

    /// Whether the ranking there is was made of these files and these changes.
    pub fn ranks_now(&self) -> bool {
        let of = |r: &Ranked| Arc::ptr_eq(&r.base, &self.base) && r.draft.ranks_as(self.draft());
        self.ranked.as_ref().is_some_and(of)
    }

    /// What the best of the ranking sets, where the ranking is of what is set now.
    pub fn best_now(&self) -> Option<(&Mix, Given)> {
        let ranked = self.ranked.as_ref().filter(|_| self.ranks_now())?;
        let mix = ranked.answer.mixes.first()?;
        Some((mix, taken(ranked.context.site(), mix)))
    }

    /// Whether what is told of the river is of what is set now and of the best there is.
    pub fn flows_now(&self) -> bool {
        let of = |d: &Downstream| {
            self.shown.as_ref().is_some_and(|s| Arc::ptr_eq(&s.on.context, &d.context))
                && self.is_current()
                && d.tried.as_ref() == self.draft().tried()
                && d.best == self.best_now().map(|b| b.1)
        };
        self.downstream.as_ref().is_some_and(of)
    }

    /// The best with every gate under the changes a ranking was made for.
    pub fn whole_beside(&self, ranked: &Ranked) -> Option<&Whole> {
        let of = |w: &&Whole| Arc::ptr_eq(&w.base, &ranked.base) && w.draft.ranks_beside(&ranked.draft);
        self.whole.as_ref().filter(of)
    }

    /// Whether what the user changed means the same in other files: the same gates, wells and targets, by name.
    pub fn takes(&self, other: &Context) -> bool {
        let names = |context: &Context| {
            let site = context.site();
            let outlets: Vec<_> = site.outlets.iter().map(|o| (o.name.clone(), o.well)).collect();
            let wells: Vec<_> = site.wells.iter().map(|w| w.name.clone()).collect();
            let targets: Vec<_> = site.targets.iter().map(|t| t.name.clone()).collect();
            (outlets, wells, targets)
        };
        names(&self.base) == names(other)
    }

    /// The answer to a try; the last there is of the one on the board where it has none of its own yet.
    pub fn answer(&self, index: usize) -> Option<&Result<MixAnswer, Failure>> {
        let shown = self.shown.as_ref()?;
        let given = self.draft().tries.get(index)?;
        let place = shown.mixes.iter().find(|(g, _)| g == given);
        place.or_else(|| shown.mixes.get(index)).map(|(_, answer)| answer)
    }

    /// The answer to the try on the board.
    pub fn tried(&self) -> Option<&MixAnswer> {
        self.answer(self.draft().at)?.as_ref().ok()
    }

    /// The same where it is of exactly this setting, not one of before.
    pub fn tried_now(&self) -> Option<&MixAnswer> {
        let shown = self.shown.as_ref().filter(|_| self.is_current())?;
        let tried = self.draft().tried()?;
        shown.mixes.iter().find(|(given, _)| given == tried)?.1.as_ref().ok()
    }
}
