//! How well the release was foreseen, where it was not and why that may be, what another way would have done, and what the
//! record teaches.

use chrono::Month;

use crate::record::Score;
use crate::report::page::{Block, Table};
use crate::report::text::log::{count, learning as teaches, left_out, level_name, signed, span};
use crate::report::text::river::degree_days;
use crate::tasks::Context;
use crate::tasks::log::{Scored, Spell};
use crate::tasks::report::ReportAnswer;
use crate::units::{Dimension, figure, in_system};

use super::cells;
use super::decided::score_cells;

/// Spells told (choice: the report is to stay short).
const SPELLS: usize = 5;

/// The scores, together and by level, flow and month; then the days that are in none of them.
pub(super) fn blocks(context: &Context, answer: &ReportAnswer) -> Vec<Block> {
    let (site, system, past) = (context.site(), context.system, &answer.past);
    let mut out = Vec::new();
    if past.temperature.all.n == 0 && past.oxygen.all.n == 0 {
        out.push(Block::Words("No day can be held against the gauge below the dam.".to_owned()));
    } else {
        let mut rows = Vec::new();
        let mut row = |name: String, warmth: Option<&Score>, breath: Option<&Score>| {
            let mut cells = vec![name];
            cells.extend(score_cells(warmth, false, system));
            cells.extend(score_cells(breath, true, system));
            rows.push(cells);
        };
        row("all days".into(), Some(&past.temperature.all), Some(&past.oxygen.all));
        if let Some((warmth, breath)) = &past.with_applied {
            row("with what is applied of the learned".into(), Some(warmth), Some(breath));
        }
        if let Some((warmth, breath)) = &past.with_learned {
            row("with what is learned, fitted on these days".into(), Some(warmth), Some(breath));
        }
        for (level, score) in &past.temperature.by_level {
            let breath = past.oxygen.by_level.iter().find(|other| other.0 == *level).map(|other| &other.1);
            row(format!("most from {}", level_name(site, *level)), Some(score), breath);
        }
        let unit = system.unit(Dimension::Flow);
        for (at, class) in past.temperature.by_flow.iter().enumerate() {
            let [low, high] = [class.flow_m3s.0, class.flow_m3s.1].map(|m3s| figure(m3s, unit, 1));
            let breath = past.oxygen.by_flow.get(at).map(|class| &class.score);
            row(format!("{low} to {high} {}", unit.symbol()), Some(&class.score), breath);
        }
        for (month, score) in &past.temperature.by_month {
            let name =
                u8::try_from(*month).ok().and_then(|m| Month::try_from(m).ok()).map_or("", |m| m.name());
            let breath = past.oxygen.by_month.iter().find(|other| other.0 == *month).map(|other| &other.1);
            row(name.to_owned(), Some(score), breath);
        }
        out.push(Block::Table(Table {
            caption: "The gauge below the dam beside what is computed for each day from the newest cast and the gates as \
                      they were logged, with nothing learned: mean and root mean square of the difference, share of days \
                      inside the 10-90 % band"
                .to_owned(),
            head: cells(&[
                "Days", "n", "Bias", "RMSE", "Inside", "Oxygen n", "Bias", "RMSE", "Inside",
            ]),
            rows,
            right: (1..9).collect(),
        }));
    }
    let left = left_out(past);
    if !left.is_empty() {
        out.push(Block::Words("Days left out of these figures and of learning:".to_owned()));
        out.push(Block::List(left));
    }
    out
}

/// Spells outside the band, the farthest of them, each with the likeliest cause.
pub(super) fn spells(context: &Context, answer: &ReportAnswer) -> Vec<Block> {
    let system = context.system;
    let mut told: Vec<&Spell> = answer.past.spells.iter().collect();
    let size = |spell: &Spell| spell.outside as f64 * spell.off_c.abs();
    told.sort_by(|a, b| size(b).total_cmp(&size(a)));
    let more = told.len().saturating_sub(SPELLS);
    told.truncate(SPELLS);
    told.sort_by_key(|spell| spell.days);
    let mut rows: Vec<String> = told
        .into_iter()
        .map(|spell| {
            let what = format!(
                "{}: outside on {}, the gauge {} beside what was expected",
                span(spell.days),
                count(spell.outside),
                signed(spell.off_c, system)
            );
            let cause = spell.causes.first().and_then(|cause| Some((cause.name, cause.speaks_for.first()?)));
            match cause {
                None => format!("{what}; nothing speaks for a cause"),
                Some((name, evidence)) => {
                    format!("{what}; may be: {name} ({})", in_system(evidence, system))
                }
            }
        })
        .collect();
    if more > 0 {
        rows.push(format!(
            "{more} smaller ones more: gatemix log tells all, with what speaks for and against"
        ));
    }
    if rows.is_empty() { Vec::new() } else { vec![Block::List(rows)] }
}

/// The season as set beside doing nothing, perfect hindsight and the gauge.
pub(super) fn hindcast(context: &Context, answer: &ReportAnswer) -> Vec<Block> {
    let system = context.system;
    let of = match &answer.past.hindcast {
        Err(why) => return vec![Block::Words(format!("Not done: {}.", in_system(why, system)))],
        Ok(of) => of,
    };
    let row = |scored: &Scored| {
        vec![
            scored.name.clone(),
            scored.days_outside.to_string(),
            scored.judged.to_string(),
            degree_days(scored.degree_days_c, system),
            scored.lost.to_string(),
        ]
    };
    let all = [Some(&of.as_set), Some(&of.nothing), Some(&of.hindsight), of.observed.as_ref()];
    vec![
        Block::Table(Table {
            caption: format!(
                "{}, inflow by plan {}: days outside the hard targets at the dam, as the program computes the pool",
                span(of.days),
                of.plan
            ),
            head: cells(&["Way", "Outside", "Judged", "Sum outside", "Not reached"]),
            rows: all.into_iter().flatten().map(row).collect(),
            right: vec![1, 2, 3, 4],
        }),
        Block::Words(
            "Hindsight saw all that came: it is no evidence of what could have been known.".to_owned(),
        ),
    ]
}

/// What the record teaches, up to the date of the report, and whether it is applied.
pub(super) fn learning(context: &Context, answer: &ReportAnswer) -> Vec<Block> {
    let lines = teaches(context, &answer.past);
    if lines.is_empty() {
        return Vec::new();
    }
    let applied = match answer.past.with_applied {
        None => "Nothing of it is applied: the site file names nothing of it.",
        Some(_) => {
            "What the site file names of it is applied; the scores above show the days with and without it."
        }
    };
    vec![Block::List(lines), Block::Words(applied.to_owned())]
}
