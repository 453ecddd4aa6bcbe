//! The log screen: asking for the past, choosing a day and a decision, its pages.

use chrono::{Datelike, Days, NaiveDate};

use crate::tasks::Failure;

use super::super::keys::Action;
use super::super::model::{LogPage, LogSpan, Model, Passed, Screen, Session};
use super::super::work::{Lane, Work};
use super::{Effect, log_rows, logging, say};

/// Lines of a page, and days of a week (choice).
const PAGE: usize = 5;
const WEEK: i64 = 7;

/// Does what a key asks for.
pub(super) fn act(model: &mut Model, action: Action) -> Vec<Effect> {
    let Some(session) = model.session() else { return Vec::new() };
    let line = session.log.page == LogPage::Line;
    match action {
        Action::Amend => return logging::amend(model, false),
        Action::Withdraw => return logging::amend(model, true),
        Action::Again => return again(model),
        Action::Scores => turn(model, LogPage::Scores),
        Action::Spells => turn(model, LogPage::Spells),
        Action::Learned => turn(model, LogPage::Learned),
        Action::Hindcast => turn(model, LogPage::Hindcast),
        Action::Enter => turn(model, LogPage::Decision),
        Action::Oxygen => with(model, |session| session.log.oxygen = !session.log.oxygen),
        Action::Span => zoom(model),
        Action::Left => step(model, -1),
        Action::Right => step(model, 1),
        Action::Before => step(model, -WEEK),
        Action::After => step(model, WEEK),
        Action::First if line => step(model, i64::MIN),
        Action::Last if line => step(model, i64::MAX),
        Action::First => scroll(model, |_| 0),
        Action::Last => scroll(model, |_| usize::MAX),
        Action::PageUp => scroll(model, |at| at.saturating_sub(PAGE)),
        Action::PageDown => scroll(model, |at| at + PAGE),
        Action::Up if line => choose(model, |at| at.saturating_sub(1)),
        Action::Down if line => choose(model, |at| at + 1),
        Action::Up => scroll(model, |at| at.saturating_sub(1)),
        Action::Down => scroll(model, |at| at + 1),
        _ => {}
    }
    Vec::new()
}

/// Asks for the past, where it is looked at, not known yet and not on its way.
pub(super) fn ask(model: &mut Model) -> Option<Effect> {
    let session = model.session().filter(|s| s.screen == Screen::Log && !s.past_now())?;
    let asked = session.past_asked.as_ref().is_some_and(|(base, changed)| {
        std::sync::Arc::ptr_eq(base, &session.base) && *changed == session.past_changed()
    });
    if asked && (model.past.is_some() || session.past_wrong.is_some()) {
        return None;
    }
    asking(model)
}

fn asking(model: &mut Model) -> Option<Effect> {
    let session = model.session_mut()?;
    let (base, changed) = (session.base.clone(), session.past_changed());
    session.past_asked = Some((base.clone(), changed.clone()));
    session.past_wrong = None;
    Some(super::ask(model, Work::Past(base, changed)))
}

fn again(model: &mut Model) -> Vec<Effect> {
    if model.session().is_some_and(Session::past_now) {
        say(model, "this past is of what is set now");
        return Vec::new();
    }
    model.message = None;
    asking(model).into_iter().collect()
}

/// Takes what a worker says of the past.
pub(super) fn told(model: &mut Model, told: Result<Box<Passed>, Failure>) -> Vec<Effect> {
    with(model, |session| match told {
        Ok(passed) => {
            session.past = Some(*passed);
            session.past_wrong = None;
            session.log.scroll = 0;
            if let (Some(day), Some((first, last))) = (session.log.day, ends(session)) {
                session.log.day = Some(day.clamp(first, last));
            }
        }
        Err(failure) => session.past_wrong = Some(failure),
    });
    ask(model).into_iter().collect()
}

/// Stops what is under way.
pub(super) fn stop(model: &mut Model) -> Option<Effect> {
    let under = model.past.take()?;
    with(model, |session| session.past_wrong = Some(Failure::Stopped));
    say(model, "stopped; r computes the past");
    Some(Effect::Stop(Lane::Past, under.generation + 1))
}

