//! What a note is of, and from what the change to it begins.

use std::sync::Arc;

use chrono::{DateTime, FixedOffset};

use crate::problem::Problem;
use crate::rank::Progress;
use crate::record::Decided;
use crate::tasks::log::gates;
use crate::tasks::rank::{RankAnswer, rank};
use crate::tasks::words::Given;
use crate::tasks::{Context, Failure, MixAnswer, mix_given};

use super::{NoteAsked, Subject};

/// What a note is of, with everything judged from what is set before it.
pub(super) struct About {
    pub(super) subject: Subject,
    /// The context in which what is set now is what is set before the change.
    pub(super) context: Context,
    pub(super) mix: MixAnswer,
    pub(super) ranked: RankAnswer,
    /// From when the decision holds, and why it was taken.
    pub(super) decided: Option<(DateTime<FixedOffset>, String)>,
    /// What the crew cannot set, in words.
    pub(super) cannot: Vec<String>,
    /// What to know of where it comes from, in words.
    pub(super) said: Vec<String>,
}

pub(super) fn about(context: &Context, asked: &NoteAsked, progress: Progress) -> Result<About, Failure> {
    let site = context.site();
    if !asked.words.is_empty() {
        let given = Given::typed(site, &asked.words, context.profile.pool_m)?;
        let mix = mix_given(context, &given)?;
        return of_mix(context.clone(), Subject::Named, asked, mix, progress);
    }
    let standing = context.standing().filter(|d| !d.is_overdue(context.on.date_naive()));
    match standing {
        Some(decided) => of_decision(context, &decided, asked, progress),
        None => first_ranked(context, asked, progress),
    }
}

/// The last decision: from what was set before it where it begins on the day of the answer, else as it stands.
fn of_decision(
    context: &Context,
    decided: &Decided,
    asked: &NoteAsked,
    progress: Progress,
) -> Result<About, Failure> {
    let site = context.site();
    let decision = decided.decision;
    let (given, gone) = Given::logged(site, &decision.chosen);
    let mut before = context.clone();
    let is_of_today = decision.from.with_timezone(&site.offset).date_naive() >= context.on.date_naive();
    if is_of_today {
        let gates = decision.known.before.as_ref();
        before.set_before =
            Some(Arc::new(gates.map(|gates| Given::logged(site, gates).0).unwrap_or_default()));
    }
    let mix = mix_given(&before, &given)?;
    let mut out = of_mix(before, Subject::Decision(decided.id), asked, mix, progress)?;
    out.decided = Some((decision.from, decision.why.clone()));
    if !gone.is_empty() {
        out.cannot.push(format!(
            "decision {} sets gates that the site no longer has: {}",
            decided.id,
            gone.join(", ")
        ));
    }
    if is_of_today && decided.amended > 0 {
        let words = format!(
            "decision {} was amended: the change begins from what was set when the last line of it was written",
            decided.id
        );
        out.said.push(words);
    }
    let later = context.log.log.decisions().into_iter().find(|other| other.decision.from > context.on);
    if let Some(later) = later {
        let from = later.decision.from.with_timezone(&site.offset).format("%Y-%m-%dT%H:%M");
        out.said.push(format!("decision {} takes its place later; its note: --on {from}", later.id));
    }
    Ok(out)
}

/// A mix that is known, with a ranking of as much release beside it.
fn of_mix(
    context: Context,
    subject: Subject,
    asked: &NoteAsked,
    mix: MixAnswer,
    progress: Progress,
) -> Result<About, Failure> {
    let mut beside = asked.ranked.clone();
    if beside.release.is_none() && mix.day.is_none() {
        beside.release = Some(format!("{} m3/s", mix.mix.release.flow_m3s));
    }
    let ranked = rank(&context, &beside, progress)?;
    Ok(About { subject, context, mix, ranked, decided: None, cannot: Vec::new(), said: Vec::new() })
}

fn first_ranked(context: &Context, asked: &NoteAsked, progress: Progress) -> Result<About, Failure> {
    let site = context.site();
    let ranked = rank(context, &asked.ranked, progress)?;
    let Some(first) = ranked.mixes.first() else {
        let words = "no mix is allowed and no decision holds, so there is nothing to write a note of";
        let problem = Problem::refused("no-mix", words, "name the gates with --set or --open");
        return Err(Failure::Refused(vec![problem], context.system));
    };
    // as the log would keep it, so that the note is the same before and after it is logged
    let (given, _) = Given::logged(site, &gates(site, &first.day));
    let mix = mix_given(context, &given)?;
    let mut said = Vec::new();
    if first.parts.len() > 1 {
        said.push("the flows are means of the blocks of the day: each block has its own".to_owned());
    }
    let subject = Subject::FirstRanked;
    let cannot = Vec::new();
    Ok(About { subject, context: context.clone(), mix, ranked, decided: None, cannot, said })
}
