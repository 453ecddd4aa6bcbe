//! The cold water needed on the date read, case by case, where that was asked.

use chrono::NaiveDate;

use crate::problem::harmless;
use crate::report::text::volume;
use crate::tasks::season::CaseNeeded;
use crate::tui::look::Role;
use crate::tui::model::SeasonQuestion;
use crate::units::System;

use super::Screen;
use super::readout::plural;

/// A line for each case, or how far the search is.
pub(super) fn lines(screen: &Screen, date: NaiveDate) -> Vec<(String, Role)> {
    let on = date.format("%m-%d");
    if let Some(left) = screen.session.left_on(date) {
        let head = (format!("needed on {on} for later days:"), Role::Cold);
        let cases = left.answer.cases.iter().map(|case| told(case, screen.model.system()));
        return std::iter::once(head).chain(cases).collect();
    }
    let question = screen.session.season_question();
    let asked = |(of, on): &(SeasonQuestion, NaiveDate)| of.is(&question) && *on == date;
    let asked = screen.session.left_asked.as_ref().is_some_and(asked);
    let under = screen.model.needed.as_ref().filter(|_| asked);
    under.map_or_else(Vec::new, |under| {
        vec![(format!("needed on {on}: sought, {:.0} %, Esc stops", 100.0 * under.done), Role::Warn)]
    })
}

/// What is needed in a case, how much there is too little or to spare, and what comes of having it.
fn told(of: &CaseNeeded, system: System) -> (String, Role) {
    let case = harmless(&of.case);
    let found = match &of.needed.found {
        Err(why) => return (format!("- {case}: not known, {why}"), Role::Warn),
        Ok(found) => found,
    };
    let least = &found.least;
    let amount = |m3: f64| volume(m3, system);
    let needed = least.usable_m3.map_or_else(|| "nothing usable".to_owned(), amount);
    let spare_m3 = of.needed.to_spare_m3();
    let apart = spare_m3.map_or_else(String::new, |m3| {
        let word = if m3 < 0.0 { "SHORT" } else { "spare" };
        format!(", {word} {}", amount(m3.abs()))
    });
    let then = match least.days_outside {
        _ if least.lost > 0 => "it stops all the same".to_owned(),
        0 => "then no day outside".to_owned(),
        days => format!("{} outside remain", plural(u64::from(days), "day")),
    };
    let solved = if of.foresight { ", SOLVED ON IT" } else { "" };
    let short = spare_m3.is_some_and(|m3| m3 < 0.0);
    (format!("- {case}: {needed}{apart}, {then}{solved}"), if short { Role::Outside } else { Role::Plain })
}
