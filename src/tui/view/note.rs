//! The note screen.
//!
//! ```text
//! what the note is of, which sheet, the format it is saved in
//! what keeps it from being ready for signature
//! the sheet, as it is printed
//! ```

use ratatui::buffer::Buffer;
use ratatui::layout::Rect;

use crate::problem::harmless;
use crate::tasks::Failure;
use crate::tasks::note::Subject;
use crate::tui::look::Role;
use crate::tui::model::{FORMATS, Model, Noted, Session};
use crate::units::in_system;

use super::failure_words;
use super::scroll::{self, Lines, say};
use super::write::cut;

/// Draws the note screen.
pub(super) fn draw(model: &Model, session: &Session, area: Rect, buf: &mut Buffer) {
    let head = head(model, session, usize::from(area.width));
    let rows = u16::try_from(head.len()).unwrap_or(area.height).min(area.height);
    scroll::write(&head, Rect { height: rows, ..area }, model.look, buf);
    let area = sheet_area(area, rows);
    let lines = sheet(session);
    let from = session.note.scroll.min(scroll::last(&lines, area));
    scroll::scrolled(&lines, area, from, model.look, buf);
}

fn sheet_area(area: Rect, head: u16) -> Rect {
    Rect { y: area.y + head, height: area.height - head, ..area }
}

/// The furthest that the sheet can be scrolled.
pub(super) fn last(model: &Model, session: &Session, area: Rect) -> usize {
    let rows = head(model, session, usize::from(area.width)).len();
    let rows = u16::try_from(rows).unwrap_or(area.height).min(area.height);
    scroll::last(&sheet(session), sheet_area(area, rows))
}

/// The main figures, where the window is small.
pub(super) fn in_short(model: &Model, session: &Session, width: usize) -> Lines {
    let mut out = head(model, session, width);
    for (line, role) in sheet(session).into_iter().skip(session.note.scroll) {
        say(&mut out, &line, width, 2, role);
    }
    out
}

/// The sheet shown, as it is printed.
fn sheet(session: &Session) -> Lines {
    let sheets = session.noted.as_ref().map_or(&[][..], |noted| &noted.sheets);
    let lines = sheets.get(session.note.sheet).map_or(&[][..], Vec::as_slice);
    lines.iter().map(|line| (harmless(line), Role::Plain)).collect()
}

/// What the note is of, and what keeps it from being ready.
fn head(model: &Model, session: &Session, width: usize) -> Lines {
    let mut out = Lines::new();
    if let Some((words, role)) = missing(model, session) {
        say(&mut out, &words, width, 2, role);
    }
    let Some(noted) = &session.noted else { return out };
    let names = ["change order", "agency note"];
    let sheet = session.note.sheet;
    let end = FORMATS.iter().find(|(of, _)| *of == session.note.format).map_or("", |of| of.1);
    let words = format!(
        "of {} | sheet {}/{}, {} | as {end}",
        of(noted),
        sheet + 1,
        noted.sheets.len(),
        names.get(sheet).copied().unwrap_or("")
    );
    say(&mut out, &words, width, 2, Role::Strong);
    out.extend(not_ready(noted, model, width).map(|words| (words, Role::Outside)));
    out
}

/// That it is not ready for signature, in one line; the first sheet has every reason.
fn not_ready(noted: &Noted, model: &Model, width: usize) -> Option<String> {
    let reasons = &noted.answer.not_ready;
    let first = harmless(&in_system(reasons.first()?, model.system()));
    let words = match reasons.len() {
        1 => format!("NOT READY FOR SIGNATURE: {first}"),
        count => format!("NOT READY FOR SIGNATURE, {count} reasons: {first}"),
    };
    Some(cut(&words, width))
}

/// What a note is of.
fn of(noted: &Noted) -> String {
    match noted.answer.subject {
        Subject::Decision(id) => format!("decision {id} of the log"),
        Subject::FirstRanked => "the first ranked mix, no decision holds".to_owned(),
        Subject::Named => "the try of the mix screen".to_owned(),
    }
}

/// Why there is no note, or why it is not of what is set now.
fn missing(model: &Model, session: &Session) -> Option<(String, Role)> {
    if session.notes_now(model.system()) {
        return None;
    }
    let before = if session.noted.is_some() { "FROM BEFORE; " } else { "" };
    let (words, role) = match &session.note_wrong {
        Some(Failure::Stopped) => ("r makes the note".to_owned(), Role::Warn),
        Some(failure) => (format!("no note: {}", failure_words(failure, model.system())), Role::Outside),
        None => {
            let done = model.note.map_or(0.0, |under| 100.0 * under.done);
            (format!("the note is being made, {done:.0} %, Esc stops"), Role::Warn)
        }
    };
    Some((format!("{before}{words}"), role))
}
