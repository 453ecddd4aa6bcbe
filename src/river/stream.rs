//! The water that a side stream or seepage brings at a moment.
//!
//! Methods: `docs/methods.md`, section 6.

use chrono::{DateTime, Datelike, FixedOffset, NaiveDate, TimeDelta};

use crate::series::{Record, Series};
use crate::site::{Inflow, Reach, Yearly};

use super::water::{Seeping, Water};

/// What a stream brings.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Brought {
    pub(super) water: Water,
    /// Its series ended before, and what was read on this day holds on.
    pub(super) held: Option<NaiveDate>,
}

/// Days for which the last reading of a stream is held where it has no figures (choice: what is read today serves the
/// ten days that are looked ahead, and the way down after them).
pub(super) const HELD_DAYS: i64 = 14;

/// The water of a stream: by its series where that tells the moment, else by its figures, else by a last reading that
/// is not older than [`HELD_DAYS`]. `None` where flow or temperature are not known at all.
pub(super) fn brought(
    stream: &Inflow,
    record: Option<&Record>,
    at: DateTime<FixedOffset>,
    by_hour: bool,
) -> Option<Brought> {
    let mut held: Option<NaiveDate> = None;
    let mut figure = |series: Option<&Series>, given: Option<&Yearly>| {
        let told = series.and_then(|s| told(s, at, by_hour)).or(given.map(|g| g.in_month(at.month())));
        told.or_else(|| {
            let (time, value) = series.and_then(|s| last(s, at))?;
            let day = time.with_timezone(at.offset()).date_naive();
            held = Some(held.map_or(day, |first| first.min(day)));
            Some(value)
        })
    };
    let flow_m3s = figure(record.map(|r| &r.flow_m3s), stream.flow_m3s.as_ref())?.max(0.0);
    let temperature_c = figure(record.map(|r| &r.temperature_c), stream.temperature_c.as_ref())?;
    let oxygen_mg_l = figure(record.map(|r| &r.oxygen_mg_l), stream.oxygen_mg_l.as_ref());
    Some(Brought { water: Water { flow_m3s, temperature_c, oxygen_mg_l, demand_mg_l: 0.0 }, held })
}

/// The water that seeps into a reach in a month; `None` where none does.
pub(super) fn seeping_into(reach: &Reach, month: u32) -> Option<Seeping> {
    let seepage = reach.seepage.as_ref()?;
    let per_m_m3s = seepage.flow_m3s.in_month(month) / reach.length_m;
    let water = Water {
        flow_m3s: per_m_m3s * reach.length_m,
        temperature_c: seepage.temperature_c.in_month(month),
        oxygen_mg_l: seepage.oxygen_mg_l.as_ref().map(|o| o.in_month(month)),
        demand_mg_l: 0.0,
    };
    (per_m_m3s > 0.0).then_some(Seeping { per_m_m3s, water })
}

/// By the hour the value between readings; else, or where they are too far apart, the mean of the readings of the day.
fn told(series: &Series, at: DateTime<FixedOffset>, by_hour: bool) -> Option<f64> {
    if by_hour && let Some(value) = series.at(at) {
        return Some(value);
    }
    let readings = series.readings();
    let midnight =
        at.date_naive().and_time(chrono::NaiveTime::MIN).and_local_timezone(*at.offset()).single()?;
    let from = readings.partition_point(|r| r.0 < midnight);
    let to = readings.partition_point(|r| r.0 < midnight + TimeDelta::hours(24));
    let day = readings.get(from..to).filter(|day| !day.is_empty())?;
    Some(day.iter().map(|r| r.1).sum::<f64>() / day.len() as f64)
}

/// The last reading before a moment, if it is not too old.
fn last(series: &Series, at: DateTime<FixedOffset>) -> Option<(DateTime<FixedOffset>, f64)> {
    let readings = series.readings();
    let last = readings.partition_point(|r| r.0 <= at).checked_sub(1).and_then(|i| readings.get(i)).copied();
    last.filter(|(time, _)| at - *time <= TimeDelta::days(HELD_DAYS))
}
