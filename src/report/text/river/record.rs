//! What stations recorded, against the rules: days outside, by how much, and a calendar of them.

use chrono::NaiveDate;

use crate::problem::harmless;
use crate::target::{Held, Mark, Standing, Tally, Target};
use crate::tasks::Context;
use crate::tasks::river::RiverAnswer;
use crate::units::System;

use super::super::wrapped_at;
use super::rules::{asks, floor, source};

/// What every statement about a record carries.
pub const PROVISIONAL: &str = "from provisional data; not a compliance determination";

/// The same where every reading was looked through.
pub const REVIEWED: &str = "from data marked as reviewed; not a compliance determination";

/// What days of a record are without an answer.
const UNREAD: &str = "without enough readings";

/// What a record is held against.
#[derive(Clone, Copy)]
enum Of {
    Range,
    Oxygen,
    Share,
}

impl Of {
    /// How far outside.
    fn by(self, rule: &Target, by: f64, system: System) -> String {
        match self {
            Self::Range => super::amounts::by(rule, by, system),
            Self::Oxygen => format!("{by:.1} mg/L"),
            Self::Share => format!("{:.0} % of saturation", 100.0 * by),
        }
    }
}

/// Signs of the calendar, with their meaning.
pub const SIGNS: &str = ". inside  # above  v below  ? too little recorded";

/// Lines about every record, wrapped at a width; the first of each rule is strong.
pub fn record(context: &Context, answer: &RiverAnswer, system: System, width: usize) -> Vec<(String, bool)> {
    let mut out = Vec::new();
    if answer.observed.is_empty() {
        say(&mut out, "No station has recorded anything on days on which a rule is valid.", width, true);
        return out;
    }
    for observed in &answer.observed {
        let Some(rule) = context.site().targets.get(observed.target) else { continue };
        let record = &observed.record;
        let parts = [
            (&record.temperature, asks(rule, system), Of::Range),
            (&record.oxygen, floor(rule), Of::Oxygen),
            (&record.oxygen_share, floor(rule), Of::Share),
        ];
        for (held, asked, of) in parts {
            let by = |by: f64| of.by(rule, by, system);
            let marked = if record.provisional { PROVISIONAL } else { REVIEWED };
            let Some(held) = held else { continue };
            let place = harmless(&rule.point);
            say(&mut out, &format!("{} at {place}: {asked}", harmless(&rule.name)), width, true);
            say(&mut out, &format!("  {}; {marked}", tally(&held.all, &by, UNREAD)), width, false);
            if held.seasons.len() > 1 {
                for (year, season) in &held.seasons {
                    say(
                        &mut out,
                        &format!("  season of {year}: {}", tally(season, &by, UNREAD)),
                        width,
                        false,
                    );
                }
            }
            // where no day is outside a calendar tells nothing more
            if held.all.over + held.all.under > 0 {
                out.extend(calendar(held).into_iter().map(|line| (line, false)));
            }
            say(&mut out, &format!("  {}", source(rule)), width, false);
        }
    }
    out
}

/// Adds words, wrapped.
fn say(out: &mut Vec<(String, bool)>, text: &str, width: usize, strong: bool) {
    out.extend(wrapped_at(text, 4, width).lines().map(|line| (line.to_owned(), strong)));
}

/// `3 of 61 days above, by up to 0.8 C (2026-07-14), 2 in a row; 5 days without enough readings`
pub(in crate::report::text) fn tally(tally: &Tally, amount: &dyn Fn(f64) -> String, unknown: &str) -> String {
    let mut out = Vec::new();
    for (count, word) in [(tally.over, "above"), (tally.under, "below")] {
        if count > 0 {
            out.push(format!("{count} of {} {word}", days(tally.judged)));
        }
    }
    if out.is_empty() {
        out.push(format!("none of {} outside", days(tally.judged)));
    }
    if let Some((by, on)) = tally.worst {
        out.push(format!("by up to {} ({on})", amount(by)));
        out.push(format!("at most {} in a row", tally.longest_run));
    }
    if tally.unknown > 0 {
        out.push(format!("{} {unknown}", days(tally.unknown)));
    }
    out.join(", ")
}

fn days(count: u32) -> String {
    days_of(f64::from(count))
}

/// `1 day`, `3 days`.
pub(in crate::report::text) fn days_of(count: f64) -> String {
    if (0.5..1.5).contains(&count) { "1 day".to_owned() } else { format!("{count:.0} days") }
}

/// A line a month: a sign for every day of it.
pub fn calendar(held: &Held) -> Vec<String> {
    let mut out = Vec::new();
    if held.months.is_empty() {
        return out;
    }
    out.push(format!("  {:<9}1   5    10   15   20   25   30", ""));
    for (&(year, month), tally) in &held.months {
        let sign = |day: u32| {
            let date = NaiveDate::from_ymd_opt(year, month, day);
            let mark = date.and_then(|date| held.days.iter().find(|d| d.0 == date));
            mark.map_or(' ', |(_, mark)| sign(*mark))
        };
        let days: String = (1..=31).map(sign).collect();
        let outside = tally.over + tally.under;
        let count = if outside > 0 { format!("{outside} outside") } else { String::new() };
        out.push(format!("  {year}-{month:02}  {days}  {count}").trim_end().to_owned());
    }
    out.push(format!("  {SIGNS}"));
    out
}

fn sign(mark: Mark) -> char {
    match mark.standing {
        Standing::Inside => '.',
        Standing::Above => '#',
        Standing::Below => 'v',
        Standing::Unknown => '?',
    }
}
