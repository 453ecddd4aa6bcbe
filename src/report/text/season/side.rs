//! The seasons of an answer side by side.

use crate::problem::harmless;
use crate::season::Exhausted;
use crate::tasks::season::{SeasonAnswer, SeasonRun};
use crate::units::{Dimension, System, figure};

use super::super::{fitted, wrapped};
use super::short;

/// Columns of the names together, of a plan's alone, and of each figure.
const NAME: usize = 36;
const PLAN: usize = 16;
const CELLS: [usize; 5] = [8, 9, 9, 7, 7];

/// Heads of the figures, in the order of [`Row::cells`].
pub const HEADS: [&str; 5] = ["runs out", "reserve", "outside", "worst", "moves"];

/// One season.
#[derive(Debug, Clone, PartialEq)]
pub struct Row {
    /// Plan, case and strategy.
    pub name: [String; 3],
    /// The figures below [`HEADS`].
    pub cells: [String; 5],
    /// Solved with this very case in view.
    pub foresight: bool,
    /// The one spoken of.
    pub main: bool,
}

/// Every season, unseen cases first.
pub fn side(answer: &SeasonAnswer, system: System) -> Vec<Row> {
    let row = |(i, run): (usize, &SeasonRun)| {
        let (score, outcome) = (&run.outcome.score, &run.outcome);
        let unit = system.unit(Dimension::TemperatureDifference);
        Row {
            name: [&run.run.plan, &run.run.case, &run.run.strategy].map(|name| harmless(name)),
            cells: [
                date(&outcome.exhausted),
                outcome.under_reserve.as_ref().map_or_else(|| "-".to_owned(), date),
                format!("{} d", score.days_outside),
                figure(score.worst_c, unit, 1),
                outcome.moves.to_string(),
            ],
            foresight: run.foresight,
            main: i == 0,
        }
    };
    let mut rows: Vec<Row> = answer.runs().enumerate().map(row).collect();
    rows.sort_by_key(|row| row.foresight);
    rows
}

fn date(of: &Exhausted) -> String {
    match of {
        Exhausted::On(date) => short(*date),
        Exhausted::NotBy(_) => "not".to_owned(),
        Exhausted::Unknown(_) => "?".to_owned(),
    }
}

fn in_columns(cells: [&str; 5]) -> String {
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
        let seen = if row.foresight { " (seen)" } else { "" };
        let [plan, case, strategy] = &row.name;
        let name = fitted(&format!("{}, {case}, {strategy}{seen}", fitted(plan, PLAN).trim_end()), NAME - 1);
        let cells = in_columns(row.cells.each_ref().map(String::as_str));
        format!("{mark} {name:<NAME$}{cells}").trim_end().to_owned()
    }));
    out
}

/// What the heads and the cells mean.
pub fn meaning(rows: &[Row], system: System) -> String {
    let unit = system.unit(Dimension::TemperatureDifference);
    let seen = if rows.iter().any(|row| row.foresight) {
        "; (seen): solved with that very case in view, no evidence, so unseen cases stand first"
    } else {
        ""
    };
    format!(
        "outside: days outside the hard targets, summed over them; worst: farthest outside, {}; not: not by the end of the \
         season{seen}",
        unit.symbol()
    )
}
