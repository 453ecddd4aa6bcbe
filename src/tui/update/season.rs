//! The season screen: asking, stopping, choosing plan, case, strategy and date.

use std::collections::BTreeSet;

use chrono::{Days, NaiveDate};

use crate::problem::harmless;
use crate::season::Schedule;
use crate::site::Strategy;
use crate::tasks::Failure;
use crate::tasks::season::SeasonAsked;

use super::super::keys::Action;
use super::super::model::{Ahead, Model, Screen, SeasonPage, SeasonShown, Session};
use super::super::work::{Lane, Work};
use super::mix::back_and_forth;
use super::{Effect, change, complain, say, season_rows};

/// Lines of a page, and days of a week (choice).
const PAGE: usize = 5;
const WEEK: i64 = 7;
/// Days between decisions that can be chosen (choice).
const EVERY: [u32; 4] = [1, 3, 7, 14];

/// Does what a key asks for.
pub(super) fn act(model: &mut Model, action: Action) -> Vec<Effect> {
    let Some(session) = model.session() else { return Vec::new() };
    let pictures = session.season.page == SeasonPage::Pictures;
    match action {
        Action::Case => return choose(model, &CASE),
        Action::Plan => return choose(model, &PLAN),
        Action::Strategy => return choose(model, &STRATEGY),
        Action::Every => return every(model),
        Action::Needed => return super::needed::asked(model),
        Action::Undo => return undo(model),
        Action::Again => return again(model),
        Action::Beside => turn(model, SeasonPage::Beside),
        Action::Calendar => turn(model, SeasonPage::Calendar),
        Action::Oxygen => {
            if let Some(session) = model.session_mut() {
                session.season.oxygen = !session.season.oxygen;
            }
        }
        Action::Left => step(model, -1),
        Action::Right => step(model, 1),
        Action::Before => step(model, -WEEK),
        Action::After => step(model, WEEK),
        Action::MuchLess => read(model, |at, moved| moved.iter().rev().find(|d| **d < at).copied()),
        Action::MuchMore => read(model, |at, moved| moved.iter().find(|d| **d > at).copied()),
        Action::First => step(model, i64::MIN),
        Action::Last => step(model, i64::MAX),
        Action::PageUp => scroll(model, |at| at.saturating_sub(PAGE)),
        Action::PageDown => scroll(model, |at| at + PAGE),
        Action::Up if pictures => look(model, |at, count| (at + count - 1) % count),
        Action::Down if pictures => look(model, |at, count| (at + 1) % count),
        Action::Up => scroll(model, |at| at.saturating_sub(1)),
        Action::Down => scroll(model, |at| at + 1),
        _ => {}
    }
    Vec::new()
}

/// Asks for the season chosen, where it is looked at, not known yet and not on its way.
pub(super) fn ask(model: &mut Model) -> Option<Effect> {
    let session = model.session().filter(|s| s.screen == Screen::Season)?;
    let question = session.season_question();
    // why an earlier question has no answer says nothing of this one
    let asked = session.season_asked.as_ref().is_some_and(|q| q.is(&question));
    let answered = asked && (model.ahead.is_some() || session.season_wrong.is_some());
    if answered || session.seasons_now() {
        return None;
    }
    asking(model)
}

/// Asks for the season chosen.
fn asking(model: &mut Model) -> Option<Effect> {
    let session = model.session_mut()?;
    let question = session.season_question();
    session.season_asked = Some(question.clone());
    session.season_wrong = None;
    Some(super::ask(model, Work::Season(question)))
}

/// Takes what a worker says of the season.
pub(super) fn told(model: &mut Model, told: Result<Box<Ahead>, Failure>) -> Vec<Effect> {
    let Some(session) = model.session_mut() else { return Vec::new() };
    match told {
        Ok(ahead) => {
            session.season_wrong = None;
            session.take_ahead(*ahead);
        }
        // a plan or a case that is there no more: what the site itself says is looked at
        Err(Failure::Usage(words)) if session.season.chosen != SeasonAsked::default() => {
            session.season.chosen = SeasonAsked::default();
            complain(model, harmless(&words));
        }
        Err(failure) => session.season_wrong = Some(failure),
    }
    settle(model);
    ask(model).into_iter().collect()
}

