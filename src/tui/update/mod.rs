//! A message changes the model, and may ask for something to be done outside it.

mod answers;
mod asking;
mod list;
mod log;
mod logging;
mod mix;
mod mouse;
mod needed;
mod note;
mod pool;
mod rank;
mod river;
mod season;
mod typing;

use chrono::{DateTime, Utc};
use crossterm::event::{KeyEvent, MouseEvent};

use crate::files::folder::demonstrations;
use crate::problem::Problem;
use crate::tasks::Asked;
use crate::tasks::log::{Logged, NotLogged};
use crate::units::System;

use asking::{ask, ask_casts, ask_looked_at, ask_mixes, ask_rank, ask_river};
pub(super) use river::rules;

use super::keys::{Action, Place, action};
use super::model::{Choice, Draft, Entry, Likes, Message, Model, Over, Saved, Screen, Session, Stage};
use super::view::{
    answer_text, failure_words, log_rows, mix_rows, note_rows, rank_rows, river_rows, rule_in_sight,
    season_rows,
};
use super::work::{Lane, Seen, Sent, Work};

/// A message.
#[derive(Debug)]
pub enum Event {
    /// A key.
    Key(KeyEvent),
    /// The mouse.
    Mouse(MouseEvent),
    /// Text pasted.
    Paste(String),
    /// The terminal has this many columns and rows.
    Resize(u16, u16),
    /// The time of day.
    Tick(DateTime<Utc>),
    /// A worker.
    Sent(Sent),
    /// Files on disk differ from what was read.
    FilesChanged,
    /// The list of sites that was asked for.
    Sites(Vec<Choice>),
    /// A new site was made in a folder, or why not.
    Made(Result<String, Problem>),
    /// Something that could not be done.
    Said(Problem),
    /// What was logged, or why nothing was.
    Logged(Result<Box<Logged>, NotLogged>),
    /// What was to be saved, and why it could not be.
    Saved(Box<Saved>, Option<Problem>),
}

/// What is to be done outside the model.
#[derive(Debug)]
pub enum Effect {
    /// Compute.
    Ask(u64, Box<Work>),
    /// Stop computing in a lane: nothing of this generation or before is wanted.
    Stop(Lane, u64),
    /// Notice when the files of a site differ from what they were.
    Watch(Seen),
    /// List the sites of a folder, and the demonstrations.
    List(Option<String>),
    /// Make a new site in a folder.
    NewSite(String, System),
    /// Copy to the clipboard of the terminal.
    Copy(String),
    /// Keep what the user likes.
    Keep(Likes),
    /// Write something to the log.
    Log(Box<Entry>),
    /// Save something in a file.
    Save(Saved),
    /// Stop for the shell.
    Suspend,
    /// Leave.
    Quit,
}

/// Asks for the site the command line names.
pub fn begin(model: &mut Model) -> Vec<Effect> {
    let work = Work::Open(model.asked.clone(), model.clock);
    vec![ask(model, work)]
}

/// Opens another site.
fn open(model: &mut Model, named: String) -> Vec<Effect> {
    // the first demonstration is opened where nothing is named
    let first = || demonstrations().first().map(|name| (*name).to_owned());
    let again = model.asked.site.clone().or_else(first).as_ref() == Some(&named);
    model.asked = Asked { site: Some(named), units: model.asked.units, ..Asked::default() };
    let kept = match std::mem::replace(&mut model.stage, Stage::Opening { kept: None }) {
        Stage::Sites { kept, .. } if again => kept,
        _ => None,
    };
    model.stage = Stage::Opening { kept };
    model.message = None;
    begin(model)
}

/// Changes the model by a message.
pub fn update(model: &mut Model, event: Event) -> Vec<Effect> {
    match event {
        Event::Key(key) => pressed(model, &key),
        Event::Mouse(mouse) => mouse::moused(model, mouse),
        Event::Paste(text) => typing::pasted(model, &text),
        Event::Resize(columns, rows) => {
            model.size = (columns, rows);
            Vec::new()
        }
        Event::Tick(clock) => ticked(model, clock),
        Event::Sent(sent) => answers::sent(model, sent),
        // who chooses a site is not to be pulled back into the last
        Event::FilesChanged if matches!(model.stage, Stage::Sites { .. }) => Vec::new(),
        Event::FilesChanged => {
            // what is computed on the old files is computed on nothing
            let work = Work::Open(model.asked.clone(), model.clock);
            vec![ask(model, work)]
        }
        Event::Sites(list) => list::listed(model, list),
        Event::Made(Ok(folder)) => open(model, folder),
        Event::Logged(logged) => logging::logged(model, logged),
        Event::Saved(saved, problem) => note::saved(model, *saved, problem),
        Event::Made(Err(problem)) | Event::Said(problem) => {
            let system = model.system();
            complain(model, problem.text(system));
            Vec::new()
        }
    }
}

