//! The rank screen: choosing a mix, taking it; the drill and what it is held against.

use std::sync::Arc;

use crate::problem::harmless;
use crate::tasks::rank::{RankAnswer, Shown as Mix};
use crate::tasks::{Context, Failure};
use crate::units::{Dimension, System, figure};

use super::super::keys::Action;
use super::super::model::{Field, Model, Over, Page, Priced, Ranked, Screen, Session, Typed, Whole, taken};
use super::super::work::Work;
use super::mix::TRIES;
use super::{Effect, ask, ask_rank, change, complain, rank_rows, say};

/// Lines of a page (choice).
const PAGE: usize = 5;

/// Does what a key asks for.
pub(super) fn act(model: &mut Model, action: Action) -> Vec<Effect> {
    let Some(session) = model.session() else { return Vec::new() };
    let page = session.rank.page;
    let none = session.ranked.as_ref().is_none_or(|r| r.answer.mixes.is_empty());
    match action {
        Action::Enter if page == Page::List => return take(model),
        Action::Enter => turn(model, Page::List),
        Action::Rejected => turn(model, if page == Page::Rejected { Page::List } else { Page::Rejected }),
        Action::Prices if page == Page::Prices => turn(model, Page::List),
        Action::Prices => {
            turn(model, Page::Prices);
            return ask_prices(model).into_iter().collect();
        }
        Action::Again if page == Page::Prices => return ask_prices(model).into_iter().collect(),
        Action::Others => turn(model, if page == Page::Others { Page::List } else { Page::Others }),
        Action::Drill => model.over = Some(Over::Drill(0)),
        Action::Order => model.over = Some(Over::Order(0)),
        Action::Release => typing(model),
        Action::Again => return again(model),
        Action::PageUp => scroll(model, |at, _| at.saturating_sub(PAGE)),
        Action::PageDown => scroll(model, |at, _| at + PAGE),
        _ if page == Page::List && !none => choose(model, action),
        Action::Up => scroll(model, |at, _| at.saturating_sub(1)),
        Action::Down => scroll(model, |at, _| at + 1),
        Action::First => scroll(model, |_, _| 0),
        Action::Last => scroll(model, |_, last| last),
        _ => {}
    }
    Vec::new()
}

/// Back: to the list, then out of the drill.
pub(super) fn back(model: &mut Model) -> Vec<Effect> {
    let Some(session) = model.session() else { return Vec::new() };
    if session.rank.page != Page::List {
        turn(model, Page::List);
        return Vec::new();
    }
    let effects = change(model, |_, draft| draft.without.clear());
    if !effects.is_empty() {
        say(model, "the drill is over: every gate is ranked again");
    }
    effects
}

/// Takes a ranking; a mix chosen stays chosen where it is in the new one.
pub(super) fn ranked(model: &mut Model, ranked: Result<Box<(Arc<Context>, RankAnswer)>, Failure>) {
    let Some(session) = model.session_mut() else { return };
    let (context, answer) = match ranked {
        Ok(ranked) => *ranked,
        Err(failure) => {
            session.rank_wrong = Some(failure);
            return;
        }
    };
    // who looks at the best looks at the best of the new one
    let chosen = session.ranked.as_ref().filter(|_| session.rank.at > 0);
    let chosen = chosen.and_then(|r| r.answer.mixes.get(session.rank.at));
    let again = chosen.and_then(|chosen| answer.mixes.iter().position(|m| stands(m) == stands(chosen)));
    session.rank.at = again.unwrap_or(0);
    session.rank.scroll = 0;
    let (base, draft) = (Arc::clone(&session.base), session.draft().clone());
    if draft.without.is_empty() {
        let best = answer.mixes.first().cloned().map(Box::new);
        session.whole = Some(Whole { base: Arc::clone(&base), draft: draft.clone(), best });
    }
    // why an earlier ranking has no prices says nothing of this one
    session.price_wrong = None;
    session.ranked = Some(Ranked { base, draft, context, answer });
    session.rank_wrong = None;
}

/// Asks what the mixes of the ranking cost by the end of the season, where that is not known and not on its way.
fn ask_prices(model: &mut Model) -> Option<Effect> {
    if model.prices_mixes() {
        return None;
    }
    if model.session().is_none_or(|s| !s.ranks_now()) {
        complain(model, "the ranking is from before: prices wait for the new one; then r");
        return None;
    }
    let session = model.session_mut().filter(|s| s.prices_now().is_none())?;
    let ranked = session.ranked.as_ref()?;
    let work = Work::Prices {
        context: Arc::clone(&ranked.context),
        ranking: Box::new(ranked.answer.clone()),
        asked: session.price_asked(),
    };
    // a season under way gives way to them
    (session.season_asked, session.price_wrong) = (None, None);
    Some(ask(model, work))
}

