//! A past season gone through again from its first cast: as it was set, doing nothing, and in full view of what came.
//!
//! Methods: `docs/methods.md`, section 9.

use std::collections::BTreeSet;
use std::sync::Arc;

use chrono::{Days as Span, NaiveDate};
use rayon::prelude::*;

use crate::mix::reference_days;
use crate::profile::Profile;
use crate::rank::{Criterion, Progress};
use crate::season::{Choosing, Plan, Run, Schedule, Setup, Skies, is_in_degrees, lost, passed, run, tallies};
use crate::series::{Daily, Days};
use crate::site::{Case, Strategy};
use crate::target::{DAM, Mark, Target, observed};
use crate::tasks::setting::as_it_was;
use crate::tasks::{Context, Failure};

use super::stood::Tellers;
use super::{Hindcast, Scored};

/// How the gates of a season gone through again are chosen.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
enum Way {
    AsSet,
    Nothing,
    Best,
    Thrift,
}

impl Way {
    fn words(self) -> &'static str {
        match self {
            Self::AsSet => "as it was set",
            Self::Nothing => "doing nothing: the gates of the first day, moved only where a limit forces it",
            Self::Best => "the best mix of each day",
            Self::Thrift => "cold water weighed over the whole season",
        }
    }

    /// What perfect hindsight is called where this is it.
    fn in_hindsight(self) -> String {
        match self {
            Self::AsSet => "perfect hindsight: nothing better than what was set".to_owned(),
            Self::Nothing => "perfect hindsight: nothing better than doing nothing".to_owned(),
            Self::Best | Self::Thrift => format!("perfect hindsight: {}", self.words()),
        }
    }
}

/// The last season whose days a plan tells that is over, or why there is none.
pub(super) fn hindcast(
    context: &Context,
    tellers: &Tellers,
    casts: &[Arc<Profile>],
    gauge: &Daily,
    progress: Progress,
) -> Result<Result<Hindcast, String>, Failure> {
    let season = match Season::of(context, tellers, casts) {
        Ok(season) => season,
        Err(why) => return Ok(Err(why)),
    };
    // of equal ones the first counts as hindsight
    let ways = [Way::AsSet, Way::Nothing, Way::Best, Way::Thrift];
    // the others take little: what thrift has done is told for all
    let tell = |way: Way, done: f64| progress(if way == Way::Thrift { done } else { 0.0 });
    let runs =
        ways.par_iter().map(|way| season.run(*way, &|done| tell(*way, done))).collect::<Option<Vec<_>>>();
    let Some(runs) = runs else {
        return if progress(1.0).is_break() {
            Err(Failure::Stopped)
        } else {
            Ok(Err(format!("the cast of {} shows no water", season.begins)))
        };
    };
    let scored: Vec<(Way, Scored)> =
        ways.into_iter().zip(&runs).map(|(way, run)| (way, season.scored(way.words(), run))).collect();
    let of = |wanted: Way| scored.iter().find(|(way, _)| *way == wanted).map(|(_, scored)| scored.clone());
    let (Some(as_set), Some(nothing)) = (of(Way::AsSet), of(Way::Nothing)) else {
        return Ok(Err("the season could not be gone through".into()));
    };
    // whoever sees all that comes also sees that what was set, or nothing at all, served best
    let order = |a: &Scored, b: &Scored| {
        (a.lost, a.days_outside)
            .cmp(&(b.lost, b.days_outside))
            .then(a.degree_days_c.total_cmp(&b.degree_days_c))
    };
    let best = scored.iter().min_by(|a, b| order(&a.1, &b.1));
    let named = |(way, scored): &(Way, Scored)| Scored { name: way.in_hindsight(), ..scored.clone() };
    let hindsight = best.map_or_else(|| as_set.clone(), named);
    Ok(Ok(Hindcast {
        days: (season.begins, season.ends),
        plan: season.plan.name.clone(),
        observed: season.observed(gauge),
        as_set,
        nothing,
        hindsight,
    }))
}

/// A season that is over, with all that tells its days.
struct Season<'a> {
    context: &'a Context,
    start: &'a Profile,
    begins: NaiveDate,
    ends: NaiveDate,
    plan: Plan,
    set: Arc<Schedule>,
    skies: Skies,
}

impl<'a> Season<'a> {
    fn of(context: &'a Context, tellers: &Tellers, casts: &'a [Arc<Profile>]) -> Result<Self, String> {
        let site = context.site();
        let date = |cast: &Profile| cast.taken.map(|taken| taken.with_timezone(&site.offset).date_naive());
        let found = tellers.over.iter().filter_map(|(plan, _)| {
            let (first, last) = plan.span()?;
            let begins = casts.iter().find(|cast| date(cast).is_some_and(|d| (first..last).contains(&d)))?;
            Some((plan, begins, date(begins)?, last))
        });
        let Some((plan, start, begins, ends)) = found.max_by_key(|(_, _, begins, ends)| (*ends, *begins))
        else {
            return Err(not_told(context, tellers));
        };
        let days = || begins.iter_days().take_while(|day| *day <= ends);
        let mut changes: Vec<(NaiveDate, Vec<crate::mix::Gate>)> = Vec::new();
        for day in days() {
            if let (Some(stood), _) = tellers.on(day)
                && changes.last().is_none_or(|last| last.1 != stood.gates)
            {
                changes.push((day, stood.gates));
            }
        }
        if changes.first().is_none_or(|first| first.0 != begins) {
            return Err(format!(
                "nothing tells how the gates stood on {begins}, when the season begins: log the decision of that day, or \
                 write a schedule of the plan's name into the folder `schedules`"
            ));
        }
        // as it was, nothing shifted
        let case = Case { name: "as told".into(), air_c: 0.0, wind: 1.0, inflow: 1.0, inflow_c: 0.0 };
        let skies = Skies::of_case(site, &context.conditions, &case, begins, ends)?;
        let told = plan.days.iter().filter(|day| (begins..=ends).contains(&day.date)).copied().collect();
        let set = Arc::new(Schedule { file: String::new(), changes });
        Ok(Self { context, start, begins, ends, plan: Plan { days: told, ..(**plan).clone() }, set, skies })
    }

