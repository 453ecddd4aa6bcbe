//! What takes time: asked as plain data, computed on a thread, answered as a message. A newer question of one kind
//! makes the answer to an older one worthless, so it is stopped and dropped.

use std::ops::ControlFlow;
use std::panic::{AssertUnwindSafe, catch_unwind};
use std::sync::atomic::{AtomicU64, Ordering};
use std::sync::mpsc::{Receiver, Sender, channel};
use std::sync::{Arc, Mutex, PoisonError};
use std::thread;

use chrono::{DateTime, NaiveDate, Utc};

use crate::files::folder::{Stamps, stamps};
use crate::problem::Problem;
use crate::tasks::log::past;
use crate::tasks::note::note;
use crate::tasks::rank::{RankAnswer, RankAsked, Shown, rank};
use crate::tasks::river::downstream;
use crate::tasks::season::{SeasonAsked, needed, prices, season};
use crate::tasks::{
    Asked, Cast, Changed, Context, Failure, Given, MixAnswer, PoolAnswer, Solved, casts, mix, mix_given,
    open, pool, preferred_c, solve,
};
use crate::units::System;

use super::model::{
    Ahead, AsTyped, Downstream, Left, NoteQuestion, Noted, Passed, Priced, SeasonQuestion, asked,
};

/// Who computes: what answers a key, or what takes longer.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Lane {
    /// Opening, pool and mix.
    Quick,
    /// The ranking.
    Long,
    /// The casts of the season.
    Aside,
    /// The river.
    Down,
    /// The season, and the price of mixes by its end.
    Ahead,
    /// The cold water needed on a date.
    Needed,
    /// What happened.
    Past,
    /// Change order and agency note.
    Note,
}

/// What settings are computed on.
#[derive(Debug, Clone)]
pub enum On {
    /// The files as opened, with what is changed; the pool is computed too.
    Files(Arc<Context>, Changed),
    /// The same as last time.
    Same(Arc<Context>),
}

/// A question.
#[derive(Debug, Clone)]
pub enum Work {
    /// Open a site.
    Open(Asked, DateTime<Utc>),
    /// Some settings.
    Mix {
        /// What they are computed on.
        on: On,
        /// The settings.
        tries: Vec<Given>,
        /// The setting to solve for the preferred temperature, where that is asked.
        solve: Option<Given>,
    },
    /// The ranking, under what is changed.
    Rank {
        /// The files as opened.
        base: Arc<Context>,
        /// What is changed.
        changed: Changed,
        /// What is asked.
        asked: RankAsked,
    },
    /// Every cast of the season, under what is changed except the pool and the cast.
    Casts(Arc<Context>, Changed),
    /// What arrives downstream of what is tried, beside what is set now and the best of the ranking.
    River {
        /// The files and what is changed.
        context: Arc<Context>,
        /// The setting tried, with its answer.
        tried: Box<(Given, MixAnswer)>,
        /// The best of the ranking, with what it sets.
        best: Option<Box<(Given, Shown)>>,
    },
    /// The season ahead, under what is changed.
    Season(Box<SeasonQuestion>),
    /// The cold water needed on a date of the season.
    Needed(Box<SeasonQuestion>, NaiveDate),
    /// What the mixes of a ranking cost by the end of the season.
    Prices {
        /// The files and changes of the ranking.
        context: Arc<Context>,
        /// The ranking.
        ranking: Box<RankAnswer>,
        /// Plan and case.
        asked: SeasonAsked,
    },
    /// What happened, under what is changed of what that depends on.
    Past(Arc<Context>, Changed),
    /// Change order and agency note.
    Note(Box<NoteQuestion>),
}

/// What settings are computed on.
#[derive(Debug, Clone)]
pub struct Anew {
    /// The files as opened.
    pub base: Arc<Context>,
    /// What is changed.
    pub changed: Changed,
    /// Both together.
    pub context: Arc<Context>,
    /// The pool.
    pub pool: PoolAnswer,
}

/// Settings computed together.
#[derive(Debug, Clone)]
pub struct Computed {
    /// What they were computed on, where that is not what it was last time.
    pub anew: Option<Anew>,
    /// Each setting with its answer.
    pub mixes: Vec<(Given, Result<MixAnswer, Failure>)>,
    /// The setting that was to be solved, and what came of it.
    pub solved: Option<(Given, Result<Solved, Failure>)>,
}

