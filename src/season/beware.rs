//! What to beware of in a season: deep water newly drawn, a pool or a stage that falls fast, turnover.
//!
//! Methods: `docs/methods.md`, section 8.

use chrono::NaiveDate;

use crate::mix::LOW_OXYGEN_SHARE;
use crate::mix::limits::change_times;
use crate::profile::LAYERED_C;
use crate::site::{Point, Site};
use crate::units::say;

use super::ahead;
use super::layers::Layers;
use super::outcome::{StageFall, Stopping};
use super::run::{Run, SeasonDay, Setup};

/// A cast that lies this near to the plan lies on it, m (choice: wind and waves move a gauge as much).
const OFF_PLAN_M: f64 = 0.1;
/// A pool that falls by no more than this beyond its limit keeps it, m (choice: what evaporates on one day is made good
/// on the next).
const FALL_M: f64 = 0.01;
/// A release this near to its bound keeps it, as a share of it (choice: the same).
const RELEASE_SHARE: f64 = 0.02;

/// A stage that falls by no more than this beyond its limit keeps it, m per hour (choice: the last figure shown).
const STAGE_M: f64 = 0.001;

/// Everything to beware of, by kind.
pub(super) fn warnings(setup: &Setup, site: &Site, run: &Run) -> Vec<Stopping> {
    let [too_little, too_much] = releases(site, &run.days);
    let alone = [off_plan(setup, site, run), too_little, too_much, deep_water(run), drawdown(site, run)];
    alone.into_iter().flatten().chain(stages_too_fast(site, &run.days)).collect()
}

/// A cast whose pool is not the plan's.
fn off_plan(setup: &Setup, site: &Site, run: &Run) -> Option<Stopping> {
    let (above_m, until) = ahead::off_plan(setup, run.start.pool_m(&site.pool))?;
    if above_m.abs() < OFF_PLAN_M {
        return None;
    }
    let side = if above_m > 0.0 { "above" } else { "below" };
    let words = format!(
        "the pool of the cast lies {} {side} the plan; it is brought to it in a straight line by {until}, and the release \
         of the days until then makes up for it",
        say::m(above_m.abs(), 2)
    );
    Some(Stopping { date: setup.begins, kind: "off-plan", words })
}

/// Days on which less than the least release of the site leaves, and on which more than the greatest does.
fn releases(site: &Site, days: &[SeasonDay]) -> [Option<Stopping>; 2] {
    type Beyond = fn(f64, f64) -> bool;
    let of = |bound: Option<f64>, kind, side, beyond: Beyond, farther: fn(f64, f64) -> f64| {
        let bound_m3s = bound?;
        let over = || days.iter().filter(|day| beyond(day.release_m3s(), bound_m3s));
        let first = over().next()?;
        let farthest = over().map(SeasonDay::release_m3s).reduce(farther)?;
        let words = format!(
            "what the plan releases in this case is {side} {kind} {} on {} of {} days, first on this one, at worst {}",
            say::m3s(bound_m3s, 1),
            over().count(),
            days.len(),
            say::m3s(farthest, 1)
        );
        Some(Stopping { date: first.date, kind, words })
    };
    let under = |flow: f64, min: f64| flow < min * (1.0 - RELEASE_SHARE);
    let above = |flow: f64, max: f64| flow > max * (1.0 + RELEASE_SHARE);
    [
        of(site.release.min_m3s, "release.min", "below", under, f64::min),
        of(site.release.max_m3s, "release.max", "above", above, f64::max),
    ]
}

/// Water with hardly any oxygen that comes into the release, where there was hardly any of it on the first day, or much
/// less.
fn deep_water(run: &Run) -> Option<Stopping> {
    let mut drawn = run.days.iter().filter_map(|day| Some((day.date, day.release?.oxygen_low_share)));
    let began = drawn.next()?.1;
    let most = if began > LOW_OXYGEN_SHARE { began + LOW_OXYGEN_SHARE } else { LOW_OXYGEN_SHARE };
    let (date, share) = drawn.find(|(_, share)| *share > most)?;
    let words = format!(
        "{:.0} % of the release comes from water with less than 1 mg/L of oxygen, against {:.0} % on the first day: \
         hydrogen sulphide, iron and manganese can come with it and take up oxygen below the dam; they are not computed",
        100.0 * share,
        100.0 * began
    );
    Some(Stopping { date, kind: "deep-water", words })
}

