//! The log of a site: what was decided and what happened, read and written.

mod asked;
mod decided;
mod now;
mod past;

use std::path::PathBuf;

use chrono::{DateTime, FixedOffset, SubsecRound, Utc};

use crate::files::log::{Appended, append};
use crate::problem::Problem;
use crate::rank::Progress;
use crate::record::Log;
use crate::record::line::{Decision, Event, Line};

use super::{Context, Failure};

pub(super) use asked::date;
pub use asked::{DecisionAsked, EventAsked};
pub(super) use decided::gates;
pub use past::{Cause, Hindcast, Past, PastDay, Scored, Skill, Spell, Turned, past, past_within, skill};

/// What was written.
#[derive(Debug, Clone, PartialEq)]
pub struct Logged {
    /// The line, and where it is.
    pub appended: Appended,
    /// What to know of it: limits that it breaks, what was assumed, a torn line that was closed.
    pub said: Vec<Problem>,
}

/// Why nothing was written.
#[derive(Debug, Clone, PartialEq)]
pub enum NotLogged {
    /// What was asked cannot be.
    Task(Failure),
    /// The machine cannot.
    Machine(Problem),
}

impl From<Failure> for NotLogged {
    fn from(failure: Failure) -> Self {
        Self::Task(failure)
    }
}

/// Logs a decision, or an amendment of one. `clock` is the time of day of the machine.
///
/// # Errors
/// Words that cannot be understood, gates that cannot be set, a site inside the binary; a log that cannot be written.
pub fn decide(
    context: &Context,
    asked: &DecisionAsked,
    clock: DateTime<Utc>,
    progress: Progress,
) -> Result<Logged, NotLogged> {
    let path = path(context)?;
    let at = now(context, clock);
    let told = asked.told(context)?;
    let (made, mut said) = match told.amends {
        Some(id) if told.keeps_gates => (amended(&context.log.log, id)?, Vec::new()),
        _ => decided::decided(context, asked, progress)?,
    };
    let line = |log: &Log| {
        let mut decision: Decision = match told.amends {
            // it may have been amended again since it was read
            Some(id) if told.keeps_gates => amended(log, id).map_err(|failure| problem_of(&failure))?,
            _ => made.clone(),
        };
        told.put(&mut decision, log);
        (decision.id, decision.at) = (log.next_id(), at);
        Ok(Line::Decision(Box::new(decision)))
    };
    let appended = append(&path, &line).map_err(NotLogged::Machine)?;
    said.extend(appended.mended.clone());
    Ok(Logged { appended, said })
}

/// Logs something that nobody planned, or amends what was logged of it.
///
/// # Errors
/// As [`decide`].
pub fn event(context: &Context, asked: &EventAsked, clock: DateTime<Utc>) -> Result<Logged, NotLogged> {
    let path = path(context)?;
    let made = asked.event(context, now(context, clock))?;
    let line = |log: &Log| Ok(Line::Event(Event { id: log.next_id(), ..made.clone() }));
    let appended = append(&path, &line).map_err(NotLogged::Machine)?;
    let said = appended.mended.clone().into_iter().collect();
    Ok(Logged { appended, said })
}

/// The decision that a number names, as it stands.
fn amended(log: &Log, id: u64) -> Result<Decision, Failure> {
    let found = log.decision(id).map(|decided| decided.decision.clone());
    found.ok_or_else(|| {
        let numbers: Vec<String> = log.decisions().iter().map(|d| d.id.to_string()).collect();
        let there = if numbers.is_empty() {
            "none is logged".to_owned()
        } else {
            format!("there are {}", numbers.join(", "))
        };
        Failure::Usage(format!("--amend {id}: no decision has that number; {there}"))
    })
}

fn problem_of(failure: &Failure) -> Problem {
    Problem::refused("log-amends", failure.words(), "read the log again")
}

/// The file that is written to.
///
/// # Errors
/// A site inside the binary has none.
pub fn path(context: &Context) -> Result<PathBuf, Failure> {
    context.folder.log_path().ok_or_else(|| {
        let words = "this demonstration is held inside the program: it has no log to write";
        let cure = "write it out with `gatemix demo`, and name that folder";
        Failure::Refused(vec![Problem::refused("no-log", words, cure)], context.system)
    })
}

fn now(context: &Context, clock: DateTime<Utc>) -> DateTime<FixedOffset> {
    clock.with_timezone(&context.site().offset).trunc_subsecs(0)
}
