//! What is to be logged: the form, its keys, and what comes of it.

use std::sync::Arc;

use crossterm::event::KeyEvent;

use crate::problem::{Problem, harmless};
use crate::record::Decided;
use crate::record::line::Line as Logline;
use crate::report::text::setting_words;
use crate::tasks::log::{Logged, NotLogged, path};
use crate::tasks::{Context, Failure};
use crate::units::{System, in_system};

use super::super::keys::{Action, Place, action};
use super::super::model::{AsTyped, Form, Line, Logs, Model, Over, Screen, Session, asked, taken};
use super::super::work::Work;
use super::{Effect, ask, complain, failure_words, say, typing};

/// What is to be decided: its gates as they are typed, what it is in words.
type Chosen = (AsTyped, Vec<String>, Arc<Context>);

/// Opens the form of a decision: the mix chosen on the rank screen, elsewhere the try.
pub(super) fn decide(model: &mut Model) -> Vec<Effect> {
    let system = model.system();
    let Some(session) = model.session() else { return Vec::new() };
    let chosen =
        if session.screen == Screen::Rank { ranked(session, system) } else { tried(session, system) };
    let (gates, mut what, context) = match chosen {
        Ok(chosen) => chosen,
        Err(why) => {
            complain(model, why);
            return Vec::new();
        }
    };
    let changed = &session.draft().changed;
    let under = [
        ("cast", changed.cast.is_some()),
        ("pool", changed.pool_m.is_some()),
        ("date", changed.on.is_some()),
        ("targets", changed.targets.is_some()),
    ];
    let under: Vec<&str> = under.into_iter().filter(|u| u.1).map(|u| u.0).collect();
    what.push(format!("from {}", context.on.format("%Y-%m-%d %H:%M %:z")));
    if !under.is_empty() {
        what.push(format!("! under what is tried here: {}", under.join(", ")));
    }
    let ranked = Box::new(session.rank_asked());
    let by = model.by.clone();
    let lines = [(Line::By, by.as_str()), (Line::Why, ""), (Line::Until, ""), (Line::Trigger, "")];
    open(model, Form::new(Logs::Decision(gates, ranked), what, context, &lines))
}

/// The try, with the limits that it breaks.
fn tried(session: &Session, system: System) -> Result<Chosen, String> {
    let context = session.context();
    let site = context.site();
    let (Some(answer), Some(given)) = (session.tried_now(), session.draft().tried()) else {
        return Err("the try has no answer to log: see the mix screen".into());
    };
    let mut what = vec![format!("the try: {}", setting_words(site, &answer.setting, system))];
    let broken = answer.mix.limits.iter().filter(|check| check.broken());
    what.extend(
        broken.map(|check| format!("! it misses {}", harmless(&in_system(&check.words(site), system)))),
    );
    Ok((AsTyped::of(site, &asked(site, given)), what, Arc::clone(context)))
}

/// The mix chosen; the first is logged as such, its parts of the day and all.
fn ranked(session: &Session, system: System) -> Result<Chosen, String> {
    let ranked = session.ranked.as_ref().filter(|_| session.ranks_now());
    let ranked = ranked.ok_or("the ranking is from before: nothing of it is logged")?;
    let (at, site) = (session.rank.at, ranked.context.site());
    let mix = ranked.answer.mixes.get(at).ok_or("no mix is allowed, so there is none to log")?;
    let what = format!("mix {} of the ranking: {}", at + 1, setting_words(site, &mix.day, system));
    let gates = if at == 0 { AsTyped::default() } else { AsTyped::of(site, &taken(site, mix)) };
    Ok((gates, vec![what], Arc::clone(&ranked.context)))
}

/// Opens the form of an event.
pub(super) fn happened(model: &mut Model) -> Vec<Effect> {
    let Some(session) = model.session() else { return Vec::new() };
    let context = Arc::clone(session.context());
    let what =
        vec!["something that nobody planned, such as a gate that failed or a meter at fault".to_owned()];
    let by = model.by.clone();
    let lines = [(Line::By, by.as_str()), (Line::Happened, ""), (Line::From, ""), (Line::Ended, "")];
    open(model, Form::new(Logs::Event, what, context, &lines))
}