/// The first day on which the pool falls faster than the site allows, and the fastest.
fn drawdown(site: &Site, run: &Run) -> Option<Stopping> {
    let most_m = site.limits.drawdown_m_per_day?;
    let over: Vec<(NaiveDate, f64)> = falls(site, run).filter(|fall| fall.1 > most_m + FALL_M).collect();
    let fastest_m = over.iter().map(|fall| fall.1).fold(0.0, f64::max);
    let words = format!(
        "the pool falls by more than {} on {} of {} days, first on this one, by up to {}",
        say::m(most_m, 2),
        over.len(),
        run.days.len(),
        say::m(fastest_m, 2)
    );
    Some(Stopping { date: over.first()?.0, kind: "max_drawdown_per_day", words })
}

/// How far the pool falls on each day, m.
fn falls<'a>(site: &'a Site, run: &'a Run) -> impl Iterator<Item = (NaiveDate, f64)> + 'a {
    let starts = std::iter::once(run.start.pool_m(&site.pool)).chain(run.days.iter().map(|d| d.pool_m));
    run.days.iter().zip(starts).map(|(day, before)| (day.date, before - day.pool_m))
}

/// The fastest fall of the pool in a day, m, and when; `None` where it never falls.
pub(super) fn fastest_fall(site: &Site, run: &Run) -> Option<(f64, NaiveDate)> {
    let fastest = falls(site, run).max_by(|a, b| a.1.total_cmp(&b.1).then(b.0.cmp(&a.0)))?;
    (fastest.1 > 0.0).then_some((fastest.1, fastest.0))
}

/// The fastest fall of the stage at each point with a rating: the change from one day to the next, made in the hours
/// of a change at the dam. The river spreads it out, so that it falls no faster than this.
pub(super) fn stage_falls(site: &Site, days: &[SeasonDay]) -> Vec<StageFall> {
    let of = |point: usize| {
        let falls = falls_at(site, days, point);
        let (date, m_per_hour) = falls.max_by(|a, b| a.1.total_cmp(&b.1).then(b.0.cmp(&a.0)))?;
        (m_per_hour > 0.0).then_some(StageFall { point, m_per_hour, date })
    };
    (0..points(site).len()).filter_map(of).collect()
}

/// Points at which the stage can fall faster than their limit: the first such day, how many there are, the fastest.
fn stages_too_fast(site: &Site, days: &[SeasonDay]) -> Vec<Stopping> {
    let of = |(index, point): (usize, &Point)| {
        let most_m = point.stage_fall_m_per_hour?;
        let over: Vec<(NaiveDate, f64)> =
            falls_at(site, days, index).filter(|fall| fall.1 > most_m + STAGE_M).collect();
        let fastest_m = over.iter().map(|fall| fall.1).fold(0.0, f64::max);
        let words = format!(
            "the stage at {} can fall by more than {} in an hour on {} of {} days, first on this one, by up to {}",
            point.name,
            say::m(most_m, 3),
            over.len(),
            days.len(),
            say::m(fastest_m, 3)
        );
        Some(Stopping { date: over.first()?.0, kind: "max_stage_fall_per_hour", words })
    };
    points(site).iter().enumerate().filter_map(of).collect()
}

/// How far the stage at a point falls by each day whose release and that of the day before arrive there, m per hour.
fn falls_at<'a>(
    site: &'a Site,
    days: &'a [SeasonDay],
    point: usize,
) -> impl Iterator<Item = (NaiveDate, f64)> + 'a {
    let (hours, _) = change_times(site);
    let stage =
        move |day: &SeasonDay| points(site).get(point)?.stage_m(day.points.as_ref()?.get(point)?.flow_m3s);
    let fall = move |pair: &[SeasonDay]| match pair {
        [a, b] => Some((b.date, (stage(a)? - stage(b)?) / hours)),
        _ => None,
    };
    days.windows(2).filter_map(fall)
}

fn points(site: &Site) -> &[Point] {
    site.river.as_ref().map_or(&[][..], |river| &river.points)
}

/// The day on which the pool turns over: the first after a layered one that mixes it from surface to bed, or at whose
/// end both differ by no more than makes layers.
pub(super) fn turnover(run: &Run) -> Option<NaiveDate> {
    let mut layered = is_layered(&run.start);
    for day in &run.days {
        if layered && (day.overturned || !is_layered(&day.layers)) {
            return Some(day.date);
        }
        layered |= is_layered(&day.layers);
    }
    None
}

fn is_layered(layers: &Layers) -> bool {
    let ends = layers.layers.first().zip(layers.layers.last());
    ends.is_some_and(|(bed, surface)| (surface.temperature_c - bed.temperature_c).abs() >= LAYERED_C)
}
