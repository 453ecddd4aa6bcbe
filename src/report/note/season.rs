//! How the season looks in its cases.

use crate::report::page::{Block, Table};
use crate::season::Exhausted;
use crate::tasks::Context;
use crate::tasks::note::NoteAnswer;
use crate::tasks::season::{SeasonAnswer, SeasonRun};
use crate::units::say;

use super::pictures;

pub(super) fn blocks(context: &Context, answer: &NoteAnswer) -> Vec<Block> {
    let mut out = vec![Block::Heading(2, "The season ahead".to_owned())];
    match &answer.season {
        Err(why) => out.push(Block::Words(format!("No season is told: {why}."))),
        Ok(season) => {
            let plan = std::iter::once(of(season)).chain(reserves(context));
            out.push(Block::Words(plan.collect::<Vec<_>>().join(" ")));
            out.push(match pictures::days(context, season) {
                Some(picture) => Block::Beside(cases(season), Box::new(picture)),
                None => Block::Table(cases(season)),
            });
        }
    }
    out
}

/// Which plan, and how gates are chosen in it.
fn of(season: &SeasonAnswer) -> String {
    let run = &season.main.run;
    let last = run.days.last().map_or_else(String::new, |day| format!(" to {}", day.date));
    format!(
        "Plan {}, {}{last}. Gates in it by the strategy {}, decided anew every {} days from {}; the mix of this note is not held in it.",
        run.plan, season.begins, run.strategy, season.decide_days, season.decides
    )
}

fn cases(season: &SeasonAnswer) -> Table {
    let row = |case: &&SeasonRun| {
        let (outcome, score) = (&case.outcome, &case.outcome.score);
        let ended =
            case.run.ended.as_ref().map(|ended| format!("; stops {}", ended.date)).unwrap_or_default();
        let foresight = if case.foresight { " (foresight, no evidence)" } else { "" };
        vec![
            format!("{}{foresight}", case.run.case),
            date(&outcome.exhausted),
            outcome.under_reserve.as_ref().map_or_else(|| "no reserve given".to_owned(), date),
            format!("{}{ended}", score.days_outside),
            say::dc(score.worst_c, 1).to_string(),
            outcome
                .least_oxygen
                .map_or_else(|| "not known".to_owned(), |least| format!("{:.1} mg/L", least.0)),
        ]
    };
    Table {
        caption: "Cases: when even the coldest mix allowed is too warm for the dam; days outside the hard targets, summed over them"
            .to_owned(),
        head: ["Case", "Cold water runs out", "Reserve gone into", "Days outside", "Worst by", "Least oxygen"]
            .map(str::to_owned)
            .to_vec(),
        rows: season.cases().iter().map(row).collect(),
        right: vec![3],
    }
}

fn date(of: &Exhausted) -> String {
    match of {
        Exhausted::On(date) => date.to_string(),
        Exhausted::NotBy(date) => format!("not by {date}"),
        Exhausted::Unknown(why) => format!("not known: {why}"),
    }
}

/// What the reserves are.
fn reserves(context: &Context) -> Option<String> {
    let reserves = &context.site().season.reserves;
    let one = |reserve: &crate::site::Reserve| {
        format!(
            "{} colder than {} from {:02}-{:02} on",
            say::m3(reserve.volume_m3, 0),
            say::c(reserve.colder_c, 1),
            reserve.from.month,
            reserve.from.day
        )
    };
    let all: Vec<String> = reserves.iter().map(one).collect();
    (!all.is_empty()).then(|| format!("Reserve: {}.", all.join("; ")))
}
