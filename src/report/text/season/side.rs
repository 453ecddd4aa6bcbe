//! The seasons of an answer side by side.

use std::fmt::Write as _;

use crate::problem::harmless;
use crate::season::{Exhausted, TargetTally};
use crate::target::Tally;
use crate::tasks::season::{SeasonAnswer, SeasonRun, Seen};
use crate::units::{Dimension, System, figure};

use unicode_width::UnicodeWidthStr;

use super::super::{fitted, length, wrapped};
use super::short;

/// Columns of the names together, and of each figure.
const NAME: usize = 34;
const CELLS: [usize; 6] = [8, 8, 6, 8, 7, 6];
const MORE: [usize; 4] = [11, 7, 13, 12];

/// Columns that a plan has at least.
const LEAST: usize = 8;
/// What follows a plan that is cut.
const CUT: &str = "..";

/// Heads of the figures, in the order of [`Row::cells`]: from the third on what a season is measured by, in that order.
pub const HEADS: [&str; 6] = ["runs out", "reserve", "worst", "outside", "deg.d", "moves"];

/// Heads of the further figures, in the order of [`Row::more`].
pub const MORE_HEADS: [&str; 4] = ["temperature", "oxygen", "least oxygen", "end pool"];

/// One season.
#[derive(Debug, Clone, PartialEq)]
pub struct Row {
    /// Plan, case and strategy.
    pub name: [String; 3],
    /// The figures below [`HEADS`].
    pub cells: [String; 6],
    /// The figures below [`MORE_HEADS`].
    pub more: [String; 4],
    /// Solved with this very case in view.
    pub foresight: bool,
    /// What was in view when its gates were chosen.
    pub seen: Seen,
    /// Where it goes through fewer days than the plan of the one spoken of: `stops 09-12`, `ends 10-31`.
    pub short: Option<String>,
    /// Whether a hard rule is not judged on any day of it.
    pub unjudged: bool,
    /// The one spoken of.
    pub main: bool,
}

/// Every season, unseen cases first.
pub fn side(answer: &SeasonAnswer, system: System) -> Vec<Row> {
    let row = |(i, run): (usize, &SeasonRun)| {
        let (score, outcome) = (&run.outcome.score, &run.outcome);
        let (short, unjudged) = (days_short(answer, run), unjudged(run));
        let mark = |is: bool, mark: &'static str| if is { mark } else { "" };
        let marks = format!("{}{}", mark(short.is_some(), "!"), mark(unjudged, "?"));
        let unit = system.unit(Dimension::TemperatureDifference);
        Row {
            name: [&run.run.plan, &run.run.case, &run.run.strategy].map(|name| harmless(name)),
            cells: [
                date(&outcome.exhausted),
                outcome.under_reserve.as_ref().map_or_else(|| "-".to_owned(), date),
                figure(score.worst_c, unit, 1),
                format!("{} d{marks}", score.days_outside),
                figure(score.degree_days, unit, 0),
                outcome.moves.to_string(),
            ],
            more: [
                format!("{} d", days_by(run, |told| told.temperature)),
                format!("{} d", days_by(run, |told| told.oxygen)),
                outcome.least_oxygen.map_or_else(|| "?".to_owned(), |least| format!("{:.1}", least.0)),
                run.run.days.last().map_or_else(|| "?".to_owned(), |day| length(day.pool_m, system)),
            ],
            foresight: run.foresight,
            seen: answer.seen(run),
            short,
            unjudged,
            main: i == 0,
        }
    };
    let mut rows: Vec<Row> = answer.runs().enumerate().map(row).collect();
    rows.sort_by_key(|row| row.seen);
    rows
}

/// Days outside the hard rules by one of their two parts, summed over the rules.
fn days_by(run: &SeasonRun, part: fn(&TargetTally) -> Option<Tally>) -> u32 {
    let hard = run.outcome.targets.iter().filter(|told| is_hard(run, told));
    hard.filter_map(part).map(|tally| tally.over + tally.under).sum()
}

fn is_hard(run: &SeasonRun, told: &TargetTally) -> bool {
    run.skies.site.targets.get(told.target).is_some_and(|rule| !rule.soft)
}

/// Where a season stops, or ends with a plan before that of the one spoken of.
fn days_short(answer: &SeasonAnswer, run: &SeasonRun) -> Option<String> {
    let stops = run.run.ended.as_ref().map(|ended| format!("stops {}", short(ended.date)));
    let (last, main) = (run.plan.span()?.1, answer.main.plan.span()?.1);
    stops.or_else(|| (last < main).then(|| format!("ends {}", short(last))))
}

/// Whether a hard rule that is valid on days of the season is not judged on any of them.
fn unjudged(run: &SeasonRun) -> bool {
    let parts = |told: &TargetTally| [told.temperature, told.oxygen];
    run.outcome
        .targets
        .iter()
        .filter(|told| is_hard(run, told))
        .flat_map(parts)
        .flatten()
        .any(|t| t.judged == 0 && t.unknown > 0)
}

fn date(of: &Exhausted) -> String {
    match of {
        Exhausted::On(date) => short(*date),
        Exhausted::NotBy(_) => "not".to_owned(),
        Exhausted::Unknown(_) => "?".to_owned(),
    }
}

