//! A season under way: day after day what is set, what is decided, and what the pool then does.
//!
//! Methods: `docs/methods.md`, section 8.

use std::sync::Arc;

use chrono::{NaiveDate, NaiveTime};

use crate::mix::limits::Check;
use crate::mix::{Asked, Blend, groups, release};
use crate::profile::{Column, Profile};
use crate::rank::Progress;
use crate::river::{self, Figures};
use crate::site::Site;
use crate::units::{DAY_S, say};

use super::ahead::{ahead, forcing};
use super::decide::{Decision, NoMix, Why};
use super::deciding::eve_of;
use super::layers::Layers;
use super::plan::PlanDay;
use super::run::{Ended, Run, SeasonDay, Setup};
use super::set::Flowing;
use super::step::day;
use super::strategy::set_by;

/// A release this near to none is none, m3/s (choice: round-off of the volume of a large pool).
pub(super) const NOTHING_M3S: f64 = 1e-6;

/// A season under way.
#[derive(Clone)]
pub(super) struct Going<'a> {
    pub(super) setup: &'a Setup<'a>,
    /// The site under the air of the case, with the outages of the plan and the inflow of the day.
    pub(super) site: Site,
    pub(super) groups: Arc<Vec<Vec<usize>>>,
    ahead: Arc<Vec<PlanDay>>,
    layers: Layers,
    /// The first day on which gates may be moved: at once where nobody knows how they stand.
    pub(super) decides: NaiveDate,
    /// What is set, with the flows of the day it was decided.
    pub(super) asked: Option<Asked>,
    /// Temperature of the last release, C.
    pub(super) last_c: Option<f64>,
    /// Whether what arrives at the points is wanted.
    to_the_points: bool,
    /// What called for a decision on a day without a release.
    pub(super) overdue: Option<Why>,
    /// The site with the outages of the next day, on days before one begins.
    pub(super) eve: Option<Site>,
    pub(super) run: Run,
}

/// A day before anything is decided.
#[derive(Clone)]
pub(super) struct Morning {
    plan: PlanDay,
    pub(super) release_m3s: f64,
    pub(super) profile: Profile,
    /// What is set, as it would flow today, and the first limit it breaks.
    pub(super) held: Option<(Flowing, Option<Check>)>,
}

impl Morning {
    /// The day.
    pub(super) fn date(&self) -> NaiveDate {
        self.plan.date
    }

    /// Whether nothing is to be released.
    pub(super) fn is_closed(&self) -> bool {
        self.release_m3s <= 0.0
    }
}

impl<'a> Going<'a> {
    /// A season before its first day. `None` for a cast without water.
    pub(super) fn new(setup: &'a Setup<'a>) -> Option<Self> {
        let mut site = (*setup.skies.site).clone();
        site.limits.outages.extend(setup.plan.outages.iter().cloned());
        // how much leaves in all, and how far the pool falls, is the plan's: no mix changes it
        (site.release.min_m3s, site.release.max_m3s, site.limits.drawdown_m_per_day) = (None, None, None);
        let layers = Layers::of_profile(&site, setup.start, site.season.layer_m)?;
        let to_the_points = site.river.as_ref().is_some_and(|river| !river.points.is_empty());
        let run = Run {
            plan: setup.plan.name.clone(),
            case: setup.skies.case.name.clone(),
            strategy: setup.choosing.name(),
            start: layers.clone(),
            days: Vec::new(),
            decisions: Vec::new(),
            ended: None,
            aims: None,
        };
        Some(Self {
            ahead: Arc::new(ahead(setup, layers.pool_m(&site.pool))),
            groups: Arc::new(groups(&site)),
            decides: if setup.now.is_some() { setup.decides } else { setup.begins },
            asked: setup.now.map(|now| Asked::of(&site, now)),
            last_c: None,
            to_the_points,
            overdue: None,
            eve: None,
            layers,
            site,
            run,
            setup,
        })
    }

