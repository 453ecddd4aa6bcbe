//! What the workers send.

use std::sync::Arc;

use crate::tasks::rank::Part;
use crate::tasks::{Context, Failure, Solved};
use crate::units::{Dimension, show};

use super::super::model::{Model, Over, Session, Shown, Stage};
use super::super::work::{Computed, Done, Lane, Sent};
use super::{Effect, ask_casts, ask_looked_at, ask_mixes, ask_rank, ask_river, change, complain, say};

/// Takes what a worker sent; what is no longer wanted is dropped.
pub(super) fn sent(model: &mut Model, sent: Sent) -> Vec<Effect> {
    let wanted = |model: &mut Model, lane: Lane, generation: u64| {
        model.under(lane).is_some_and(|under| under.generation == generation)
    };
    match sent {
        Sent::Progress(lane, generation, done) => {
            if let Some(under) = model.under(lane).as_mut().filter(|u| u.generation == generation) {
                under.done = done;
            }
            Vec::new()
        }
        Sent::Done(lane, generation, done) => {
            if !wanted(model, lane, generation) {
                return Vec::new();
            }
            *model.under(lane) = None;
            match done {
                Done::Opened(opened, seen) => {
                    let effects = self::opened(model, opened);
                    seen.map(Effect::Watch).into_iter().chain(effects).collect()
                }
                Done::Casts(casts) => {
                    if let Some(session) = model.session_mut() {
                        match casts {
                            Ok(casts) => (session.casts, session.casts_wrong) = (Some(casts), None),
                            Err(failure) => session.casts_wrong = Some(failure),
                        }
                    }
                    Vec::new()
                }
                Done::Mixed(mixed) => {
                    let effects = self::mixed(model, mixed);
                    effects.into_iter().chain(ask_looked_at(model)).collect()
                }
                Done::Ranked(ranked) => {
                    super::rank::ranked(model, ranked);
                    ask_river(model).into_iter().collect()
                }
                Done::Ahead(ahead) => super::season::told(model, ahead),
                Done::Needed(left) => {
                    super::needed::told(model, left);
                    Vec::new()
                }
                Done::Priced(priced) => super::rank::priced(model, priced),
                Done::Passed(passed) => super::log::told(model, passed),
                Done::Noted(noted) => super::note::told(model, noted),
                Done::Down(down) => {
                    if let Some(session) = model.session_mut() {
                        match down {
                            Ok(down) => (session.downstream, session.river_wrong) = (Some(*down), None),
                            Err(failure) => session.river_wrong = Some(failure),
                        }
                    }
                    Vec::new()
                }
            }
        }
    }
}

fn opened(model: &mut Model, opened: Result<Arc<Context>, Failure>) -> Vec<Effect> {
    let stage = std::mem::replace(&mut model.stage, Stage::Opening { kept: None });
    let before = match stage {
        Stage::Site(session) => Some(session),
        Stage::Broken { kept, .. } | Stage::Opening { kept } => kept,
        Stage::Sites { .. } => None,
    };
    let context = match opened {
        Ok(context) => context,
        Err(failure) => {
            let (problems, system) = match failure {
                Failure::Refused(problems, system) => (problems, system),
                Failure::Usage(words) => {
                    let cure = "correct the command line";
                    (vec![crate::problem::Problem::refused("usage", words, cure)], model.system())
                }
                Failure::Stopped => (Vec::new(), model.system()),
            };
            model.over = None;
            model.stage = Stage::Broken { problems, system, scroll: 0, kept: before };
            return Vec::new();
        }
    };
    let session = match before {
        None => Box::new(Session::begin(context)),
        Some(mut session) if session.takes(&context) => {
            if session.base.site().targets != context.site().targets && session.history.drop_targets() {
                say(model, "targets changed in the site file: those tried here are dropped");
            }
            session.base = context;
            session
        }
        Some(session) => {
            // fields and lists speak of gates by their old places
            if !matches!(model.over, Some(Over::Help(_) | Over::Settings(_))) {
                model.over = None;
            }
            say(model, "gates, wells or targets changed in the site file: tries begin anew");
            Box::new(Session { screen: session.screen, ..Session::begin(context) })
        }
    };
    model.stage = Stage::Site(session);
    let asked = [ask_mixes(model, None), ask_casts(model), ask_rank(model)];
    asked.into_iter().flatten().chain(ask_looked_at(model)).collect()
}

