//! What is decided on a day of a season under way.
//!
//! Methods: `docs/methods.md`, section 8.

use chrono::NaiveDate;

use crate::intake;
use crate::mix::limits::{self, Before, Check, Moves};
use crate::mix::{Asked, Day, Setting, checks, resolve};
use crate::profile::Profile;
use crate::rank::Progress;
use crate::site::{Outage, Reserved, SAME_OPENING, Site};

use super::aims::asking;
use super::called::{called, waiting};
use super::decide::{Choice, Chosen, Decision, NoMix, Why};
use super::going::{Going, Morning, NOTHING_M3S};
use super::set::{Flowing, flowing};
use super::strategy::{Wants, changes_on, wants};

/// What there is to choose; `None` where it is more than was asked for.
type Found<T> = Result<Option<Vec<T>>, NoMix>;

impl Going<'_> {
    /// What is asked, as it would flow on a day at a site, and the first limit it breaks. `None` where it gives no water.
    pub(super) fn flows(
        &self,
        site: &Site,
        asked: &Asked,
        release_m3s: f64,
        profile: &Profile,
        date: NaiveDate,
    ) -> Option<(Flowing, Option<Check>)> {
        let pool_m = profile.pool_m;
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
            (Some((_, broken)), _) => self.called(date).or(broken.map(Why::Forced)),
        }
    }

    /// What calls for a decision on a day, and what did on days without a release before it.
    pub(super) fn called(&self, date: NaiveDate) -> Option<Why> {
        self.overdue.or_else(|| called(self.setup, &self.site, self.decides, date))
    }

    /// What is decided on a day for a reason; `None` where nothing can be done about it before the next.
    pub(super) fn decision(
        &self,
        morning: &Morning,
        why: Why,
        progress: Progress,
    ) -> Result<Option<Decision>, NoMix> {
        let date = morning.date();
        let wanted = match wants(self.setup, self.decides, &self.site, date, why) {
            Wants::Best(aim) => return self.best(morning, why, aim, progress),
            Wants::Stay => self.asked.clone(),
            Wants::These(asked) => Some(asked),
        };
        if let (true, Some(asked)) = (morning.is_closed(), &wanted) {
            return Ok(Some(decision(date, why, self.without_water(morning, asked))));
        }
        let flows =
            |asked: &Asked| self.flows(self.site_today(), asked, morning.release_m3s, &morning.profile, date);
        let found = wanted.and_then(|asked| Some((flows(&asked)?, asked)));
        match found {
            Some(((_, None), asked)) => Ok(Some(decision(date, why, self.given(morning, asked, progress)?))),
            Some(((_, Some(check)), _)) => self.best(morning, Why::Forced(check), 0.0, progress),
            None => self.best(morning, why, 0.0, progress),
        }
    }

    /// What is asked whatever else could be.
    fn given(&self, morning: &Morning, asked: Asked, progress: Progress) -> Result<Chosen, NoMix> {
        let scaled = asked.at_release(&self.site, morning.release_m3s, morning.profile.pool_m);
        let chosen = self.on(&self.site, &[], morning, 0.0, |choice| choice.given(&scaled, progress))?;
        // a flood may leave its gates nothing to pass: they are kept as they were asked
        let is_left = scaled.totals.iter().any(|total| total.1 > 0.0)
            || scaled.direct.iter().any(|g| g.flow_m3s > 0.0 && !self.spills(g.outlet));
        Ok(if is_left { chosen } else { Chosen { asked, ..chosen } })
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

    fn best(
        &self,
        morning: &Morning,
        why: Why,
        aim: f64,
        progress: Progress,
    ) -> Result<Option<Decision>, NoMix> {
        let best = |choice: &Choice| Ok(Some(vec![choice.best(progress)?]));
        let decided = self.decisions(morning, why, aim, &best, progress)?;
        Ok(decided.and_then(|one| one.into_iter().next()).flatten())
    }

    /// Every decision there is, where they are no more than so many.
    pub(super) fn every(
        &self,
        morning: &Morning,
        why: Why,
        most: usize,
        progress: Progress,
    ) -> Found<Option<Decision>> {
        self.decisions(morning, why, 0.0, &|choice| choice.every(most, progress), progress)
    }

    /// The decisions that `choose` finds. Gates whose crew cannot have come stay as they are, and those that an outage
    /// takes on the next day are not used; where that leaves no mix what is set stays, without a decision where only
    /// that outage called for one; where it cannot stay either, all are moved.
    fn decisions(
        &self,
        morning: &Morning,
        why: Why,
        aim: f64,
        choose: &dyn Fn(&Choice) -> Found<Chosen>,
        progress: Progress,
    ) -> Found<Option<Decision>> {
        let date = morning.date();
        let all = |found: Option<Vec<Chosen>>| {
            found.map(|every| every.into_iter().map(|one| Some(decision(date, why, one))).collect())
        };
        let now = morning.held.as_ref().map(|held| &held.0.setting);
        let waiting = now.map_or_else(Vec::new, |_| waiting(self.setup, &self.site, date));
        if waiting.is_empty() && self.eve.is_none() {
            return self.on(&self.site, &[], morning, aim, choose).map(all);
        }
        let mut bound = self.site_today().clone();
        for &outlet in &waiting {
            stays(&mut bound, outlet, now, date);
        }
        match self.on(&bound, &waiting, morning, aim, choose) {
            Err(NoMix::Allowed(..)) => {}
            found if waiting.is_empty() => return found.map(all),
            found => {
                // what is within reach is told however many days the change to it takes
                let reach =
                    self.on(self.site_today(), &[], morning, aim, |choice| choice.reach_c(progress))?;
                let told = |one: Chosen| Chosen { attainable_c: reach, ..one };
                return found.map(|found| all(found.map(|every| every.into_iter().map(told).collect())));
            }
        }
        let flows = |asked| self.flows(&self.site, asked, morning.release_m3s, &morning.profile, date);
        match self.asked.as_ref().filter(|asked| flows(asked).is_some_and(|held| held.1.is_none())) {
            Some(_) if matches!(why, Why::Forced(_)) => Ok(Some(vec![None])),
            Some(asked) => Ok(all(Some(vec![self.given(morning, asked.clone(), progress)?]))),
            None => self.on(&self.site, &[], morning, aim, choose).map(all),
        }
    }

    /// The site of the day: what an outage takes on the next day is not used any more, so that it stands as it should
    /// when the outage begins.
    pub(super) fn site_today(&self) -> &Site {
        self.eve.as_ref().unwrap_or(&self.site)
    }

    /// What a mix of the day is decided on, at a site where some outlets do not move, with an aim.
    fn on<T>(
        &self,
        site: &Site,
        waiting: &[usize],
        morning: &Morning,
        aim: f64,
        ask: impl FnOnce(&Choice) -> T,
    ) -> T {
        let day = Day::new(&self.site, morning.date(), self.setup.skies.conditions.clone());
        let shut = Setting::default();
        let is_shut = |asked: &Asked| asked.parts().iter().all(|part| part.1 <= 0.0);
        let now = morning.held.as_ref().map(|held| &held.0.setting);
        let choice = Choice {
            site,
            groups: &self.groups,
            profile: &morning.profile,
            day: &asking(day, &self.site, aim),
            blocks: [(1.0, morning.release_m3s)],
            now: now.or_else(|| self.asked.as_ref().is_some_and(is_shut).then_some(&shut)),
            // the change of the flow is the plan's
            before: Before { flow_m3s: Some(morning.release_m3s), temperature_c: self.last_c },
            order: self.setup.order,
            waiting,
        };
        ask(&choice)
    }
}