/// Stops what is under way.
pub(super) fn stop(model: &mut Model) -> Option<Effect> {
    let pricing = model.prices_mixes();
    let under = model.ahead.take()?;
    if let Some(session) = model.session_mut() {
        let wrong = if pricing { &mut session.price_wrong } else { &mut session.season_wrong };
        *wrong = Some(Failure::Stopped);
    }
    say(
        model,
        if pricing {
            "the prices are stopped; p on the rank screen computes them"
        } else {
            "the season is stopped; r on its screen computes it"
        },
    );
    Some(Effect::Stop(Lane::Ahead, under.generation + 1))
}

/// Back to the pictures.
pub(super) fn back(model: &mut Model) {
    turn(model, SeasonPage::Pictures);
}

/// Reads the date of a cell pressed with the mouse.
pub(super) fn pressed(model: &mut Model, day: NaiveDate) {
    if let Some(session) = model.session_mut() {
        session.season.day = Some(day);
    }
}

fn turn(model: &mut Model, page: SeasonPage) {
    if let Some(session) = model.session_mut() {
        let view = &mut session.season;
        view.page = if view.page == page { SeasonPage::Pictures } else { page };
        view.scroll = 0;
    }
}

/// What is chosen among names: what it is called, the names there are, the one shown, the one chosen, and how another is
/// chosen.
struct Selection {
    what: &'static str,
    names: fn(&SeasonShown) -> Vec<String>,
    shown: fn(&SeasonShown) -> String,
    chosen: fn(&SeasonAsked) -> Option<String>,
    choose: fn(&mut SeasonAsked, String, &SeasonShown),
}

const CASE: Selection = Selection {
    what: "case",
    names: cases,
    shown: case_of,
    chosen: |asked| asked.case.clone(),
    choose: |asked, name, _| asked.case = Some(name),
};
const PLAN: Selection = Selection {
    what: "plan",
    names: plans,
    shown: plan_of,
    chosen: |asked| asked.plan.clone(),
    choose: |asked, name, _| asked.plan = Some(name),
};
const STRATEGY: Selection = Selection {
    what: "strategy",
    names: strategies,
    shown: strategy_of,
    chosen: SeasonAsked::chooses,
    choose: chooses,
};

/// Chooses the next of some names, and asks where that season is not known yet.
fn choose(model: &mut Model, of: &Selection) -> Vec<Effect> {
    let what = of.what;
    let next = model.session().and_then(|session| {
        let shown = session.season_shown()?;
        let names = (of.names)(&shown);
        let mut chosen = session.season.chosen.clone();
        let here = (of.chosen)(&chosen).unwrap_or_else(|| (of.shown)(&shown));
        let at = names.iter().position(|n| *n == here).map_or(0, |i| i + 1);
        let next = names.get(at % names.len().max(1)).filter(|n| **n != here)?;
        (of.choose)(&mut chosen, next.clone(), &shown);
        Some((next.clone(), chosen))
    });
    let Some((next, chosen)) = next else {
        let words = if model.session().is_some_and(|s| s.season_shown().is_some()) {
            format!("there is no other {what}")
        } else {
            "there is no season to choose from yet".to_owned()
        };
        complain(model, words);
        return Vec::new();
    };
    say(model, format!("{what} {}", harmless(&next)));
    if let Some(session) = model.session_mut() {
        session.season.chosen = chosen;
        session.season_wrong = None;
    }
    settle(model);
    ask(model).into_iter().collect()
}

/// The cases of an answer, in its order; those of the site first in theirs.
fn cases(shown: &SeasonShown) -> Vec<String> {
    let of_site = shown.ahead.context.site().season.cases.iter().map(|c| c.name.clone());
    let there: Vec<String> = shown.ahead.answer.runs().map(|r| r.run.case.clone()).collect();
    let mut names: Vec<String> = of_site.filter(|name| there.contains(name)).collect();
    for name in there {
        if !names.contains(&name) {
            names.push(name);
        }
    }
    names
}

/// The plans of an answer by their files: two may have one name.
fn plans(shown: &SeasonShown) -> Vec<String> {
    let files: BTreeSet<&String> = shown.ahead.answer.runs().map(|r| &r.plan.file).collect();
    files.into_iter().cloned().collect()
}

/// The strategies, then the gate schedules of the folder.
fn strategies(shown: &SeasonShown) -> Vec<String> {
    let schedules = shown.ahead.answer.schedules.iter().map(|file| Schedule::called(file));
    Strategy::NAMES.iter().map(|s| s.0.to_owned()).chain(schedules).collect()
}