fn in_columns<const N: usize>(cells: [&str; N], wide: [usize; N]) -> String {
    let wide: Vec<String> = cells.iter().zip(wide).map(|(cell, wide)| format!("{cell:>wide$}")).collect();
    wide.concat()
}

/// The table in plain columns.
pub(super) fn table(answer: &SeasonAnswer, system: System) -> String {
    let rows = side(answer, system);
    let mut out = String::new();
    for line in columns(&rows).into_iter().chain([String::new()]).chain(more_columns(&rows)) {
        out.push_str(&line);
        out.push('\n');
    }
    out.push_str(&wrapped(&format!("  {}", meaning(&rows, system)), 2));
    out.push_str(&wrapped(&format!("  {}", combined(answer)), 2));
    out.push('\n');
    out
}

/// Which seasons stand beside the one spoken of.
fn combined(answer: &SeasonAnswer) -> String {
    let of = &answer.main.run;
    let (plans, others) = if answer.every_case {
        ("every case", "")
    } else {
        ("this case", ", --every-case for the other plans in every case")
    };
    format!(
        "run beside plan {}, case {}: this plan in the other cases, the other plans in {plans}, the other strategies \
         with this plan in this case; --plan, --case and --strategy ask for another{others}",
        harmless(&of.plan),
        harmless(&of.case)
    )
}

/// Rows in plain columns under their heads.
pub fn columns(rows: &[Row]) -> Vec<String> {
    under_heads(rows, &in_columns(HEADS, CELLS), |row| {
        in_columns(row.cells.each_ref().map(String::as_str), CELLS)
    })
}

/// Their further figures in the same way.
pub fn more_columns(rows: &[Row]) -> Vec<String> {
    under_heads(rows, &in_columns(MORE_HEADS, MORE), |row| {
        in_columns(row.more.each_ref().map(String::as_str), MORE)
    })
}

fn under_heads(rows: &[Row], head: &str, cells: impl Fn(&Row) -> String) -> Vec<String> {
    let mut out = vec![format!("  {:<NAME$}{head}", "plan, case, strategy")];
    out.extend(rows.iter().map(|row| {
        let mark = if row.main { ">" } else { " " };
        let seen = match row.seen {
            Seen::Nothing => " ",
            Seen::Weather => "+",
            Seen::All => "*",
        };
        let name = fitted(&named(&row.name), NAME - 1);
        format!("{mark}{seen}{name:<NAME$}{}", cells(row)).trim_end().to_owned()
    }));
    out
}

/// Plan, case and strategy in the columns of names, the plan cut after a word where it is too long.
fn named([plan, case, strategy]: &[String; 3]) -> String {
    let rest = format!(", {case}, {strategy}");
    let room = (NAME - 1).saturating_sub(rest.width()).max(LEAST);
    if plan.width() <= room {
        return format!("{plan}{rest}");
    }
    let mut cut = String::new();
    for word in plan.split_whitespace() {
        let more = if cut.is_empty() { word.to_owned() } else { format!("{cut} {word}") };
        if more.width() + CUT.len() > room {
            break;
        }
        cut = more;
    }
    // a first word that is too long is cut itself
    let cut = if cut.is_empty() { fitted(plan, room.saturating_sub(CUT.len())) } else { cut };
    format!("{}{CUT}{rest}", cut.trim_end())
}

/// What the heads and the cells mean.
pub fn meaning(rows: &[Row], system: System) -> String {
    let unit = system.unit(Dimension::TemperatureDifference);
    let mut out = format!(
        "worst: farthest outside the hard targets, {0}; outside: days outside, summed over them; deg.d: {0} days \
         outside; in this order, and moves last, a season is measured, and thrift seeks the least. Temperature and \
         oxygen: days outside by each, which may be the same days; least oxygen: below the dam, mg/L; not: not by the \
         end of the season",
        unit.symbol()
    );
    if rows.iter().any(|row| row.seen == Seen::All) {
        out.push_str("; *: solved with that very case in view, no evidence, so unseen cases stand first");
    }
    if rows.iter().any(|row| row.seen == Seen::Weather) {
        out.push_str("; +: solved in that weather under another plan");
    }
    let short =
        rows.iter().filter_map(|row| Some(format!("{} {}", row.name.join(", "), row.short.as_ref()?)));
    let short: Vec<String> = short.collect();
    if !short.is_empty() {
        let _ = write!(out, "; !: days after its end are not counted: {}", short.join("; "));
    }
    if rows.iter().any(|row| row.unjudged) {
        out.push_str("; ?: a hard rule is not judged on any day");
    }
    out
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn law_a_plan_too_long_for_its_column_is_cut_after_a_word() {
        let of = |plan: &str| {
            let name = named(&[plan, "middling", "thrift"].map(str::to_owned));
            assert!(name.width() < NAME && name.ends_with(", middling, thrift"), "{name}");
            name
        };
        assert_eq!(of("planned"), "planned, middling, thrift");
        assert_eq!(of("as in 3 of years"), "as in 3 of.., middling, thrift");
        assert_eq!(of("as in other years"), "as in other.., middling, thrift");
        assert_eq!(of("hydroelectric-maximum"), "hydroelectric.., middling, thrift");
        let long = ["as it is", "a case with a name of its own and more", "best"].map(str::to_owned);
        assert!(named(&long).starts_with("as it is, a case with"));
    }
}
