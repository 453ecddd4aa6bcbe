//! What else comes of a season: stages, oxygen, power, turnover, falls, cautions, and how well its balances close.

use crate::problem::harmless;
use crate::tasks::Context;
use crate::tasks::season::SeasonRun;
use crate::units::{System, in_system, say};

use super::{at_place, exhausted_words};

/// Hours of a change where the site does not say.
const CHANGE_HOURS: &str = "in one hour, assumed";

/// A line each.
pub fn rest(context: &Context, run: &SeasonRun, system: System) -> Vec<String> {
    let (site, outcome) = (context.site(), &run.outcome);
    let mut out: Vec<String> = outcome
        .warnings
        .iter()
        .map(|w| format!("! {}: {}", w.date, harmless(&in_system(&w.words, system))))
        .collect();
    out.extend(site.season.stages.iter().enumerate().map(|(i, stages)| {
        let named = outcome.stages.iter().filter(|told| told.stages == i).filter_map(|told| {
            let (stage, _) = stages.at.get(told.stage)?;
            Some(format!("{} {}", harmless(stage), exhausted_words(&told.on)))
        });
        let named: Vec<String> = named.collect();
        format!("{}: {}", at_place(&stages.name, &stages.point), named.join(", "))
    }));
    out.push(match outcome.least_oxygen {
        Some((least, date)) => format!("least oxygen below the dam: {least:.1} mg/L on {date}"),
        None => "oxygen below the dam: not known".to_owned(),
    });
    if let Some(lost) = outcome.generation_lost_mwh {
        out.push(format!("energy not generated: {lost:.0} MWh"));
    }
    out.push(match outcome.turnover {
        Some(date) => format!("the pool turns over on {date}"),
        None => "the pool does not turn over in the season".to_owned(),
    });
    out.push(fall(context, run, system));
    out.extend(stage_falls(context, run, system));
    let (water, heat) = outcome.errors;
    out.push(format!(
        "balances of every day close: water to {water:.0e}, heat to {heat:.0e} of their largest term"
    ));
    out
}

/// How fast the pool falls, against its limit.
fn fall(context: &Context, run: &SeasonRun, system: System) -> String {
    let limit = context
        .site()
        .limits
        .drawdown_m_per_day
        .map_or_else(|| "no limit of it is given".to_owned(), |most| format!("{} allowed", say::m(most, 2)));
    let words = match run.outcome.fastest_fall {
        Some((m, date)) => format!("the pool falls at most {} in a day, on {date}; {limit}", say::m(m, 2)),
        None => format!("the pool never falls; {limit}"),
    };
    in_system(&words, system)
}

/// How fast the stage can fall at points with a rating, against their limits.
fn stage_falls(context: &Context, run: &SeasonRun, system: System) -> Vec<String> {
    let points = context.site().river.as_ref().map_or(&[][..], |r| &r.points);
    let hours = context.site().limits.change_hours;
    let made = hours.map_or_else(|| CHANGE_HOURS.to_owned(), |h| format!("in {h:.1} hours"));
    let of = |fall: &crate::season::StageFall| {
        let point = points.get(fall.point)?;
        let name = harmless(&point.name);
        let limit = point.stage_fall_m_per_hour.map_or_else(
            || "no limit of it is given".to_owned(),
            |most| format!("{} allowed", say::m(most, 3)),
        );
        let words = format!(
            "the stage at {name} falls at most {} in an hour, on {}, where a change at the dam is made {made}; {limit}",
            say::m(fall.m_per_hour, 3),
            fall.date
        );
        Some(in_system(&words, system))
    };
    let mut out: Vec<String> = run.outcome.stage_falls.iter().filter_map(of).collect();
    let is_closed = run.run.days.iter().any(|day| day.release.is_none());
    if is_closed && points.iter().any(|point| !point.rating.is_empty()) {
        out.push("the stage on days without a release, and its fall to them, is not known".to_owned());
    }
    out
}
