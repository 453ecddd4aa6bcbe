//! The log screen.
//!
//! ```text
//! what is logged, how far back the record goes, how far off the expected was
//! the record: expected band and gauge by day, decisions, days outside and left out
//! ---------------------------------------------+------------------------------
//! decisions, the newest first                  | the day read: expected, gauge,
//!                                              | difference, the decision, why
//! ```
//! A decision in full, the scores, the spells outside the band, what is learned and the hindcast take the place of all
//! of it.

mod decisions;
mod pages;
mod picture;
mod readout;

use std::borrow::Cow;

use chrono::NaiveDate;
use ratatui::buffer::Buffer;
use ratatui::layout::{Position, Rect};

use crate::record::Score;
use crate::tasks::{Context, Failure};
use crate::tui::draw::past::{day_at, past};
use crate::tui::look::Role;
use crate::tui::model::{LogPage, Model, Passed, Session};
use crate::units::{Dimension, System, in_system, say};

use super::failure_words;
use super::scroll::{self, Lines};
use super::season::plural;
use super::write::{cut, put};

/// Columns of the readout, and from which width on it has more (choice).
const READOUT: u16 = 36;
const READOUT_WIDE: u16 = 48;
const WIDE: u16 = 100;
/// Share of the rows that the picture has, in hundredths (choice).
const PICTURE: u16 = 54;

/// What is drawn.
struct Screen<'a> {
    model: &'a Model,
    session: &'a Session,
    /// The past there is.
    passed: Option<&'a Passed>,
}

/// Where the parts lie: a page takes everything below the heading.
struct Parts {
    heading: Rect,
    picture: Rect,
    decisions: Rect,
    readout: Rect,
    page: Rect,
}

impl<'a> Screen<'a> {
    fn of(model: &'a Model, session: &'a Session) -> Self {
        Self { model, session, passed: session.past.as_ref() }
    }

    fn parts(&self, area: Rect) -> Parts {
        let page = Rect { y: area.y + 1, height: area.height.saturating_sub(1), ..area };
        let pictured = self.session.past_days().is_empty();
        let rows = if pictured { page.height.min(2) } else { page.height * PICTURE / 100 };
        let below = Rect { y: page.y + rows, height: page.height - rows, ..page };
        let readout = if area.width >= WIDE { READOUT_WIDE } else { READOUT }.min(area.width / 2);
        let left = area.width.saturating_sub(readout + 1);
        Parts {
            heading: Rect { height: area.height.min(1), ..area },
            picture: Rect { height: rows, ..page },
            decisions: Rect { width: left, ..below },
            readout: Rect { x: below.x + left + 1, width: readout, ..below },
            page,
        }
    }

    /// Temperature, or oxygen.
    fn dimension(&self) -> Dimension {
        if self.session.log.oxygen { Dimension::Concentration } else { Dimension::Temperature }
    }

    fn system(&self) -> System {
        self.model.system()
    }

    /// A context in the units shown.
    fn context<'c>(&self, context: &'c Context) -> Cow<'c, Context> {
        if context.system == self.system() {
            return Cow::Borrowed(context);
        }
        let mut context = context.clone();
        context.system = self.system();
        Cow::Owned(context)
    }

    /// A difference with its sign: `+0.4 F`.
    fn by(&self, si: f64) -> String {
        by(si, self.session.log.oxygen, self.system())
    }

    /// Why there is no past, or why it is not of what is set now.
    fn missing(&self) -> Option<(String, Role)> {
        if self.session.past_now() {
            return None;
        }
        let before = if self.passed.is_some() { "FROM BEFORE; " } else { "" };
        let (words, role) = match &self.session.past_wrong {
            Some(Failure::Stopped) => ("r computes the past".to_owned(), Role::Warn),
            Some(failure) => (format!("no past: {}", failure_words(failure, self.system())), Role::Outside),
            None => {
                let done = self.model.past.map_or(0.0, |under| 100.0 * under.done);
                (format!("the past is being computed, {done:.0} %, Esc stops"), Role::Warn)
            }
        };
        Some((format!("{before}{words}"), role))
    }

    /// What is logged, and how far off the expected was.
    fn heading(&self) -> (String, Role) {
        let log = &self.session.context().log.log;
        let mut words = plural(log.decisions().len() as u64, "decision");
        let events = log.events().len();
        if events > 0 {
            words = format!("{words}, {}", plural(events as u64, "event"));
        }
        if let Some((missing, role)) = self.missing() {
            return (format!("{missing} | {words}"), role);
        }
        if let Some(passed) = self.passed {
            let scores = if self.session.log.oxygen { &passed.past.oxygen } else { &passed.past.temperature };
            let what = if self.session.log.oxygen { "oxygen" } else { "release" };
            words = format!("{words} | {what}: {}", self.scored(&scores.all));
        }
        (words, Role::Strong)
    }

    /// A score in a line.
    fn scored(&self, score: &Score) -> String {
        scored(score, self.session.log.oxygen, self.system())
    }
}