/// Places whose keys work now, the nearest first.
pub fn places(model: &Model) -> Vec<Place> {
    match &model.over {
        Some(Over::Field(_)) => return vec![Place::Field],
        Some(Over::Form(_)) => return vec![Place::Form],
        Some(Over::Help(_)) => return vec![Place::Help, Place::Everywhere],
        Some(_) => return vec![Place::List, Place::Everywhere],
        None => {}
    }
    match &model.stage {
        Stage::Opening { .. } => vec![Place::Everywhere],
        Stage::Sites { .. } => vec![Place::Sites, Place::Everywhere],
        Stage::Broken { .. } => vec![Place::Problems, Place::Everywhere],
        Stage::Site(session) => {
            let screen = match session.screen {
                Screen::Pool => Place::Pool,
                Screen::Mix => Place::Mix,
                Screen::Rank => Place::Rank,
                Screen::River => Place::River,
                Screen::Season => Place::Season,
                Screen::Log => Place::Log,
                Screen::Note => Place::Note,
            };
            vec![screen, Place::Site, Place::Everywhere]
        }
    }
}

fn pressed(model: &mut Model, key: &KeyEvent) -> Vec<Effect> {
    // these two work while typing too
    if let Some(action @ (Action::Quit | Action::Suspend)) = action(key, &[Place::Everywhere])
        .filter(|_| key.modifiers.contains(crossterm::event::KeyModifiers::CONTROL))
    {
        return vec![if action == Action::Quit { Effect::Quit } else { Effect::Suspend }];
    }
    match model.over {
        Some(Over::Field(_)) => return typing::key(model, key),
        Some(Over::Form(_)) => return logging::key(model, key),
        _ => {}
    }
    match action(key, &places(model)) {
        Some(action) => act(model, action),
        None => Vec::new(),
    }
}

/// Does what a key, or the mouse in its place, asks for.
fn act(model: &mut Model, action: Action) -> Vec<Effect> {
    if model.over.is_some() && !matches!(action, Action::Quit | Action::Help) {
        return list::act(model, action);
    }
    match action {
        Action::Quit => vec![Effect::Quit],
        Action::Suspend => vec![Effect::Suspend],
        Action::Help => {
            model.over = if matches!(model.over, Some(Over::Help(_))) { None } else { Some(Over::Help(0)) };
            Vec::new()
        }
        Action::Settings => {
            model.over = Some(Over::Settings(0));
            Vec::new()
        }
        Action::Sites => list::sites(model),
        Action::Back => back(model),
        Action::Copy => copy(model),
        Action::Screen(number) => to_screen(model, |_| number.saturating_sub(1)),
        Action::NextScreen => to_screen(model, |at| (at + 1) % Screen::ALL.len()),
        Action::PreviousScreen => to_screen(model, |at| (at + Screen::ALL.len() - 1) % Screen::ALL.len()),
        Action::Decide => logging::decide(model),
        Action::Happened => logging::happened(model),
        other => match &model.stage {
            Stage::Sites { .. } | Stage::Broken { .. } => list::act(model, other),
            Stage::Opening { .. } => Vec::new(),
            Stage::Site(session) => match session.screen {
                Screen::Pool => pool::act(model, other),
                Screen::Mix => mix::act(model, other),
                Screen::Rank => rank::act(model, other),
                Screen::River => river::act(model, other),
                Screen::Season => season::act(model, other),
                Screen::Log => log::act(model, other),
                Screen::Note => note::act(model, other),
            },
        },
    }
}

fn to_screen(model: &mut Model, to: impl Fn(usize) -> usize) -> Vec<Effect> {
    if let Some(session) = model.session_mut() {
        let at = Screen::ALL.iter().position(|s| s.1 == session.screen).unwrap_or(0);
        if let Some((_, screen)) = Screen::ALL.get(to(at)) {
            session.screen = *screen;
        }
    }
    model.message = None;
    if let Some(session) = model.session_mut() {
        // who comes back to what was stopped wants it
        (session.season_wrong, session.past_wrong, session.note_wrong) = (None, None, None);
    }
    ask_looked_at(model)
}

