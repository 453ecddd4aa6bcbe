//! The lines over the list: what was ranked, whether that is a drill, why nothing fits.

use ratatui::layout::Rect;

use crate::rank::Criterion;
use crate::report::text::{named, openings, range, rank};
use crate::tasks::rank::Shown;
use crate::tui::look::Role;
use crate::tui::model::{Model, Session};
use crate::units::{Dimension, show};

use super::super::failure_words;
use super::{Lines, Screen, say};

/// Rows from which the targets are told here; the trade curve has their bounds too.
const TALL: u16 = 24;

/// The lines over the list.
pub(super) fn lines(screen: &Screen, area: Rect) -> Lines {
    let (context, answer, system) = (&screen.ranked.context, &screen.ranked.answer, screen.model.system());
    let mut said = warnings(screen);
    // temperatures within one step of the preferred are as good as one another
    let near = show(context.site().bins.temperature_c, Dimension::TemperatureDifference, system, 1);
    let name = |c: &Criterion| match c {
        Criterion::Preferred if area.height >= TALL => format!("preferred (in steps of {near})"),
        other => other.name().replace('_', " "),
    };
    let by: Vec<String> = answer.order.iter().map(name).collect();
    let words = format!("{}, by {}", rank::release(context, answer, system), by.join(", "));
    said.push((words, Role::Strong));
    let date = context.on.date_naive();
    let valid: Vec<_> = context.site().targets_on(date).map(|(_, t)| t).collect();
    for rule in valid.iter().filter(|_| area.height >= TALL) {
        said.push((format!("target {}: {}", named(rule, system), range(rule, system)), Role::Plain));
    }
    if valid.is_empty() {
        said.push(("no target is valid on this date".to_owned(), Role::Plain));
    }
    set(screen, said, usize::from(area.width))
}

/// What must be known before anything of the list is believed, alone.
pub(super) fn alone(screen: &Screen, width: usize) -> Lines {
    set(screen, warnings(screen), width)
}

/// Wrapped; while a newer ranking is made the first words are that these are from before.
fn set(screen: &Screen, mut said: Lines, width: usize) -> Lines {
    if let Some(first) = said.first_mut().filter(|_| screen.old && screen.model.long.is_some()) {
        *first = (format!("from before: {}", first.0), Role::Warn);
    }
    let mut out = Lines::new();
    for (words, role) in said {
        say(&mut out, &words, width, 2, role);
    }
    out
}

fn warnings(screen: &Screen) -> Lines {
    let (model, session, ranked) = (screen.model, screen.session, screen.ranked);
    let (context, answer, system) = (&ranked.context, &ranked.answer, model.system());
    let mut out = Lines::new();
    if let Some(failure) = session.rank_wrong.as_ref().filter(|_| model.long.is_none()) {
        let why = failure_words(failure, system);
        out.push((format!("! no ranking of the last change, the list is from before: {why}"), Role::Outside));
    } else if screen.old && model.long.is_none() {
        let words = "! the newer ranking was stopped, the list is from before; r ranks again";
        out.push((words.to_owned(), Role::Outside));
    }
    if !answer.without.is_empty() {
        out.push((drill(screen), Role::Warn));
    }
    if answer.now.is_none()
        && let Some(note) = answer.notes.iter().find(|n| n.kind == "now-unknown")
    {
        out.push((format!("! {}", note.advice(system)), Role::Warn));
    }
    let nothing = rank::nothing_fits(context, answer, system);
    out.extend(nothing.map(|words| (format!("! {words}"), Role::Outside)));
    out
}

/// `! DRILL without N3, Esc ends it: best 52.9 F ... instead of ... with every gate`.
fn drill(screen: &Screen) -> String {
    let ranked = screen.ranked;
    let (context, answer, system) = (&ranked.context, &ranked.answer, screen.model.system());
    let water = |shown: &Shown| {
        let air = shown.oxygen_mg_l.map_or_else(|| "unknown".to_owned(), |o| format!("{o:.1} mg/L"));
        format!("{}, oxygen {air}", show(shown.temperature_c, Dimension::Temperature, system, 1))
    };
    let lost = rank::without(context, answer);
    let best =
        answer.mixes.first().map_or_else(|| "no mix is allowed".to_owned(), |m| format!("best {}", water(m)));
    let whole = match screen.session.whole_beside(ranked).map(|w| w.best.as_deref()) {
        Some(Some(best)) => {
            format!(
                "instead of {} with every gate ({})",
                water(best),
                openings(context, best, system).join(", ")
            )
        }
        Some(None) => "with every gate none is either".to_owned(),
        None => "with every gate not ranked since the last change".to_owned(),
    };
    format!("! DRILL, Esc ends it: without {lost}: {best}, {whole}")
}

/// What is said where there is no ranking at all.
pub(super) fn without_ranking(model: &Model, session: &Session, width: usize) -> Lines {
    let mut out = Lines::new();
    match &session.rank_wrong {
        Some(failure) => {
            let words = format!("! no ranking: {}", failure_words(failure, model.system()));
            say(&mut out, &words, width, 2, Role::Outside);
        }
        None if model.long.is_some() => say(&mut out, "ranking ...", width, 2, Role::Quiet),
        None => say(&mut out, "! no ranking: it was stopped; r ranks", width, 2, Role::Outside),
    }
    out
}
