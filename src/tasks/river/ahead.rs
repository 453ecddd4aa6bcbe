//! The days ahead: what arrives if a release is held, and when a change must leave the dam to be in time.
//!
//! Methods: `docs/methods.md`, section 6.

use std::collections::BTreeMap;

use chrono::{DateTime, FixedOffset, NaiveDate, TimeDelta};

use crate::mix::reference_days;
use crate::river::{AtPoint, Course, Figures, course, latest};
use crate::series::{Days, Series};
use crate::target::{Mark, Standing, Target};
use crate::tasks::Context;

use super::{Way, Which};

/// What arrives of a day's release, if today's is held.
#[derive(Debug, Clone, PartialEq)]
pub struct Arriving {
    /// The day the water leaves the dam.
    pub date: NaiveDate,
    /// Whether its weather is forecast.
    pub forecast: bool,
    /// Whether it runs on weather repeated from the day before, where the file ends.
    pub repeated: bool,
    /// Mean temperature of the air, C, where weather is known by the day.
    pub air_c: Option<f64>,
    /// By way, then by point; a way without a course is empty.
    pub ways: Vec<Vec<Figures>>,
}

/// When a change must leave the dam to be in time for days that would be too warm.
#[derive(Debug, Clone, PartialEq)]
pub struct Timely {
    /// The release that is held.
    pub which: Which,
    /// Index in the points of the river.
    pub point: usize,
    /// The rule that would be missed, by its index in the targets.
    pub target: usize,
    /// The first such day at the point.
    pub day: NaiveDate,
    /// Days in a row that would be, as far as is looked ahead.
    pub days: usize,
    /// The worst of them: the rule's value then, and by how much it is outside, in the unit of the rule.
    pub worst: (NaiveDate, f64, f64),
    /// Hours the water takes.
    pub travel_h: f64,
    /// Latest moment at which water must leave the dam to be there when that day begins.
    pub leave_by: DateTime<FixedOffset>,
    /// Whether that moment is past.
    pub late: bool,
    /// Hours before which a change of flow cannot arrive.
    pub rise_first_h: f64,
    /// Hours its bulk takes.
    pub rise_h: f64,
}

/// Days looked ahead, where the weather is told that far (choice).
const AHEAD: usize = 10;

/// The releases on their way on every day looked at, each computed once.
pub(super) struct Ahead<'a> {
    context: &'a Context,
    ways: &'a [Way],
    /// By way, then by the day the water leaves the dam; of the release now also days before today.
    courses: Vec<BTreeMap<NaiveDate, Course>>,
}

impl<'a> Ahead<'a> {
    pub(super) fn of(context: &'a Context, ways: &'a [Way]) -> Self {
        let (site, conditions) = (context.site(), &*context.conditions);
        let today = context.on.date_naive();
        let told = conditions.weather.last_day();
        let far = ways.iter().flat_map(|w| &w.course).flat_map(|c| &c.points).map(|p| p.travel_h);
        let back = 1 + whole_days(far.fold(0.0, f64::max));
        let of = |way: &Way| {
            let ahead =
                today.iter_days().take(AHEAD).take_while(|d| *d == today || told.is_some_and(|t| *d <= t));
            let begin = if way.which == Which::Now { today - TimeDelta::days(back) } else { today };
            let before = begin.iter_days().take_while(|date| *date < today);
            let on = |date: NaiveDate| Some((date, course(site, conditions, date, &way.released())?));
            before.chain(ahead).filter_map(on).collect()
        };
        Self { context, ways, courses: ways.iter().map(of).collect() }
    }

    /// What arrives day by day, today first, as far as the weather is told. The profile is today's throughout.
    pub(super) fn days(&self) -> Vec<Arriving> {
        let (site, conditions) = (self.context.site(), &*self.context.conditions);
        let today = self.context.on.date_naive();
        let mut dates: Vec<NaiveDate> = self.courses.iter().flat_map(BTreeMap::keys).copied().collect();
        dates.retain(|date| *date >= today);
        dates.sort_unstable();
        dates.dedup();
        let of = |date: NaiveDate| {
            let courses = || self.courses.iter().map(|courses| courses.get(&date));
            let figures = |c: &Course| c.points.iter().map(|p| p.figures).collect();
            let forecast = conditions.weather.forecast_from;
            Arriving {
                date,
                forecast: forecast.is_some_and(|from| from.with_timezone(&site.offset).date_naive() <= date),
                repeated: courses().flatten().flat_map(|c| &c.flags).any(|f| f.kind == "weather-repeated"),
                air_c: conditions.weather.day(date).map(|air| air.temperature_c),
                ways: courses().map(|c| c.map_or_else(Vec::new, figures)).collect(),
            }
        };
        dates.into_iter().map(of).collect()
    }

    /// When a change must leave the dam, by release and point, where days ahead would be too warm for a rule if that
    /// release is held. The record of each point is continued by what is computed to arrive, hour for hour, and every
    /// rule is held against both as against a record alone. Of each point the first such days are told that do not
    /// begin today: of a miss today the standings tell.
    pub(super) fn timely(&self) -> Vec<Timely> {
        let points = self.context.site().river.as_ref().map_or(0, |r| r.points.len());
        let all = (0..self.ways.len()).flat_map(|way| (0..points).map(move |point| (way, point)));
        all.filter_map(|(way, point)| self.first(way, point)).collect()
    }

