//! The seasons of an answer side by side.

use std::fmt::Write as _;

use crate::problem::harmless;
use crate::season::{Exhausted, TargetTally};
use crate::tasks::season::{SeasonAnswer, SeasonRun, Seen};
use crate::units::{Dimension, System, figure};

use unicode_width::UnicodeWidthStr;

use super::super::{fitted, wrapped};
use super::short;

/// Columns of the names together, and of each figure.
const NAME: usize = 34;
const CELLS: [usize; 6] = [8, 8, 8, 6, 7, 6];

/// What follows a plan that is cut.
const CUT: &str = "..";

/// Heads of the figures, in the order of [`Row::cells`].
pub const HEADS: [&str; 6] = ["runs out", "reserve", "outside", "worst", "oxygen", "moves"];

/// One season.
#[derive(Debug, Clone, PartialEq)]
pub struct Row {
    /// Plan, case and strategy.
    pub name: [String; 3],
    /// The figures below [`HEADS`].
    pub cells: [String; 6],
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
                format!("{} d{marks}", score.days_outside),
                figure(score.worst_c, unit, 1),
                outcome.least_oxygen.map_or_else(|| "?".to_owned(), |least| format!("{:.1}", least.0)),
                outcome.moves.to_string(),
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

/// Where a season stops, or ends with a plan before that of the one spoken of.
fn days_short(answer: &SeasonAnswer, run: &SeasonRun) -> Option<String> {
    let stops = run.run.ended.as_ref().map(|ended| format!("stops {}", short(ended.date)));
    let (last, main) = (run.plan.span()?.1, answer.main.plan.span()?.1);
    stops.or_else(|| (last < main).then(|| format!("ends {}", short(last))))
}

/// Whether a hard rule that is valid on days of the season is not judged on any of them.
fn unjudged(run: &SeasonRun) -> bool {
    let is_hard =
        |told: &&TargetTally| run.skies.site.targets.get(told.target).is_some_and(|rule| !rule.soft);
    let parts = |told: &TargetTally| [told.temperature, told.oxygen];
    run.outcome
        .targets
        .iter()
        .filter(is_hard)
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

fn in_columns(cells: [&str; 6]) -> String {
    let wide: Vec<String> = cells.iter().zip(CELLS).map(|(cell, wide)| format!("{cell:>wide$}")).collect();
    wide.concat()
}

/// The table in plain columns.
pub(super) fn table(answer: &SeasonAnswer, system: System) -> String {
    let rows = side(answer, system);
    let mut out = String::new();
    for line in columns(&rows) {
        out.push_str(&line);
        out.push('\n');
    }
    out.push_str(&wrapped(&format!("  {}", meaning(&rows, system)), 2));
    out.push('\n');
    out
}

/// Rows in plain columns under their heads.
pub fn columns(rows: &[Row]) -> Vec<String> {
    let head = in_columns(HEADS);
    let mut out = vec![format!("  {:<NAME$}{head}", "plan, case, strategy")];
    out.extend(rows.iter().map(|row| {
        let mark = if row.main { ">" } else { " " };
        let seen = match row.seen {
            Seen::Nothing => " ",
            Seen::Weather => "+",
            Seen::All => "*",
        };
        let name = fitted(&named(&row.name), NAME - 1);
        let cells = in_columns(row.cells.each_ref().map(String::as_str));
        format!("{mark}{seen}{name:<NAME$}{cells}").trim_end().to_owned()
    }));
    out
}

/// Plan, case and strategy in the columns of names, the plan cut after a word where it is too long.
fn named([plan, case, strategy]: &[String; 3]) -> String {
    let rest = format!(", {case}, {strategy}");
    let room = (NAME - 1).saturating_sub(rest.width());
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
        "outside: days outside the hard targets, summed over them; worst: farthest outside, {}; oxygen: lowest below the \
         dam, mg/L; not: not by the end of the season",
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
        assert!(
            named(&["a", "a case with a name of its own and more", "best"].map(str::to_owned))
                .starts_with("a")
        );
    }
}
