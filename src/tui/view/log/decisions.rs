//! The decisions: a line of each, the newest first, and one of them in full.

use ratatui::buffer::Buffer;
use ratatui::layout::Rect;

use crate::problem::harmless;
use crate::record::{Decided, Score};
use crate::report::text::log::{decision, event_words, turned};
use crate::tui::look::Role;

use super::super::lists::first_line;
use super::super::scroll::{Lines, say};
use super::super::write::{cut, put, row_style, wrapped};
use super::Screen;

/// Columns of the label of a part of a decision.
const MARGIN: usize = 10;

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
    let years = area.width >= YEARS;
    put(buf, area, 0, 0, &cut(HEAD[usize::from(years)], usize::from(area.width)), look.style(Role::Quiet));
    let rows = Rect { y: area.y + 1, height: area.height.saturating_sub(1), ..area };
    let from = first_line(at, all.len(), rows.height);
    for (row, (i, decided)) in (0..rows.height).zip(all.iter().enumerate().skip(from)) {
        let mark = if i == at { ">" } else { " " };
        let line = format!("{mark}{}", line(screen, decided, years));
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
const HEAD: [&str; 2] = [" no.  from   bias     own band  by", " no.  from        bias     own band  by"];
/// Columns from which the year is told (choice: a name has its room then).
const YEARS: u16 = 56;

/// `  8  2026-06-23  +0.4 F     5/7     weekly gate meeting`.
fn line(screen: &Screen, decided: &Decided, years: bool) -> String {
    let from = screen.session.stands_from(decided).format(if years { "%Y-%m-%d" } else { "%m-%d" });
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

/// The decision chosen, in full, in the words of the command.
pub(super) fn full(screen: &Screen, width: usize) -> Lines {
    let mut out = Lines::new();
    let session = screen.session;
    let Some(decided) = session.decision_at().and_then(|at| session.decisions().into_iter().nth(at)) else {
        out.extend(none(screen, width).into_iter().map(|line| (line, Role::Plain)));
        return out;
    };
    let words = "A decision in full; Enter or Esc goes back, a amends it, w takes it back.";
    say(&mut out, words, width, 2, Role::Quiet);
    let mut parts = decision(&screen.context(session.context()), &decided);
    let came = session.turned(decided.id).map_or_else(Vec::new, |of| turned(of, screen.system()));
    parts.extend(came.into_iter().map(|words| ("Came", words)));
    for (label, text) in parts {
        let beside = wrapped(&text, width.saturating_sub(MARGIN).max(1), 0);
        for (i, line) in beside.into_iter().enumerate() {
            let label = if i == 0 { label } else { "" };
            let role = if label == "Decision" { Role::Strong } else { Role::Plain };
            out.push((format!("{label:MARGIN$}{line}"), role));
        }
    }
    let events = session.context().log.log.events();
    let site = session.context().site();
    for event in events {
        say(&mut out, &format!("Event {}", event_words(site, event)), width, 2, Role::Quiet);
    }
    out
}