/// A difference with its sign: `+0.4 F`.
fn by(si: f64, oxygen: bool, system: System) -> String {
    if oxygen { format!("{si:+.1} mg/L") } else { in_system(&say::dc(si, 1).signed().to_string(), system) }
}

/// A score in a line: `62 days, bias +0.4 F, RMSE 0.6 F, 45/62 in the band`.
fn scored(score: &Score, oxygen: bool, system: System) -> String {
    let Some(misfit) = score.misfit else { return "no day can be held against the gauge".to_owned() };
    let inside = if score.with_band > 0 {
        format!(", {}/{} in the band", score.inside, score.with_band)
    } else {
        String::new()
    };
    let rmse = error(misfit.rmse, oxygen, system);
    format!(
        "{}, bias {}, RMSE {rmse}{inside}",
        plural(score.n as u64, "day"),
        by(misfit.bias, oxygen, system)
    )
}

/// The size of a difference: `0.6 F`.
fn error(si: f64, oxygen: bool, system: System) -> String {
    if oxygen { format!("{si:.1} mg/L") } else { in_system(&say::dc(si, 1).to_string(), system) }
}

/// Draws the log screen.
pub(super) fn draw(model: &Model, session: &Session, area: Rect, buf: &mut Buffer) {
    let screen = Screen::of(model, session);
    let parts = screen.parts(area);
    let (words, role) = screen.heading();
    put(buf, parts.heading, 0, 0, &cut(&words, usize::from(parts.heading.width)), model.look.style(role));
    if session.log.page == LogPage::Line {
        match picture::picture(&screen) {
            Some(picture) => past(&picture, parts.picture, buf, model.look),
            None => scroll::write(&picture::without(&screen, parts.picture), parts.picture, model.look, buf),
        }
        decisions::draw(&screen, parts.decisions, buf);
    }
    let (lines, area) = scrolling(&screen, &parts);
    let from = session.log.scroll.min(scroll::last(&lines, area));
    scroll::scrolled(&lines, area, from, model.look, buf);
}

/// What scrolls, and where it stands.
fn scrolling(screen: &Screen, parts: &Parts) -> (Lines, Rect) {
    let width = usize::from(parts.page.width);
    let page = match screen.session.log.page {
        LogPage::Line => {
            return (readout::lines(screen, usize::from(parts.readout.width)), parts.readout);
        }
        LogPage::Decision => decisions::full(screen, width),
        LogPage::Scores | LogPage::Spells | LogPage::Learned | LogPage::Hindcast => {
            pages::lines(screen, width)
        }
    };
    (page, parts.page)
}

/// The day under a place of the time line.
pub(super) fn hit(model: &Model, session: &Session, area: Rect, at: Position) -> Option<NaiveDate> {
    let screen = Screen::of(model, session);
    let area = screen.parts(area).picture;
    let picture = picture::picture(&screen).filter(|_| session.log.page == LogPage::Line)?;
    let day = day_at(&picture, area, at.x, at.y)?;
    session.past_days().get(session.past_span().start + day).map(|day| day.date)
}

/// The furthest that what scrolls can be scrolled.
pub(super) fn last(model: &Model, session: &Session, area: Rect) -> usize {
    let screen = Screen::of(model, session);
    let (lines, area) = scrolling(&screen, &screen.parts(area));
    scroll::last(&lines, area)
}

/// The main figures, where the window is small.
pub(super) fn in_short(model: &Model, session: &Session, width: usize) -> Lines {
    let screen = Screen::of(model, session);
    let mut out = Lines::new();
    let (words, role) = screen.heading();
    scroll::say(&mut out, &words, width, 2, role);
    out.extend(readout::lines(&screen, width));
    out
}
