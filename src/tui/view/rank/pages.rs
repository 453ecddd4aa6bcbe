//! What is rejected, and the answers beyond the list.

use crate::mix::limits::Group;
use crate::problem::{Weight, harmless};
use crate::report::text::rank;
use crate::tui::look::Role;
use crate::units::in_system;

use super::{Lines, Screen, labelled, say};

/// Columns of the label of an answer.
const MARGIN: usize = 9;

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
