//! What was decided and how it turned out, and what nobody planned.

use crate::record::{Decided, Score};
use crate::report::page::{Block, Table};
use crate::report::text::log::{apart, count, event_words, gates, signed, span};
use crate::target::DAM;
use crate::tasks::Context;
use crate::tasks::log::Turned;
use crate::tasks::report::ReportAnswer;
use crate::units::System;

use super::cells;

pub(super) fn blocks(context: &Context, answer: &ReportAnswer) -> Vec<Block> {
    let decided = answer.decided(context);
    let mut out = Vec::new();
    if decided.is_empty() {
        out.push(Block::Words("No decision of these days is in the log.".to_owned()));
    } else {
        let rows = decided.iter().map(|decided| row(context, answer, decided));
        out.push(Block::Table(Table {
            caption: "Each decision as it stands, and the gauge at the dam beside what it expected when it was written, \
                      over the days it stood but those of a change or an event"
                .to_owned(),
            head: cells(&["No.", "Stood", "By", "Gates", "Why", "How it turned out"]),
            rows: rows.collect(),
            right: vec![0],
        }));
    }
    let events: Vec<String> = answer
        .events(context)
        .into_iter()
        .map(|event| format!("Event {}", event_words(context.site(), event)))
        .collect();
    if !events.is_empty() {
        out.push(Block::List(events));
    }
    out
}

fn row(context: &Context, answer: &ReportAnswer, decided: &Decided) -> Vec<String> {
    let system = context.system;
    let turned = answer.past.decisions.iter().find(|turned| turned.id == decided.id);
    let amended = match decided.amended {
        0 => String::new(),
        1 => " (amended once)".to_owned(),
        times => format!(" (amended {times} times)"),
    };
    vec![
        decided.id.to_string(),
        turned.map_or_else(String::new, |turned| span(turned.days)),
        format!("{}{amended}", decided.decision.by),
        gates(context.site(), &decided.decision.chosen, system),
        decided.decision.why.clone(),
        turned.map_or_else(|| "no gauge".to_owned(), |turned| came(turned, system)),
    ]
}

/// `+0.5 C on the mean of 7 days, 5 of 7 inside the band it wrote`
fn came(turned: &Turned, system: System) -> String {
    let Some((_, warmth, breath)) = turned.places.iter().find(|place| place.0 == DAM) else {
        return "no gauge".to_owned();
    };
    let one = |score: &Score, bias: &dyn Fn(f64) -> String| {
        let misfit = score.misfit?;
        let inside = format!(", {} of {} inside the band it wrote", score.inside, score.with_band);
        let inside = if score.with_band > 0 { inside } else { String::new() };
        Some(format!("{} on the mean of {}{inside}", bias(misfit.bias), count(score.n)))
    };
    let warmth = one(warmth, &|c| signed(c, system));
    let breath = one(breath, &|mg_l| format!("oxygen {mg_l:+.2} mg/L"));
    let told: Vec<String> = warmth.into_iter().chain(breath).collect();
    if told.is_empty() { "no day can be held against the gauge".to_owned() } else { told.join("; ") }
}

/// Bias and error of a score, and the share inside, as cells.
pub(super) fn score_cells(score: Option<&Score>, is_oxygen: bool, system: System) -> Vec<String> {
    let n = score.map_or(0, |score| score.n);
    let Some((score, misfit)) = score.and_then(|score| Some((score, score.misfit?))) else {
        return vec![n.to_string(), "-".to_owned(), "-".to_owned(), "-".to_owned()];
    };
    let inside =
        score.share_inside().map_or_else(|| "-".to_owned(), |share| format!("{:.0} %", 100.0 * share));
    let (bias, rmse) = if is_oxygen {
        (format!("{:+.2} mg/L", misfit.bias), format!("{:.2} mg/L", misfit.rmse))
    } else {
        (signed(misfit.bias, system), apart(misfit.rmse, system))
    };
    vec![n.to_string(), bias, rmse, inside]
}