/// Back to the time line.
pub(super) fn back(model: &mut Model) {
    turn(model, LogPage::Line);
}

/// Reads the day of a cell pressed with the mouse.
pub(super) fn pressed(model: &mut Model, day: NaiveDate) {
    with(model, |session| read(session, day));
}

fn with(model: &mut Model, change: impl FnOnce(&mut Session)) {
    if let Some(session) = model.session_mut() {
        change(session);
    }
}

fn turn(model: &mut Model, page: LogPage) {
    with(model, |session| {
        let view = &mut session.log;
        view.page = if view.page == page { LogPage::Line } else { page };
        view.scroll = 0;
    });
}

/// First and last day of the past.
fn ends(session: &Session) -> Option<(NaiveDate, NaiveDate)> {
    let days = session.past_days();
    Some((days.first()?.date, days.last()?.date))
}

/// Reads a day, and chooses the decision that stood on it.
fn read(session: &mut Session, day: NaiveDate) {
    session.log.day = Some(day);
    session.log.scroll = 0;
    let standing = session.past_days().iter().find(|past| past.date == day).and_then(|past| past.decision);
    session.log.decision = standing.or(session.log.decision);
}

/// Goes so many days on, no further than the past lasts.
fn step(model: &mut Model, by: i64) {
    with(model, |session| {
        let Some((first, last)) = ends(session) else { return };
        let now = session.past_read().and_then(|at| session.past_days().get(at));
        let at = now.map_or(last, |day| day.date);
        let far = Days::new(by.unsigned_abs());
        let to = if by < 0 { at.checked_sub_days(far) } else { at.checked_add_days(far) };
        let to = to.unwrap_or(if by < 0 { first } else { last }).clamp(first, last);
        read(session, to);
    });
}

/// Chooses a decision of the list, and reads its first day where the past has it.
fn choose(model: &mut Model, to: impl Fn(usize) -> usize) {
    with(model, |session| {
        let Some(at) = session.decision_at() else { return };
        let all = session.decisions();
        // the first time the newest is shown already
        let at = if session.log.decision.is_none() { 0 } else { to(at).min(all.len().saturating_sub(1)) };
        let Some(decided) = all.get(at) else { return };
        let (id, from) = (decided.id, session.stands_from(decided).date_naive());
        session.log.decision = Some(id);
        session.log.scroll = 0;
        if let Some((first, last)) = ends(session) {
            session.log.day = Some(from.clamp(first, last));
        }
    });
}

/// The next span that shows other days than this one.
fn zoom(model: &mut Model) {
    let mut same = true;
    with(model, |session| {
        let before = session.past_span();
        for _ in 0..2 {
            session.log.span = match session.log.span {
                LogSpan::Whole => LogSpan::Season,
                LogSpan::Season => LogSpan::Weeks,
                LogSpan::Weeks => LogSpan::Whole,
            };
            if session.past_span() != before {
                same = false;
                break;
            }
        }
    });
    let words = model.session().map(|session| {
        let span = session.past_span();
        let of = |i: usize| session.past_days().get(i).map(|day| day.date);
        match (same, of(span.start), of(span.end.saturating_sub(1)), session.log.span) {
            (_, None, ..) | (_, _, None, _) => "there is no past to look at yet".to_owned(),
            (true, ..) => "the past is too short for more than one look at it".to_owned(),
            (_, Some(from), Some(to), LogSpan::Whole) => format!("all of the past, {from} to {to}"),
            (_, Some(from), _, LogSpan::Season) => format!("the season of {}", from.year()),
            (_, Some(from), Some(to), LogSpan::Weeks) => format!("{from} to {to}"),
        }
    });
    if let Some(words) = words {
        say(model, words);
    }
}

/// Scrolls what scrolls, no further than its last line.
fn scroll(model: &mut Model, to: impl Fn(usize) -> usize) {
    let last = log_rows(model);
    with(model, |session| session.log.scroll = to(session.log.scroll.min(last)).min(last));
}
