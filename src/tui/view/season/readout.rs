//! The date read, and what comes of the season: beside the pictures.

use chrono::NaiveDate;
use ratatui::layout::Rect;

use crate::mix::{Blend, Setting};
use crate::problem::harmless;
use crate::report::text::season::{at_place, exhausted_words, moved_words, outside_by, past};
use crate::report::text::{setting_words, volume};
use crate::season::{Exhausted, GateMoves, SeasonDay, TargetTally};
use crate::target::{Mark, Standing, Tally, Target};
use crate::tui::draw::season::{shade, sign, untold};
use crate::tui::look::{Look, Role};
use crate::units::{Dimension, System, figure, in_system, show};

use super::super::scroll::{Lines, say};
use super::super::write::at_commas;
use super::picture::{ASKED, COMES, USABLE, days_by};
use super::{Screen, left};

/// Columns from which a date has its day of the week (choice: with it and three digits each it still has one row).
const FULL: usize = 32;

/// What is said beside the pictures, wrapped.
struct Said {
    lines: Lines,
    width: usize,
    /// How the pictures are drawn, where there are any.
    look: Option<Look>,
}

impl Said {
    fn add(&mut self, text: &str, role: Role) {
        say(&mut self.lines, text, self.width, 2, role);
    }

    /// Figures, parted behind commas where they can be.
    fn add_list(&mut self, text: &str, role: Role) {
        self.lines.extend(at_commas(text, self.width, 2).into_iter().map(|line| (line, role)));
    }

    fn add_blank(&mut self) {
        self.lines.push((String::new(), Role::Plain));
    }

    /// The same with the sign of the curve that they tell in figures.
    fn told(&mut self, sign: impl Fn(Look) -> &'static str, text: &str, role: Role) {
        let sign = self.look.map_or_else(String::new, |look| format!("{} ", sign(look)));
        self.add_list(&format!("{sign}{text}"), role);
    }
}

/// Everything beside the pictures, which are drawn so in an area.
pub(super) fn lines(screen: &Screen, width: usize, pictures: Option<(Rect, Look)>) -> Lines {
    let mut out = Said { lines: Lines::new(), width, look: pictures.map(|p| p.1) };
    if let Some(words) = screen.old_words() {
        out.add(&words, Role::Old);
    }
    if let Some(words) = screen.seen_words() {
        out.add(words, Role::Warn);
    }
    let days = &screen.shown.run.run.days;
    match screen.day().and_then(|i| Some((i, days.get(i)?))) {
        Some((i, day)) => {
            of_water(screen, (i, day), &mut out);
            for (words, role) in left::lines(screen, day.date) {
                out.add_list(&words, role);
            }
            of_gates(screen, day, &mut out);
        }
        None => out.add("the season has no day", Role::Outside),
    }
    out.add_blank();
    of_season(screen, &mut out);
    let signs = pictures.map_or_else(Vec::new, |(area, look)| untold(area, look));
    if !signs.is_empty() {
        out.add_blank();
        let signs: Vec<String> = signs.iter().map(|(sign, words)| format!("{sign} {words}")).collect();
        out.add_list(&format!("in the pool: {}", signs.join(", ")), Role::Quiet);
    }
    out.lines
}

/// The water of the date read: pool, release, what is asked, what is left.
fn of_water(screen: &Screen, (i, day): (usize, &SeasonDay), out: &mut Said) {
    let system = screen.model.system();
    let value = |v: f64, dimension, decimals| show(v, dimension, system, decimals);
    let flow = |m3s: f64| value(m3s, Dimension::Flow, u8::from(system == System::Si));
    let c = |c: f64| value(c, Dimension::Temperature, 1);
    let count = screen.shown.run.run.days.len();
    let date = day.date.format(if out.width < FULL { "%Y-%m-%d" } else { "%a %Y-%m-%d" });
    out.add(&format!("{date} day {} of {count}", i + 1), Role::Strong);
    let pool = value(day.pool_m, Dimension::Length, 1);
    out.add_list(&format!("pool {pool}, inflow {}", flow(day.inflow_m3s)), Role::Plain);
    let oxygen = |o: Option<f64>| o.map_or_else(|| "oxygen ?".to_owned(), |o| format!("{o:.1} mg/L"));
    let left = |release: &Blend| {
        let (warm, oxygen) = (c(release.temperature_c), oxygen(release.oxygen_below_mg_l));
        format!("release {}: {warm}, {oxygen}", flow(release.flow_m3s))
    };
    let words = day.release.as_ref().map_or_else(|| "no release".to_owned(), left);
    let comes = |look| sign(COMES.0, COMES.1, look);
    match screen.point() {
        None => out.told(comes, &words, screen.role()),
        Some(point) => {
            out.add_list(&words, Role::Plain);
            let figures = day.points.as_ref().and_then(|p| p.get(point));
            let words = figures.map_or_else(
                || "not known".to_owned(),
                |f| format!("{}, {}", c(f.mean_c), oxygen(f.oxygen_mean_mg_l)),
            );
            out.told(comes, &format!("{}: {words}", screen.place()), screen.role());
        }
    }
    let (asked, missed) = standing(screen, day);
    match asked {
        (words, role, true) => out.told(|look| sign(ASKED.0, ASKED.1, look), &words, role),
        (words, role, false) => out.add(&words, role),
    }
    for words in &missed {
        out.add(words, Role::Outside);
    }
    if let Some([low, high]) = reach(screen, day.date) {
        let (low, high) = (figure(low, system.unit(Dimension::Temperature), 1), c(high));
        let words = format!("attainable {low} to {high}");
        if screen.point().is_none() && !screen.session.season.oxygen {
            out.told(shade, &words, Role::Plain);
        } else {
            out.add(&words, Role::Plain);
        }
    }
    if let Some(cold) = screen.shown.run.outcome.cold.first()
        && let Some(of) = cold.days.get(i)
    {
        let usable = of
            .usable_m3
            .map_or_else(|| "none usable".to_owned(), |m3| format!("{} usable", volume(m3, system)));
        let words = format!("below {}: {usable} of {}", c(cold.threshold_c), volume(of.total_m3, system));
        out.told(|look| sign(USABLE.0, USABLE.1, look), &words, Role::Cold);
    }
}

