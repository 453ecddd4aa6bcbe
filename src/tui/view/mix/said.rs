//! What is said beside the board: the limits of what is chosen, the difference from now, what it takes, what to beware
//! of, what is not checked.

use ratatui::buffer::Buffer;
use ratatui::layout::Rect;

use crate::mix::limits::{Check, Of};
use crate::problem::{Weight, harmless};
use crate::report::{flags_of, text};
use crate::tasks::MixAnswer;
use crate::tui::look::Role;
use crate::tui::model::{Cell, Model, Session};
use crate::units::{Dimension, System, in_system, show};

use super::super::failure_words;
use super::super::write::{put, put_right, wrapped};

/// Whether so many lines scroll, the rows they then have, and the last line to scroll to. What is left has a row of
/// its own: beside words it would read as one of their figures.
fn scrolled(lines: usize, height: u16) -> (bool, u16, usize) {
    let scrolls = lines > usize::from(height) && height > 1;
    let shown = if scrolls { height - 1 } else { height };
    (scrolls, shown, lines.saturating_sub(usize::from(shown)))
}

/// The last line to scroll to.
pub(super) fn last(model: &Model, session: &Session, area: Rect) -> usize {
    scrolled(lines(model, session, usize::from(area.width)).len(), area.height).2
}

/// Draws what is said.
pub(super) fn draw(model: &Model, session: &Session, area: Rect, buf: &mut Buffer) {
    let lines = lines(model, session, usize::from(area.width));
    let (scrolls, shown, last) = scrolled(lines.len(), area.height);
    let from = session.mix.scroll.min(last);
    for (row, (line, role)) in (0..shown).zip(lines.iter().skip(from)) {
        put(buf, area, 0, row, line, model.look.style(*role));
    }
    if scrolls {
        let below = last - from;
        let words = if below > 0 { format!("{below} more lines, PgDn") } else { "PgUp".to_owned() };
        put_right(buf, area, area.width, shown, &words, model.look.style(Role::Key));
    }
}

/// Everything that is said, wrapped.
fn lines(model: &Model, session: &Session, width: usize) -> Vec<(String, Role)> {
    let system = model.system();
    let mut out: Vec<(String, Role)> = Vec::new();
    let mut say = |text: String, role: Role| {
        let lines = wrapped(&text, width, 2);
        out.extend(lines.into_iter().map(|l| (l, role)));
    };
    if let Some(failure) = &session.wrong {
        say(format!("! no answer to the last change: {}", failure_words(failure, system)), Role::Outside);
    }
    let answer = match session.answer(session.draft().at) {
        Some(Ok(answer)) => answer,
        Some(Err(failure)) => {
            say(failure_words(failure, system), Role::Outside);
            return out;
        }
        None => {
            say("computing ...".into(), Role::Quiet);
            return out;
        }
    };
    let context = session.context();
    let site = context.site();
    if let Some((_, was)) = &answer.now {
        say(format!("against now: {}", text::difference(was, &answer.mix, system)), Role::Strong);
    } else {
        let changed = &session.draft().changed;
        let tried = if changed.pool_m.is_some() || changed.on.is_some() || changed.cast.is_some() {
            "the setting now, with the pool, date or cast tried"
        } else {
            "the setting now"
        };
        say(tried.into(), Role::Strong);
    }
    // limits that are broken and what to beware of come before anything that can be scrolled away
    for flag in flags_of(&answer.mix.warnings).into_iter().filter(|p| p.weight != Weight::Note) {
        let role = if flag.kind == "limit" { Role::Outside } else { Role::Warn };
        say(format!("! {}", flag.advice(system)), role);
    }
    if let Some(words) = text::learned::with_and_without(site, answer.without.as_ref(), system) {
        say(format!("learned: {words}"), Role::Plain);
    }
    if let Some(change) = &answer.change {
        // a well that carries otherwise is a change too, though no gate moves
        let wells = answer.now.as_ref().map(|now| text::wells_changed(site, &now.0, &answer.setting, system));
        let hours = change.moves.crew_hours;
        let parts = [
            text::moves(context, change, system),
            wells.unwrap_or_default(),
            if hours > 0.0 { format!("{hours:.1} crew hours") } else { String::new() },
        ];
        let told: Vec<String> = parts.into_iter().filter(|p| !p.is_empty()).collect();
        say(told.join("; "), Role::Plain);
    }
    if answer.day.is_some() {
        say("this is the day's longest block; targets are judged over the day".into(), Role::Warn);
    }
    if answer.day.is_none() && !site.blocks.is_empty() {
        say("held all day long here; the site file has blocks of the day".into(), Role::Warn);
    }
    if let Some(words) = ranked_at(session, answer, system) {
        say(words, Role::Plain);
    }
    if session.draft().changed.targets.is_some() {
        say("* targets as tried here, not as the site file has them".into(), Role::Warn);
    }
    for check in chosen(answer, session.mix.cell) {
        let words = harmless(&in_system(&check.words(site), system));
        let spare = check
            .spare()
            .map_or_else(String::new, |spare| format!("; {} to spare", in_system(&spare, system)));
        say(format!("  {words}{spare}"), Role::Plain);
    }
    for note in flags_of(&answer.mix.warnings).into_iter().filter(|p| p.weight == Weight::Note) {
        say(format!("- {}", note.advice(system)), Role::Plain);
    }
    if answer.mix.not_checked.is_empty() {
        say("every limit of the site file is checked".into(), Role::Plain);
    } else {
        say(format!("not checked: {}", harmless(&answer.mix.not_checked.join("; "))), Role::Plain);
    }
    out
}

/// That the ranking, and what is attainable, are of another release, where they are.
fn ranked_at(session: &Session, answer: &MixAnswer, system: System) -> Option<String> {
    let ranked = session.ranked.as_ref()?;
    let &[(_, wanted)] = &ranked.answer.blocks[..] else { return None };
    let set: f64 = answer.setting.gates.iter().map(|g| g.flow_m3s).sum();
    let digits = u8::from(system == System::Si);
    let [set, wanted] = [set, wanted].map(|flow| show(flow, Dimension::Flow, system, digits));
    (set != wanted).then(|| format!("this releases {set}; ranking and attainable are of {wanted}"))
}

/// Limits of what is chosen that are kept; those broken are told before.
fn chosen(answer: &MixAnswer, cell: Cell) -> Vec<&Check> {
    let of = match cell {
        Cell::Opening(i) | Cell::Flow(i) => Of::Outlet(i),
        Cell::Total(i) => Of::Well(i),
        _ => Of::Whole,
    };
    answer.mix.limits.iter().filter(|c| c.of == of && !c.broken()).collect()
}
