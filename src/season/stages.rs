//! Stages of eggs and young by the degree-days of a season.
//!
//! Methods: `docs/methods.md`, section 8.

use chrono::{Datelike, NaiveDate};

use crate::site::{Site, Stages};
use crate::target::{DAM, YearDay};

use super::outcome::{Exhausted, StageDate};
use super::run::SeasonDay;

/// When every stage of the site is reached.
pub(super) fn stages(site: &Site, days: &[SeasonDay]) -> Vec<StageDate> {
    let of = |(stages, told): (usize, &Stages)| {
        let sums = sums(site, told, days);
        let one = |(stage, at): (usize, &(String, f64))| StageDate {
            stages,
            stage,
            on: match &sums {
                Err(why) => Exhausted::Unknown(why.clone()),
                Ok(sums) => reached(sums, at.1),
            },
        };
        told.at.iter().enumerate().map(one).collect::<Vec<StageDate>>()
    };
    site.season.stages.iter().enumerate().flat_map(of).collect()
}

fn reached(sums: &[(NaiveDate, f64)], at_c_days: f64) -> Exhausted {
    let on = sums.iter().find(|(_, sum)| *sum >= at_c_days).map(|(date, _)| Exhausted::On(*date));
    let end = || sums.last().map(|(date, _)| Exhausted::NotBy(*date));
    on.or_else(end).unwrap_or_else(|| Exhausted::Unknown("the season has no day".to_owned()))
}

/// Degree-days above the base since counting began, C days, by day: the first time in the season that its day of the
/// year comes. What the days before the season brought is not known.
fn sums(site: &Site, stages: &Stages, days: &[SeasonDay]) -> Result<Vec<(NaiveDate, f64)>, String> {
    let point = site.river.as_ref().and_then(|r| r.points.iter().position(|p| p.name == stages.point));
    let temperature = |day: &SeasonDay| {
        if stages.point == DAM {
            return Some(day.release?.temperature_c);
        }
        Some(day.points.as_ref()?.get(point?)?.mean_c)
    };
    let begins = |day: &SeasonDay| YearDay { month: day.date.month(), day: day.date.day() } == stages.since;
    let Some(first) = days.iter().position(begins) else {
        let YearDay { month, day } = stages.since;
        return Err(format!("counting begins on {month:02}-{day:02}, which is no day of the season"));
    };
    let mut sum = 0.0;
    days.iter()
        .skip(first)
        .map(|day| {
            let warm_c = temperature(day).ok_or_else(|| match day.release {
                Some(_) => "what arrives there is not known".to_owned(),
                None => format!("nothing is released on {}", day.date),
            })?;
            sum += (warm_c - stages.base_c).max(0.0);
            Ok((day.date, sum))
        })
        .collect()
}
