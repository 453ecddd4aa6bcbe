//! The days ahead: what arrives if a release is held, and when a change must leave the dam to be in time.
//!
//! Methods: `docs/methods.md`, section 6.

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

/// What arrives day by day, today first, as far as the weather is told by the day. The profile is today's throughout.
pub(super) fn days(context: &Context, ways: &[Way]) -> Vec<Arriving> {
    let (site, conditions) = (context.site(), &*context.conditions);
    let of = |date: NaiveDate| {
        let courses: Vec<Option<Course>> =
            ways.iter().map(|way| course(site, conditions, date, &way.released())).collect();
        let forecast = conditions.weather.forecast_from;
        Arriving {
            date,
            forecast: forecast.is_some_and(|from| from.with_timezone(&site.offset).date_naive() <= date),
            repeated: courses.iter().flatten().flat_map(|c| &c.flags).any(|f| f.kind == "weather-repeated"),
            air_c: conditions.weather.day(date).map(|air| air.temperature_c),
            ways: courses
                .into_iter()
                .map(|c| c.map_or_else(Vec::new, |c| c.points.iter().map(|p| p.figures).collect()))
                .collect(),
        }
    };
    dates(context).map(of).collect()
}

/// Today and the days after it whose weather is told; today alone where weather is not told by the day.
fn dates(context: &Context) -> impl Iterator<Item = NaiveDate> + '_ {
    let today = context.on.date_naive();
    let told = move |date: &NaiveDate| *date == today || context.conditions.weather.day(*date).is_some();
    today.iter_days().take(AHEAD).take_while(told)
}

/// When a change must leave the dam, by point, where days ahead would be too warm for a rule if the release is held.
/// The record of each point is continued by what is computed to arrive, hour for hour, and every rule is held against
/// both as against a record alone. Of each point the first such days are told that do not begin today: of a miss
/// today the standings tell.
pub(super) fn timely(context: &Context, ways: &[Way], way: &Way) -> Vec<Timely> {
    let points = context.site().river.as_ref().map_or(0, |r| r.points.len());
    let now = ways.iter().find(|w| w.which == Which::Now).unwrap_or(way);
    (0..points).filter_map(|point| first(context, (now, way), point)).collect()
}

/// The first days on which a point would be too warm.
fn first(context: &Context, (now, way): (&Way, &Way), point: usize) -> Option<Timely> {
    let site = context.site();
    let name = &site.river.as_ref()?.points.get(point)?.name;
    let there = course(site, &context.conditions, context.on.date_naive(), &way.released())?;
    let there = there.points.into_iter().find(|p| p.point == point)?;
    let ahead = continued(context, (now, way), point, there.travel_h)?;
    let begins = |date: NaiveDate| date.and_hms_opt(0, 0, 0)?.and_local_timezone(site.offset).single();
    let run = way.targets.iter().filter(|s| !s.wish).filter_map(|s| {
        let rule = site.targets.get(s.target).filter(|rule| rule.point == *name)?;
        Some((s.target, run_above(context, rule, &ahead)?))
    });
    let (target, run) = run.min_by_key(|(_, run)| run.first)?;
    let conditions = &context.conditions;
    let begins = begins(run.first)?;
    let leave_by = latest(site, conditions, way.flow_m3s(), point, begins)?;
    Some(Timely {
        point,
        target,
        day: run.first,
        days: run.days,
        worst: run.worst,
        // of that day: streams that join make the water faster or slower
        travel_h: (begins - leave_by).as_seconds_f64() / HOUR_S,
        leave_by,
        late: leave_by < context.on,
        rise_first_h: there.rise_first_h,
        rise_h: there.rise_h,
    })
}

/// The days of a point as recorded, and after the record as computed to arrive: until the water of today is there of the
/// release now, then of the one that is held.
fn continued(context: &Context, (now, way): (&Way, &Way), point: usize, travel_h: f64) -> Option<Days> {
    let (site, conditions) = (context.site(), &*context.conditions);
    let name = &site.river.as_ref()?.points.get(point)?.name;
    let recorded = conditions.observed.get(name).map(|r| &r.temperature_c);
    let mut readings = recorded.map_or_else(Vec::new, |r| r.readings().to_vec());
    let end = readings.last().map(|r| r.0);
    let today = context.on.date_naive();
    let before = today - TimeDelta::days(1 + whole_days(travel_h));
    let earlier = before.iter_days().take_while(|date| *date < today).map(|date| (date, now));
    for (date, of) in earlier.chain(dates(context).map(|date| (date, way))) {
        let Some(course) = course(site, conditions, date, &of.released()) else { continue };
        let Some(there) = course.points.iter().find(|p| p.point == point) else { continue };
        readings.extend(arrives(site.offset, date, there).filter(|r| end.is_none_or(|end| r.0 > end)));
    }
    Some(Series::new(readings).days(site.offset, site.coverage))
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

/// Hours of a day.
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

/// Seconds of an hour.
const HOUR_S: f64 = 3600.0;
/// Milliseconds of an hour.
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
