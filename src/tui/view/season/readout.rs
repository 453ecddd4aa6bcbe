//! The date read, and what comes of the season: beside the pictures.

use chrono::NaiveDate;

use crate::mix::{Blend, Setting};
use crate::problem::harmless;
use crate::report::text::season::{at_place, exhausted_words, moved_words, outside_by, past};
use crate::report::text::{setting_words, volume};
use crate::season::{Exhausted, GateMoves, SeasonDay};
use crate::target::{Mark, Standing, Tally, Target};
use crate::tui::look::Role;
use crate::units::{Dimension, System, figure, in_system, show};

use super::super::scroll::{Lines, say};
use super::Screen;

/// Columns from which a date has its day of the week (choice: with it and three digits each it still has one row).
const FULL: usize = 32;

/// Everything beside the pictures, wrapped.
pub(super) fn lines(screen: &Screen, width: usize) -> Lines {
    let mut out = Lines::new();
    if let Some(words) = screen.old_words() {
        say(&mut out, &words, width, 2, Role::Old);
    }
    if let Some(words) = screen.seen_words() {
        say(&mut out, words, width, 2, Role::Warn);
    }
    let days = &screen.shown.run.run.days;
    match screen.day().and_then(|i| Some((i, days.get(i)?))) {
        Some((i, day)) => of_day(screen, (i, day), width, &mut out),
        None => say(&mut out, "the season has no day", width, 2, Role::Outside),
    }
    out.push((String::new(), Role::Plain));
    of_season(screen, width, &mut out);
    out
}

/// The date read.
fn of_day(screen: &Screen, (i, day): (usize, &SeasonDay), width: usize, out: &mut Lines) {
    let (system, site) = (screen.model.system(), screen.site());
    let mut add = |text: &str, role| say(out, text, width, 2, role);
    let value = |v: f64, dimension, decimals| show(v, dimension, system, decimals);
    let flow = |m3s: f64| value(m3s, Dimension::Flow, u8::from(system == System::Si));
    let c = |c: f64| value(c, Dimension::Temperature, 1);
    let count = screen.shown.run.run.days.len();
    let date = day.date.format(if width < FULL { "%Y-%m-%d" } else { "%a %Y-%m-%d" });
    add(&format!("{date} day {} of {count}", i + 1), Role::Strong);
    let pool = value(day.pool_m, Dimension::Length, 1);
    add(&format!("pool {pool}, inflow {}", flow(day.inflow_m3s)), Role::Plain);
    let oxygen = |o: Option<f64>| o.map_or_else(|| "oxygen ?".to_owned(), |o| format!("{o:.1} mg/L"));
    let left = |release: &Blend| {
        let (warm, oxygen) = (c(release.temperature_c), oxygen(release.oxygen_below_mg_l));
        format!("release {}: {warm}, {oxygen}", flow(release.flow_m3s))
    };
    add(&day.release.as_ref().map_or_else(|| "no release".to_owned(), left), Role::Tried);
    if let Some(point) = screen.point() {
        let figures = day.points.as_ref().and_then(|p| p.get(point));
        let words = figures.map_or_else(
            || "not known".to_owned(),
            |f| format!("{}, {}", c(f.mean_c), oxygen(f.oxygen_mean_mg_l)),
        );
        add(&format!("{}: {words}", screen.place()), Role::Tried);
    }
    for (words, role) in standing(screen, day) {
        add(&words, role);
    }
    if let Some([low, high]) = reach(screen, day.date) {
        let (low, high) = (figure(low, system.unit(Dimension::Temperature), 1), c(high));
        add(&format!("attainable {low} to {high}"), Role::Plain);
    }
    if let Some(cold) = screen.shown.run.outcome.cold.first()
        && let Some(of) = cold.days.get(i)
    {
        let usable = of
            .usable_m3
            .map_or_else(|| "none usable".to_owned(), |m3| format!("{} usable", volume(m3, system)));
        let words = format!("below {}: {usable} of {}", c(cold.threshold_c), volume(of.total_m3, system));
        add(&words, Role::Cold);
    }
    let setting = Setting { gates: day.gates.clone(), ..Setting::default() };
    add(&format!("set: {}", setting_words(site, &setting, system)), Role::Plain);
    let calendar = &screen.shown.run.outcome.calendar;
    if let Some(on) = calendar.iter().rev().find(|on| on.date <= day.date) {
        add(&format!("since {}: {}", on.date.format("%m-%d"), why(on, screen)), Role::Plain);
    }
    // a limit of the change can be broken where no gate moves
    let decision = screen.shown.run.run.decisions.iter().rev().find(|decision| decision.date <= day.date);
    if let Some(words) = decision.and_then(|decision| past(site, decision, system)) {
        add(&format!("! {words}"), Role::Warn);
    }
    if let Some(next) = calendar.iter().find(|on| on.date > day.date) {
        let book = next.book_by.map_or_else(String::new, |by| format!(", book by {}", by.format("%m-%d")));
        let moves = moved_words(site, &next.moved, system);
        add(&format!("next {}: {moves}{book}", next.date.format("%m-%d")), Role::Plain);
    }
    if day.overturned {
        add("the pool overturns", Role::Warn);
    }
}

/// What was moved, or what forced it.
fn why(on: &GateMoves, screen: &Screen) -> String {
    match &on.forced {
        Some((_, words)) => format!("FORCED by {}", harmless(&in_system(words, screen.model.system()))),
        None => moved_words(screen.site(), &on.moved, screen.model.system()),
    }
}

