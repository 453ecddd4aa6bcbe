//! The day read: what was expected and why, what the gauge read, what stood.

use crate::problem::harmless;
use crate::report::text::log::gates;
use crate::tasks::log::PastDay;
use crate::tui::draw::past::DayMark;
use crate::tui::draw::through::sign;
use crate::tui::look::Role;
use crate::units::{figure, show};

use super::super::scroll::{Lines, say};
use super::Screen;
use super::picture::{EXPECTED, GAUGE, Told, mark};

/// Everything that is said of the day read.
pub(super) fn lines(screen: &Screen, width: usize) -> Lines {
    let mut out = Lines::new();
    let session = screen.session;
    let read = session.past_read().and_then(|at| Some((at, session.past_days().get(at)?)));
    let Some((at, day)) = read else { return out };
    let told = screen.told(day);
    let count = session.past_days().len();
    let date = day.date.format("%a %Y-%m-%d");
    say(&mut out, &format!("{date}, day {} of {count}", at + 1), width, 2, Role::Strong);
    figures(screen, &told, width, &mut out);
    if let Some(words) = left_out(screen, day) {
        say(&mut out, &words, width, 2, Role::Warn);
    }
    stood(screen, day, width, &mut out);
    let marks: Vec<DayMark> = session.past_days().iter().map(|day| mark(screen, day)).collect();
    for (of, sign, meaning) in DayMark::SIGNS.into_iter().filter(|(of, ..)| marks.contains(of)) {
        say(&mut out, &format!("{sign} {meaning}"), width, 2, of.role());
    }
    out
}

/// Expected, its band, the gauge, and how far apart they are, with and without what is learned.
fn figures(screen: &Screen, told: &Told, width: usize, out: &mut Lines) {
    let (dimension, system, look) = (screen.dimension(), screen.system(), screen.model.look);
    let unit = system.unit(dimension);
    let value = |si: f64| show(si, dimension, system, 1);
    let low = |si: f64| figure(si, unit, 1);
    let band = told.band.map_or_else(String::new, |(l, h)| format!(" [{} to {}]", low(l), value(h)));
    let words = told.expected.map_or_else(
        || "expected: nothing can be computed".to_owned(),
        |expected| format!("{} expected {}{band}", sign(EXPECTED.0, EXPECTED.1, look), value(expected)),
    );
    say(out, &words, width, 2, Role::Range);
    let role = if screen.session.log.oxygen { Role::Oxygen } else { Role::Temperature };
    let words = told.measured.map_or_else(
        || "gauge: no valid mean of the day".to_owned(),
        |measured| format!("{} gauge {}", sign(GAUGE.0, GAUGE.1, look), value(measured)),
    );
    say(out, &words, width, 2, role);
    if let (Some(expected), Some(measured)) = (told.expected, told.measured) {
        let (standing, role) = match told.outside() {
            Some(true) => (", OUTSIDE the day's band", Role::Outside),
            Some(false) => (", in the day's band", Role::Inside),
            None => ("", Role::Plain),
        };
        say(out, &format!("difference {}{standing}", screen.by(measured - expected)), width, 2, role);
    }
    if let Some(plain) = told.plain {
        let by = told.measured.map_or_else(String::new, |m| format!(", {}", screen.by(m - plain)));
        say(out, &format!("nothing learned {}{by}", value(plain)), width, 2, Role::Plain);
    }
}

/// Why a day is left out.
pub(super) fn left_out(screen: &Screen, day: &PastDay) -> Option<String> {
    let why = day.left_out.as_ref()?;
    let sign = if screen.is_event(day) { "E" } else { "x" };
    Some(format!("{sign} left out: {}", harmless(why)))
}

/// The decision that stood, its gates and its reason.
fn stood(screen: &Screen, day: &PastDay, width: usize, out: &mut Lines) {
    let all = screen.session.decisions();
    let Some(decided) = day.decision.and_then(|id| all.iter().find(|d| d.id == id)) else {
        say(out, "no decision stood", width, 2, Role::Quiet);
        return;
    };
    let since = screen.session.stands_from(decided).format("%m-%d");
    let words = format!(
        "decision {} since {since}: {}",
        decided.id,
        gates(screen.session.context().site(), &decided.decision.chosen, screen.system())
    );
    say(out, &words, width, 2, Role::Plain);
    say(out, &format!("why: {}", harmless(&decided.decision.why)), width, 2, Role::Quiet);
}