/// What was named, and how its files stood before they were read.
pub type Seen = (String, Stamps);

/// An answer.
#[derive(Debug)]
pub enum Done {
    /// A site opened; with what is to be watched, where a site was named.
    Opened(Result<Arc<Context>, Failure>, Option<Seen>),
    /// Pool and settings.
    Mixed(Result<Box<Computed>, Failure>),
    /// The ranking, with what it was made for.
    Ranked(Result<Box<(Arc<Context>, RankAnswer)>, Failure>),
    /// The casts of the season.
    Casts(Result<Vec<Cast>, Failure>),
    /// What arrives downstream.
    Down(Result<Box<Downstream>, Failure>),
    /// The season.
    Ahead(Result<Box<Ahead>, Failure>),
    /// The cold water needed.
    Needed(Result<Box<Left>, Failure>),
    /// The price of mixes.
    Priced(Result<Box<Priced>, Failure>),
    /// What happened.
    Passed(Result<Box<Passed>, Failure>),
    /// The note.
    Noted(Result<Box<Noted>, Failure>),
}

impl Work {
    /// Who computes it.
    pub fn lane(&self) -> Lane {
        match self {
            Self::Open(..) | Self::Mix { .. } => Lane::Quick,
            Self::Rank { .. } => Lane::Long,
            Self::Casts(..) => Lane::Aside,
            Self::River { .. } => Lane::Down,
            Self::Season(..) | Self::Prices { .. } => Lane::Ahead,
            Self::Needed(..) => Lane::Needed,
            Self::Past(..) => Lane::Past,
            Self::Note(..) => Lane::Note,
        }
    }

    /// The answer; `progress` is told how much is done and may stop it.
    pub fn perform(self, progress: &(dyn Fn(f64) -> ControlFlow<()> + Sync)) -> Done {
        match self {
            Self::Open(asked, clock) => {
                // looked at first: what changes while it is read is noticed too
                let seen = asked.site.clone().map(|named| {
                    let seen = stamps(&named);
                    (named, seen)
                });
                Done::Opened(open(&asked, clock).map(Arc::new), seen)
            }
            Self::Mix { on, tries, solve } => Done::Mixed(computed(on, tries, solve).map(Box::new)),
            Self::Rank { base, changed, asked } => Done::Ranked(base.changed(&changed).and_then(|context| {
                let answer = rank(&context, &asked, progress)?;
                Ok(Box::new((Arc::new(context), answer)))
            })),
            Self::Casts(base, changed) => {
                let changed = Changed { cast: None, pool_m: None, ..changed };
                Done::Casts(base.changed(&changed).map(|context| casts(&context)))
            }
            Self::River { context, tried, best } => {
                let (given, answer) = *tried;
                let (best, shown) = best.map(|b| *b).unzip();
                // a site that says nothing of what is set now has nothing to show of it
                let now = mix(&context, &[]).ok();
                let answer = downstream(&context, Some(&answer), now.as_ref(), shown.as_ref());
                Done::Down(Ok(Box::new(Downstream { context, tried: Some(given), best, answer })))
            }
            Self::Season(question) => {
                Done::Ahead(question.base.changed(&question.changed).and_then(|context| {
                    let answer = season(&context, &question.asked, progress)?;
                    Ok(Box::new(Ahead { question: *question, context: Arc::new(context), answer }))
                }))
            }
            Self::Needed(question, date) => {
                Done::Needed(question.base.changed(&question.changed).and_then(|context| {
                    let date = date.to_string();
                    let answer = needed(&context, &question.asked, Some(&date), progress)?;
                    Ok(Box::new(Left { question: *question, context: Arc::new(context), answer }))
                }))
            }
            Self::Prices { context, ranking, asked } => Done::Priced(
                prices(&context, &ranking, &asked, progress)
                    .map(|prices| Box::new(Priced { context, asked, prices })),
            ),
            Self::Past(base, changed) => Done::Passed(base.changed(&changed).and_then(|context| {
                let past = past(&context, progress)?;
                Ok(Box::new(Passed { base, changed, context: Arc::new(context), past }))
            })),
            Self::Note(question) => {
                Done::Noted(question.base.changed(&question.changed).and_then(|mut context| {
                    context.system = question.system;
                    let given = question.candidate.as_ref();
                    let gates = given.map(|given| AsTyped::of(context.site(), given)).unwrap_or_default();
                    let answer = note(&context, &question.asked(&gates), progress)?;
                    Ok(Box::new(Noted::new(*question, Arc::new(context), answer)))
                }))
            }
        }
    }

