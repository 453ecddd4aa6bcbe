//! The report of a season as JSON.

use serde::Serialize;

use crate::record::line::Event;
use crate::report::caution;
use crate::tasks::Context;
use crate::tasks::report::ReportAnswer;

use super::log::{DecidedJson, one};
use super::past::PastJson;
use super::river_record::ObservedJson;
use super::shape::{Head, ProblemJson};
use super::{head, problem, written};

#[derive(Serialize)]
struct ReportJson<'a> {
    #[serde(flatten)]
    head: Head,
    from: String,
    to: String,
    observed: Vec<ObservedJson>,
    /// Targets valid on these days that no record tells of.
    not_observed: Vec<NotObservedJson<'a>>,
    decisions: Vec<DecidedJson<'a>>,
    events: Vec<&'a Event>,
    past: PastJson,
    problems: Vec<ProblemJson>,
    caution: &'static str,
}

#[derive(Serialize)]
struct NotObservedJson<'a> {
    target: &'a str,
    point: &'a str,
}

/// The answer of `report`.
pub fn report(context: &Context, answer: &ReportAnswer) -> String {
    let targets = &context.site().targets;
    let rules = answer.unobserved.iter().filter_map(|&index| targets.get(index));
    written(&ReportJson {
        head: head(context, &context.fingerprint, &[]),
        from: answer.days.0.to_string(),
        to: answer.days.1.to_string(),
        observed: super::river_record::observed(context, &answer.observed),
        not_observed: rules.map(|rule| NotObservedJson { target: &rule.name, point: &rule.point }).collect(),
        decisions: answer.decided(context).iter().map(|decided| one(context, decided)).collect(),
        events: answer.events(context),
        past: super::past::past(context, &answer.past),
        problems: context.log.problems.iter().map(problem).collect(),
        caution: caution(),
    })
}
