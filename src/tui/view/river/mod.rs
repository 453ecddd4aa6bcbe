//! The river screen.
//!
//! ```text
//! temperature along the river, what each point    | the dam and the points side by side:
//! asks, and the release that would give it        | when water arrives, what it is
//! oxygen along the river                          | the release each point would need
//! ------------------------------------------------+--------------------------------------
//! rules with their standings, or day by day
//! ```
//! What was recorded takes the place of all of it.

mod days;
mod picture;
mod points;
mod record;
mod rules;

use ratatui::buffer::Buffer;
use ratatui::layout::{Position, Rect};

use crate::tui::draw::along::{along, point_at};
use crate::tui::look::Role;
use crate::tui::model::{Downstream, Model, RiverPage, Session};

use super::failure_words;
use super::write::{cut, put, put_right, wrapped};

/// Lines with their meaning.
type Lines = Vec<(String, Role)>;

/// Least rows of the page below, and of a picture (choice).
const BELOW: u16 = 7;
const PICTURE: u16 = 8;
/// Columns the places want beside the pictures (choice).
const PLACES: u16 = 46;

/// A screen that has an answer to show.
struct Screen<'a> {
    model: &'a Model,
    session: &'a Session,
    down: &'a Downstream,
    /// Whether the answer is not of what is set now.
    old: bool,
}

/// Where the parts lie.
struct Parts {
    warmth: Rect,
    oxygen: Rect,
    places: Rect,
    below: Rect,
}

fn parts(screen: &Screen, area: Rect) -> Parts {
    if screen.session.river.page == RiverPage::Record {
        // the calendars are a picture of their own
        let none = Rect { width: 0, height: 0, ..area };
        return Parts { warmth: none, oxygen: none, places: none, below: area };
    }
    let right = PLACES.max(area.width / 5 * 2).min(area.width / 2);
    let left = area.width - right - 1;
    let above = (area.height * 3 / 5).min(area.height.saturating_sub(BELOW));
    let has_course = screen.down.answer.ways.iter().any(|w| w.course.is_some());
    let both = has_course && above >= 2 * PICTURE;
    let warmth = if both { above * 3 / 5 } else { above };
    Parts {
        warmth: Rect { width: left, height: warmth, ..area },
        oxygen: Rect { y: area.y + warmth, width: left, height: above - warmth, ..area },
        places: Rect { x: area.x + left + 1, width: right, height: above, ..area },
        below: Rect { y: area.y + above, height: area.height - above, ..area },
    }
}

/// Draws the river screen.
pub(super) fn draw(model: &Model, session: &Session, area: Rect, buf: &mut Buffer) {
    let Some(screen) = screen(model, session) else {
        write(&without(model, session, usize::from(area.width)), area, 0, model, buf);
        return;
    };
    let parts = parts(&screen, area);
    let [warmth, oxygen] = picture::pictures(&screen, parts.oxygen.height == 0);
    if parts.warmth.height > 0 {
        along(&warmth, parts.warmth, buf, model.look);
    }
    if parts.oxygen.height > 0 {
        along(&oxygen, parts.oxygen, buf, model.look);
    }
    let lines = points::lines(&screen, usize::from(parts.places.width), usize::from(parts.places.height));
    write(&lines, parts.places, 0, model, buf);
    let (lines, last) = scrolled(&screen, parts.below);
    let from = from(&screen, last, parts.below);
    let rows = if last > 0 { parts.below.height.saturating_sub(1) } else { parts.below.height };
    write(&lines, Rect { height: rows, ..parts.below }, from, model, buf);
    if session.river.page == RiverPage::Rules {
        rules::mark(&screen, Rect { height: rows, ..parts.below }, from, buf);
    }
    if last > 0 {
        let below = last - from;
        let words = if below > 0 { format!("{below} more, PgDn ") } else { "the end, PgUp ".to_owned() };
        put_right(buf, parts.below, parts.below.width, rows, &words, model.look.style(Role::Key));
    }
}

