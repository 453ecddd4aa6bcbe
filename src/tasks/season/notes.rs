//! What a season assumes, and what it does not look at.

use std::collections::BTreeSet;

use chrono::Datelike;

use crate::problem::{Problem, Weight};
use crate::rank::Criterion;
use crate::season::{Choosing, Turned};
use crate::tasks::Context;
use crate::units::say;

use super::SeasonRun;
use super::asked::{Case, Understood};

/// A miss that is shown as less, C (choice: the tenth of a degree shown).
const SEEN_C: f64 = 0.1;

/// Notes on the plans, the cases and the model.
pub(super) fn notes(context: &Context, of: &Understood) -> Vec<Problem> {
    let mut out = of_plans(of);
    out.extend(before_the_plan(of));
    out.extend(of.plan.above_full(context.site(), of.begins, context.profile.pool_m));
    out.extend(schedule(of));
    out.extend(years(context, of));
    out.extend(of.over.iter().map(|plan| {
        let words = format!("the plan {} tells days that are over, and is not among the others", plan.file);
        Problem::note("plan-past", words)
    }));
    out.extend(context.rules_off());
    out.extend(context.record_flags());
    out.push(Problem::note("cases", cases(&of.cases)));
    if !context.site().blocks.is_empty() {
        let words = "the blocks of the day are not looked at: every day releases evenly what the plan asks";
        out.push(Problem::note("season-blocks", words));
    }
    let words = "flow changes that the plan itself asks for are not held against their limits, and no perturbed cases \
                 stand behind a season: its figures are those of one pool under one weather";
    out.push(Problem::note("season-not-checked", words));
    out
}

/// What the plan assumes, and what is to be known of those beside it.
pub(super) fn of_plans(of: &Understood) -> Vec<Problem> {
    let mut out: Vec<Problem> = of.plan.notes.clone();
    out.extend(of.refused.iter().map(left_out));
    out
}

/// What holds where the cast is older than the plan.
fn before_the_plan(of: &Understood) -> Option<Problem> {
    let (first, _) = of.plan.span()?;
    let words = format!(
        "the plan begins on {first}: from {} to then its first inflow and release hold, or its pool is gone to in a \
         straight line",
        of.begins
    );
    (first > of.begins).then(|| Problem::note("before-plan", words))
}

/// A gate schedule whose changes do not lie in the season.
fn schedule(of: &Understood) -> Option<Problem> {
    let Choosing::Schedule(schedule) = &of.choosing else { return None };
    let (_, last) = of.plan.span()?;
    let dates = || schedule.changes.iter().map(|change| change.0);
    let (words, cure) = if !dates().any(|date| of.begins <= date && date <= last) {
        let words = format!("no change of the schedule lies in the season, {} to {last}", of.begins);
        (words, "name a schedule of this season")
    } else if let Some(held) =
        dates().next_back().filter(|held| *held <= of.begins && schedule.changes.len() > 1)
    {
        let words =
            format!("the last row of the schedule is of {held}: what it sets is held to the end, {last}");
        (words, "give rows for the days of the season, or name a schedule of this season")
    } else if let Some(first) = dates().next().filter(|first| *first > of.decides) {
        let words = format!(
            "the schedule begins on {first}: until then what is set now stays, else the best mix of the day"
        );
        (words, "give a row for the first day")
    } else {
        return None;
    };
    Some(Problem::flag("schedule-days", words, cure).in_file(&schedule.file))
}

/// What became of the weather of years.
fn years(context: &Context, of: &Understood) -> Vec<Problem> {
    let Some(years) = context.folder.years() else { return Vec::new() };
    let refused = years
        .problems
        .iter()
        .filter(|p| p.weight == Weight::Refused)
        .map(|problem| Problem { weight: Weight::Flag, ..problem.clone() });
    let mut out: Vec<Problem> = refused.collect();
    let told: BTreeSet<i32> = years.weather.iter().flat_map(|w| w.days.keys()).map(Datelike::year).collect();
    let is_case =
        |year: i32| of.cases.iter().any(|c| matches!(c, Case::Year(skies) if skies.year == Some(year)));
    let lost: Vec<String> = told.into_iter().filter(|year| !is_case(*year)).map(|y| y.to_string()).collect();
    if let (false, Some((_, last))) = (lost.is_empty(), of.plan.span()) {
        let words = format!(
            "years of the record that do not hold every day from {} to {} are no cases: {}",
            of.begins.format("%m-%d"),
            last.format("%m-%d"),
            lost.join(", ")
        );
        out.push(Problem::note("years-left-out", words));
    }
    out
}

