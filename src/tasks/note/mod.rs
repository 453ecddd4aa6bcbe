//! The note: a change made ready for those who carry it out and those who must agree to it.

mod begins;
mod ready;
mod stage;
mod subject;
mod unchecked;

use chrono::{DateTime, FixedOffset};

use crate::mix::Setting;
use crate::order::{Manner, NoOrder, Order, Question, order};
use crate::rank::Progress;

use super::log::{Skill, skill};
use super::mix::same;
use super::rank::{RankAnswer, RankAsked};
use super::river::{RiverAnswer, downstream};
use super::season::{SeasonAnswer, SeasonAsked, season};
use super::{Context, Failure, MixAnswer, Word, now_setting};

pub use stage::StageChange;
pub use unchecked::Unchecked;

use begins::begins;
use ready::Ready;
use subject::{About, about};

/// Share of the progress that the ranking takes, and with the season after it; the rest is the past (choice).
const RANKING: f64 = 0.3;
const SEASON: f64 = 0.8;

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
    /// What is set before the change; `None` where nobody knows.
    pub before: Option<Setting>,
    /// The ranking beside it.
    pub ranked: RankAnswer,
    /// What arrives down the river.
    pub river: RiverAnswer,
    /// What the change does to the stage at each point of the river.
    pub stages: Vec<StageChange>,
    /// How well the release of past days was foreseen.
    pub skill: Skill,
    /// The season in its cases, or why there is none.
    pub season: Result<SeasonAnswer, String>,
    /// When the change begins.
    pub begins: DateTime<FixedOffset>,
    /// The order of the moves, or why none is written; `None` where nobody knows what is set now, and where the gates
    /// stand already.
    pub order: Option<Result<Order, NoOrder>>,
    /// Whether the gates stand already: there is nothing to move.
    pub stands: bool,
    /// What keeps it from being ready for signature, in words; empty where nothing does.
    pub not_ready: Vec<String>,
    /// What to know all the same, in words.
    pub cautions: Vec<String>,
    /// Limits that are not checked, of what is set now as of what is to be set.
    pub not_checked: Vec<Unchecked>,
    /// Why, in the user's words.
    pub why: Option<String>,
    /// Anything else, in the user's words.
    pub remarks: Option<String>,
}

/// Makes the note of the gates that are asked, else of the last decision that holds, else of the first ranked mix.
/// `progress` is told how much is done and may stop it.
///
/// # Errors
/// Words that cannot be understood; no mix to write of; a caller who stops it.
pub fn note(context: &Context, asked: &NoteAsked, progress: Progress) -> Result<NoteAnswer, Failure> {
    let About { subject, context, mix, ranked, decided, cannot, said } =
        about(context, asked, &|done| progress(RANKING * done))?;
    let context = &context;
    let begins = begins(context, asked.at.as_deref(), decided.as_ref().map(|decided| decided.0))?;
    let season = ahead(context, asked, &|done| progress(RANKING + (SEASON - RANKING) * done))?;
    let skill = skill(context, &|done| progress(SEASON + (1.0 - SEASON) * done))?;
    let before = now_setting(context).map_err(|failure| match subject {
        Subject::Decision(id) if context.set_before.is_some() => {
            format!("decision {id} was logged without it")
        }
        _ => failure.words(),
    });
    let now = super::mix(context, &[]).ok();
    let river = downstream(context, Some(&mix), now.as_ref(), ranked.mixes.first());
    let mut stands = before.as_ref().is_ok_and(|before| same(&before.setting, &mix.setting));
    let mut way = before.as_ref().ok().filter(|_| !stands).map(|before| {
        order(&Question {
            site: context.site(),
            profile: &context.profile,
            date: begins.date_naive(),
            now: &before.setting,
            wanted: &mix.setting,
            manner: manner(context),
        })
    });
    if way.as_ref().is_some_and(|way| way.as_ref().is_ok_and(|order| order.steps.is_empty())) {
        (stands, way) = (true, None);
    }
    // what is set now is held against no change
    let of_now = now.iter().flat_map(|now| &now.mix.not_checked).filter(|text| text.contains(" of "));
    let not_checked = unchecked::unchecked(mix.mix.not_checked.iter().chain(of_now), stands);
    let found = way.as_ref().and_then(|way| way.as_ref().ok());
    let stages = stage::stages(context, &river, found);
    let ready = Ready {
        context,
        mix: &mix,
        before: &before,
        stands,
        order: way.as_ref(),
        not_checked: &not_checked,
        stages: &stages,
        begins,
    };
    let (not_ready, cautions) = (ready.not_ready(cannot), ready.cautions(said));
    if progress(1.0).is_break() {
        return Err(Failure::Stopped);
    }
    Ok(NoteAnswer {
        why: asked.why.clone().or(decided.map(|decided| decided.1)).filter(|why| !why.trim().is_empty()),
        remarks: asked.remarks.clone().filter(|remarks| !remarks.trim().is_empty()),
        order: way,
        before: before.ok().map(|before| before.setting),
        subject,
        mix,
        ranked,
        river,
        stages,
        skill,
        season,
        begins,
        stands,
        not_ready,
        cautions,
        not_checked,
    })
}

/// The season in its cases, or why there is none.
fn ahead(
    context: &Context,
    asked: &NoteAsked,
    progress: Progress,
) -> Result<Result<SeasonAnswer, String>, Failure> {
    let plan = asked.plan.clone();
    match season(context, &SeasonAsked { plan, ..SeasonAsked::default() }, progress) {
        Ok(answer) => Ok(Ok(answer)),
        Err(Failure::Stopped) => Err(Failure::Stopped),
        // a plan that was named and is not there is a slip of whoever named it
        Err(Failure::Usage(words)) if asked.plan.is_some() => Err(Failure::Usage(words)),
        Err(failure) => Ok(Err(failure.words())),
    }
}

/// How the site has its moves made.
fn manner(context: &Context) -> Manner {
    let told = &context.site().order;
    Manner { shut_first: told.shut_first, through_bands: told.through_bands, ..Manner::default() }
}
