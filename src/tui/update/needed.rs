//! The cold water needed on the date read: asked, stopped, told.

use crate::tasks::Failure;

use super::super::model::{Left, Model, SeasonPage};
use super::super::work::{Lane, Work};
use super::{Effect, ask, complain, failure_words, say};

/// Asks how much cold water is needed on the date read, where that is not known and not on its way.
pub(super) fn asked(model: &mut Model) -> Vec<Effect> {
    let under_way = model.needed.is_some();
    let Some(session) = model.session_mut() else { return Vec::new() };
    let day = session.day_read();
    let date = day.and_then(|i| Some(session.season_shown()?.run.run.days.get(i)?.date));
    let Some(date) = date else {
        complain(model, "there is no season to read a date of yet");
        return Vec::new();
    };
    if session.season.page == SeasonPage::Beside {
        session.season.page = SeasonPage::Pictures;
    }
    if session.left_on(date).is_some() {
        say(model, format!("what is needed on {date} is told beside the pictures; g has it in full"));
        return Vec::new();
    }
    let question = session.season_question();
    let same = session.left_asked.as_ref().is_some_and(|(of, on)| of.is(&question) && *on == date);
    if under_way && same {
        return Vec::new();
    }
    session.left_asked = Some((question.clone(), date));
    model.message = None;
    vec![ask(model, Work::Needed(question, date))]
}

/// Takes what a worker says of it.
pub(super) fn told(model: &mut Model, left: Result<Box<Left>, Failure>) {
    let system = model.system();
    let Some(session) = model.session_mut() else { return };
    match left {
        Ok(left) => session.take_left(*left),
        Err(Failure::Stopped) => {}
        Err(failure) => complain(model, failure_words(&failure, system)),
    }
}

/// Stops what is under way.
pub(super) fn stop(model: &mut Model) -> Option<Effect> {
    let under = model.needed.take()?;
    say(model, "stopped; l on the season screen asks again what is needed on a date");
    Some(Effect::Stop(Lane::Needed, under.generation + 1))
}
