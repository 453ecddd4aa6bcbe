//! The decisions: a line of each, the newest first, and one of them in full.

use ratatui::buffer::Buffer;
use ratatui::layout::Rect;

use crate::problem::harmless;
use crate::record::line::Gates;
use crate::record::{Decided, Score};
use crate::tui::look::Role;
use crate::units::{Dimension, show};

use super::super::lists::first_line;
use super::super::scroll::{Lines, say};
use super::super::write::{cut, put, row_style, wrapped};
use super::{Screen, scored};

/// Columns of the label of a part of a decision.
const MARGIN: usize = 11;

/// Gates of a decision with their flows and openings.
pub(super) fn gates(screen: &Screen, gates: &Gates) -> String {
    let system = screen.system();
    let one = |(name, flow): (&String, &f64)| {
        let open = gates.open.get(name).map_or_else(String::new, |percent| format!(" at {percent:.0}%"));
        let decimals = u8::from(system == crate::units::System::Si);
        format!("{} {}{open}", harmless(name), show(*flow, Dimension::Flow, system, decimals))
    };
    let all: Vec<String> = gates.set.iter().map(one).collect();
    if all.is_empty() { "every gate shut".to_owned() } else { all.join(", ") }
}

/// Draws the list.
pub(super) fn draw(screen: &Screen, area: Rect, buf: &mut Buffer) {
    let look = screen.model.look;
    let all = screen.session.decisions();
    if all.is_empty() {
        for (row, line) in (0..area.height).zip(none(screen, usize::from(area.width))) {
            put(buf, area, 0, row, &line, look.style(Role::Plain));
        }
        return;
    }
    let at = screen.session.decision_at().unwrap_or(0);
    put(buf, area, 0, 0, &cut(HEAD, usize::from(area.width)), look.style(Role::Quiet));
    let rows = Rect { y: area.y + 1, height: area.height.saturating_sub(1), ..area };
    let from = first_line(at, all.len(), rows.height);
    for (row, (i, decided)) in (0..rows.height).zip(all.iter().enumerate().skip(from)) {
        let mark = if i == at { ">" } else { " " };
        let line = format!("{mark}{}", line(screen, decided));
        put(buf, rows, 0, row, &cut(&line, usize::from(rows.width)), look.style(Role::Plain));
        if i == at {
            row_style(buf, rows, row, look.style(Role::Chosen));
        }
    }
}

/// What stands in place of decisions where there are none.
fn none(screen: &Screen, width: usize) -> Vec<String> {
    let words = match crate::tasks::log::path(screen.session.context()) {
        Ok(_) => {
            "No decision is logged yet. g logs the try of the mix screen, on the rank screen the mix chosen."
        }
        Err(_) => "No decision is logged: this demonstration is held in memory and has no log to write to.",
    };
    wrapped(words, width, 2)
}

/// Heads of the columns.
const HEAD: &str = " no.  from        bias       inside  by";

/// `  8  2026-06-23  +0.4 F     5/7     weekly gate meeting`.
fn line(screen: &Screen, decided: &Decided) -> String {
    let from = screen.session.stands_from(decided).format("%Y-%m-%d");
    let (bias, inside) = match outcome(screen, decided.id).map(|score| (score, score.misfit)) {
        Some((score, Some(misfit))) => {
            (screen.by(misfit.bias), format!("{}/{}", score.inside, score.with_band))
        }
        Some((_, None)) => ("no gauge".to_owned(), "-".to_owned()),
        None if decided.stands(screen.session.context().on) => ("set now".to_owned(), "-".to_owned()),
        None => ("not known".to_owned(), "-".to_owned()),
    };
    let amended = if decided.amended > 0 { " (amended)" } else { "" };
    let by = harmless(&decided.decision.by);
    format!("{:>3}  {from}  {bias:<9}  {inside:<6}  {by}{amended}", decided.id)
}

/// How a decision turned out at the dam, by what is looked at.
fn outcome<'a>(screen: &Screen<'a>, id: u64) -> Option<&'a Score> {
    let (_, temperature, oxygen) = screen.session.turned(id)?.places.first()?;
    Some(if screen.session.log.oxygen { oxygen } else { temperature })
}