    fn setup<'s>(&'s self, way: Way, now: Option<&'s crate::mix::Setting>) -> Setup<'s> {
        Setup {
            start: self.start,
            begins: self.begins,
            decides: self.begins,
            now,
            plan: &self.plan,
            skies: &self.skies,
            choosing: match way {
                Way::AsSet => Choosing::Schedule(self.set.clone()),
                Way::Nothing => Choosing::By(Strategy::Hold),
                Way::Best => Choosing::By(Strategy::Best),
                Way::Thrift => Choosing::By(Strategy::Thrift),
            },
            decide_days: self.context.site().season.decide_days,
            order: &Criterion::USUAL,
        }
    }

    /// `None` where it is stopped, or the cast shows no water.
    fn run(&self, way: Way, progress: Progress) -> Option<Run> {
        let first = self.set.changes.first().map_or(&[][..], |change| change.1.as_slice());
        let now = as_it_was(self.context.site(), self.start, first);
        match way {
            Way::AsSet => passed(&self.setup(way, None), progress),
            _ => run(&self.setup(way, Some(&now)), progress),
        }
    }

    fn scored(&self, name: &str, run: &Run) -> Scored {
        let site = &self.skies.site;
        let held = tallies(site, &self.skies.conditions, &run.days);
        let hard = held.into_iter().filter_map(|held| {
            let rule = site.targets.get(held.target).filter(|rule| counts(rule))?;
            Some((rule, held.temperature_days, held.oxygen_days))
        });
        let lost = usize::try_from(lost(&self.setup(Way::Nothing, None), run)).unwrap_or(usize::MAX);
        Scored { lost, ..scored(name, hard) }
    }

    /// What the gauge read on the days of the season; `None` where it tells none of them.
    fn observed(&self, gauge: &Daily) -> Option<Scored> {
        let (site, conditions) = (self.context.site(), &self.context.conditions);
        let days = |of: &Days| Days {
            days: of.days.range(self.begins..=self.ends).map(|(d, v)| (*d, *v)).collect(),
        };
        let station = Daily {
            temperature_c: days(&gauge.temperature_c),
            oxygen_mg_l: days(&gauge.oxygen_mg_l),
            oxygen_share: days(&gauge.oxygen_share),
            recorded: Some((self.begins, self.ends)),
            provisional: gauge.provisional,
        };
        let hard = site.targets.iter().filter(|rule| counts(rule)).map(|rule| {
            let dates = station.temperature_c.days.keys().copied();
            let reference = rule.reference.as_ref().map(|r| reference_days(site, r, conditions, dates));
            let valid = |date| rule.valid_on(date, site.year_type.as_deref());
            let of = observed(rule, &station, reference.as_ref(), site.coverage, valid);
            let oxygen = of.oxygen.or(of.oxygen_share);
            (
                rule,
                of.temperature.map(|h| h.days).unwrap_or_default(),
                oxygen.map(|h| h.days).unwrap_or_default(),
            )
        });
        let scored = scored("as the gauge read it", hard);
        (!station.temperature_c.days.is_empty()).then_some(scored)
    }
}

/// Whether a target counts: a hard one at the dam.
fn counts(rule: &Target) -> bool {
    !rule.soft && rule.point == DAM
}

type Marks = Vec<(NaiveDate, Mark)>;

/// Days outside any of the targets, and by how many degrees in all.
fn scored<'t>(name: &str, targets: impl Iterator<Item = (&'t Target, Marks, Marks)>) -> Scored {
    let (mut outside, mut judged) = (BTreeSet::new(), BTreeSet::new());
    let mut degree_days_c = 0.0;
    for (rule, temperature, oxygen) in targets {
        if is_in_degrees(rule.statistic) {
            degree_days_c += temperature.iter().filter_map(|(_, mark)| mark.by).sum::<f64>();
        }
        for (date, mark) in temperature.into_iter().chain(oxygen) {
            if mark.outside() {
                outside.insert(date);
            }
            if mark.by.is_some() {
                judged.insert(date);
            }
        }
    }
    Scored {
        name: name.to_owned(),
        days_outside: outside.len(),
        degree_days_c,
        judged: judged.len(),
        lost: 0,
    }
}

/// The days that no plan tells, and what to write.
fn not_told(context: &Context, tellers: &Tellers) -> String {
    let on = context.on.date_naive();
    let last = on.checked_sub_days(Span::new(1)).unwrap_or(on);
    let from = tellers
        .first()
        .filter(|first| *first < last)
        .map_or_else(String::new, |first| format!("{first} to "));
    format!(
        "no plan tells the inflow of {from}{last} with a cast among its days: write plans/past.csv, a row a day or a week: \
         date, the pool or the release, the inflow and its temperature"
    )
}
