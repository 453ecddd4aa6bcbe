//! The days of the past as they are known: gates, cast and pool, events.

use std::sync::Arc;

use chrono::{NaiveDate, TimeDelta};

use crate::mix::Setting;
use crate::profile::Profile;
use crate::record::Day;
use crate::season::Plan;
use crate::series::Daily;
use crate::tasks::Context;
use crate::tasks::setting::as_it_was;
use crate::units::DAY_S;

use super::stood::{NOON, Stood, Tellers};

/// One day of the past.
#[derive(Debug, Clone)]
pub(super) struct Known {
    pub(super) date: NaiveDate,
    pub(super) stood: Option<Stood>,
    /// What stood, under the pool of the day; `None` without a cast too.
    pub(super) setting: Option<Setting>,
    /// The newest cast taken by noon, under the pool of the day.
    pub(super) profile: Option<Arc<Profile>>,
    pub(super) changed: bool,
    pub(super) event: Option<String>,
}

impl Known {
    /// As the record takes it.
    pub(super) fn day(&self) -> Day<'_> {
        Day {
            date: self.date,
            setting: self.setting.as_ref(),
            profile: self.profile.as_deref(),
            changed: self.changed,
            event: self.event.as_deref(),
        }
    }
}

/// The casts of the folder that tell their time, the oldest first.
pub(super) fn casts(context: &Context) -> Vec<Arc<Profile>> {
    let folder = &context.folder;
    let sound = folder.casts().iter().filter_map(|listed| folder.profile_of(listed).0);
    sound.filter(|profile| profile.taken.is_some()).map(Arc::new).collect()
}

/// Every day from the first that log, schedules or gauge tell to the one before the date of the answer; that date too
/// where the gauge tells all of it.
pub(super) fn known(
    context: &Context,
    tellers: &Tellers,
    casts: &[Arc<Profile>],
    gauge: &Daily,
) -> Vec<Known> {
    let on = context.on.date_naive();
    let recorded = gauge.recorded.map(|(first, _)| first);
    let Some(first) = tellers.first().into_iter().chain(recorded).min() else { return Vec::new() };
    let is_told = |date: NaiveDate| date < on || gauge.temperature_c.days.contains_key(&date);
    let dates = first.iter_days().take_while(|date| *date <= on && is_told(*date));
    dates.map(|date| one(context, tellers, casts, date)).collect()
}

fn one(context: &Context, tellers: &Tellers, casts: &[Arc<Profile>], date: NaiveDate) -> Known {
    let site = context.site();
    let (stood, changed) = tellers.on(date);
    let newest = date.and_time(NOON).and_local_timezone(site.offset).single().and_then(|noon| {
        casts.iter().rev().find(|cast| cast.taken.is_some_and(|taken| taken <= noon)).cloned()
    });
    let profile = newest.map(|cast| under_its_pool(context, tellers, &cast, date));
    let setting = stood.as_ref().map(|stood| match &profile {
        Some(profile) => as_it_was(site, profile, &stood.gates),
        // without a cast nothing is computed; that something was set is known all the same
        None => Setting::of(stood.gates.clone()),
    });
    let event = context.log.log.event_on(date).map(|event| event.text.clone());
    Known { date, stood, setting, profile, changed, event }
}

/// A cast under the pool of a day: as a plan of days that are over tells it, else as the decision of the day knew it,
/// else under its own.
fn under_its_pool(
    context: &Context,
    tellers: &Tellers,
    cast: &Arc<Profile>,
    date: NaiveDate,
) -> Arc<Profile> {
    let site = context.site();
    let taken = cast.taken.map(|taken| taken.with_timezone(&site.offset).date_naive());
    let planned = || {
        taken.and_then(|taken| {
            tellers.over.iter().find_map(|(plan, _)| pool_m(context, plan, cast, taken, date))
        })
    };
    let logged = || {
        let noon = date.and_time(NOON).and_local_timezone(site.offset).single()?;
        let known = &tellers.decided(noon)?.0.decision.known;
        (known.taken >= cast.taken).then_some(known.pool_m)
    };
    let Some(pool_m) = planned().or_else(logged) else { return cast.clone() };
    cast.at_pool(site, pool_m).map_or_else(|_| cast.clone(), Arc::new)
}

/// The pool at noon of a day by a plan, m: between those it tells, else by what came in and left since the cast.
fn pool_m(context: &Context, plan: &Plan, cast: &Profile, taken: NaiveDate, date: NaiveDate) -> Option<f64> {
    let of = |date: NaiveDate| plan.days.iter().find(|day| day.date == date);
    let (today, eve) = (of(date)?, date.checked_sub_signed(TimeDelta::days(1)).and_then(of));
    if let Some(ends_m) = today.pool_m {
        return Some(eve.and_then(|eve| eve.pool_m).map_or(ends_m, |begins_m| 0.5 * (begins_m + ends_m)));
    }
    let gained = |date: NaiveDate| of(date).and_then(|day| Some(DAY_S * (day.inflow_m3s - day.release_m3s?)));
    let days = taken.iter_days().take_while(|day| *day < date);
    let gained_m3 = days.map(gained).sum::<Option<f64>>()?;
    let pool = &context.site().pool;
    // what the sun took is less than the pool is read to
    pool.elevation_of_volume_m(pool.volume_m3(cast.pool_m) + gained_m3)
}
