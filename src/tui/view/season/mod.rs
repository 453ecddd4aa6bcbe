//! The season screen.
//!
//! ```text
//! plan, case, strategy; where the figures are from
//! the pool through the season: water, gates, open zones        | the date read:
//! the release against what is asked and what can be had        | pool, release,
//! cold water with its reserve                                  | what is set and why
//! moves, days outside, gates                                   | what comes of it
//! ```
//! The table of cases and plans, or the calendar, takes the place of all of it.

mod beside;
mod calendar;
mod left;
mod picture;
mod readout;

use chrono::{Days, NaiveDate};
use ratatui::buffer::Buffer;
use ratatui::layout::{Position, Rect};

use crate::problem::harmless;
use crate::tasks::Failure;
use crate::tasks::season::Seen;
use crate::tui::draw::season::{day_at, season};
use crate::tui::look::Role;
use crate::tui::model::{Model, SeasonPage, SeasonShown, Session};

pub(super) use readout::plural;

use super::failure_words;
use super::scroll::{self, Lines};
use super::write::{cut, put, wrapped};

/// Columns of the readout, and from which width on it has more (choice).
const READOUT: u16 = 31;
const READOUT_WIDE: u16 = 40;
const WIDE: u16 = 100;

/// A screen that has an answer to show.
struct Screen<'a> {
    model: &'a Model,
    session: &'a Session,
    shown: SeasonShown<'a>,
}

impl Screen<'_> {
    /// That the season is not of what is set and chosen, and whether another is on its way, or why there is none.
    fn old_words(&self) -> Option<String> {
        self.shown.old.then(|| match &self.session.season_wrong {
            _ if self.model.ahead.is_some() => "FROM BEFORE; the new is being computed".to_owned(),
            None | Some(Failure::Stopped) => "FROM BEFORE; r computes the new".to_owned(),
            Some(failure) => {
                format!("FROM BEFORE; no newer season: {}", failure_words(failure, self.model.system()))
            }
        })
    }

    /// Of a strategy that is solved on a case: whether it was this one.
    fn seen_words(&self) -> Option<&'static str> {
        let (shown, answer) = (self.shown.run, &self.shown.ahead.answer);
        match answer.seen(shown) {
            Seen::All => Some("SOLVED ON THIS CASE: foresight, no evidence"),
            Seen::Weather => Some("solved in this weather under another plan"),
            Seen::Nothing => (answer.main.foresight && shown.run.strategy == answer.main.run.strategy)
                .then_some("this case was not seen"),
        }
    }

    /// Plan, case and strategy of what is shown, each with its key.
    fn heading(&self) -> String {
        let (run, answer) = (&self.shown.run.run, &self.shown.ahead.answer);
        format!(
            "plan {} | case {} | {}, every {} d",
            harmless(&run.plan),
            harmless(&run.case),
            harmless(&run.strategy),
            answer.decide_days
        )
    }
}

/// Where the parts lie: the heading, the pictures, the readout; a page takes both.
struct Parts {
    heading: Rect,
    pictures: Rect,
    readout: Rect,
    page: Rect,
}

fn parts(area: Rect) -> Parts {
    let readout = if area.width >= WIDE { READOUT_WIDE } else { READOUT }.min(area.width / 2);
    let below = Rect { y: area.y + 1, height: area.height.saturating_sub(1), ..area };
    let left = area.width.saturating_sub(readout + 1);
    Parts {
        heading: Rect { height: area.height.min(1), ..area },
        pictures: Rect { width: left, ..below },
        readout: Rect { x: area.x + left + 1, width: readout, ..below },
        page: below,
    }
}

/// Draws the season screen.
pub(super) fn draw(model: &Model, session: &Session, area: Rect, buf: &mut Buffer) {
    let Some(screen) = screen(model, session) else {
        scroll::write(&without(model, session, usize::from(area.width)), area, model.look, buf);
        return;
    };
    let parts = parts(area);
    let words = cut(&screen.heading(), usize::from(parts.heading.width));
    put(buf, parts.heading, 0, 0, &words, model.look.style(Role::Strong));
    let (lines, area) = scrolling(&screen, &parts);
    if session.season.page == SeasonPage::Pictures
        && let Some(picture) = picture::picture(&screen)
    {
        season(&picture, parts.pictures, buf, model.look);
    }
    let from = session.season.scroll.min(scroll::last(&lines, area));
    scroll::scrolled(&lines, area, from, model.look, buf);
}

/// What scrolls, and where it stands.
fn scrolling(screen: &Screen, parts: &Parts) -> (Lines, Rect) {
    let width = |area: Rect| usize::from(area.width);
    match screen.session.season.page {
        SeasonPage::Pictures => {
            let pictures = Some((parts.pictures, screen.model.look));
            (readout::lines(screen, width(parts.readout), pictures), parts.readout)
        }
        SeasonPage::Beside => (beside::lines(screen, width(parts.page)), parts.page),
        SeasonPage::Calendar => (calendar::lines(screen, width(parts.page)), parts.page),
    }
}

/// The date under a place of the pictures.
pub(super) fn hit(model: &Model, session: &Session, area: Rect, at: Position) -> Option<NaiveDate> {
    let screen = screen(model, session).filter(|s| s.session.season.page == SeasonPage::Pictures)?;
    let picture = picture::picture(&screen)?;
    let day = day_at(&picture, parts(area).pictures, at.x, at.y)?;
    picture.first.checked_add_days(Days::new(day as u64))
}

/// The furthest that what scrolls can be scrolled.
pub(super) fn last(model: &Model, session: &Session, area: Rect) -> usize {
    screen(model, session).map_or(0, |screen| {
        let (lines, area) = scrolling(&screen, &parts(area));
        scroll::last(&lines, area)
    })
}

/// The main figures, where the window is small.
pub(super) fn in_short(model: &Model, session: &Session, width: usize) -> Lines {
    let Some(screen) = screen(model, session) else { return without(model, session, width) };
    let mut out = Lines::new();
    scroll::say(&mut out, &screen.heading(), width, 2, Role::Strong);
    out.extend(readout::lines(&screen, width, None));
    out
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
