//! The log as JSON.

use serde::Serialize;

use crate::record::Decided;
use crate::record::line::{Decision, Event, Line};
use crate::report::caution;
use crate::tasks::Context;
use crate::tasks::log::{Logged, Past};

use super::applied::{LearnedJson, applied};
use super::past::PastJson;
use super::shape::{Head, ProblemJson};
use super::{head, problem, written};

#[derive(Serialize)]
struct LogJson<'a> {
    #[serde(flatten)]
    head: Head,
    decisions: Vec<DecidedJson<'a>>,
    events: Vec<&'a Event>,
    /// What the site file applies of the learned.
    learned: Option<LearnedJson>,
    past: PastJson,
    problems: Vec<ProblemJson>,
    caution: &'static str,
}

#[derive(Serialize)]
struct DecidedJson<'a> {
    decision: u64,
    set_now: bool,
    amended: usize,
    ends: Option<String>,
    #[serde(flatten)]
    told: &'a Decision,
}

#[derive(Serialize)]
struct LoggedJson<'a> {
    logged: &'a Line,
    file: String,
    problems: Vec<ProblemJson>,
    caution: &'static str,
}

/// The answer of `log`.
pub fn log(context: &Context, past: &Past) -> String {
    written(&LogJson {
        head: head(context, &context.fingerprint, &[]),
        decisions: context.log.log.decisions().iter().map(|decided| one(context, decided)).collect(),
        events: context.log.log.events(),
        learned: applied(context.site()),
        past: super::past::past(context, past),
        problems: context.log.problems.iter().map(problem).collect(),
        caution: caution(),
    })
}

fn one<'a>(context: &Context, decided: &Decided<'a>) -> DecidedJson<'a> {
    DecidedJson {
        decision: decided.id,
        set_now: decided.stands(context.on),
        amended: decided.amended,
        ends: decided.ends.map(|ends| ends.to_rfc3339()),
        told: decided.decision,
    }
}

/// What was written, and where.
pub fn logged(logged: &Logged) -> String {
    written(&LoggedJson {
        logged: &logged.appended.line,
        file: logged.appended.path.display().to_string(),
        problems: logged.said.iter().map(problem).collect(),
        caution: caution(),
    })
}