/// Where outages begin on the day after a date, the site with them from that date on.
pub(super) fn eve_of(site: &Site, date: NaiveDate) -> Option<Site> {
    let tomorrow = date.succ_opt()?;
    site.limits.outages.iter().any(|outage| outage.from == tomorrow).then(|| {
        let mut eve = site.clone();
        eve.limits.outages.iter_mut().filter(|o| o.from == tomorrow).for_each(|o| o.from = date);
        eve
    })
}

/// Binds an outlet to stay as it stands in a setting: shut as if it were out of use, or in its position with a flow.
fn stays(site: &mut Site, outlet: usize, now: Option<&Setting>, date: NaiveDate) {
    let gate = now.and_then(|now| now.gates.iter().find(|g| g.outlet == outlet && now.stands_open(site, g)));
    let reason = String::new();
    let Some((gate, o)) = gate.zip(site.outlets.get_mut(outlet)) else {
        site.limits.outages.push(Outage { outlet, from: date, to: Some(date), reason });
        return;
    };
    o.positions.retain(|p| p.opening <= 0.0 || (p.opening - gate.opening).abs() < SAME_OPENING);
    site.limits.reserved.push(Reserved { outlet, flow_m3s: NOTHING_M3S, reason });
}

fn decision(date: NaiveDate, why: Why, chosen: Chosen) -> Decision {
    let Chosen { asked, moves, moved, attainable_c, past } = chosen;
    let Moves { count, crew_hours, lead_days, .. } = moves;
    Decision { date, why, asked, moves: count, moved, crew_hours, lead_days, attainable_c, past }
}