    /// Whether a day is still to come.
    pub(super) fn is_on(&self) -> bool {
        self.run.ended.is_none() && self.run.days.len() < self.ahead.len()
    }

    /// Share of the days gone through.
    pub(super) fn share_done(&self) -> f64 {
        self.run.days.len() as f64 / self.ahead.len().max(1) as f64
    }

    /// Goes through the days that are left. `None` where the caller stops it.
    pub(super) fn finished(mut self, progress: Progress) -> Option<Run> {
        self.through(NaiveDate::MAX, progress)?;
        Some(self.run)
    }

    /// Goes through the days up to a date. `None` where the caller stops it.
    pub(super) fn through(&mut self, last: NaiveDate, progress: Progress) -> Option<()> {
        let is_due = |next: &PlanDay| next.date <= last;
        while self.is_on() && self.ahead.get(self.run.days.len()).is_some_and(is_due) {
            let done = self.share_done();
            if progress(done).is_break() {
                return None;
            }
            // whoever looks on is not told how far a single decision is
            self.next_day(&|_| progress(done))?;
        }
        Some(())
    }

    /// The same season with other water in the pool.
    pub(super) fn with(&self, layers: Layers) -> Self {
        Self { layers, ..self.clone() }
    }

    /// Goes through days that have passed: by the schedule, its flows as they are told, also those of a well; else by what
    /// is set now. Whatever limit stood against it.
    pub(super) fn through_what_was(mut self, progress: Progress) -> Option<Run> {
        while self.is_on() {
            if progress(self.share_done()).is_break() {
                return None;
            }
            let date = self.ahead.get(self.run.days.len()).map(|plan| plan.date);
            if let Some(gates) = date.and_then(|date| set_by(self.setup, date)) {
                self.asked = Some(Asked { direct: gates.clone(), ..Asked::default() });
            }
            if let Some(morning) = self.morning() {
                self.pass(morning, None);
            }
        }
        Some(self.run)
    }

    /// Goes through one day. `None` where the caller stops it.
    fn next_day(&mut self, progress: Progress) -> Option<()> {
        let Some(morning) = self.morning() else { return Some(()) };
        let decided = self.why(&morning).map_or(Ok(None), |why| self.decision(&morning, why, progress));
        match decided {
            Ok(decided) => self.pass(morning, decided),
            Err(NoMix::Cancelled) => return None,
            Err(NoMix::Allowed(check, words)) => self.end(morning.date(), words, check),
        }
        Some(())
    }

    /// The next day before anything is decided; the season ends where it cannot begin.
    pub(super) fn morning(&mut self) -> Option<Morning> {
        let plan = *self.ahead.get(self.run.days.len())?;
        self.site.inflow_m3s = Some(plan.inflow_m3s);
        let release_m3s = self.release_m3s(&plan);
        if release_m3s < 0.0 {
            let words = format!(
                "nothing is left to release: for the pool to be where it is planned, {} more would have to come in",
                say::m3s(-release_m3s, 2)
            );
            self.end(plan.date, words, None);
            return None;
        }
        let at = plan.date.and_time(NaiveTime::MIN).and_local_timezone(self.site.offset).single();
        let Some(profile) = at.and_then(|at| self.layers.profile(&self.site, at)) else {
            self.end(plan.date, "the pool holds no water".into(), None);
            return None;
        };
        self.eve = eve_of(&self.site, plan.date);
        let flows = |asked| self.flows(self.site_today(), asked, release_m3s, &profile, plan.date);
        let held = self.asked.as_ref().and_then(flows);
        if self.last_c.is_none() {
            self.last_c = held.as_ref().map(|held| held.0.release.temperature_c);
        }
        Some(Morning { plan, release_m3s, profile, held })
    }

