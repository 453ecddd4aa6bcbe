//! What is rejected, the answers beyond the list, and the price of the mixes by the end of the season.

use crate::mix::limits::Group;
use crate::problem::{Weight, harmless};
use crate::report::text::{openings, rank, season};
use crate::tasks::Failure;
use crate::tui::look::Role;
use crate::units::in_system;

use super::super::failure_words;
use super::{Lines, Screen, labelled, say};

/// Columns of the label of an answer.
const MARGIN: usize = 9;

/// Columns of the mark and the number of a mix.
const NUMBER: usize = 6;

/// What is rejected: by which limits, how many mixes, the nearest miss of each; what was examined.
pub(super) fn rejected(screen: &Screen, width: usize) -> Lines {
    let (context, answer, system) = (&screen.ranked.context, &screen.ranked.answer, screen.model.system());
    let mut out = Lines::new();
    say(&mut out, "What is rejected; x or Esc goes back to the list.", width, 2, Role::Quiet);
    let mut before: Option<Group> = None;
    for told in rank::rejected(context, answer, system) {
        if before != Some(told.group) {
            say(&mut out, &rank::heading(told.group), width, 2, Role::Strong);
            before = Some(told.group);
        }
        let count = format!("{:>1$}  ", told.count, rank::COUNT);
        labelled(&mut out, &count, rank::COUNT + 2, &told.words, width, Role::Plain);
    }
    if before.is_none() && answer.ranking.examined > 0 {
        say(&mut out, "No limit rejects any mix.", width, 2, Role::Strong);
    }
    let broken = answer.now.iter().flat_map(|now| now.limits.iter().filter(|c| c.broken()));
    for check in broken {
        let words = harmless(&in_system(&check.words(context.site()), system));
        say(&mut out, &format!("! the setting now misses {words}"), width, 2, Role::Outside);
    }
    out.push((String::new(), Role::Plain));
    labelled(&mut out, "Examined", MARGIN, &rank::examined(answer, system), width, Role::Plain);
    for (label, words) in rank::answers(context, answer, system).into_iter().filter(|a| a.0 == "Range") {
        labelled(&mut out, label, MARGIN, &words, width, Role::Plain);
    }
    out
}

/// The answers beyond the list, and what was assumed.
pub(super) fn others(screen: &Screen, width: usize) -> Lines {
    let (context, answer, system) = (&screen.ranked.context, &screen.ranked.answer, screen.model.system());
    let mut out = Lines::new();
    say(&mut out, "Answers beyond the list; m or Esc goes back to it.", width, 2, Role::Quiet);
    let answers = rank::answers(context, answer, system);
    let none = answers.is_empty();
    for (label, words) in answers {
        labelled(&mut out, label, MARGIN, &words, width, Role::Plain);
    }
    if none {
        say(&mut out, "No mix is allowed: there is nothing beyond the list.", width, 2, Role::Strong);
    }
    let flags = context.profile.flags.iter().filter(|p| p.weight == Weight::Flag);
    for note in answer.notes.iter().chain(flags) {
        labelled(&mut out, "Note", MARGIN, &note.advice(system), width, Role::Plain);
    }
    say(&mut out, rank::CAPTION, width, 2, Role::Quiet);
    out
}

/// What each mix costs by the end of the season, the one chosen marked.
pub(super) fn prices(screen: &Screen, width: usize) -> Lines {
    let (model, session, ranked) = (screen.model, screen.session, screen.ranked);
    let mut out = Lines::new();
    let words = "What each mix costs by the end of the season; p or Esc goes back to the list.";
    say(&mut out, words, width, 2, Role::Quiet);
    let Some(prices) = session.prices_now() else {
        let (words, role) = unpriced(screen);
        say(&mut out, &words, width, 2, role);
        return out;
    };
    say(&mut out, &season::priced(prices), width, 2, Role::Plain);
    for ((at, line), mix) in season::prices(prices).iter().enumerate().zip(&ranked.answer.mixes) {
        let chosen = at == session.rank.at;
        let (mark, role) = if chosen { (">", Role::Chosen) } else { (" ", Role::Plain) };
        let (number, words) = line.trim_start().split_once("  ").unwrap_or(("", line));
        labelled(&mut out, &format!("{mark} {number:>2}"), NUMBER, words, width, role);
        let gates = openings(&ranked.context, mix, model.system()).join(", ");
        labelled(&mut out, "", NUMBER, &gates, width, Role::Quiet);
    }
    for note in &prices.notes {
        labelled(&mut out, "Note", MARGIN, &note.advice(model.system()), width, Role::Plain);
    }
    out
}

/// Why there are no prices.
fn unpriced(screen: &Screen) -> (String, Role) {
    let (model, session) = (screen.model, screen.session);
    if let Some(under) = model.ahead.as_ref().filter(|_| model.prices_mixes()) {
        return (format!("computing the prices, {:.0} %; Esc stops", 100.0 * under.done), Role::Quiet);
    }
    match &session.price_wrong {
        Some(Failure::Stopped) => ("Stopped; r computes the prices.".to_owned(), Role::Plain),
        Some(failure) => (format!("No prices: {}", failure_words(failure, model.system())), Role::Outside),
        None => ("Not computed for this ranking; r computes the prices.".to_owned(), Role::Plain),
    }
}