/// The gates of the date read, and what is moved before and after it.
fn of_gates(screen: &Screen, day: &SeasonDay, out: &mut Said) {
    let (system, site) = (screen.model.system(), screen.site());
    let setting = Setting { gates: day.gates.clone(), ..Setting::default() };
    out.add_list(&format!("set: {}", setting_words(site, &setting, system)), Role::Plain);
    let calendar = &screen.shown.run.outcome.calendar;
    if let Some(on) = calendar.iter().rev().find(|on| on.date <= day.date) {
        out.add_list(&format!("since {}: {}", on.date.format("%m-%d"), why(on, screen)), Role::Plain);
    }
    // a limit of the change can be broken where no gate moves
    let decision = screen.shown.run.run.decisions.iter().rev().find(|decision| decision.date <= day.date);
    if let Some(words) = decision.and_then(|decision| past(site, decision, system)) {
        out.add(&format!("! {words}"), Role::Warn);
    }
    if let Some(next) = calendar.iter().find(|on| on.date > day.date) {
        let book = next.book_by.map_or_else(String::new, |by| format!(", book by {}", by.format("%m-%d")));
        let moves = moved_words(site, &next.moved, system);
        out.add_list(&format!("next {}: {moves}{book}", next.date.format("%m-%d")), Role::Plain);
    }
    if day.overturned {
        out.add("the pool overturns", Role::Warn);
    }
}

/// What was moved, or what forced it.
fn why(on: &GateMoves, screen: &Screen) -> String {
    match &on.forced {
        Some((_, words)) => format!("FORCED by {}", harmless(&in_system(words, screen.model.system()))),
        None => moved_words(screen.site(), &on.moved, screen.model.system()),
    }
}

/// What is asked at the place looked at and how the day stands, whether a range is asked; each rule it is outside of.
fn standing(screen: &Screen, day: &SeasonDay) -> ((String, Role, bool), Vec<String>) {
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
        format!("! {}: {word}{by}", harmless(&rule.name))
    });
    let missed: Vec<String> = missed.collect();
    let unknown = marks.iter().any(|(_, mark)| mark.standing == Standing::Unknown);
    let end = match (missed.is_empty(), unknown, marks.is_empty()) {
        (false, ..) | (true, _, true) => "",
        (true, true, _) => ": not all known",
        (true, false, _) => ": inside",
    };
    let ranged = asked.is_some();
    let words = asked.unwrap_or_else(|| {
        let none = if marks.is_empty() { "nothing is asked" } else { "rules" };
        format!("{none} at {}", screen.place())
    });
    let role = if marks.is_empty() || unknown || !missed.is_empty() { Role::Plain } else { Role::Inside };
    ((format!("{words}{end}"), role, ranged), missed)
}

/// What is within reach, as the last decision found it.
fn reach(screen: &Screen, date: NaiveDate) -> Option<[f64; 2]> {
    let reached = &screen.shown.run.outcome.reached;
    reached.iter().rev().find(|on| on.date <= date)?.attainable_c
}

/// The figures people decide by.
fn of_season(screen: &Screen, out: &mut Said) {
    let (context, run, system) = (&screen.shown.ahead.context, screen.shown.run, screen.model.system());
    let outcome = &run.outcome;
    let mut add = |text: &str, role| out.add(text, role);
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
        let days = days_outside(told);
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

/// How many days outside a rule, and by what.
fn days_outside(told: &TargetTally) -> String {
    let all = plural(u64::from(told.days_outside()), "day");
    let by = |oxygen| days_by(told, oxygen).iter().filter(|(_, mark)| mark.outside()).count();
    match (by(false), by(true)) {
        (0, 0) => all,
        (_, 0) => format!("{all} by temperature"),
        (0, _) => format!("{all} by oxygen"),
        (temperature, oxygen) => format!("{all}, {temperature} by temperature, {oxygen} by oxygen"),
    }
}

/// `1 day`, `3 days`.
pub(in crate::tui::view) fn plural(count: u64, word: &str) -> String {
    if count == 1 { format!("1 {word}") } else { format!("{count} {word}s") }
}
