//! The form of what is to be logged.

use ratatui::buffer::Buffer;
use ratatui::layout::{Position, Rect};

use crate::problem::harmless;

use super::super::look::Role;
use super::super::model::{Field, Form, Line, Logs, Model, Typed};
use super::lists::middle;
use super::write::{cut, put, row_style, wrapped};

/// Columns inside, and of the label of a line (choices).
const WIDTH: u16 = 70;
const LABEL: u16 = 9;
/// Rows of what is said of the line typed into (choice: the longest cure takes two).
const WORDS: usize = 2;

/// Draws a form; where the cursor stands.
///
/// ```text
/// log a decision: Up Down, Enter logs, Esc leaves
/// by       crew
/// why      weekly meeting_
/// until
/// ends if
/// why it is decided so, in your words
///
/// the try: Upper 20.0 m3/s at 100%
/// ```
pub(super) fn draw(model: &Model, form: &Form, area: Rect, buf: &mut Buffer) -> Position {
    let look = model.look;
    let what = match form.logs {
        Logs::Decision(..) => "log a decision",
        Logs::Amendment(_) => "amend a decision",
        Logs::Withdrawal(_) => "take a decision back",
        Logs::Event => "log an event",
    };
    let room = usize::from(WIDTH.min(area.width.saturating_sub(4)));
    let told: Vec<(String, Role)> = form
        .what
        .iter()
        .flat_map(|words| {
            let role = if words.starts_with('!') { Role::Warn } else { Role::Plain };
            wrapped(words, room, 2).into_iter().map(move |line| (line, role))
        })
        .collect();
    let rows = form.fields.len() + WORDS + told.len();
    let title = format!("{what}: Up Down, Enter logs, Esc leaves");
    let inside = middle(model, area, &title, WIDTH, rows, buf);
    // in a low window the line typed into and what is said of it stay in sight
    let lines = usize::from(inside.height).saturating_sub(1).max(1);
    let from = (form.at + 1).saturating_sub(lines);
    let mut cursor = Position::new(inside.x, inside.y);
    let mut row = 0;
    for (i, field) in form.fields.iter().enumerate().skip(from).take(lines) {
        let column = line(model, field, i == form.at, Rect { y: inside.y + row, height: 1, ..inside }, buf);
        if i == form.at {
            cursor = Position::new(inside.x + column, inside.y + row);
        }
        row += 1;
    }
    let (words, role) = said(form);
    let below = wrapped(&words, usize::from(inside.width), 2);
    for (line, row) in below.iter().zip(row..inside.height) {
        put(buf, inside, 0, row, &cut(line, usize::from(inside.width)), look.style(role));
    }
    row += u16::try_from(below.len().max(WORDS)).unwrap_or(0);
    for ((line, role), row) in told.iter().zip(row..inside.height) {
        put(buf, inside, 0, row, &cut(line, usize::from(inside.width)), look.style(*role));
    }
    cursor
}

/// A line with its label; the column of the cursor.
fn line(model: &Model, field: &Field, chosen: bool, area: Rect, buf: &mut Buffer) -> u16 {
    let look = model.look;
    let Typed::Line(of) = field.typed else { return 0 };
    let mark = if field.wrong.is_some() { "!" } else { " " };
    let label = format!("{mark}{}", of.label());
    let role = if chosen { Role::Strong } else { Role::Plain };
    put(buf, area, 0, 0, &label, look.style(role));
    let left = LABEL.min(area.width);
    let text = Rect { x: area.x + left, width: area.width - left, ..area };
    let width = usize::from(text.width.saturating_sub(1));
    let scroll = if chosen { field.input.visual_scroll(width) } else { 0 };
    let words: String = harmless(field.input.value()).chars().skip(scroll).collect();
    let style = look.style(if chosen { Role::Field } else { Role::Plain });
    if chosen {
        row_style(buf, text, 0, style);
        put(buf, text, 0, 0, &words, style);
    } else {
        put(buf, text, 0, 0, &cut(&words, width), style);
    }
    let column = u16::try_from(field.input.visual_cursor().saturating_sub(scroll)).unwrap_or(0);
    left + column.min(text.width.saturating_sub(1))
}

/// What is wrong, or what may be typed.
fn said(form: &Form) -> (String, Role) {
    if let Some(wrong) = &form.wrong {
        return (format!("! {wrong}"), Role::Outside);
    }
    let field = form.fields.get(form.at);
    if let Some(wrong) = field.and_then(|field| field.wrong.as_ref()) {
        return (format!("! {}", harmless(wrong)), Role::Outside);
    }
    let hint = match (field.map(|field| field.typed), &form.logs) {
        // what an amendment does not say stays as it was
        (Some(Typed::Line(Line::Until | Line::Trigger)), Logs::Amendment(_)) => "empty: as it was",
        (Some(Typed::Line(Line::Why)), Logs::Withdrawal(_)) => "why it is taken back, in your words",
        (Some(Typed::Line(line)), _) => line.hint(),
        _ => "",
    };
    (hint.to_owned(), Role::Quiet)
}
