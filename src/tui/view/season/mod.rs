//! The season screen.
//!
//! ```text
//! plan, case, strategy; what is shown                          | the date read:
//! the pool through the season: water, gates, open zones        | pool, release,
//! the release against what is asked and what can be had        | what is set and why
//! cold water with its reserve                                  | ---------------
//! moves and gates lost                                         | what comes of it
//! ```
//! The table of cases and plans, or the calendar, takes the place of all of it.

use ratatui::buffer::Buffer;
use ratatui::layout::Rect;

use crate::tasks::Failure;
use crate::tui::look::Role;
use crate::tui::model::{Model, SeasonShown, Session};

use super::failure_words;
use super::scroll::{self, Lines};
use super::write::wrapped;

/// A screen that has an answer to show.
struct Screen<'a> {
    model: &'a Model,
    session: &'a Session,
    shown: SeasonShown<'a>,
}

/// Draws the season screen.
pub(super) fn draw(model: &Model, session: &Session, area: Rect, buf: &mut Buffer) {
    let Some(screen) = screen(model, session) else {
        scroll::write(&without(model, session, usize::from(area.width)), area, model.look, buf);
        return;
    };
    let _ = (screen.model, screen.session, screen.shown);
}

/// The furthest that what scrolls can be scrolled.
pub(super) fn last(model: &Model, session: &Session, area: Rect) -> usize {
    let _ = (model, session, area);
    0
}

/// The main figures, where the window is small.
pub(super) fn in_short(model: &Model, session: &Session, width: usize) -> Lines {
    without(model, session, width)
}

fn screen<'a>(model: &'a Model, session: &'a Session) -> Option<Screen<'a>> {
    Some(Screen { model, session, shown: session.season_shown()? })
}

/// Why there is nothing to show.
fn without(model: &Model, session: &Session, width: usize) -> Lines {
    let failure = session.season_wrong.as_ref().or(session.wrong.as_ref());
    let words = match failure {
        Some(Failure::Stopped) => "Stopped; r computes the season.".to_owned(),
        Some(failure) => format!("No season: {}", failure_words(failure, model.system())),
        None => "computing the season ahead ...".to_owned(),
    };
    wrapped(&words, width, 2).into_iter().map(|line| (line, Role::Plain)).collect()
}