    /// The first days on which a point would be too warm if a release is held.
    fn first(&self, at: usize, point: usize) -> Option<Timely> {
        let (site, way) = (self.context.site(), self.ways.get(at)?);
        let name = &site.river.as_ref()?.points.get(point)?.name;
        let today = self.courses.get(at)?.get(&self.context.on.date_naive())?;
        let there = today.points.iter().find(|p| p.point == point)?;
        let ahead = self.continued(at, point)?;
        let begins = |date: NaiveDate| date.and_hms_opt(0, 0, 0)?.and_local_timezone(site.offset).single();
        let run = way.targets.iter().filter(|s| !s.wish).filter_map(|s| {
            let rule = site.targets.get(s.target).filter(|rule| rule.point == *name)?;
            Some((s.target, run_above(self.context, rule, &ahead)?))
        });
        let (target, run) = run.min_by_key(|(_, run)| run.first)?;
        let begins = begins(run.first)?;
        let leave_by = latest(site, &self.context.conditions, way.flow_m3s(), point, begins)?;
        Some(Timely {
            which: way.which,
            point,
            target,
            day: run.first,
            days: run.days,
            worst: run.worst,
            // of that day: streams that join make the water faster or slower
            travel_h: (begins - leave_by).as_seconds_f64() / HOUR_S,
            leave_by,
            late: leave_by < self.context.on,
            rise_first_h: there.rise_first_h,
            rise_h: there.rise_h,
        })
    }

    /// The days of a point as recorded, and after the record as computed to arrive: until the water of today is there of
    /// the release now, then of the one that is held.
    fn continued(&self, at: usize, point: usize) -> Option<Days> {
        let site = self.context.site();
        let name = &site.river.as_ref()?.points.get(point)?.name;
        let recorded = self.context.conditions.observed.get(name).map(|r| &r.temperature_c);
        let mut readings = recorded.map_or_else(Vec::new, |r| r.readings().to_vec());
        let end = readings.last().map(|r| r.0);
        let today = self.context.on.date_naive();
        let now = self.ways.iter().position(|w| w.which == Which::Now);
        let earlier = now.and_then(|now| self.courses.get(now)).into_iter().flatten();
        let earlier = earlier.filter(|(date, _)| **date < today);
        let held = self.courses.get(at)?.iter().filter(|(date, _)| **date >= today);
        for (date, course) in earlier.chain(held) {
            let Some(there) = course.points.iter().find(|p| p.point == point) else { continue };
            let arrives = arrives(site.offset, *date, there);
            readings.extend(arrives.filter(|r| end.is_none_or(|end| r.0 > end)));
        }
        Some(Series::new(readings).days(site.offset, site.coverage))
    }
}

/// When each hour of a day's release is at a point, and its temperature there, C.
fn arrives(
    offset: FixedOffset,
    date: NaiveDate,
    there: &AtPoint,
) -> impl Iterator<Item = (DateTime<FixedOffset>, f64)> + '_ {
    (0..HOURS).filter_map(move |hour| {
        let leaves = date.and_hms_opt(hour, 0, 0)?.and_local_timezone(offset).single()?;
        let at = usize::try_from(hour).ok().and_then(|hour| there.hourly_c.get(hour)).copied();
        let travel = TimeDelta::try_milliseconds(milliseconds(there.travel_h))?;
        Some((leaves.checked_add_signed(travel)?, at.unwrap_or(there.figures.mean_c)))
    })
}

/// Hours of a day (standard).
const HOURS: u32 = 24;

/// Days in a row above a rule.
struct Run {
    first: NaiveDate,
    days: usize,
    worst: (NaiveDate, f64, f64),
}

/// The first run of days above a rule that begins after today, the buffer counted in.
fn run_above(context: &Context, rule: &Target, ahead: &Days) -> Option<Run> {
    let site = context.site();
    let today = context.on.date_naive();
    let kept = Target { high_c: rule.high_kept_c(), low_c: None, buffer_c: 0.0, ..rule.clone() };
    kept.high_c?;
    let dates = || today.iter_days().take(AHEAD);
    let reference =
        kept.reference.as_ref().map(|r| reference_days(site, r, &context.conditions, dates_of(ahead)));
    let differences = reference.as_ref().map(|r| ahead.minus(r));
    let water = differences.as_ref().unwrap_or(ahead);
    let mark = |date: NaiveDate| -> Mark {
        let valid = kept.valid_on(date, site.year_type.as_deref()) && ahead.on(date).is_some();
        if valid { kept.observed_on(water, date, site.coverage) } else { Mark::UNKNOWN }
    };
    let mut runs: Vec<Run> = Vec::new();
    let mut last: Option<NaiveDate> = None;
    for date in dates() {
        let mark = mark(date);
        let (Standing::Above, Some(value), Some(by)) = (mark.standing, mark.value, mark.by) else { continue };
        let goes_on = last.is_some_and(|l| l.succ_opt() == Some(date));
        last = Some(date);
        match runs.last_mut().filter(|_| goes_on) {
            Some(run) => {
                run.days += 1;
                if by > run.worst.2 {
                    run.worst = (date, value, by);
                }
            }
            None => runs.push(Run { first: date, days: 1, worst: (date, value, by) }),
        }
    }
    runs.into_iter().find(|run| run.first > today)
}

/// The dates of days.
fn dates_of(days: &Days) -> impl Iterator<Item = NaiveDate> + '_ {
    days.days.keys().copied()
}

/// Seconds of an hour (standard).
const HOUR_S: f64 = 3600.0;
/// Milliseconds of an hour (standard).
const HOUR_MS: f64 = 3_600_000.0;
/// The longest way looked at, hours (choice): a year.
const LONGEST_H: f64 = 365.0 * 24.0;

/// Whole milliseconds of hours.
fn milliseconds(hours: f64) -> i64 {
    #[expect(clippy::cast_possible_truncation, reason = "held to a year of milliseconds")]
    let whole = (hours.clamp(0.0, LONGEST_H) * HOUR_MS) as i64;
    whole
}

/// Whole days of hours.
fn whole_days(hours: f64) -> i64 {
    milliseconds(hours) / (24 * 3_600_000)
}
