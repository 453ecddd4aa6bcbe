//! What is said beside the picture.

use crate::problem::{Problem, any_refused};
use crate::report::text;
use crate::tasks::{Cast, Context, Freshness, cold_water};
use crate::tui::look::Role;
use crate::tui::model::{Model, Session};
use crate::units::{Dimension, System};

use super::super::failure_words;
use super::{Line, filled, flags, named, tables};

/// Which cast is spoken of, how old it is, how much there is to beware of: these lines stay in sight.
pub(super) fn head(session: &Session, width: usize) -> Vec<Line> {
    let mut out: Vec<Line> = Vec::new();
    let mut say = |text: &str, role: Role| {
        out.extend(filled(text, width, 2).into_iter().map(|line| (line, role)));
    };
    let looked = session.looked_at();
    let shown = looked.or_else(|| session.cast(&session.context().profile.file));
    let place = shown.and_then(|shown| {
        let casts = session.casts.as_ref()?;
        Some(format!("cast {} of {}, ", casts.iter().position(|c| c.file == shown.file)? + 1, casts.len()))
    });
    let place = place.unwrap_or_default();
    if let Some(cast) = looked {
        let words = format!("looking at the cast of {}, not the one worked with", named(session, cast));
        say(&words, Role::Warn);
    } else {
        let taken = match (shown, session.context().profile.taken) {
            (Some(cast), _) => named(session, cast),
            (None, Some(taken)) => {
                taken.with_timezone(&session.base.site().offset).format("%Y-%m-%d").to_string()
            }
            (None, None) => "unknown time".to_owned(),
        };
        let chosen = session.draft().changed.cast.is_some();
        let newest = if chosen { ", chosen; not the newest" } else { "" };
        say(&format!("cast of {taken}, worked with{newest}"), Role::Strong);
    }
    if session.pool_shown().is_none() {
        say("x cannot be read; nothing is computed on it", Role::Outside);
    }
    let (count, role) = flags::counted(&problems(session));
    // the head of every screen says it of the one worked with
    let age = looked.and_then(|cast| cast.pool.as_ref()).map(|(context, _)| age(context));
    say(&format!("{place}{}{count}", age.unwrap_or_default()), role);
    out
}

/// How old a cast is and what that means.
fn age(context: &Context) -> String {
    let word = match Freshness::of(context.site(), context.age_days) {
        Freshness::Fresh => "fresh".to_owned(),
        Freshness::Ageing => "~ ageing".to_owned(),
        other => format!("! {}", other.word().to_uppercase()),
    };
    match context.age_days.filter(|days| *days >= 0.0) {
        Some(days) => format!("{} old: {word}; ", crate::report::days(days)),
        None => format!("{word}; "),
    }
}

/// Everything said of the cast shown.
fn problems(session: &Session) -> Vec<Problem> {
    match (session.pool_shown(), session.looked_at()) {
        (Some((context, answer)), _) => {
            context.profile.flags.iter().chain(&answer.against_previous).cloned().collect()
        }
        (None, Some(cast)) => cast.problems.clone(),
        (None, None) => Vec::new(),
    }
}

/// Everything that is said, wrapped; an empty line between the parts.
pub(super) fn lines(model: &Model, session: &Session, width: usize) -> Vec<Line> {
    let system = model.system();
    let mut out: Vec<Line> = Vec::new();
    if let Some(failure) = &session.wrong {
        say(
            &mut out,
            &format!("! no answer to the last change: {}", failure_words(failure, system)),
            width,
            Role::Outside,
        );
    }
    if let Some((context, answer)) = session.pool_shown() {
        let of = |dimension: Dimension| system.unit(dimension).symbol();
        for line in text::layer_words(context, answer, system) {
            say(&mut out, &line, width, Role::Plain);
        }
        heading(&mut out, "Colder water", width);
        let mut volumes: Vec<_> = answer.cold.iter().map(|c| (*c, false)).collect();
        let typed = session.pool.colder_c.map(|c| (cold_water(context, answer, c), true));
        volumes.extend(typed);
        out.extend(tables::cold(&volumes, system, width));
        match text::reach_words(answer, system) {
            Some(reach) => say(&mut out, &reach, width, Role::Quiet),
            None => say(&mut out, "! no outlet is usable under this pool", width, Role::Outside),
        }
        heading(&mut out, "Against the cast before", width);
        match text::since_words(context, answer, system) {
            Some(since) => {
                say(&mut out, &since, width, Role::Plain);
                if let Some(cold) = text::cold_since_words(context, answer, system) {
                    say(&mut out, &cold, width, Role::Plain);
                }
            }
            None => say(&mut out, "no sound cast before this one", width, Role::Plain),
        }
        heading(
            &mut out,
            &format!("Outlets, {}: centre, water above the top, least asked for", of(Dimension::Length)),
            width,
        );
        out.extend(tables::outlets(context, &answer.outlets, system, width));
    }
    let problems = problems(session);
    let profile = session.pool_shown().map(|(context, _)| &context.profile);
    let refused = if any_refused(&problems) { "Problems (x), flags" } else { "Flags" };
    heading(&mut out, &format!("{refused} (!) and notes (-)"), width);
    if problems.is_empty() {
        say(&mut out, "none", width, Role::Plain);
    }
    out.extend(flags::lines(&problems, profile, system, width));
    season(&mut out, session, system, width);
    out
}

/// What there is to say of the casts of the season.
fn season(out: &mut Vec<Line>, session: &Session, system: System, width: usize) {
    match (&session.casts, &session.casts_wrong) {
        (_, Some(failure)) => {
            heading(out, "Casts", width);
            say(out, &format!("! not read: {}", failure_words(failure, system)), width, Role::Outside);
        }
        (None, None) => {
            heading(out, "Casts", width);
            say(out, "being read ...", width, Role::Quiet);
        }
        (Some(casts), None) => {
            let looked = session.looked_at().map(|c| &c.file);
            let broken: Vec<&Cast> =
                casts.iter().filter(|c| c.pool.is_none() && Some(&c.file) != looked).collect();

            if !broken.is_empty() {
                heading(out, "Casts that cannot be read", width);
                for cast in broken {
                    say(
                        out,
                        &format!("x {}; step to it with [ ] to read why", named(session, cast)),
                        width,
                        Role::Outside,
                    );
                }
            }
        }
    }
}

fn heading(out: &mut Vec<Line>, words: &str, width: usize) {
    if !out.is_empty() {
        out.push((String::new(), Role::Plain));
    }
    say(out, words, width, Role::Strong);
}

fn say(out: &mut Vec<Line>, text: &str, width: usize, role: Role) {
    out.extend(filled(text, width, 2).into_iter().map(|line| (line, role)));
}
