//! The season ahead, in words: what people decide by first, then what it comes from. The lines are made for the
//! command and the screens alike.

mod calendar;
mod cold;
mod first;
pub(in crate::report) mod learned;
pub(super) mod needed;
pub(super) mod price;
mod rest;
mod side;
mod unjudged;

use chrono::NaiveDate;
use unicode_width::UnicodeWidthStr;

use crate::problem::{Problem, Weight, harmless};
use crate::report::flags_of;
use crate::season::{Exhausted, Run};
use crate::tasks::Context;
use crate::tasks::season::SeasonAnswer;

use super::{labelled, list, wrapped};

pub use calendar::{gates, moved_words, moves, past, reach};
pub use cold::{cold, left};
pub use first::{exhausted, out_of_reach, outside_by, reserve, targets};
pub use needed::needed;
pub use price::{asked as priced, lines as prices};
pub use rest::rest;
pub use side::{HEADS, MORE_HEADS, Row, columns, meaning, more_columns, side};

/// Everything but head and caution.
pub(super) fn body(context: &Context, answer: &SeasonAnswer) -> String {
    let system = context.system;
    let mut out = labelled("Season", &spoken_of(answer));
    out.push_str(&labelled("", &gates_chosen(context, answer)));
    for (label, words) in first::first(context, answer, system) {
        out.push_str(&labelled(label, &words));
    }
    out.push('\n');
    out.push_str(&side::table(answer, system));
    out.push_str(&section("Cold water", cold(&answer.main, system)));
    out.push_str(&section("Gates", gates(context, &answer.main, system)));
    out.push_str(&section("Moves", moves(context, &answer.main, system)));
    out.push_str(&section("Within reach on the days of decision", reach(&answer.main, system)));
    out.push_str(&section("Beside", rest(context, &answer.main, system)));
    // what is said of a file beside the casts may be a note of the season already
    let mut cast = flags_of(&context.profile.flags);
    cast.retain(|flag| flag.weight != Weight::Note && !answer.notes.contains(flag));
    out.push_str(&list("The cast", &cast, true, system));
    let notes: Vec<&Problem> = answer.notes.iter().collect();
    out.push_str(&list("The season", &notes, false, system));
    out
}

/// Lines under a heading, each wrapped; nothing without lines.
fn section(heading: &str, lines: Vec<String>) -> String {
    if lines.is_empty() {
        return String::new();
    }
    let mut out = format!("{heading}\n");
    for line in lines {
        out.push_str(&wrapped_row(&line));
    }
    out.push('\n');
    out
}

/// A line, wrapped where it is too long: what stands in a first column stays there, the rest beside it.
fn wrapped_row(line: &str) -> String {
    let line = format!("  {line}");
    if line.width() <= super::WIDTH {
        return format!("{line}\n");
    }
    let column = line.trim_start().find("  ").map(|at| at + 2);
    let Some((label, text)) = column.and_then(|at| line.split_at_checked(at + 2)) else {
        return wrapped(&line, 4);
    };
    let beside = label.width() + text.len() - text.trim_start().len();
    let body = wrapped(&format!("{:beside$}{}", "", text.trim_start()), beside);
    format!("{label:<beside$}{}", body.get(beside..).unwrap_or_default())
}

/// `2026-07-14 to 2026-11-30, plan steady (plans/steady.csv), case middling`
fn spoken_of(answer: &SeasonAnswer) -> String {
    let main = &answer.main;
    let last = main.run.days.last().map_or(answer.begins, |day| day.date);
    format!(
        "{} to {last}; plan {} ({}), case {}: {}",
        answer.begins,
        harmless(&main.run.plan),
        harmless(&main.plan.file),
        harmless(&main.run.case),
        harmless(&main.skies.from)
    )
}

/// How the gates are chosen, from when on, and how often.
fn gates_chosen(context: &Context, answer: &SeasonAnswer) -> String {
    let held = if answer.decides > answer.begins {
        format!("what is set now is held until {}, then ", answer.decides)
    } else if answer.decides < context.on.date_naive() {
        format!("nobody knows what is set now: decided from {}, the day of the cast, on: ", answer.decides)
    } else {
        String::new()
    };
    let solved = if answer.main.foresight {
        "; solved with this very case in view: foresight, no evidence"
    } else {
        ""
    };
    let order = match answer.main.order.as_slice() {
        [] => String::new(),
        order => {
            let by: Vec<&str> = order.iter().map(|criterion| criterion.name()).collect();
            format!("; on each day of decision the mixes are ordered by {}", by.join(", "))
        }
    };
    format!(
        "{held}{}, decided every {}{order}{solved}",
        harmless(&strategy_words(&answer.main.run)),
        super::days(f64::from(answer.decide_days))
    )
}

/// A strategy in words.
pub fn strategy_words(run: &Run) -> String {
    match run.strategy.as_str() {
        "hold" => "the setting is held as long as no limit stands against it".to_owned(),
        "best" => "the best mix of the day".to_owned(),
        "thrift" => "release targets that spare cold water".to_owned(),
        other => format!("gates as the {other} says"),
    }
}

/// `2026-09-12`, `not by 2026-11-30`, `not known: why`.
pub fn exhausted_words(of: &Exhausted) -> String {
    match of {
        Exhausted::On(date) => date.to_string(),
        Exhausted::NotBy(date) => format!("not by {date}"),
        Exhausted::Unknown(why) => format!("not known: {}", harmless(why)),
    }
}

/// A name with its place, where the name does not tell it.
pub fn at_place(name: &str, place: &str) -> String {
    let (name, place) = (harmless(name), harmless(place));
    if name.ends_with(&format!(" at {place}")) { name } else { format!("{name} at {place}") }
}

/// A date in a table.
fn short(date: NaiveDate) -> String {
    date.format("%m-%d").to_string()
}
