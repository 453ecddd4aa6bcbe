//! A season under way: day after day what is set, what is decided, and what the pool then does.
//!
//! Methods: `docs/methods.md`, section 8.

use std::sync::Arc;

use chrono::{NaiveDate, NaiveTime};

use crate::intake;
use crate::mix::limits::{self, Before, Check, Moves};
use crate::mix::{Asked, Blend, Day, Setting, checks, groups, release, resolve};
use crate::profile::{Column, Profile};
use crate::rank::Progress;
use crate::river::{self, Figures};
use crate::site::Site;
use crate::units::{DAY_S, say};

use super::ahead::{ahead, forcing};
use super::aims::asking;
use super::decide::{Choice, Chosen, Decision, NoMix, Why};
use super::layers::Layers;
use super::plan::PlanDay;
use super::run::{Ended, Run, SeasonDay, Setup};
use super::set::{Flowing, flowing};
use super::step::day;
use super::strategy::{Wants, changes_on, is_due, set_by, wants};

/// A release this near to none is none, m3/s (choice: round-off of the volume of a large pool).
const NOTHING_M3S: f64 = 1e-6;

/// A season under way.
#[derive(Clone)]
pub(super) struct Going<'a> {
    pub(super) setup: &'a Setup<'a>,
    /// The site under the air of the case, with the outages of the plan and the inflow of the day.
    site: Site,
    groups: Arc<Vec<Vec<usize>>>,
    ahead: Arc<Vec<PlanDay>>,
    layers: Layers,
    /// The first day on which gates may be moved: at once where nobody knows how they stand.
    pub(super) decides: NaiveDate,
    /// What is set, with the flows of the day it was decided.
    asked: Option<Asked>,
    /// Temperature of the last release, C.
    last_c: Option<f64>,
    /// Whether what arrives at the points is wanted.
    to_the_points: bool,
    /// Whether a decision was due on a day without a release.
    overdue: bool,
    pub(super) run: Run,
}

/// A day before anything is decided.
#[derive(Clone)]
pub(super) struct Morning {
    plan: PlanDay,
    release_m3s: f64,
    profile: Profile,
    /// What is set, as it would flow today, and the first limit it breaks.
    held: Option<(Flowing, Option<Check>)>,
}

impl Morning {
    /// The day.
    pub(super) fn date(&self) -> NaiveDate {
        self.plan.date
    }

