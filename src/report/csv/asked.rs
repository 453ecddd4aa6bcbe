//! What the hard rules ask at a place on the days of a season, and how far outside it is.

use chrono::NaiveDate;

use crate::season::TargetTally;
use crate::target::{Standing, Target};
use crate::tasks::season::SeasonRun;
use crate::units::{Dimension, System};

use super::{figure, plain};

/// Heads of the figures of [`cells`].
pub(super) fn heads(warm: &str) -> [String; 5] {
    [
        format!("asked_low_{warm}"),
        format!("asked_high_{warm}"),
        "asked_oxygen_mg_l".to_owned(),
        format!("outside_{warm}"),
        "oxygen_short_mg_l".to_owned(),
    ]
}

/// What is asked at a place on a day, the rules taken together; how far its temperature lies outside by the rule it
/// misses most, below as less than zero; by how much its oxygen falls short.
pub(super) fn cells(run: &SeasonRun, place: &str, date: NaiveDate, system: System) -> [String; 5] {
    let rules = || rules(run, place, date);
    let ranges = || rules().map(|(rule, _)| rule).filter(|rule| is_in_degrees(rule));
    let low_c = ranges().filter_map(|rule| rule.low_c).reduce(f64::max);
    let high_c = ranges().filter_map(|rule| rule.high_c).reduce(f64::min);
    let floor_mg_l = rules().filter_map(|(rule, _)| rule.oxygen_min_mg_l).reduce(f64::max);
    let outside_c = rules()
        .filter(|(rule, _)| is_in_degrees(rule))
        .filter_map(|(_, told)| by(&told.temperature_days, date))
        .reduce(|a, b| if b.abs() > a.abs() { b } else { a });
    let short_mg_l = rules()
        .filter(|(rule, _)| rule.oxygen_min_mg_l.is_some())
        .filter_map(|(_, told)| by(&told.oxygen_days, date))
        .map(f64::abs)
        .reduce(f64::max);
    let c = |value: Option<f64>, dimension| figure(value, dimension, system);
    [
        c(low_c, Dimension::Temperature),
        c(high_c, Dimension::Temperature),
        plain(floor_mg_l),
        c(outside_c, Dimension::TemperatureDifference),
        plain(short_mg_l),
    ]
}

/// The hard rules of a place that are valid on a date, each with its days.
fn rules<'a>(
    run: &'a SeasonRun,
    place: &'a str,
    date: NaiveDate,
) -> impl Iterator<Item = (&'a Target, &'a TargetTally)> {
    let site = &run.skies.site;
    let of = move |told: &'a TargetTally| Some((site.targets.get(told.target)?, told));
    run.outcome.targets.iter().filter_map(of).filter(move |(rule, _)| {
        !rule.soft && rule.point == place && rule.valid_on(date, site.year_type.as_deref())
    })
}

/// Whether a rule bounds a temperature, not a count of days.
fn is_in_degrees(rule: &Target) -> bool {
    rule.is_of_temperature() && !rule.statistic.counts_days()
}

/// How far outside a day is, below as less than zero; `None` where that is not known.
fn by(days: &[(NaiveDate, crate::target::Mark)], date: NaiveDate) -> Option<f64> {
    let mark = days.iter().find(|(day, _)| *day == date)?.1;
    Some(if mark.standing == Standing::Below { -mark.by? } else { mark.by? })
}
