//! What the report is of, what it rests on, and what it does not look at.

use crate::problem::Problem;
use crate::record::METHOD;
use crate::report::flags_of;
use crate::report::page::Block;
use crate::report::text::log::count;
use crate::report::text::river::{PROVISIONAL, REVIEWED};
use crate::tasks::Context;
use crate::tasks::report::ReportAnswer;

use super::pictures;

/// Problems told (choice: `check` tells all).
const TOLD: usize = 6;

/// What it is of.
pub(super) fn begins(context: &Context, answer: &ReportAnswer) -> Vec<Block> {
    let site = context.site();
    let mut out = Vec::new();
    if site.demonstration {
        out.push(Block::Warning(
            "A demonstration: this place, its data and its decisions are invented.".to_owned(),
        ));
    }
    let (from, to) = answer.days;
    let past = &answer.past;
    let read = past.days.iter().filter(|day| day.measured_c.is_some()).count();
    let held = past.temperature.all.n.max(past.oxygen.all.n);
    let river = site.river_name.as_ref().map_or_else(String::new, |river| format!(" on the {river}"));
    let facts = [
        ("Dam", format!("{}{river}", site.name)),
        (
            "Season",
            format!(
                "{from} to {to}, {}: {read} with a daily mean of the gauge below the dam, {held} that can be held against \
                 what was expected, {} left out",
                count(past.days.len()),
                past.left_out.len()
            ),
        ),
        (
            "Log",
            format!(
                "{} decision(s), {} event(s); days of an event are judged against the targets as they were recorded, and \
                 left out of skill and learning",
                answer.decided(context).len(),
                answer.events(context).len()
            ),
        ),
    ];
    out.push(Block::Facts(facts.into_iter().map(|(label, value)| (label.to_owned(), value)).collect()));
    out
}

/// When the cast was taken that the report is made with.
pub(super) fn taken(context: &Context) -> String {
    context.profile.taken.map_or_else(
        || "an unknown time".to_owned(),
        |at| at.with_timezone(&context.site().offset).format("%Y-%m-%d %H:%M %:z").to_string(),
    )
}

/// The pool, the data and what was not looked at.
pub(super) fn blocks(context: &Context, answer: &ReportAnswer) -> Vec<Block> {
    let offset = context.site().offset;
    let mut out = vec![pictures::pool(context)];
    let mut list: Vec<String> = context
        .conditions
        .observed
        .iter()
        .map(|(point, record)| {
            let readings = record.temperature_c.readings();
            let date = |at: chrono::DateTime<chrono::FixedOffset>| at.with_timezone(&offset).date_naive();
            let span = readings.first().zip(readings.last()).map_or_else(
                || "empty".to_owned(),
                |(first, last)| format!("{} to {}", date(first.0), date(last.0)),
            );
            format!("Record at {point}: {span}")
        })
        .collect();
    if list.is_empty() {
        list.push("No record of the river".to_owned());
    } else {
        let provisional = answer.observed.iter().any(|observed| observed.record.provisional);
        list.push(format!("Days against targets: {}", if provisional { PROVISIONAL } else { REVIEWED }));
    }
    let casts = context.folder.casts().len();
    list.push(format!("{casts} cast(s) in the folder, the newest taken {}", taken(context)));
    list.push(
        "Not looked at: limits of the structure on these days, flows and stages below the dam, the quality of readings \
         beyond the checks of the files"
            .to_owned(),
    );
    let problems: Vec<&Problem> = flags_of(&context.log.problems);
    let told = problems.iter().copied().chain(&answer.past.notes);
    list.extend(told.take(TOLD).map(|problem| problem.advice(context.system)));
    list.push(format!(
        "Made for {} with gatemix {}, {METHOD}; inputs {}",
        context.on.format("%Y-%m-%d %H:%M %:z"),
        env!("CARGO_PKG_VERSION"),
        context.fingerprint
    ));
    out.push(Block::List(list));
    out
}