    /// What a day is to release, m3/s; below zero where the inflow cannot fill the pool as far as is planned.
    fn release_m3s(&self, plan: &PlanDay) -> f64 {
        let pool = &self.site.pool;
        let by_pool = |to_m: f64| {
            let gain_m3 = pool.volume_m3(to_m) - pool.volume_m3(pool.bed_m) - self.layers.volume_m3();
            plan.inflow_m3s - gain_m3 / DAY_S
        };
        let release_m3s = plan.release_m3s.or_else(|| plan.pool_m.map(by_pool)).unwrap_or_default();
        if release_m3s.abs() < NOTHING_M3S { 0.0 } else { release_m3s }
    }

    /// Goes through a day with what was decided, or with what is set.
    pub(super) fn pass(&mut self, morning: Morning, decided: Option<Decision>) {
        let (date, is_closed) = (morning.date(), morning.is_closed());
        let Morning { plan, release_m3s, profile, mut held } = morning;
        self.overdue = if is_closed { self.called(date) } else { self.overdue };
        if let Some(decision) = decided {
            held = self.flows(&self.site, &decision.asked, release_m3s, &profile, date);
            self.asked = Some(decision.asked.clone());
            self.run.decisions.push(decision);
            self.overdue = None;
        }
        let (gates, drawn) = match held {
            Some((Flowing { setting, drawn, .. }, _)) => (setting.gates, drawn),
            None if is_closed => (Vec::new(), Vec::new()),
            None => return self.end(date, "what is set gives no water".into(), None),
        };
        let sky = self.setup.skies.days.get(&date).copied();
        let forcing = forcing(&plan, sky, self.layers.layers.last());
        let levels = |_: &Column, _: f64| drawn.iter().map(|d| d.level.clone()).collect();
        let stepped = match day(&mut self.layers, &self.site, &forcing, &levels) {
            Ok(stepped) => stepped,
            Err(unbalanced) => return self.end(date, unbalanced.words, None),
        };
        let left = release(&stepped.drawn).map(|left| left.aerated(&self.site, &stepped.drawn, 0.5));
        if left.is_none() && !is_closed {
            return self.end(date, "what is set gives no water".into(), None);
        }
        self.last_c = left.map(|left| left.temperature_c).or(self.last_c);
        self.widen(date, left.map(|left| left.temperature_c));
        self.run.days.push(SeasonDay {
            date,
            pool_m: self.layers.pool_m(&self.site.pool),
            inflow_m3s: plan.inflow_m3s,
            gates,
            drawn: stepped.drawn,
            release: left,
            points: left.and_then(|left| self.arriving(date, &left)),
            layers: self.layers.clone(),
            balance: stepped.balance,
            overturned: stepped.overturned,
        });
    }

    /// What a day of decision releases is within reach of it: the pool of the day differs a little from its morning's.
    fn widen(&mut self, date: NaiveDate, release_c: Option<f64>) {
        let decision = self.run.decisions.last_mut().filter(|decision| decision.date == date);
        let range = decision.and_then(|decision| decision.attainable_c.as_mut());
        if let (Some([low, high]), Some(release_c)) = (range, release_c) {
            (*low, *high) = (low.min(release_c), high.max(release_c));
        }
    }

    /// What arrives at the points of the river, where there are any.
    fn arriving(&self, date: NaiveDate, release: &Blend) -> Option<Vec<Figures>> {
        let part = river::Part {
            hours: 24.0,
            flow_m3s: release.flow_m3s,
            temperature_c: release.temperature_c,
            oxygen_mg_l: release.oxygen_below_mg_l,
        };
        let conditions = &self.setup.skies.conditions;
        let course =
            self.to_the_points.then(|| river::course(&self.site, conditions, date, &[part])).flatten()?;
        Some(course.points.into_iter().map(|at| at.figures).collect())
    }

    pub(super) fn end(&mut self, date: NaiveDate, words: String, check: Option<Check>) {
        self.run.ended = Some(Ended { date, words, check });
    }
}