    /// What a failure is to this question.
    fn unanswered(&self) -> fn(Failure) -> Done {
        match self {
            Self::Open(..) => |failure| Done::Opened(Err(failure), None),
            Self::Mix { .. } => |failure| Done::Mixed(Err(failure)),
            Self::Rank { .. } => |failure| Done::Ranked(Err(failure)),
            Self::Casts(..) => |failure| Done::Casts(Err(failure)),
            Self::River { .. } => |failure| Done::Down(Err(failure)),
            Self::Season(..) => |failure| Done::Ahead(Err(failure)),
            Self::Needed(..) => |failure| Done::Needed(Err(failure)),
            Self::Prices { .. } => |failure| Done::Priced(Err(failure)),
            Self::Past(..) => |failure| Done::Passed(Err(failure)),
            Self::Note(..) => |failure| Done::Noted(Err(failure)),
        }
    }
}

fn computed(on: On, tries: Vec<Given>, wanted: Option<Given>) -> Result<Computed, Failure> {
    let (context, anew) = match on {
        On::Same(context) => (context, None),
        On::Files(base, changed) => {
            let context = Arc::new(base.changed(&changed)?);
            let pool = pool(&context);
            (Arc::clone(&context), Some(Anew { base, changed, context, pool }))
        }
    };
    let mixes =
        tries.into_iter().map(|t| (t.clone(), mix_given(&context, &asked(context.site(), &t)))).collect();
    let solved = wanted.map(|given| {
        let answer = preferred_c(&context)
            .ok_or_else(|| Failure::Usage("no target of this date prefers a temperature".into()))
            .and_then(|wanted_c| solve(&context, &asked(context.site(), &given), wanted_c));
        (given, answer)
    });
    Ok(Computed { anew, mixes, solved })
}

/// What a worker sends.
#[derive(Debug)]
pub enum Sent {
    /// How much of a question is done, 0 to 1.
    Progress(Lane, u64, f64),
    /// Its answer.
    Done(Lane, u64, Done),
}

/// A thread for questions of one lane: it takes the newest and leaves out those before.
pub(super) struct Worker {
    newest: Arc<AtomicU64>,
    queue: Sender<(u64, Work)>,
}

impl Worker {
    /// Starts the thread; answers go to `send`.
    pub(super) fn start(send: impl Fn(Sent) + Send + Sync + 'static) -> Self {
        let newest = Arc::new(AtomicU64::new(0));
        let (queue, questions) = channel();
        let seen = Arc::clone(&newest);
        thread::spawn(move || serve(&questions, &seen, &send));
        Self { newest, queue }
    }

    /// Asks a question; what is under way in the lane stops.
    pub(super) fn ask(&self, generation: u64, work: Work) {
        self.newest.store(generation, Ordering::Relaxed);
        // a worker that is gone cannot answer; there is nothing to do about it here
        _ = self.queue.send((generation, work));
    }

    /// Stops what is under way: no question of this or an earlier generation is answered.
    pub(super) fn stop(&self, generation: u64) {
        self.newest.store(generation, Ordering::Relaxed);
    }
}

fn serve(questions: &Receiver<(u64, Work)>, newest: &AtomicU64, send: &(impl Fn(Sent) + Send + Sync)) {
    while let Ok((generation, work)) = questions.recv() {
        let stale = || newest.load(Ordering::Relaxed) != generation;
        if stale() {
            continue;
        }
        let (lane, unanswered) = (work.lane(), work.unanswered());
        let told = Mutex::new(0.0_f64);
        let progress = |done: f64| {
            let mut told = told.lock().unwrap_or_else(PoisonError::into_inner);
            // a hundredth at a time: the screen shows no more
            if done >= *told + 0.01 {
                *told = done;
                send(Sent::Progress(lane, generation, done));
            }
            if stale() { ControlFlow::Break(()) } else { ControlFlow::Continue(()) }
        };
        // a fault in one question must not take the screens along
        let done = catch_unwind(AssertUnwindSafe(|| work.perform(&progress))).unwrap_or_else(|_| {
            let words = "the computing failed: a fault of the program";
            let problem = Problem::refused("fault", words, "please report it with your files");
            unanswered(Failure::Refused(vec![problem], System::default()))
        });
        if !stale() {
            send(Sent::Done(lane, generation, done));
        }
    }
}
