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
use super::scroll::{self, Lines, say};
use super::write::wrapped;

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

impl Screen<'_> {
    /// Whether anything is known of the way down.
    fn has_course(&self) -> bool {
        self.down.answer.ways.iter().any(|w| w.course.is_some())
    }

    /// That an answer is of before, and whether another is on its way.
    fn old_words(&self) -> Option<&'static str> {
        let waits = self.model.quick.is_some() || self.model.long.is_some() || self.model.down.is_some();
        self.old.then_some(if waits {
            "FROM BEFORE; the new is being computed"
        } else {
            "FROM BEFORE; no answer to the last change"
        })
    }
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
    let has_course = screen.has_course();
    // without a picture no more rows than the words take
    let said = points::lines(screen, usize::from(right), usize::from(above)).len();
    let above = if has_course { above } else { above.min(u16::try_from(said + 1).unwrap_or(above)) };
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
        scroll::write(&without(model, session, usize::from(area.width)), area, model.look, buf);
        return;
    };
    let parts = parts(&screen, area);
    let [warmth, oxygen] = picture::pictures(&screen, parts.oxygen.height == 0);
    if parts.warmth.height > 0 && screen.has_course() {
        along(&warmth, parts.warmth, buf, model.look);
    } else {
        let words = no_course(&screen, usize::from(parts.warmth.width));
        scroll::write(&words, parts.warmth, model.look, buf);
    }
    if parts.oxygen.height > 0 {
        along(&oxygen, parts.oxygen, buf, model.look);
    }
    let lines = points::lines(&screen, usize::from(parts.places.width), usize::from(parts.places.height));
    scroll::write(&lines, parts.places, model.look, buf);
    let lines = page(&screen, parts.below);
    let from = session.river.scroll.min(scroll::last(&lines, parts.below));
    scroll::scrolled(&lines, parts.below, from, model.look, buf);
    if session.river.page == RiverPage::Rules {
        rules::mark(&screen, (parts.below, scroll::rows(&lines, parts.below)), from, buf);
    }
}

/// The rule under a place: a row of the rules, or the first rule of the point nearest in a picture.
pub(super) fn hit(model: &Model, session: &Session, area: Rect, at: Position) -> Option<usize> {
    let screen = screen(model, session)?;
    let parts = parts(&screen, area);
    let pictures = picture::pictures(&screen, parts.oxygen.height == 0);
    for (picture, place) in pictures.iter().zip([parts.warmth, parts.oxygen]) {
        if place.contains(at) && screen.has_course() {
            let point = point_at(picture, place, at.x, at.y)?;
            return rules::first_at(&screen, point);
        }
    }
    if parts.below.contains(at) && session.river.page == RiverPage::Rules {
        let last = scroll::last(&page(&screen, parts.below), parts.below);
        let line = usize::from(at.y - parts.below.y) + session.river.scroll.min(last);
        return rules::at_line(&screen, parts.below, line);
    }
    None
}

/// The furthest that what scrolls can be scrolled.
pub(super) fn last(model: &Model, session: &Session, area: Rect) -> usize {
    screen(model, session).map_or(0, |screen| {
        let below = parts(&screen, area).below;
        scroll::last(&page(&screen, below), below)
    })
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

/// Why there is no picture.
fn no_course(screen: &Screen, width: usize) -> Lines {
    let mut out = Lines::new();
    say(&mut out, "No picture: what arrives is not known.", width, 2, Role::Strong);
    for note in screen.down.answer.notes.iter().filter(|n| n.kind.starts_with("no-")) {
        say(&mut out, &note.advice(screen.model.system()), width, 2, Role::Warn);
    }
    out
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

/// First line of the page below with which the rule chosen is in sight, the nearest to the one shown.
pub(super) fn in_sight(model: &Model, session: &Session, area: Rect) -> usize {
    let Some(screen) = screen(model, session) else { return 0 };
    let area = parts(&screen, area).below;
    let last = scroll::last(&page(&screen, area), area);
    let from = session.river.scroll.min(last);
    if session.river.page != RiverPage::Rules {
        return from;
    }
    let rows = usize::from(area.height.saturating_sub(1));
    let (first, end) = rules::lines_of_chosen(&screen, area);
    // with the first rule the lines before it come back
    let first = if session.river.rule == 0 && end <= rows { 0 } else { first };
    from.max(end.saturating_sub(rows)).min(first).min(last)
}

/// What scrolls.
fn page(screen: &Screen, area: Rect) -> Lines {
    let width = usize::from(area.width);
    match screen.session.river.page {
        RiverPage::Rules => rules::lines(screen, area),
        RiverPage::Days => days::lines(screen, width),
        RiverPage::Record => record::lines(screen, width),
    }
}