    /// Whether nothing is to be released.
    fn is_closed(&self) -> bool {
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
            overdue: false,
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

    /// Goes through days that have passed: by the schedule, else by what is set now, whatever limit stood against it.
    pub(super) fn through_what_was(mut self, progress: Progress) -> Option<Run> {
        while self.is_on() {
            if progress(self.share_done()).is_break() {
                return None;
            }
            let date = self.ahead.get(self.run.days.len()).map(|plan| plan.date);
            if let Some(gates) = date.and_then(|date| set_by(self.setup, date)) {
                self.asked = Some(Asked::of(&self.site, &Setting::of(gates.clone())));
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
        let decided = self.why(&morning).map(|why| self.decision(&morning, why, progress)).transpose();
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
        let held = self.asked.as_ref().and_then(|asked| self.flows(asked, release_m3s, &profile, plan.date));
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

    /// What is asked, as it would flow on a day, and the first limit it breaks. `None` where it gives no water.
    fn flows(
        &self,
        asked: &Asked,
        release_m3s: f64,
        profile: &Profile,
        date: NaiveDate,
    ) -> Option<(Flowing, Option<Check>)> {
        let (site, pool_m) = (&self.site, profile.pool_m);
        let asked = asked.at_release(site, release_m3s, pool_m);
        let flowing = flowing(site, &self.groups, &profile.column, &asked, pool_m)?;
        let Flowing { setting, drawn, release } = &flowing;
        let checks = checks(site, &profile.column, setting, pool_m, date, drawn, release);
        let broken = checks.into_iter().find(Check::broken);
        Some((flowing, broken))
    }

    /// Why something is decided on a day; `None` where what is set stays.
    ///
    /// On a day without a release there is no water to choose: what is due then is decided on the next day with one,
    /// and only a schedule moves gates.
    pub(super) fn why(&self, morning: &Morning) -> Option<Why> {
        let date = morning.date();
        match (&morning.held, self.run.decisions.is_empty()) {
            _ if morning.is_closed() => {
                let is_set = date >= self.decides && changes_on(self.setup, date);
                let why = if self.run.decisions.is_empty() { Why::Begin } else { Why::Due };
                is_set.then_some(why)
            }
            (Some(_), true) if date < self.decides => None,
            (_, true) => Some(Why::Begin),
            (None, _) => Some(Why::Due),
            (Some(_), _) if self.overdue || is_due(self.setup, self.decides, date) => Some(Why::Due),
            (Some((_, broken)), _) => broken.map(Why::Forced),
        }
    }

    /// What is decided on a day for a reason.
    fn decision(&self, morning: &Morning, why: Why, progress: Progress) -> Result<Decision, NoMix> {
        let date = morning.date();
        let wanted = match wants(self.setup, self.decides, &self.site, date, why) {
            Wants::Best(aim) => return self.best(morning, why, aim, progress),
            Wants::Stay => self.asked.clone(),
            Wants::These(asked) => Some(asked),
        };
        if let (true, Some(asked)) = (morning.is_closed(), &wanted) {
            return Ok(decision(date, why, self.without_water(morning, asked)));
        }
        let flows = |asked: &Asked| self.flows(asked, morning.release_m3s, &morning.profile, date);
        let found = wanted.and_then(|asked| Some((flows(&asked)?, asked)));
        match found {
            Some(((_, None), asked)) => {
                let scaled = asked.at_release(&self.site, morning.release_m3s, morning.profile.pool_m);
                let chosen = self.on(morning, 0.0, |choice| choice.given(&scaled, progress))?;
                // a flood may leave its gates nothing to pass: they are kept as they were asked
                let is_left = scaled.totals.iter().any(|total| total.1 > 0.0)
                    || scaled.direct.iter().any(|g| g.flow_m3s > 0.0 && !self.spills(g.outlet));
                Ok(decision(date, why, if is_left { chosen } else { Chosen { asked, ..chosen } }))
            }
            Some(((_, Some(check)), _)) => self.best(morning, Why::Forced(check), 0.0, progress),
            None => self.best(morning, why, 0.0, progress),
        }
    }

    /// Gates moved on a day without a release: those that would stand otherwise if water flowed as asked.
    fn without_water(&self, morning: &Morning, asked: &Asked) -> Chosen {
        let (site, profile) = (&self.site, &morning.profile);
        let sum = |asked: &Asked| asked.parts().iter().map(|part| part.1).sum::<f64>();
        let flow_m3s = sum(asked).max(self.asked.as_ref().map_or(0.0, sum));
        let full = |asked: &Asked| {
            let asked = asked.at_release(site, flow_m3s, profile.pool_m);
            resolve(site, &profile.column, &self.groups, &asked, profile.pool_m)
        };
        let to = full(asked);
        let (moves, moved) = self.asked.as_ref().map(full).map_or_else(Default::default, |now| {
            (limits::moves(site, &now, &to, &mut Vec::new()), limits::moved(site, &now, &to))
        });
        Chosen { asked: asked.clone(), moves, moved, attainable_c: None, past: Vec::new() }
    }

    fn spills(&self, outlet: usize) -> bool {
        self.site.outlets.get(outlet).is_some_and(intake::spills_by_itself)
    }

    fn best(&self, morning: &Morning, why: Why, aim: f64, progress: Progress) -> Result<Decision, NoMix> {
        let chosen = self.on(morning, aim, |choice| choice.best(progress))?;
        Ok(decision(morning.date(), why, chosen))
    }

    /// Every decision there is, where they are no more than so many.
    pub(super) fn every(
        &self,
        morning: &Morning,
        why: Why,
        most: usize,
        progress: Progress,
    ) -> Result<Option<Vec<Decision>>, NoMix> {
        let every = self.on(morning, 0.0, |choice| choice.every(most, progress))?;
        let decisions = |every: Vec<Chosen>| {
            every.into_iter().map(|chosen| decision(morning.date(), why, chosen)).collect()
        };
        Ok(every.map(decisions))
    }

    /// What a mix of the day is decided on, with an aim.
    fn on<T>(&self, morning: &Morning, aim: f64, ask: impl FnOnce(&Choice) -> T) -> T {
        let day = Day::new(&self.site, morning.date(), self.setup.skies.conditions.clone());
        let shut = Setting::default();
        let is_shut = |asked: &Asked| asked.parts().iter().all(|part| part.1 <= 0.0);
        let now = morning.held.as_ref().map(|held| &held.0.setting);
        let choice = Choice {
            site: &self.site,
            groups: &self.groups,
            profile: &morning.profile,
            day: &asking(day, &self.site, aim),
            blocks: [(1.0, morning.release_m3s)],
            now: now.or_else(|| self.asked.as_ref().is_some_and(is_shut).then_some(&shut)),
            // the change of the flow is the plan's
            before: Before { flow_m3s: Some(morning.release_m3s), temperature_c: self.last_c },
            order: self.setup.order,
        };
        ask(&choice)
    }

    /// Goes through a day with what was decided, or with what is set.
    pub(super) fn pass(&mut self, morning: Morning, decided: Option<Decision>) {
        let (date, is_closed) = (morning.date(), morning.is_closed());
        let Morning { plan, release_m3s, profile, mut held } = morning;
        self.overdue |= is_closed && is_due(self.setup, self.decides, date);
        if let Some(decision) = decided {
            held = self.flows(&decision.asked, release_m3s, &profile, date);
            self.asked = Some(decision.asked.clone());
            self.run.decisions.push(decision);
            self.overdue = false;
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

fn decision(date: NaiveDate, why: Why, chosen: Chosen) -> Decision {
    let Chosen { asked, moves, moved, attainable_c, past } = chosen;
    let Moves { count, crew_hours, lead_days, .. } = moves;
    Decision { date, why, asked, moves: count, moved, crew_hours, lead_days, attainable_c, past }
}
