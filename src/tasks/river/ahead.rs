//! The days ahead: what arrives if a release is held, and when a change must leave the dam to be in time.
//!
//! Methods: `docs/methods.md`, section 6.

use std::sync::Arc;

use chrono::{DateTime, FixedOffset, NaiveDate, TimeDelta};

use crate::mix::Day;
use crate::river::{AtPoint, Figures, course};
use crate::target::Figure;
use crate::tasks::Context;

use super::Way;

/// What arrives of a day's release, if today's is held.
#[derive(Debug, Clone, PartialEq)]
pub struct Arriving {
    /// The day the water leaves the dam.
    pub date: NaiveDate,
    /// Whether its weather is forecast.
    pub forecast: bool,
    /// Mean temperature of the air, C, where weather is known by the day.
    pub air_c: Option<f64>,
    /// By way, then by point; a way without a course is empty.
    pub ways: Vec<Vec<Figures>>,
}

/// When a change must leave the dam to be in time for a day that would be too warm.
#[derive(Debug, Clone, PartialEq)]
pub struct Timely {
    /// Index in the points of the river.
    pub point: usize,
    /// The rule that would be missed, by its index in the targets.
    pub target: usize,
    /// The first such day at the point.
    pub day: NaiveDate,
    /// The figure the rule speaks of, then, C.
    pub value_c: f64,
    /// By how much it would be missed, C.
    pub by_c: f64,
    /// Days in a row that would be.
    pub days: usize,
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
    /// The days on which the first and the last of that water leave the dam.
    pub first: NaiveDate,
    /// The last.
    pub leaves: NaiveDate,
}

/// Days looked ahead, where the weather is told that far (choice).
const AHEAD: usize = 10;

/// What arrives day by day, today first, as far as the weather is told by the day. The profile is today's throughout.
pub(super) fn days(context: &Context, ways: &[Way]) -> Vec<Arriving> {
    let (site, conditions) = (context.site(), &*context.conditions);
    let of = |date: NaiveDate| {
        let figures = |way: &Way| {
            let course = course(site, conditions, date, &way.released());
            course.map_or_else(Vec::new, |c| c.points.iter().map(|p| p.figures).collect())
        };
        Arriving {
            date,
            forecast: conditions
                .weather
                .forecast_from
                .is_some_and(|from| from.with_timezone(&site.offset).date_naive() <= date),
            air_c: conditions.weather.day(date).map(|air| air.temperature_c),
            ways: ways.iter().map(figures).collect(),
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

/// When a change must leave the dam, by point, where a day ahead would be too warm for a rule if the release is held.
/// Points too warm today already are not told here: their standings say so.
pub(super) fn timely(context: &Context, way: &Way) -> Vec<Timely> {
    let (site, conditions) = (context.site(), &*context.conditions);
    let mut out: Vec<Timely> = Vec::new();
    // a point's days in a row that would be too warm, as found so far
    for date in dates(context) {
        let Some(course) = course(site, conditions, date, &way.released()) else { return out };
        let rules = Day::new(site, date, Arc::clone(&context.conditions)).rules(site);
        for there in &course.points {
            let worst = rules
                .iter()
                .filter(|r| {
                    r.point == Some(there.point) && site.targets.get(r.target).is_some_and(|t| !t.soft)
                })
                .filter_map(|r| {
                    let today = r.today.as_ref().ok()?;
                    let figure = figure_c(&there.figures, today.figure)?;
                    Some((r.target, figure, today.outside_c(figure)))
                })
                .filter(|(_, _, outside)| *outside > 0.0)
                .max_by(|a, b| a.2.total_cmp(&b.2));
            let known = out.iter_mut().find(|t| t.point == there.point);
            match (worst, known) {
                (Some((target, value_c, by_c)), None) => {
                    out.extend(first(context, there, date, (target, value_c, by_c)));
                }
                (Some((_, _, by_c)), Some(known)) if known.leaves.succ_opt() == Some(date) => {
                    known.leaves = date;
                    known.days += 1;
                    known.by_c = known.by_c.max(by_c);
                }
                _ => {}
            }
        }
    }
    out.retain(|t| t.first > context.on.date_naive());
    out
}

/// The first day on which a point would be too warm of water that leaves on a date.
fn first(
    context: &Context,
    there: &AtPoint,
    leaves: NaiveDate,
    (target, value_c, by_c): (usize, f64, f64),
) -> Option<Timely> {
    let offset = context.site().offset;
    let begins = |date: NaiveDate| date.and_hms_opt(0, 0, 0)?.and_local_timezone(offset).single();
    let travel = TimeDelta::milliseconds(whole(there.travel_h * HOUR_MS));
    let day = (begins(leaves)? + travel).date_naive();
    let leave_by = begins(day)? - travel;
    Some(Timely {
        point: there.point,
        target,
        day,
        value_c,
        by_c,
        days: 1,
        travel_h: there.travel_h,
        leave_by,
        late: leave_by < context.on,
        rise_first_h: there.rise_first_h,
        rise_h: there.rise_h,
        first: leaves,
        leaves,
    })
}

/// Milliseconds of an hour.
const HOUR_MS: f64 = 3_600_000.0;

/// A number of milliseconds, whole; a travel time has no more of them than a century.
fn whole(milliseconds: f64) -> i64 {
    let most = 100.0 * 365.0 * 24.0 * HOUR_MS;
    #[expect(clippy::cast_possible_truncation, reason = "held to a century of milliseconds")]
    let whole = milliseconds.clamp(0.0, most) as i64;
    whole
}

/// The figure of a day's water that a rule is held against; of every reading the greatest.
fn figure_c(figures: &Figures, figure: Figure) -> Option<f64> {
    match figure {
        Figure::Mean => Some(figures.mean_c),
        Figure::Max | Figure::Both => figures.range_c.map(|r| r.0),
        // a heat wave does not make the least reading or a change too warm
        Figure::Min | Figure::HourlyChange => None,
    }
}