/// What is turned from day to day without a move that is counted.
pub(super) fn turned(context: &Context, main: &SeasonRun) -> Vec<Problem> {
    let of = |turned: &Turned| {
        let name = &context.site().outlets.get(turned.outlet)?.name;
        let days = if turned.days == 1 { "day" } else { "days" };
        let words = format!(
            "`{name}` is turned on {} {days} between decisions so that it keeps its share of the release, by {} at most, \
             on {}: these are not among the moves",
            turned.days,
            say::m3s(turned.most_m3s, 2),
            turned.date
        );
        Some(Problem::note("turned", words))
    };
    main.outcome.turned.iter().filter_map(of).collect()
}

/// Strategies beside the one spoken of, in the same case under the same plan, that come out nearer to the targets: a
/// mix is chosen for its day, by what counts first there.
pub(super) fn nearer(main: &SeasonRun, others: &[SeasonRun], order: &[Criterion]) -> Vec<Problem> {
    let (name, score) = (&main.run.strategy, &main.outcome.score);
    let same = |other: &&SeasonRun| {
        let of = &other.run;
        other.plan.file == main.plan.file && of.case == main.run.case && of.strategy != *name
    };
    let of = |other: &SeasonRun| {
        let (than, beside) = (&other.outcome.score, &other.run.strategy);
        let fewer = score.days_outside.saturating_sub(than.days_outside);
        let milder_c = score.worst_c - than.worst_c;
        let days = (fewer > 0).then(|| {
            let days = if fewer == 1 { "day" } else { "days" };
            format!("{fewer} fewer {days} outside the hard targets")
        });
        let [worst, here] = [than.worst_c, score.worst_c].map(|c| say::dc(c, 1));
        let worst =
            (milder_c >= SEEN_C).then(|| format!("a worst miss of their ranges of {worst} against {here}"));
        let gains: Vec<String> = [days, worst].into_iter().flatten().collect();
        if gains.is_empty() || than.lost != score.lost {
            return None;
        }
        let least = |run: &SeasonRun| run.outcome.least_oxygen.map(|least| least.0);
        let oxygen = least(other).zip(least(main)).map_or_else(String::new, |(there, here)| {
            format!(
                "; the lowest oxygen below the dam is {there:.1} mg/L under `{beside}` and {here:.1} here"
            )
        });
        let names: Vec<&str> = order.iter().map(|criterion| criterion.name()).collect();
        let words = format!(
            "`{beside}` has {}: each mix of `{name}` is chosen for its day, in the order {}{oxygen}",
            gains.join(" and "),
            names.join(", ")
        );
        Some(Problem::note("order-of-the-day", words))
    };
    others.iter().filter(same).filter_map(of).collect()
}

/// Where thrift is outside on more days than the best of the day: it seeks the least worst miss before the fewest days.
pub(super) fn spares(main: &SeasonRun, others: &[SeasonRun]) -> Option<Problem> {
    let best = others.iter().find(|other| {
        let of = &other.run;
        other.plan.file == main.plan.file && of.case == main.run.case && of.strategy == "best"
    })?;
    let (thrift, best) = (&main.outcome.score, &best.outcome.score);
    let words = format!(
        "`thrift` has a worst miss of {} and {} days outside, `best` {} and {}: fewer degrees at worst count before \
         fewer days",
        say::dc(thrift.worst_c, 1),
        thrift.days_outside,
        say::dc(best.worst_c, 1),
        best.days_outside
    );
    let is_more = main.run.strategy == "thrift"
        && thrift.lost == best.lost
        && thrift.worst_c < best.worst_c
        && thrift.days_outside > best.days_outside;
    is_more.then(|| Problem::note("worst-before-days", words))
}

/// A plan beside the one spoken of that is refused, by its first problem.
fn left_out(problem: &Problem) -> Problem {
    let file = problem.place.file.as_deref().unwrap_or_default();
    let line = problem.place.line.map_or_else(String::new, |line| format!(", line {line}"));
    let words = format!("the plan {file} is left out{line}: {}", problem.words);
    Problem::flag("plan-left-out", words, problem.cure.clone())
}

/// The cases by their shifts.
fn cases(cases: &[Case]) -> String {
    let shifts = |case: &Case| match case {
        Case::Year(skies) => skies.case.name.clone(),
        Case::Shifted(case) => {
            let mut parts = Vec::new();
            if case.air_c.abs() > 0.0 {
                parts.push(format!("air {}", say::dc(case.air_c, 1).signed()));
            }
            if (case.wind - 1.0).abs() > 0.0 {
                parts.push(format!("wind {:.0} %", 100.0 * case.wind));
            }
            if (case.inflow - 1.0).abs() > 0.0 {
                parts.push(format!("inflow {:.0} %", 100.0 * case.inflow));
            }
            if case.inflow_c.abs() > 0.0 {
                parts.push(format!("its water {}", say::dc(case.inflow_c, 1).signed()));
            }
            let shifts = if parts.is_empty() { "as given".to_owned() } else { parts.join(", ") };
            format!("{} ({shifts})", case.name)
        }
    };
    cases.iter().map(shifts).collect::<Vec<_>>().join("; ")
}
