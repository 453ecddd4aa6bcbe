//! The day a setting is judged for: what every rule asks of it, by what the folder tells of the river.
//!
//! Methods: `docs/methods.md`, section 7.

use std::sync::Arc;

use chrono::{Datelike, NaiveDate};

use crate::river::Conditions;
use crate::series::{Daily, Day as DayOf, Days};
use crate::site::{Site, Surface};
use crate::target::{Air, DAM, Known, Reference, Target, Today, today};
use crate::weather::equilibrium_c;

/// A reference whose record ends before the day is held for so many days (choice).
const HELD_DAYS: i64 = 3;

/// A date with what is known around the river.
#[derive(Debug, Clone)]
pub struct Day {
    /// The date.
    pub date: NaiveDate,
    /// What the folder tells beside the site and its casts; without it only the dam is judged, and no day before.
    pub conditions: Option<Arc<Conditions>>,
    /// What the rules ask, where that is already known.
    asked: Option<Arc<[RuleToday]>>,
}

impl From<NaiveDate> for Day {
    fn from(date: NaiveDate) -> Self {
        Self { date, conditions: None, asked: None }
    }
}

impl From<&Self> for Day {
    fn from(day: &Self) -> Self {
        day.clone()
    }
}

/// What one rule asks of the day.
#[derive(Debug, Clone, PartialEq)]
pub struct RuleToday {
    /// Index in the site's targets.
    pub target: usize,
    /// Index in the points of the site's river; `None` for the dam.
    pub point: Option<usize>,
    /// What it asks of the temperature, or why that cannot be said.
    pub today: Result<Today, String>,
    /// What it asks of the oxygen.
    pub air: Option<Air>,
}

impl Day {
    /// A date with what is known around the river, made ready for many settings.
    pub fn new(site: &Site, date: NaiveDate, conditions: Arc<Conditions>) -> Self {
        let asked = asked(site, date, Some(&conditions));
        Self { date, conditions: Some(conditions), asked: Some(asked) }
    }

    /// The same day with other wants of its rules, in the order of [`rules`](Self::rules).
    #[must_use]
    pub fn asking(&self, site: &Site, change: impl Fn(&mut RuleToday)) -> Self {
        let mut asked = self.rules(site).to_vec();
        asked.iter_mut().for_each(change);
        Self { asked: Some(asked.into()), ..self.clone() }
    }

    /// What every rule valid on the date asks, in the order of the site.
    pub fn rules(&self, site: &Site) -> Arc<[RuleToday]> {
        self.asked.clone().unwrap_or_else(|| asked(site, self.date, self.conditions.as_deref()))
    }
}

/// What every rule valid on a date asks.
fn asked(site: &Site, date: NaiveDate, conditions: Option<&Conditions>) -> Arc<[RuleToday]> {
    let rules: Vec<(usize, &Target)> = site.targets_on(date).collect();
    // the days of a record serve every rule of its point
    let mut points: Vec<&str> = rules.iter().map(|(_, rule)| rule.point.as_str()).collect();
    points.sort_unstable();
    points.dedup();
    let record = |point: &str| Some(conditions?.observed.get(point)?.daily(site.offset, site.coverage));
    let days: Vec<(&str, Option<Daily>)> = points.into_iter().map(|p| (p, record(p))).collect();
    let one = |(target, rule): (usize, &Target)| {
        let known_days = days.iter().find(|d| d.0 == rule.point).and_then(|d| d.1.as_ref());
        let of_stream = rule.reference.as_ref().and_then(|r| stream(site, r, conditions));
        let reference = |day: NaiveDate| {
            reference(site, rule.reference.as_ref()?, of_stream.as_ref(), conditions, day, date)
        };
        let known = Known { days: known_days, reference: &reference, coverage: site.coverage };
        let points = site.river.as_ref().map_or(&[][..], |river| &river.points);
        let point = points.iter().position(|p| p.name == rule.point).filter(|_| rule.point != DAM);
        let mut today = today(rule, date, known);
        if let (Ok(today), Some(Reference::Stream(name))) = (&mut today, &rule.reference)
            && let Some(from) = of_stream.as_ref().and_then(|days| held_from(days, date))
        {
            let held = format!("{name} is taken as on {from}: its record does not tell of this day");
            today.words = Some(today.words.take().map_or(held.clone(), |words| format!("{words}; {held}")));
        }
        RuleToday { target, point, today, air: Air::of(rule, date, known) }
    };
    rules.into_iter().map(one).collect()
}

/// The days that the series of a reference tells.
fn stream(site: &Site, reference: &Reference, conditions: Option<&Conditions>) -> Option<Days> {
    let Reference::Stream(name) = reference else { return None };
    let conditions = conditions?;
    let record = conditions.streams.get(name).or_else(|| conditions.observed.get(name))?;
    Some(record.temperature_c.days(site.offset, site.coverage))
}

/// The last day of a record that stands for a later one; `None` where it tells of that day, or ends too long before.
fn held_from(days: &Days, today: NaiveDate) -> Option<NaiveDate> {
    let (last, _) = days.days.range(..=today).next_back()?;
    (1..=HELD_DAYS).contains(&(today - *last).num_days()).then_some(*last)
}

/// The reference of a rule on a day.
fn reference(
    site: &Site,
    reference: &Reference,
    of_stream: Option<&Days>,
    conditions: Option<&Conditions>,
    day: NaiveDate,
    today: NaiveDate,
) -> Option<DayOf> {
    let all_day = |value: f64| DayOf { mean: value, max: value, min: value, hourly_change: None };
    let river = site.river.as_ref()?;
    match reference {
        Reference::Natural => match river.surface.as_ref()? {
            Surface::Given { equilibrium_c, .. } => Some(all_day(equilibrium_c.in_month(day.month()))),
            Surface::Monthly(air) => {
                let air = air.get(usize::try_from(day.month0()).ok()?)?;
                equilibrium_c(air, 0.0).map(all_day)
            }
            Surface::File(_) => equilibrium_c(conditions?.weather.days.get(&day)?, 0.0).map(all_day),
        },
        Reference::Stream(name) => {
            let told = of_stream.and_then(|days| {
                let (last, of) = days.days.range(..=day).next_back()?;
                // of the day itself the record may not tell yet
                let held = if day == today { HELD_DAYS } else { 0 };
                ((day - *last).num_days() <= held).then_some(*of)
            });
            let figure = || {
                let mut inflows = river.reaches.iter().flat_map(|reach| &reach.inflows);
                let inflow = inflows.find(|inflow| inflow.name == *name)?;
                Some(all_day(inflow.temperature_c.as_ref()?.in_month(day.month())))
            };
            told.or_else(figure)
        }
    }
}

/// The reference of a rule on days of a record.
pub fn reference_days(
    site: &Site,
    of: &Reference,
    conditions: &Conditions,
    dates: impl Iterator<Item = NaiveDate>,
) -> Days {
    let of_stream = stream(site, of, Some(conditions));
    // nothing is held over: a day of a record is judged by its own reference
    let on = |date: NaiveDate| {
        let day = reference(site, of, of_stream.as_ref(), Some(conditions), date, date.succ_opt()?)?;
        Some((date, day))
    };
    Days { days: dates.filter_map(on).collect() }
}