/// What is asked at the place looked at, and how the day stands: a line, and one for each rule it is outside of.
fn standing(screen: &Screen, day: &SeasonDay) -> Vec<(String, Role)> {
    let system = screen.model.system();
    let oxygen = screen.session.season.oxygen;
    let dimension = if oxygen { Dimension::Concentration } else { Dimension::Temperature };
    let value = |v: f64| show(v, dimension, system, 1);
    let low_of = |v: f64| figure(v, system.unit(dimension), 1);
    let range = |ends: [Option<f64>; 2]| match ends {
        [None, None] => None,
        [Some(low), None] => Some(format!("{} at least", value(low))),
        [None, Some(high)] => Some(format!("{} at most", value(high))),
        [Some(low), Some(high)] => Some(format!("{} to {}", low_of(low), value(high))),
    };
    let (rule, kept) = (screen.asked(day.date), screen.kept(day.date));
    // days outside are counted without the buffer, mixes are chosen with it
    let buffered =
        range(kept).filter(|_| kept != rule).map_or_else(String::new, |r| format!(", planned {r}"));
    let asked = range(rule).map(|range| format!("asked {range}{buffered}"));
    let marks: Vec<(&Target, Mark)> = screen.marks(day.date).collect();
    let missed = marks.iter().filter(|(_, mark)| mark.outside()).map(|(rule, mark)| {
        let by =
            mark.by.map_or_else(String::new, |by| format!(" by {}", outside_by(rule, by, oxygen, system)));
        let word = mark.standing.word().to_uppercase();
        (format!("! {}: {word}{by}", harmless(&rule.name)), Role::Outside)
    });
    let missed: Vec<(String, Role)> = missed.collect();
    let unknown = marks.iter().any(|(_, mark)| mark.standing == Standing::Unknown);
    let end = match (missed.is_empty(), unknown, marks.is_empty()) {
        (false, ..) | (true, _, true) => "",
        (true, true, _) => ": not all known",
        (true, false, _) => ": inside",
    };
    let words = asked.unwrap_or_else(|| {
        let none = if marks.is_empty() { "nothing is asked" } else { "rules" };
        format!("{none} at {}", screen.place())
    });
    let role = if marks.is_empty() || unknown || !missed.is_empty() { Role::Plain } else { Role::Inside };
    std::iter::once((format!("{words}{end}"), role)).chain(missed).collect()
}

/// What is within reach, as the last decision found it.
fn reach(screen: &Screen, date: NaiveDate) -> Option<[f64; 2]> {
    let reached = &screen.shown.run.outcome.reached;
    reached.iter().rev().find(|on| on.date <= date)?.attainable_c
}

/// The figures people decide by.
fn of_season(screen: &Screen, width: usize, out: &mut Lines) {
    let (context, run, system) = (&screen.shown.ahead.context, screen.shown.run, screen.model.system());
    let outcome = &run.outcome;
    let mut add = |text: &str, role| say(out, text, width, 2, role);
    if let Some(ended) = &run.run.ended {
        let words = format!("! STOPS on {}: {}", ended.date, harmless(&in_system(&ended.words, system)));
        add(&words, Role::Outside);
    }
    let date = |of: &Exhausted| (exhausted_words(of), of.on().is_some());
    let told = |name: &str, (words, on): (String, bool)| {
        (format!("{name}: {words}"), if on { Role::Outside } else { Role::Plain })
    };
    let (words, role) = told("out of reach", date(&outcome.exhausted));
    add(&words, role);
    if let Some(reserve) = &outcome.under_reserve {
        let (words, role) = told("under the reserve", date(reserve));
        add(&words, role);
    }
    let outside = outcome.score.days_outside;
    let words = format!("{} outside the hard targets", plural(u64::from(outside), "day"));
    add(&words, if outside > 0 { Role::Outside } else { Role::Plain });
    for told in &outcome.targets {
        let Some(rule) = context.site().targets.get(told.target) else { continue };
        let valid = |of: &&Tally| of.judged + of.unknown > 0;
        if [&told.temperature, &told.oxygen].into_iter().flatten().find(valid).is_none() {
            continue;
        }
        let days = plural(u64::from(told.days_outside()), "day");
        let wish = if rule.soft { ", a wish" } else { "" };
        let open = [("temperature", &told.temperature), ("oxygen", &told.oxygen)];
        let open = open.into_iter().filter(|(_, of)| of.as_ref().is_some_and(is_unjudged));
        let open: Vec<String> = open.map(|(name, _)| format!(", {name} not judged")).collect();
        let words = format!("- {}{wish}: {days}{}", at_place(&rule.name, &rule.point), open.concat());
        let role = match told.days_outside() {
            1.. if !rule.soft => Role::Outside,
            _ if !open.is_empty() => Role::Warn,
            _ => Role::Plain,
        };
        add(&words, role);
    }
    add(&format!("{} gates moved, {:.0} crew hours", outcome.moves, outcome.crew_hours), Role::Plain);
    for warning in &outcome.warnings {
        let words = harmless(&in_system(&warning.words, system));
        add(&format!("! {}: {words}", warning.date.format("%m-%d")), Role::Warn);
    }
}

/// Whether no day on which a rule is valid is held against it.
fn is_unjudged(of: &Tally) -> bool {
    of.judged == 0 && of.unknown > 0
}

/// `1 day`, `3 days`.
fn plural(count: u64, word: &str) -> String {
    if count == 1 { format!("1 {word}") } else { format!("{count} {word}s") }
}