/// Opens the form that gives the decision chosen other words, or takes it back.
pub(super) fn amend(model: &mut Model, withdrawn: bool) -> Vec<Effect> {
    let Some(session) = model.session() else { return Vec::new() };
    let Some(decided) = session.decision_at().and_then(|at| session.decisions().into_iter().nth(at)) else {
        complain(model, "no decision is logged yet");
        return Vec::new();
    };
    let context = Arc::clone(session.context());
    let Decided { id, decision, .. } = decided;
    let until = decision.until.map_or_else(String::new, |until| until.to_string());
    let (why, trigger) = (harmless(&decision.why), harmless(decision.trigger.as_deref().unwrap_or("")));
    let by = model.by.clone();
    let (logs, what) = if withdrawn {
        (Logs::Withdrawal(id), format!("decision {id} is taken back; it stays in the log"))
    } else {
        (Logs::Amendment(id), format!("other words for decision {id}; its gates stay as they are"))
    };
    let all = [(Line::By, by.as_str()), (Line::Why, &why), (Line::Until, &until), (Line::Trigger, &trigger)];
    let lines = if withdrawn { &[(Line::By, by.as_str()), (Line::Why, "")][..] } else { &all[..] };
    open(model, Form::new(logs, vec![what], context, lines))
}

/// Lays a form over the screen, where there is a log to write to.
fn open(model: &mut Model, form: Form) -> Vec<Effect> {
    if let Err(failure) = path(&form.context) {
        let words = failure_words(&failure, model.system());
        complain(model, words);
        return Vec::new();
    }
    model.message = None;
    model.over = Some(Over::Form(Box::new(form)));
    Vec::new()
}

/// A key while a form is filled.
pub(super) fn key(model: &mut Model, key: &KeyEvent) -> Vec<Effect> {
    match action(key, &[Place::Form]) {
        Some(Action::Enter) => return entered(model),
        Some(Action::Up) => go(model, |at| at.saturating_sub(1)),
        Some(Action::Down) => go(model, |at| at + 1),
        Some(_) => model.over = None,
        None => typing::type_key(model, key),
    }
    Vec::new()
}

fn go(model: &mut Model, to: impl Fn(usize) -> usize) {
    if let Some(Over::Form(form)) = &mut model.over {
        form.at = to(form.at).min(form.fields.len().saturating_sub(1));
    }
}

/// Has it written, where every line of it can be.
fn entered(model: &mut Model) -> Vec<Effect> {
    let system = model.system();
    let Some(Over::Form(form)) = &mut model.over else { return Vec::new() };
    let context = Arc::clone(&form.context);
    form.fields.iter_mut().for_each(|field| field.check(Some(&context), system));
    if let Some(wrong) = form.fields.iter().position(|field| field.wrong.is_some()) {
        form.at = wrong;
        return Vec::new();
    }
    let entry = form.entry();
    model.by = form.text(Line::By).unwrap_or_default();
    if let Some(Over::Form(form)) = model.over.take() {
        model.logging = Some(form);
    }
    say(model, "being logged ...");
    vec![Effect::Log(Box::new(entry))]
}

/// Says what was logged, and takes the files in anew; what could not be comes back as it was typed.
pub(super) fn logged(model: &mut Model, logged: Result<Box<Logged>, NotLogged>) -> Vec<Effect> {
    let system = model.system();
    let form = model.logging.take();
    match logged {
        Ok(logged) => {
            let (words, decision) = written(&logged, system);
            if let Some(session) = model.session_mut() {
                session.log.decision = decision.or(session.log.decision);
            }
            say(model, words);
            let work = Work::Open(model.asked.clone(), model.clock);
            vec![ask(model, work)]
        }
        Err(why) => {
            let words = words(&why, system);
            match form {
                Some(mut form) if model.over.is_none() => {
                    model.message = None;
                    form.wrong = Some(words);
                    model.over = Some(Over::Form(form));
                }
                _ => complain(model, words),
            }
            Vec::new()
        }
    }
}

fn words(why: &NotLogged, system: System) -> String {
    match why {
        NotLogged::Task(Failure::Stopped) => "stopped: nothing was logged".to_owned(),
        NotLogged::Task(failure) => failure_words(failure, system),
        NotLogged::Machine(problem) => problem.text(system),
    }
}

/// What was written, in one line, with the decision it is of.
fn written(logged: &Logged, system: System) -> (String, Option<u64>) {
    let (what, decision) = match &logged.appended.line {
        Logline::Decision(decision) => {
            let id = decision.amends.unwrap_or(decision.id);
            let done = match decision.amends {
                Some(_) if decision.withdrawn => "is taken back",
                Some(_) => "is amended",
                None => "is logged",
            };
            (format!("decision {id} {done}"), Some(id))
        }
        Logline::Event(event) => (format!("event {} is logged", event.id), None),
    };
    let file = harmless(&logged.appended.path.display().to_string());
    let said: Vec<String> = logged.said.iter().map(|problem: &Problem| problem.text(system)).collect();
    let said = if said.is_empty() { String::new() } else { format!("; {}", said.join("; ")) };
    (format!("{what}, on the disk in {file}{said}"), decision)
}