fn mixed(model: &mut Model, mixed: Result<Box<Computed>, Failure>) -> Vec<Effect> {
    let Some(session) = model.session_mut() else { return Vec::new() };
    let Computed { anew, mixes, solved } = match mixed {
        Ok(computed) => *computed,
        Err(failure) => {
            session.wrong = Some(failure);
            return Vec::new();
        }
    };
    session.wrong = None;
    let before = session.shown.take();
    // answers of last time hold where nothing but the tries changed
    let kept =
        if anew.is_some() { Vec::new() } else { before.as_ref().map_or_else(Vec::new, |s| s.mixes.clone()) };
    let on = anew.or_else(|| before.map(|s| s.on));
    let answer = |given: &crate::tasks::Given| {
        let of = |list: &[(crate::tasks::Given, _)]| list.iter().find(|(g, _)| g == given).cloned();
        of(&mixes).or_else(|| of(&kept))
    };
    if let Some(on) = on {
        let mixes = session.draft().tries.iter().filter_map(answer).collect();
        let context = Arc::clone(&on.context);
        session.shown = Some(Shown { on, mixes });
        // a target that is not valid on the date has no row any more
        session.mix.cell = session.mix.cell.moved(context.site(), context.on.date_naive(), 0, 0);
        let rules = super::rules(session).len();
        session.river.rule = session.river.rule.min(rules.saturating_sub(1));
    }
    match solved {
        // who went on to another try meanwhile has it left alone
        Some((given, solved)) if model.session().is_some_and(|s| s.draft().tried() == Some(&given)) => {
            take_solved(model, solved)
        }
        _ => Vec::new(),
    }
}

/// Puts the first split that gives the temperature on the board, or says why there is none.
fn take_solved(model: &mut Model, solved: Result<Solved, Failure>) -> Vec<Effect> {
    let system = model.system();
    let shown = |c: f64| show(c, Dimension::Temperature, system, 1);
    let solved = match solved {
        Ok(solved) => solved,
        Err(Failure::Usage(words)) => {
            complain(model, crate::problem::harmless(&words));
            return Vec::new();
        }
        Err(Failure::Refused(problems, _)) => {
            let words = problems.first().map_or_else(String::new, |p| p.sentence(system));
            complain(model, words);
            return Vec::new();
        }
        Err(Failure::Stopped) => return Vec::new(),
    };
    let names = model.session().map(|s| solved.between.map(|part| name(s, part))).unwrap_or_default();
    let Some((root, given)) = solved.roots.first() else {
        let [low, high] = solved.bracket_c;
        let words = format!(
            "no split between {} and {} gives {}: they give {} to {}; open a gate at another level",
            names[0],
            names[1],
            shown(solved.wanted_c),
            shown(low),
            shown(high)
        );
        complain(model, words);
        return Vec::new();
    };
    let given = given.clone();
    let words = format!(
        "{} with {} {} and {} {}{}",
        shown(root.temperature_c),
        names[0],
        show(root.flows_m3s[0], Dimension::Flow, system, 1),
        names[1],
        show(root.flows_m3s[1], Dimension::Flow, system, 1),
        if solved.roots.len() > 1 { "; another split gives it too" } else { "" }
    );
    let effects = change(model, |_, draft| {
        if let Some(tried) = draft.tried_mut() {
            *tried = given;
        }
    });
    say(model, words);
    effects
}

fn name(session: &Session, part: Part) -> String {
    let site = session.base.site();
    crate::problem::harmless(match part {
        Part::Outlet(i) => &site.outlets[i].name,
        Part::Well(i) => &site.wells[i].name,
    })
}
