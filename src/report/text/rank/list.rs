//! The ranked list, one line each, the setting now on top.

use std::fmt::Write as _;

use unicode_width::UnicodeWidthStr;

use crate::mix::TargetStanding;
use crate::problem::harmless;
use crate::site::Site;
use crate::target::Standing;
use crate::tasks::Context;
use crate::tasks::rank::{RankAnswer, Shown};
use crate::units::{Dimension, System, figure, in_system};

use crate::report::text::gates::openings;
use crate::report::text::{WIDTH, fitted, wrapped, wrapped_at};

/// A line of the list.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Line {
    /// Number, gates, water, oxygen, standing, share inside, moves; the gates take what the others leave.
    pub cells: [String; 7],
    /// Limits it breaks.
    pub told: Vec<String>,
}

/// What the columns hold.
pub const CAPTION: &str = "10-90% and `in` (the share inside) are of our perturbed cases; moves, crew hours";
/// Least width left to the gates.
const GATES: usize = 16;

/// The lines of the list: the heading, the setting now where it is known, and the mixes, best first.
///
/// ```text
///  no gates (flows in cfs)          water F 10-90%  O2 stands  in moves
/// now N3 100%, S3 100%              54.6 53.5-56.1 7.1 inside 55% 0
///   1 N3 100%, S3 100%, Sluice 180  52.9 51.8-54.2 7.0 inside 58% 1 0.5
/// ```
pub fn lines(context: &Context, answer: &RankAnswer, system: System) -> Vec<Line> {
    let heading = [
        "no".to_owned(),
        format!("gates (flows in {})", system.unit(Dimension::Flow).symbol()),
        format!("water {} 10-90%", system.unit(Dimension::Temperature).symbol()),
        "O2".to_owned(),
        "stands".to_owned(),
        "in".to_owned(),
        "moves".to_owned(),
    ];
    let line = |number: &str, whose: &str, shown: &Shown| Line {
        cells: cells(context, number, shown, system),
        told: told(context, whose, shown, system),
    };
    let now = answer.now.iter().map(|now| line("now", "now", now));
    let mixes = answer.mixes.iter().zip(1..).map(|(shown, number)| {
        let number = i32::to_string(&number);
        line(&number, &format!("no. {number}"), shown)
    });
    std::iter::once(Line { cells: heading, told: Vec::new() }).chain(now).chain(mixes).collect()
}

/// The list at the width of the command, with what its columns hold.
pub(super) fn list(context: &Context, answer: &RankAnswer, system: System) -> String {
    let lines = lines(context, answer, system);
    if lines.len() == 1 {
        return String::new();
    }
    let rows = table(&lines, WIDTH).concat();
    rows.iter().map(|row| row.clone() + "\n").collect::<String>() + &wrapped(CAPTION, 0)
}

fn cells(context: &Context, number: &str, shown: &Shown, system: System) -> [String; 7] {
    let site = context.site();
    let unit = system.unit(Dimension::Temperature);
    let mut water = figure(shown.temperature_c, unit, 1);
    if let Some((low, high)) = shown.spread.band_c() {
        let _ = write!(water, " {}-{}", figure(low, unit, 1), figure(high, unit, 1));
    }
    let share = shown.governing().and_then(|s| s.share_inside_both);
    let moves = shown.change.as_ref().map(|c| {
        let hours = in_hours(c.moves.crew_hours);
        if hours.is_empty() { c.moves.count.to_string() } else { format!("{} {hours}", c.moves.count) }
    });
    [
        number.to_owned(),
        openings(context, shown, system).join(", "),
        water,
        shown.oxygen_mg_l.map_or_else(|| "?".to_owned(), |o| format!("{o:.1}")),
        standing(site, &shown.targets, system),
        share.map_or_else(|| "-".to_owned(), |s| format!("{:.0}%", 100.0 * s)),
        moves.unwrap_or_else(|| "?".to_owned()),
    ]
}

/// `0.5`, nothing for none.
fn in_hours(hours: f64) -> String {
    if hours > 0.0 { format!("{hours:.1}").trim_end_matches(".0").to_owned() } else { String::new() }
}

