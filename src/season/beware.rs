//! What to beware of in a season: deep water newly drawn, a pool or a stage that falls fast, turnover.
//!
//! Methods: `docs/methods.md`, section 8.

use chrono::NaiveDate;

use crate::mix::LOW_OXYGEN_SHARE;
use crate::profile::LAYERED_C;
use crate::site::Site;
use crate::units::say;

use super::gates::mornings_m;
use super::layers::Layers;
use super::outcome::{StageFall, Stopping};
use super::run::{Run, SeasonDay};

/// Hours over which a change of the release is made where the site does not say (choice, as its limits take it).
const CHANGE_HOURS: f64 = 1.0;
/// Fall of a day beyond its limit that is not told, m (choice): what evaporates on one day is made good on the next,
/// so that a plan at its limit falls by some millimetres more or less.
const FALL_SLACK_M: f64 = 0.01;

/// Everything to beware of, by kind.
pub(super) fn warnings(site: &Site, run: &Run) -> Vec<Stopping> {
    [deep_water(run), drawdown(site, run)].into_iter().flatten().collect()
}

/// Water with hardly any oxygen that comes into the release, where there was none or less of it at the season's start.
fn deep_water(run: &Run) -> Option<Stopping> {
    let began = run.days.first()?.release.oxygen_low_share;
    let most = if began > LOW_OXYGEN_SHARE { began + LOW_OXYGEN_SHARE } else { LOW_OXYGEN_SHARE };
    let first = run.days.iter().find(|day| day.release.oxygen_low_share > most)?;
    let words = format!(
        "{:.0} % of the release comes from water with less than 1 mg/L of oxygen, on the first day of the season it \
         was {:.0} %: hydrogen sulphide, iron and manganese can come with it and take up oxygen below the dam; they \
         are not computed",
        100.0 * first.release.oxygen_low_share,
        100.0 * began
    );
    Some(Stopping { date: first.date, kind: "deep-water", words })
}

/// The first day on which the pool falls faster than the site allows, how many there are, and the fastest.
fn drawdown(site: &Site, run: &Run) -> Option<Stopping> {
    let most_m = site.limits.drawdown_m_per_day?;
    let too_fast: Vec<(NaiveDate, f64)> =
        falls(site, run).filter(|(_, fall_m)| *fall_m > most_m + FALL_SLACK_M).collect();
    let (date, _) = *too_fast.first()?;
    let fastest_m = too_fast.iter().fold(0.0, |fastest: f64, (_, fall_m)| fastest.max(*fall_m));
    let days = match too_fast.len() {
        1 => "on this day".to_owned(),
        days => format!("first on this day, on {days} days in all"),
    };
    let words = format!(
        "the pool falls by more than the {} that limits.max_drawdown_per_day allows {days}, by up to {}",
        say::m(most_m, 2),
        say::m(fastest_m, 2)
    );
    Some(Stopping { date, kind: "max_drawdown_per_day", words })
}

/// How far the pool falls on each day, m.
fn falls<'a>(site: &'a Site, run: &'a Run) -> impl Iterator<Item = (NaiveDate, f64)> + 'a {
    run.days.iter().zip(mornings_m(site, run)).map(|(day, before)| (day.date, before - day.pool_m))
}

/// The fastest fall of the pool in a day, m, and when; `None` where it never falls.
pub(super) fn fastest_fall(site: &Site, run: &Run) -> Option<(f64, NaiveDate)> {
    let fastest = falls(site, run).max_by(|a, b| a.1.total_cmp(&b.1).then(b.0.cmp(&a.0)))?;
    (fastest.1 > 0.0).then_some((fastest.1, fastest.0))
}

/// The fastest fall of the stage at each point with a rating: the change from one day to the next, made in the hours
/// of a change at the dam. The river spreads it out, so that it falls no faster than this.
pub(super) fn stage_falls(site: &Site, days: &[SeasonDay]) -> Vec<StageFall> {
    let points = site.river.as_ref().map_or(&[][..], |r| &r.points);
    let hours = site.limits.change_hours.unwrap_or(CHANGE_HOURS);
    let of = |(point, told): (usize, &crate::site::Point)| {
        let stage = |day: &SeasonDay| told.stage_m(day.points.as_ref()?.get(point)?.flow_m3s);
        let fall = |pair: &[SeasonDay]| match pair {
            [a, b] => Some((b.date, (stage(a)? - stage(b)?) / hours)),
            _ => None,
        };
        let (date, m_per_hour) =
            days.windows(2).filter_map(fall).max_by(|a, b| a.1.total_cmp(&b.1).then(b.0.cmp(&a.0)))?;
        (m_per_hour > 0.0).then_some(StageFall { point, m_per_hour, date })
    };
    points.iter().enumerate().filter_map(of).collect()
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
