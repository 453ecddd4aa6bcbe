//! What a day calls a decision for, besides a limit that is broken.
//!
//! Methods: `docs/methods.md`, section 8.

use chrono::NaiveDate;

use crate::mix::limits::notice;
use crate::site::{Outage, Outlet, Site};
use crate::target::Target;

use super::decide::{Decision, Why};
use super::run::{Choosing, Setup};
use super::strategy::changes_on;

/// What calls for a decision on a date: rules that change, an outage that is over, a crew that can come, then the days
/// that have passed. `None` where nothing does.
pub(super) fn called(setup: &Setup, site: &Site, decides: NaiveDate, date: NaiveDate) -> Option<Why> {
    let first = || {
        rule(site, date)
            .or_else(|| over(site, date).next().map(Why::OutageOver))
            .or_else(|| crew(setup, site, date))
    };
    first().or_else(|| is_due(setup, decides, date).then_some(Why::Due))
}

/// Whether something is decided on a date because its time has come.
fn is_due(setup: &Setup, decides: NaiveDate, date: NaiveDate) -> bool {
    let from = if let Choosing::Held(_, until) = &setup.choosing { *until } else { decides };
    let passed = (date - from).num_days();
    let is_turn = passed >= 0 && passed % i64::from(setup.decide_days.max(1)) == 0;
    is_turn || changes_on(setup, date)
}

/// A hard rule that begins on a date, else one whose last day was the day before.
fn rule(site: &Site, date: NaiveDate) -> Option<Why> {
    let before = date.pred_opt()?;
    let changes = |begins: bool| {
        let is_one = |rule: &Target| {
            let on = |date| rule.valid_on(date, site.year_type.as_deref());
            !rule.soft && on(date) == begins && on(before) != begins
        };
        let target = site.targets.iter().position(is_one)?;
        Some(Why::Rule { target, begins })
    };
    changes(true).or_else(|| changes(false))
}

/// The outlets whose outage ended the day before a date, in the order of the site.
fn over(site: &Site, date: NaiveDate) -> impl Iterator<Item = usize> + '_ {
    let outages = &site.limits.outages;
    let ended = move |o: &Outage| o.to.and_then(|to| to.succ_opt()) == Some(date);
    let of = |outlet: usize| outages.iter().filter(move |o| o.outlet == outlet);
    (0..site.outlets.len()).filter(move |&o| of(o).any(ended) && !of(o).any(|out| out.covers(date)))
}

/// An outlet whose crew can come from a date on.
fn crew(setup: &Setup, site: &Site, date: NaiveDate) -> Option<Why> {
    site.outlets.iter().position(|o| comes(setup, o) == Some(date)).map(Why::Crew)
}

/// The first day on which the crew of an outlet can come: it is told no sooner than gates may be moved. `None` where it
/// needs no notice, and where nobody knows how the gates stand.
fn comes(setup: &Setup, outlet: &Outlet) -> Option<NaiveDate> {
    setup.now?;
    setup.decides.checked_add_days(notice(outlet.crew.lead_days)?)
}

/// Outlets whose crew cannot have come yet on a date.
pub(super) fn waiting(setup: &Setup, site: &Site, date: NaiveDate) -> Vec<usize> {
    let waits = |o: &Outlet| comes(setup, o).is_some_and(|comes| date < comes);
    site.outlets.iter().enumerate().filter(|(_, o)| waits(o)).map(|(outlet, _)| outlet).collect()
}

/// What called for a decision, in words; `None` where its time had come, or a limit was broken.
pub(super) fn because(site: &Site, decision: &Decision) -> Option<String> {
    match decision.why {
        Why::Begin | Why::Due | Why::Forced(_) => None,
        Why::Rule { target, begins } => {
            let rule = site.targets.get(target)?;
            Some(format!("`{}` {}", rule.name, if begins { "begins" } else { "has ended" }))
        }
        Why::OutageOver(_) => {
            let names: Vec<String> =
                over(site, decision.date).map(|o| format!("`{}`", site.outlets[o].name)).collect();
            Some(format!("the outage of {} is over", names.join(", ")))
        }
        Why::Crew(_) => Some("a crew can come from this day on".to_owned()),
    }
}