/// Takes the prices.
pub(super) fn priced(model: &mut Model, priced: Result<Box<Priced>, Failure>) -> Vec<Effect> {
    if let Some(session) = model.session_mut() {
        match priced {
            Ok(priced) => (session.priced, session.price_wrong) = (Some(*priced), None),
            Err(failure) => session.price_wrong = Some(failure),
        }
    }
    super::season::ask(model).into_iter().collect()
}

/// Which gates stand open, and how far.
fn stands(mix: &Mix) -> Vec<(usize, u64)> {
    mix.day.gates.iter().map(|g| (g.outlet, g.opening.to_bits())).collect()
}

fn turn(model: &mut Model, page: Page) {
    if let Some(session) = model.session_mut() {
        session.rank.page = page;
        session.rank.scroll = 0;
    }
}

/// Scrolls what scrolls on the page, no further than its last line.
fn scroll(model: &mut Model, to: impl Fn(usize, usize) -> usize) {
    let last = rank_rows(model);
    if let Some(session) = model.session_mut() {
        session.rank.scroll = to(session.rank.scroll.min(last), last).min(last);
    }
}

fn choose(model: &mut Model, action: Action) {
    let Some(session) = model.session_mut() else { return };
    let last = session.ranked.as_ref().map_or(0, |r| r.answer.mixes.len().saturating_sub(1));
    let at = session.rank.at;
    let to = match action {
        Action::Up => at.saturating_sub(1),
        Action::Down => (at + 1).min(last),
        Action::First => 0,
        Action::Last => last,
        _ => return,
    };
    choose_mix(session, to);
}

/// Chooses a mix, from 0; what is said of it is shown from its beginning.
pub(super) fn choose_mix(session: &mut Session, to: usize) {
    if session.rank.at != to {
        session.rank.at = to;
        session.rank.scroll = 0;
    }
}

/// Begins to type the release, over the one ranked at.
fn typing(model: &mut Model) {
    let system = model.system();
    let flow = model.session().and_then(|s| {
        let of_ranked = s.ranked.as_ref().and_then(|r| match r.answer.blocks[..] {
            [(_, flow)] => Some(flow),
            _ => None,
        });
        s.draft().release_m3s.or(of_ranked)
    });
    let decimals = u8::from(system == System::Si);
    let shown = |flow| figure(flow, system.unit(Dimension::Flow), decimals).replace(',', "");
    model.over = Some(Over::Field(Field::new(Typed::Release, flow.map_or_else(String::new, shown))));
}

/// Ranks again what was stopped.
fn again(model: &mut Model) -> Vec<Effect> {
    if model.long.is_some() || model.session().is_none_or(|s| s.ranks_now() && s.rank_wrong.is_none()) {
        say(model, "the ranking is of what is set");
        return Vec::new();
    }
    model.message = None;
    ask_rank(model).into_iter().collect()
}

/// Takes the mix chosen to the mix screen: in place of the setting now, beside anything else that is tried.
fn take(model: &mut Model) -> Vec<Effect> {
    let Some(session) = model.session() else { return Vec::new() };
    let Some(ranked) = &session.ranked else { return Vec::new() };
    let Some(mix) = ranked.answer.mixes.get(session.rank.at) else { return Vec::new() };
    let given = taken(ranked.context.site(), mix);
    let number = session.rank.at + 1;
    let of = part_words(&ranked.context, mix);
    let draft = session.draft();
    let in_place = draft.tried().is_none_or(|t| *t == session.base.now_given().0);
    if !in_place && draft.tries.len() >= TRIES && !draft.tries.contains(&given) {
        complain(model, format!("{TRIES} tries are kept; drop one with d on the mix screen"));
        return Vec::new();
    }
    let effects = change(model, |_, draft| {
        draft.beside = None;
        if let Some(there) = draft.tries.iter().position(|t| *t == given) {
            draft.at = there;
        } else if let Some(tried) = draft.tried_mut().filter(|_| in_place) {
            *tried = given;
        } else {
            draft.tries.push(given);
            draft.at = draft.tries.len() - 1;
        }
    });
    let mut try_number = 1;
    if let Some(session) = model.session_mut() {
        session.screen = Screen::Mix;
        try_number = session.draft().at + 1;
    }
    say(model, format!("no. {number} of the ranking{of} is try {try_number}; u takes it back"));
    effects
}

/// Of a day of several parts only one can be tried: which.
fn part_words(context: &Context, mix: &Mix) -> String {
    let blocks = &context.site().blocks;
    let longest =
        (0..mix.parts.len()).rev().max_by(|&a, &b| mix.parts[a].share.total_cmp(&mix.parts[b].share));
    match longest.and_then(|i| blocks.get(i)).filter(|_| mix.parts.len() > 1) {
        Some(block) => format!(", its block {},", harmless(&block.name)),
        None => String::new(),
    }
}
