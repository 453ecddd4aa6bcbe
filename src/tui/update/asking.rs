//! What is asked of the workers.

use std::sync::Arc;

use crate::tasks::Given;

use super::super::model::{Model, Screen, Under};
use super::super::work::{On, Work};
use super::{Effect, log, note, season};

/// Asks a question; what was asked before in its lane is wanted no more.
pub(super) fn ask(model: &mut Model, work: Work) -> Effect {
    model.generation += 1;
    let generation = model.generation;
    let opening = matches!(work, Work::Open(..));
    *model.under(work.lane()) = Some(Under { generation, since: model.clock, done: 0.0, opening });
    Effect::Ask(generation, Box::new(work))
}

/// Asks for what the screen looked at shows, where it is not known yet and not on its way.
pub(super) fn ask_looked_at(model: &mut Model) -> Vec<Effect> {
    let ask = [ask_river, season::ask, log::ask, note::ask];
    ask.into_iter().filter_map(|ask| ask(model)).collect()
}

/// Asks for the casts of the season, each as old as it is at the date.
pub(super) fn ask_casts(model: &mut Model) -> Option<Effect> {
    let session = model.session()?;
    let work = Work::Casts(session.base.clone(), session.draft().changed.clone());
    Some(ask(model, work))
}

/// Asks for every try that has no answer yet.
pub(super) fn ask_mixes(model: &mut Model, solve: Option<Given>) -> Option<Effect> {
    // a question now would stop the opening; what is opened asks for every try by itself
    if model.quick.as_ref().is_some_and(|under| under.opening) {
        return None;
    }
    let session = model.session()?;
    let draft = session.draft();
    let same = session.shown.as_ref().filter(|_| session.is_current());
    let (on, tries) = match same {
        Some(shown) => {
            let missing = |t: &&Given| !shown.mixes.iter().any(|(g, _)| g == *t);
            (On::Same(shown.on.context.clone()), draft.tries.iter().filter(missing).cloned().collect())
        }
        None => (On::Files(session.base.clone(), draft.changed.clone()), draft.tries.clone()),
    };
    Some(ask(model, Work::Mix { on, tries, solve }))
}

/// Asks for what arrives downstream, where that is looked at and not known yet; it is made of answers that are there.
pub(super) fn ask_river(model: &mut Model) -> Option<Effect> {
    let session = model.session().filter(|s| s.screen == Screen::River && !s.flows_now())?;
    let (given, answer) = (session.draft().tried()?.clone(), session.tried_now()?.clone());
    let best = session.best_now().map(|(mix, given)| Box::new((given, mix.clone())));
    let context = Arc::clone(session.context());
    Some(ask(model, Work::River { context, tried: Box::new((given, answer)), best }))
}

/// Asks for the ranking.
pub(super) fn ask_rank(model: &mut Model) -> Option<Effect> {
    let session = model.session()?;
    let work = Work::Rank {
        base: session.base.clone(),
        changed: session.draft().changed.clone(),
        asked: session.rank_asked(),
    };
    Some(ask(model, work))
}