/// Limits that a mix computed in full breaks though the search took it for one that keeps them, or that the setting
/// now breaks.
fn told(context: &Context, whose: &str, shown: &Shown, system: System) -> Vec<String> {
    let broken = shown.limits.iter().filter(|c| c.broken());
    broken
        .map(|c| format!("! {whose} misses {}", harmless(&in_system(&c.words(context.site()), system))))
        .collect()
}

/// The largest misses of temperature and of oxygen over some targets, in capitals; `inside` where there is none.
pub fn standing(site: &Site, targets: &[TargetStanding], system: System) -> String {
    let worst = |of: &dyn Fn(&TargetStanding) -> (Standing, Option<f64>)| {
        targets
            .iter()
            .filter(|s| !s.wish)
            .map(of)
            .filter_map(|(standing, by)| Some((standing, by.filter(|b| *b > 0.0)?)))
            .max_by(|a, b| a.1.total_cmp(&b.1))
    };
    let unit = system.unit(Dimension::TemperatureDifference);
    let by = |amount: f64| if amount < 0.05 { "<0.1".to_owned() } else { format!("{amount:.1}") };
    let mut out = Vec::new();
    if let Some((standing, miss)) = worst(&|s| (s.temperature.0, s.by_c(site))) {
        out.push(format!("{} {}", standing.word().to_uppercase(), by(unit.from_si(miss))));
    }
    if let Some((_, miss)) = worst(&|s| s.oxygen) {
        out.push(format!("O2 BELOW {}", by(miss)));
    }
    if targets.iter().any(|s| s.unknown(site)) {
        out.push("UNKNOWN".to_owned());
    }
    match (out.is_empty(), targets.is_empty()) {
        (true, true) => "no target".to_owned(),
        (true, false) => "inside".to_owned(),
        _ => out.join(", "),
    }
}

/// The rows of each line at a width in cells: in columns, gates wrapped at their commas; what is told of a line follows
/// it.
pub fn table(lines: &[Line], width: usize) -> Vec<Vec<String>> {
    let widest = |column: usize| lines.iter().map(|l| l.cells[column].width()).max().unwrap_or(0);
    let widths: [usize; 7] = std::array::from_fn(widest);
    let others: usize = widths.iter().sum::<usize>() - widths[1] + widths.len() - 1;
    let gates = widths[1].min(width.saturating_sub(others).max(GATES));
    let [w_number, _, w_water, w_oxygen, w_standing, w_cases, _] = widths;
    let rows = |line: &Line| {
        let [number, set, water, oxygen, standing, cases, moves] = &line.cells;
        let mut set = broken_at_commas(set, gates).into_iter();
        let first = set.next().unwrap_or_default();
        let row = format!(
            "{number:>w_number$} {} {water:<w_water$} {oxygen:>w_oxygen$} {} {cases:>w_cases$} {moves}",
            fitted(&first, gates),
            fitted(standing, w_standing),
        );
        let mut out = vec![row.trim_end().to_owned()];
        out.extend(set.map(|more| format!("{:>w_number$}   {more}", "")));
        for words in &line.told {
            let told = wrapped_at(&format!("{:>w_number$} {words}", ""), w_number + 3, width);
            out.extend(told.lines().map(str::to_owned));
        }
        out
    };
    lines.iter().map(rows).collect()
}

/// A list cut after commas so that its lines fit; a part that is wider than a line is cut at its spaces, a word that is
/// wider anywhere: a flow that lost its last digits would be another flow.
fn broken_at_commas(list: &str, width: usize) -> Vec<String> {
    let narrow = width.saturating_sub(2);
    let fits = |piece: &str| piece.trim_end().width() <= narrow;
    let mut pieces: Vec<&str> = Vec::new();
    for part in list.split_inclusive(", ") {
        if part.trim_end().width() <= width && (pieces.is_empty() || fits(part)) {
            pieces.push(part);
            continue;
        }
        for word in part.split_inclusive(' ') {
            if fits(word) {
                pieces.push(word);
            } else {
                pieces.extend(word.split_inclusive(|_: char| true));
            }
        }
    }
    let mut out = vec![String::new()];
    for piece in pieces {
        let line = out.len() - 1;
        let room = if line == 0 { width } else { narrow };
        if !out[line].is_empty() && out[line].width() + piece.trim_end().width() > room {
            out.push(piece.to_owned());
        } else {
            out[line].push_str(piece);
        }
    }
    out.into_iter().map(|l| l.trim_end().to_owned()).collect()
}
