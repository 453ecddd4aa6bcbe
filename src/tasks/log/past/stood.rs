//! How the gates stood on a day that has passed: by the log, else by a gate schedule of the days that are over.

use std::sync::Arc;

use chrono::{DateTime, FixedOffset, NaiveDate, NaiveTime, TimeDelta};

use crate::mix::Gate;
use crate::problem::Problem;
use crate::record::Decided;
use crate::season::{Plan, Schedule};
use crate::site::{SAME_OPENING, Site};
use crate::tasks::{Context, Given};

/// Share of the release that must have moved from one gate to another for the gates to count as changed (choice):
/// flows that are metered day by day drift by as much.
const SHIFTED_SHARE: f64 = 0.05;
/// Share by which the whole release must have changed (choice): zones grow with its cube root, so it then moves them by
/// less than a tenth.
const CHANGED_FLOW: f64 = 0.25;

/// Gates that stood.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct Stood {
    /// The decision that set them; `None` where a schedule tells.
    pub(super) decision: Option<u64>,
    /// Open gates with their flows.
    pub(super) gates: Vec<Gate>,
}

/// What tells how the gates stood.
pub(super) struct Tellers<'a> {
    site: &'a Site,
    decisions: Vec<(Decided<'a>, Vec<Gate>)>,
    /// Plans whose days are over, each with the schedule of its name where there is one.
    pub(super) over: Vec<(Arc<Plan>, Option<Arc<Schedule>>)>,
    /// What was assumed.
    pub(super) notes: Vec<Problem>,
}

impl<'a> Tellers<'a> {
    pub(super) fn of(context: &'a Context) -> Self {
        let (site, on) = (context.site(), context.on.date_naive());
        let mut notes = Vec::new();
        let gates = |decided: &Decided| {
            let (given, gone) = Given::logged(site, &decided.decision.chosen);
            let gate = |by: &crate::tasks::ByFlow| Gate {
                outlet: by.outlet,
                opening: by.opening.unwrap_or(1.0),
                flow_m3s: by.flow_m3s,
            };
            let flows = given.flows.iter().filter(|by| by.flow_m3s > 0.0).map(gate).collect();
            let words = format!("decision {} sets gates that the site no longer has", decided.id);
            let flag = Problem::flag("log-gates", format!("{words}: {}", gone.join(", ")), "");
            (flows, (!gone.is_empty()).then_some(flag))
        };
        let mut decisions = Vec::new();
        for decided in context.log.log.decisions() {
            let (flows, gone) = gates(&decided);
            notes.extend(gone);
            decisions.push((decided, flows));
        }
        let mut over = Vec::new();
        for listed in context.folder.plans() {
            let Some(plan) = listed.plan.clone().filter(|p| p.span().is_some_and(|s| s.1 <= on)) else {
                continue;
            };
            let read = context.folder.schedule_of(listed).and_then(Result::ok);
            over.push((plan, read.and_then(|read| read.schedule)));
        }
        Self { site, decisions, over, notes }
    }

    /// The first date that any of them tells.
    pub(super) fn first(&self) -> Option<NaiveDate> {
        let logged = self.decisions.iter().map(|(decided, _)| self.date(decided.decision.from));
        let scheduled = self.over.iter().filter_map(|(plan, schedule)| {
            let (begins, _) = plan.span()?;
            Some(schedule.as_ref()?.changes.first()?.0.max(begins))
        });
        logged.chain(scheduled).min()
    }

    /// The decisions, by the time from which they hold.
    pub(super) fn decisions(&self) -> impl Iterator<Item = &Decided<'a>> {
        self.decisions.iter().map(|(decided, _)| decided)
    }

    /// The decision whose gates stood at a moment.
    pub(super) fn decided(&self, at: DateTime<FixedOffset>) -> Option<&(Decided<'a>, Vec<Gate>)> {
        self.decisions.iter().rev().find(|(decided, _)| decided.stands(at))
    }

    /// How the gates stood at a moment.
    fn at(&self, at: DateTime<FixedOffset>) -> Option<Stood> {
        if let Some((decided, gates)) = self.decided(at) {
            return Some(Stood { decision: Some(decided.id), gates: gates.clone() });
        }
        let date = self.date(at);
        let gates = self.over.iter().find_map(|(plan, schedule)| {
            let (begins, ends) = plan.span()?;
            let inside = (begins..=ends).contains(&date);
            let changes = &schedule.as_ref().filter(|_| inside)?.changes;
            Some(changes.iter().take_while(|change| change.0 <= date).last()?.1.clone())
        })?;
        Some(Stood { decision: None, gates })
    }

    /// How they stood at noon of a day, and whether they were changed in its course.
    pub(super) fn on(&self, date: NaiveDate) -> (Option<Stood>, bool) {
        let at = |time: NaiveTime| date.and_time(time).and_local_timezone(self.site.offset).single();
        let (Some(begins), Some(noon)) = (at(NaiveTime::MIN), at(NOON)) else { return (None, false) };
        let stood = self.at(noon);
        let ends = begins + TimeDelta::days(1);
        let instant = TimeDelta::seconds(1);
        let begun = self
            .decisions()
            .map(|decided| decided.decision.from)
            .filter(|from| *from > begins && *from < ends);
        let by_log =
            begun.into_iter().any(|from| differ(self.at(from - instant).as_ref(), self.at(from).as_ref()));
        // a schedule tells the days, not the hour at which the crew came
        let eve = self.at(begins - instant);
        let morning = self.at(begins);
        let is_told = |stood: &Option<Stood>| stood.as_ref().is_some_and(|stood| stood.decision.is_none());
        let by_day =
            eve.is_some() && (is_told(&eve) || is_told(&morning)) && differ(eve.as_ref(), morning.as_ref());
        (stood, by_log || by_day)
    }

    fn date(&self, at: DateTime<FixedOffset>) -> NaiveDate {
        at.with_timezone(&self.site.offset).date_naive()
    }
}

/// The hour by which a cast counts for its day, and at which the gates are asked for (choice).
pub(super) const NOON: NaiveTime = match NaiveTime::from_hms_opt(12, 0, 0) {
    Some(noon) => noon,
    None => NaiveTime::MIN,
};

/// Whether gates stood otherwise: by the shares of the release that they carry, by the whole of it, or by their openings.
/// What is known on one side alone counts as a change.
pub(super) fn differ(a: Option<&Stood>, b: Option<&Stood>) -> bool {
    let (Some(a), Some(b)) = (a, b) else { return a.is_some() != b.is_some() };
    let total = |of: &Stood| of.gates.iter().map(|gate| gate.flow_m3s).sum::<f64>();
    let (before, after) = (total(a), total(b));
    if before.max(after) <= 0.0 {
        return false;
    }
    if (after - before).abs() > CHANGED_FLOW * before.max(after) {
        return true;
    }
    let share = |of: &Stood, outlet: usize, whole: f64| {
        of.gates.iter().filter(|g| g.outlet == outlet).map(|g| g.flow_m3s).sum::<f64>() / whole
    };
    let mut outlets: Vec<usize> = a.gates.iter().chain(&b.gates).map(|g| g.outlet).collect();
    outlets.sort_unstable();
    outlets.dedup();
    let moved =
        outlets.iter().map(|&outlet| (share(a, outlet, before) - share(b, outlet, after)).abs()).sum::<f64>();
    let turned = a.gates.iter().any(|gate| {
        b.gates
            .iter()
            .any(|other| other.outlet == gate.outlet && (other.opening - gate.opening).abs() > SAME_OPENING)
    });
    0.5 * moved > SHIFTED_SHARE || turned
}