/// Back: what is looked at on the pool screen first, then long work is stopped, then what was said is taken off.
fn back(model: &mut Model) -> Vec<Effect> {
    if let Stage::Sites { kept, .. } = &mut model.stage {
        let Some(session) = kept.take() else { return Vec::new() };
        model.stage = Stage::Opening { kept: Some(session) };
        return begin(model);
    }
    if let Some(session) = model.session_mut().filter(|s| s.screen == Screen::Pool) {
        let read = session.pool.cursor_m.take().is_some();
        if read || session.pool.cast.take().is_some() {
            model.message = None;
            return Vec::new();
        }
    }
    let screen = model.session().map(|s| s.screen);
    let season = screen == Some(Screen::Season);
    let stopped = match screen {
        Some(Screen::Log) => log::stop(model),
        Some(Screen::Note) => note::stop(model),
        _ => None,
    };
    if let Some(effect) = stopped {
        return vec![effect];
    }
    if season && let Some(effect) = season::stop(model).or_else(|| needed::stop(model)) {
        return vec![effect];
    }
    if let Some(under) = model.long.take() {
        say(model, "stopped; what is shown was computed before");
        let stop = Effect::Stop(Lane::Long, under.generation + 1);
        return std::iter::once(stop).chain(ask_river(model)).collect();
    }
    if let Some(effect) = season::stop(model).or_else(|| needed::stop(model)) {
        return vec![effect];
    }
    model.message = None;
    match screen {
        Some(Screen::Rank) => return rank::back(model),
        Some(Screen::River) => river::back(model),
        Some(Screen::Season) => season::back(model),
        Some(Screen::Log) => log::back(model),
        Some(Screen::Pool | Screen::Mix | Screen::Note) | None => {}
    }
    Vec::new()
}

fn copy(model: &mut Model) -> Vec<Effect> {
    let (waits, system) = (model.quick.is_some(), model.system());
    let old = model.session().is_some_and(|s| match s.screen {
        Screen::Rank => !s.ranks_now(),
        Screen::River => !s.flows_now(),
        Screen::Season => !s.seasons_now(),
        Screen::Log => !s.past_now(),
        Screen::Note => !s.notes_now(system),
        Screen::Pool | Screen::Mix => s.wrong.is_some() || !s.is_current() || waits,
    });
    if old {
        complain(model, "what is shown is from before: nothing was copied");
        return Vec::new();
    }
    if let Some(text) = answer_text(model) {
        say(model, "copied to the clipboard of the terminal, where it takes that");
        return vec![Effect::Copy(text)];
    }
    complain(model, "there is no answer to copy yet");
    Vec::new()
}

fn ticked(model: &mut Model, clock: DateTime<Utc>) -> Vec<Effect> {
    model.clock = clock;
    let follows = |s: &Session| s.base.on_from == crate::tasks::OnFrom::Clock;
    // the decision date follows the clock by the hour: figures that change by the second cannot be compared
    let old = model.session().is_some_and(|s| follows(s) && (clock - s.base.on.to_utc()).num_minutes() >= 60);
    if old && model.quick.is_none() {
        let work = Work::Open(model.asked.clone(), clock);
        return vec![ask(model, work)];
    }
    Vec::new()
}

/// Says something on the message line.
fn say(model: &mut Model, words: impl Into<String>) {
    model.message = Some(Message { words: words.into(), wrong: false });
}

/// Says what went wrong.
fn complain(model: &mut Model, words: impl Into<String>) {
    model.message = Some(Message { words: words.into(), wrong: true });
}

/// Takes a new draft and asks what that makes necessary.
fn change(model: &mut Model, edit: impl FnOnce(&Session, &mut Draft)) -> Vec<Effect> {
    let Some(session) = model.session_mut() else { return Vec::new() };
    let mut draft = session.draft().clone();
    edit(session, &mut draft);
    let before = session.draft().clone();
    if !session.history.change(draft) {
        return Vec::new();
    }
    model.message = None;
    recompute(model, &before)
}

/// Asks what differs from an earlier draft.
fn recompute(model: &mut Model, before: &Draft) -> Vec<Effect> {
    let Some(session) = model.session() else { return Vec::new() };
    let draft = session.draft();
    let mixes = draft.changed != before.changed || draft.tries != before.tries;
    let ranks = !draft.ranks_as(before);
    let mut effects = Vec::new();
    if mixes {
        effects.extend(ask_mixes(model, None));
    }
    if ranks {
        effects.extend(ask_rank(model));
    }
    if !mixes && draft_of(model).is_some_and(|d| !d.goes_as(before)) {
        effects.extend(season::ask(model));
    }
    if draft_of(model).is_some_and(|d| d.changed.on != before.changed.on) {
        effects.extend(ask_casts(model));
    }
    effects
}

fn draft_of(model: &Model) -> Option<&Draft> {
    model.session().map(Session::draft)
}
