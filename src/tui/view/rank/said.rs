//! What is said of the mix chosen.

use crate::problem::harmless;
use crate::report::text::{apart, learned, rank, release_words, wells_changed};
use crate::tasks::rank::Shown;
use crate::tui::look::Role;
use crate::units::in_system;

use super::{Lines, Screen, say};

/// What is said of the mix chosen: what comes out, what to set, what it changes, why it stands there, what to beware of.
pub(super) fn lines(screen: &Screen, width: usize) -> Lines {
    let (ranked, system) = (screen.ranked, screen.model.system());
    let (context, answer) = (&ranked.context, &ranked.answer);
    let at = screen.session.rank.at;
    let mut out = Lines::new();
    let Some(shown) = answer.mixes.get(at) else { return out };
    let site = context.site();
    let water = |shown: &Shown| (shown.temperature_c, shown.oxygen_mg_l);
    let words = release_words(water(shown), &shown.spread, system);
    let old = if screen.old { ", from before" } else { "" };
    let title = format!("no. {} of {}{old}: {words}", at + 1, answer.mixes.len());
    say(&mut out, &title, width, 2, Role::Strong);
    if let Some(words) = learned::with_and_without(site, shown.without.as_ref(), system) {
        say(&mut out, &format!("learned: {words}"), width, 2, Role::Plain);
    }
    for check in shown.limits.iter().filter(|c| c.broken()) {
        let words = harmless(&in_system(&check.words(site), system));
        say(&mut out, &format!("! misses {words}; {}", check.cure()), width, 2, Role::Outside);
    }
    let said = rank::said(context, shown, system);
    for set in &said.set {
        say(&mut out, &format!("set {set}"), width, 2, Role::Tried);
    }
    // a well that carries otherwise is a change too, though no gate of it moves
    let wells = match (&answer.now, &shown.parts[..]) {
        (Some(now), [part]) => wells_changed(site, &now.day, &part.setting, system),
        _ => String::new(),
    };
    let change: Vec<String> =
        said.moves.iter().cloned().chain([wells]).filter(|words| !words.is_empty()).collect();
    if !change.is_empty() {
        say(&mut out, &change.join("; "), width, 2, Role::Plain);
    }
    if let Some(now) = &answer.now {
        let words = apart(water(now), water(shown), system);
        say(&mut out, &format!("against now: {words}"), width, 2, Role::Plain);
    }
    for beware in &said.beware {
        say(&mut out, &format!("! {beware}"), width, 2, Role::Warn);
    }
    for unsure in &said.unsure {
        say(&mut out, &format!("? unsure: {unsure}"), width, 2, Role::Warn);
    }
    for why in &said.why {
        say(&mut out, &format!("- {why}"), width, 2, Role::Plain);
    }
    let words = rank::not_checked(context, shown).map_or_else(
        || "every limit of the site file is checked".to_owned(),
        |w| format!("not checked: {w}"),
    );
    say(&mut out, &words, width, 2, Role::Plain);
    out
}