/// Gates by a strategy of a name, or by a schedule that is called so.
fn chooses(asked: &mut SeasonAsked, name: String, shown: &SeasonShown) {
    let mut schedules = shown.ahead.answer.schedules.iter();
    asked.schedule = schedules.find(|file| Schedule::called(file) == name).cloned();
    asked.strategy = asked.schedule.is_none().then_some(name);
}

/// The next number of days between decisions; the site's own is among them.
fn every(model: &mut Model) -> Vec<Effect> {
    let effects = change(model, |session, draft| {
        let own = session.base.site().season.decide_days;
        let days: BTreeSet<u32> = EVERY.into_iter().chain([own]).collect();
        let now = draft.every.unwrap_or(own);
        let next = days.iter().find(|d| **d > now).or(days.first()).copied();
        draft.every = next.filter(|days| *days != own);
    });
    settle(model);
    effects
}

/// Takes the last change back, and says so where this screen does not show it.
fn undo(model: &mut Model) -> Vec<Effect> {
    let every = |model: &Model| model.session().map(|s| s.draft().every);
    let before = every(model);
    let effects = back_and_forth(model, true);
    if model.message.is_none() && every(model) == before {
        say(model, "the last change, of another screen, is taken back; r makes it again there");
    }
    settle(model);
    effects
}

fn case_of(shown: &SeasonShown) -> String {
    shown.run.run.case.clone()
}

fn plan_of(shown: &SeasonShown) -> String {
    shown.run.plan.file.clone()
}

fn strategy_of(shown: &SeasonShown) -> String {
    shown.run.run.strategy.clone()
}

/// Computes what was stopped, or what is shown as the one spoken of.
fn again(model: &mut Model) -> Vec<Effect> {
    let Some(session) = model.session_mut() else { return Vec::new() };
    if let Some(shown) = session.season_shown().filter(|s| !s.old) {
        let main = &shown.ahead.answer.main;
        if std::ptr::eq(main, shown.run) {
            say(model, "this season is the one that was asked for");
            return Vec::new();
        }
        let chosen = SeasonAsked {
            plan: Some(plan_of(&shown)),
            case: Some(case_of(&shown)),
            ..session.season.chosen.clone()
        };
        session.season.chosen = chosen;
    }
    model.message = None;
    asking(model).into_iter().collect()
}

/// Goes so many days on, no further than the season lasts.
fn step(model: &mut Model, by: i64) {
    let Some(session) = model.session_mut() else { return };
    let Some((first, last)) = ends(session) else { return };
    let at = session.season.day.unwrap_or(first);
    let far = Days::new(by.unsigned_abs());
    let to = if by < 0 { at.checked_sub_days(far) } else { at.checked_add_days(far) };
    session.season.day = Some(to.unwrap_or(if by < 0 { first } else { last }).clamp(first, last));
}

/// Goes to a date found among those of the calendar of moves.
fn read(model: &mut Model, to: impl Fn(NaiveDate, &[NaiveDate]) -> Option<NaiveDate>) {
    let Some(session) = model.session_mut() else { return };
    let Some((first, _)) = ends(session) else { return };
    let Some(shown) = session.season_shown() else { return };
    let moved = shown.run.outcome.calendar.iter().map(|on| on.date);
    let found = to(session.season.day.unwrap_or(first), &moved.collect::<Vec<_>>());
    match found {
        Some(day) => session.season.day = Some(day),
        None => say(model, "no gate moves further on that way"),
    }
}

/// First and last day of the season shown.
fn ends(session: &Session) -> Option<(NaiveDate, NaiveDate)> {
    let days = &session.season_shown()?.run.run.days;
    Some((days.first()?.date, days.last()?.date))
}

/// Looks at the release elsewhere: the dam, then the points of the river.
fn look(model: &mut Model, to: impl Fn(usize, usize) -> usize) {
    if let Some(session) = model.session_mut() {
        let points = session.context().site().river.as_ref().map_or(0, |r| r.points.len());
        session.season.place = to(session.season.place.min(points), points + 1);
    }
}

/// Keeps date and place within the season shown.
fn settle(model: &mut Model) {
    let Some(session) = model.session_mut() else { return };
    let ends = ends(session);
    let view = &mut session.season;
    view.scroll = 0;
    view.day = view.day.and_then(|day| ends.map(|(first, last)| day.clamp(first, last)));
}

/// Scrolls what scrolls, no further than its last line.
fn scroll(model: &mut Model, to: impl Fn(usize) -> usize) {
    let last = season_rows(model);
    if let Some(session) = model.session_mut() {
        session.season.scroll = to(session.season.scroll.min(last)).min(last);
    }
}