/// The decision chosen, in full.
pub(super) fn full(screen: &Screen, width: usize) -> Lines {
    let mut out = Lines::new();
    let (session, system) = (screen.session, screen.system());
    let Some(decided) = session.decision_at().and_then(|at| session.decisions().into_iter().nth(at)) else {
        out.extend(none(screen, width).into_iter().map(|line| (line, Role::Plain)));
        return out;
    };
    let decision = decided.decision;
    let words = format!("Decision {}; Enter or Esc goes back, a amends it, w takes it back.", decided.id);
    say(&mut out, &words, width, 2, Role::Quiet);
    let mut part = |label: &str, text: &str, role: Role| {
        let beside = wrapped(text, width.saturating_sub(MARGIN).max(1), 0);
        for (i, line) in beside.into_iter().enumerate() {
            let label = if i == 0 { label } else { "" };
            out.push((format!("{label:MARGIN$}{line}"), role));
        }
    };
    let from = session.stands_from(&decided).format("%Y-%m-%d %H:%M %:z");
    let until = decision.until.map_or_else(String::new, |until| format!(", to be decided again by {until}"));
    let trigger =
        decision.trigger.as_deref().map_or_else(String::new, |t| format!(", or when {}", harmless(t)));
    let stands = if decided.stands(session.context().on) { ", set now" } else { "" };
    part("From", &format!("{from}, by {}{until}{trigger}{stands}", harmless(&decision.by)), Role::Plain);
    part("Why", &harmless(&decision.why), Role::Plain);
    part("Set", &gates(screen, &decision.chosen), Role::Strong);
    if let Some(before) = &decision.known.before {
        part("Before", &gates(screen, before), Role::Plain);
    }
    for expected in &decision.expected {
        part("Expected", &expected_words(screen, expected), Role::Plain);
    }
    match session.turned(decided.id) {
        Some(turned) => {
            let (from, to) = turned.days;
            for (place, temperature, oxygen) in &turned.places {
                let of = |score, oxygen| scored(score, oxygen, system);
                let words = format!(
                    "{from} to {to}, {}: {}; oxygen {}",
                    harmless(place),
                    of(temperature, false),
                    of(oxygen, true)
                );
                part("Came", &words, Role::Strong);
            }
        }
        None => part("Came", "nothing is known of it yet", Role::Quiet),
    }
    for rule in &decision.known.targets {
        let words =
            format!("{} at {}: {}, oxygen {}", rule.name, rule.point, rule.standing, rule.oxygen_standing);
        part("Rule then", &harmless(&words), Role::Plain);
    }
    for (number, mix) in (1..).zip(&decision.considered) {
        let c = show(mix.temperature_c, Dimension::Temperature, system, 1);
        let outside = if mix.outside.is_empty() {
            String::new()
        } else {
            format!(", outside {}", harmless(&mix.outside.join(", ")))
        };
        part(
            &format!("Ranked {number}"),
            &format!("{} = {c}{outside}", gates(screen, &mix.gates)),
            Role::Plain,
        );
    }
    let known = &decision.known;
    let words = format!(
        "written {}; inputs {}, cast {}; pool {}; gatemix {}",
        decision.at.with_timezone(&session.context().site().offset).format("%Y-%m-%d %H:%M %:z"),
        harmless(&known.inputs),
        harmless(&known.profile),
        show(known.pool_m, Dimension::Length, system, 1),
        harmless(&decision.version)
    );
    part("Known", &words, Role::Quiet);
    out
}

/// What was expected at a place, with and without what was learned.
fn expected_words(screen: &Screen, expected: &crate::record::line::Expected) -> String {
    let system = screen.system();
    let c = |c: f64| show(c, Dimension::Temperature, system, 1);
    let o = |o: f64| show(o, Dimension::Concentration, system, 1);
    let band = |band: Option<[f64; 2]>, say: &dyn Fn(f64) -> String| {
        band.map_or_else(String::new, |[low, high]| format!(" [{} to {}]", say(low), say(high)))
    };
    let mut words = format!("at {}: ", harmless(&expected.point));
    match expected.temperature_c {
        None => words.push_str("temperature not known"),
        Some(warm) => words = format!("{words}{}{}", c(warm), band(expected.band_c, &c)),
    }
    if let Some(plain) = expected.plain_temperature_c {
        words = format!("{words}, nothing learned {}", c(plain));
    }
    if let Some(oxygen) = expected.oxygen_mg_l {
        words = format!("{words}, {}{}", o(oxygen), band(expected.band_oxygen_mg_l, &o));
    }
    words
}