/// The rule under a place: a row of the rules, or the first rule of the point nearest in a picture.
pub(super) fn hit(model: &Model, session: &Session, area: Rect, at: Position) -> Option<usize> {
    let screen = screen(model, session)?;
    let parts = parts(&screen, area);
    if parts.warmth.contains(at) {
        let [warmth, _] = picture::pictures(&screen, parts.oxygen.height == 0);
        let point = point_at(&warmth, parts.warmth, at.x, at.y)?;
        return rules::first_at(&screen, point);
    }
    if parts.below.contains(at) && session.river.page == RiverPage::Rules {
        let (_, last) = scrolled(&screen, parts.below);
        let line = usize::from(at.y - parts.below.y) + from(&screen, last, parts.below);
        return rules::at_line(&screen, usize::from(parts.below.width), line);
    }
    None
}

/// The furthest that what scrolls can be scrolled.
pub(super) fn last(model: &Model, session: &Session, area: Rect) -> usize {
    screen(model, session).map_or(0, |screen| scrolled(&screen, parts(&screen, area).below).1)
}

/// The main figures, where the window is small.
pub(super) fn in_short(model: &Model, session: &Session, width: usize) -> Lines {
    match screen(model, session) {
        Some(screen) => rules::in_short(&screen, width),
        None => without(model, session, width),
    }
}

fn screen<'a>(model: &'a Model, session: &'a Session) -> Option<Screen<'a>> {
    let down = session.downstream.as_ref()?;
    Some(Screen { model, session, down, old: !session.flows_now() })
}

/// Why there is nothing to show.
fn without(model: &Model, session: &Session, width: usize) -> Lines {
    let failure = session.river_wrong.as_ref().or(session.wrong.as_ref());
    let of_try = session.answer(session.draft().at).and_then(|a| a.as_ref().err());
    let words = match failure.or(of_try) {
        Some(failure) => format!("No answer: {}", failure_words(failure, model.system())),
        None => "computing ...".to_owned(),
    };
    wrapped(&words, width, 2).into_iter().map(|line| (line, Role::Plain)).collect()
}

/// First line shown of the page below: as scrolled, and so that the rule chosen is in sight.
fn from(screen: &Screen, last: usize, area: Rect) -> usize {
    let scrolled = screen.session.river.scroll.min(last);
    if screen.session.river.page != RiverPage::Rules || last == 0 {
        return scrolled;
    }
    let rows = usize::from(area.height.saturating_sub(1));
    let (first, end) = rules::lines_of_chosen(screen, usize::from(area.width));
    scrolled.max(end.saturating_sub(rows)).min(first).min(last)
}

/// What scrolls, and how far it can be.
fn scrolled(screen: &Screen, area: Rect) -> (Lines, usize) {
    let width = usize::from(area.width);
    let lines = match screen.session.river.page {
        RiverPage::Rules => rules::lines(screen, width),
        RiverPage::Days => days::lines(screen, width),
        RiverPage::Record => record::lines(screen, width),
    };
    let rows = usize::from(area.height);
    let last = if lines.len() > rows { lines.len() - rows.saturating_sub(1) } else { 0 };
    (lines, last)
}

fn write(lines: &Lines, area: Rect, from: usize, model: &Model, buf: &mut Buffer) {
    for (row, (line, role)) in (0..area.height).zip(lines.iter().skip(from)) {
        put(buf, area, 0, row, &cut(line, usize::from(area.width)), model.look.style(*role));
    }
}

/// Adds words, wrapped, later lines indented; the first as far as its words are.
fn say(lines: &mut Lines, text: &str, width: usize, indent: usize, role: Role) {
    let lead = text.len() - text.trim_start().len();
    let mut told = wrapped(text, width.saturating_sub(lead), indent.saturating_sub(lead));
    for line in &mut told {
        line.insert_str(0, &text[..lead]);
    }
    lines.extend(told.into_iter().map(|line| (line, role)));
}
