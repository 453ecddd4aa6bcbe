//! A season held against the targets, by the very code that judges records, and its score.
//!
//! Methods: `docs/methods.md`, section 8.

use std::cmp::Ordering;
use std::collections::BTreeSet;

use chrono::NaiveDate;

use crate::mix::reference_days;
use crate::river::{Conditions, Figures};
use crate::series::{Daily, Day, Days};
use crate::site::Site;
use crate::target::{DAM, Held, Mark, Statistic, Tally, Target, observed};

use super::run::{Run, SeasonDay, Setup};

/// The season against one target.
#[derive(Debug, Clone, PartialEq)]
pub struct TargetTally {
    /// Index of the target.
    pub target: usize,
    /// Its temperature range.
    pub temperature: Option<Tally>,
    /// Its oxygen floor, in mg/L or as a share of saturation.
    pub oxygen: Option<Tally>,
    /// How each day stands by its temperature; empty without a range.
    pub temperature_days: Vec<(NaiveDate, Mark)>,
    /// The same by its oxygen; empty without a floor.
    pub oxygen_days: Vec<(NaiveDate, Mark)>,
}

impl TargetTally {
    /// The days on which it is outside, by its temperature or by its oxygen.
    pub fn outside(&self) -> BTreeSet<NaiveDate> {
        let days = self.temperature_days.iter().chain(&self.oxygen_days);
        days.filter(|(_, mark)| mark.outside()).map(|(date, _)| *date).collect()
    }

    /// Number of those days.
    pub fn days_outside(&self) -> u32 {
        u32::try_from(self.outside().len()).unwrap_or(u32::MAX)
    }

    /// Number of those days after a date.
    pub fn days_outside_after(&self, date: NaiveDate) -> u32 {
        u32::try_from(self.outside().into_iter().filter(|day| *day > date).count()).unwrap_or(u32::MAX)
    }

    /// Most of those days in a row.
    pub fn longest_run(&self) -> u32 {
        let (mut longest, mut run, mut last) = (0, 0, None);
        for day in self.outside() {
            run = if last.is_some() && last == day.pred_opt() { run + 1 } else { 1 };
            longest = longest.max(run);
            last = Some(day);
        }
        longest
    }
}

/// What a strategy is measured by, in this order: the smaller the better.
#[derive(Debug, Clone, Copy, Default, PartialEq)]
pub struct Score {
    /// Days of the plan that the season does not reach.
    pub lost: u32,
    /// Farthest outside any hard range, C.
    pub worst_c: f64,
    /// Days outside, summed over the hard targets.
    pub days_outside: u32,
    /// Degree-days outside.
    pub degree_days: f64,
    /// Gates moved.
    pub moves: usize,
}

impl Score {
    /// The score of a season.
    pub fn of(setup: &Setup, run: &Run) -> Self {
        let site = &setup.skies.site;
        let moves = run.decisions.iter().map(|d| d.moves).sum();
        Self { lost: lost(setup, run), moves, ..Self::of_days(site, &setup.skies.conditions, &run.days) }
    }

    /// The score of some days by themselves, moves left out. None of its figures falls as days are added: a day is
    /// judged by itself and those before it.
    pub(super) fn of_days(site: &Site, conditions: &Conditions, days: &[SeasonDay]) -> Self {
        let mut score = Self::default();
        for held in tallies(site, conditions, days) {
            let rule = &site.targets[held.target];
            if rule.soft {
                continue;
            }
            score.days_outside += held.days_outside();
            if let (Some(tally), true) = (held.temperature, is_in_degrees(rule.statistic)) {
                score.worst_c = score.worst_c.max(tally.worst.map_or(0.0, |worst| worst.0));
                score.degree_days += tally.sum_outside;
            }
        }
        score
    }

    /// Which of two is better.
    pub fn order(&self, other: &Self) -> Ordering {
        self.lost
            .cmp(&other.lost)
            .then(self.worst_c.total_cmp(&other.worst_c))
            .then(self.days_outside.cmp(&other.days_outside))
            .then(self.degree_days.total_cmp(&other.degree_days))
            .then(self.moves.cmp(&other.moves))
    }
}

/// Days of the plan that a season does not reach.
pub fn lost(setup: &Setup, run: &Run) -> u32 {
    let planned = setup.plan.days.last().map_or(0, |last| (last.date - setup.begins).num_days() + 1);
    let lost = planned.saturating_sub(i64::try_from(run.days.len()).unwrap_or(i64::MAX)).max(0);
    u32::try_from(lost).unwrap_or(u32::MAX)
}

/// Whether a rule of a statistic is missed by degrees: not by days, and not by a sum over days.
pub fn is_in_degrees(statistic: Statistic) -> bool {
    !statistic.is_sum() && !matches!(statistic, Statistic::DaysAbove(_) | Statistic::ShareOfDays(_))
}

/// The days of a season held against every target of its site. The release is steady through each day, so that all
/// its statistics are one; at a point of which only the mean of a day is known, rules of anything else are not judged.
pub fn tallies(site: &Site, conditions: &Conditions, days: &[SeasonDay]) -> Vec<TargetTally> {
    let one = |(target, rule): (usize, &Target)| {
        let station = station(site, rule, days);
        let dates = days.iter().map(|day| day.date);
        let reference = rule.reference.as_ref().map(|of| reference_days(site, of, conditions, dates));
        let valid = |date| rule.valid_on(date, site.year_type.as_deref());
        let of = observed(rule, &station, reference.as_ref(), site.coverage, valid);
        let oxygen = of.oxygen.or(of.oxygen_share);
        let tally = |held: &Option<Held>| held.as_ref().map(|held| held.all);
        TargetTally {
            target,
            temperature: tally(&of.temperature),
            oxygen: tally(&oxygen),
            temperature_days: of.temperature.map(|held| held.days).unwrap_or_default(),
            oxygen_days: oxygen.map(|held| held.days).unwrap_or_default(),
        }
    };
    site.targets.iter().enumerate().map(one).collect()
}

/// The days of a season as a station at the place of a rule would have recorded them.
fn station(site: &Site, rule: &Target, days: &[SeasonDay]) -> Daily {
    let points = site.river.as_ref().map_or(&[][..], |river| &river.points);
    let point = points.iter().position(|p| p.name == rule.point).filter(|_| rule.point != DAM);
    let figures = |day: &SeasonDay| match point {
        Some(point) => day.points.as_ref()?.get(point).copied(),
        None if rule.point == DAM => at_dam(site, day),
        None => None,
    };
    let of = |read: &dyn Fn(&Figures) -> Option<Day>| Days {
        days: days.iter().filter_map(|day| Some((day.date, read(&figures(day)?)?))).collect(),
    };
    let steady = |mean: f64, min: f64| Day { mean, max: mean, min, hourly_change: None };
    Daily {
        temperature_c: of(&|f| match f.range_c {
            Some((max, min)) => Some(Day { mean: f.mean_c, max, min, hourly_change: f.hourly_change_c }),
            None => is_of_means(rule.statistic).then(|| steady(f.mean_c, f.mean_c)),
        }),
        oxygen_mg_l: of(&|f| Some(steady(f.oxygen_mean_mg_l?, f.oxygen_min_mg_l?))),
        oxygen_share: of(&|f| f.oxygen_share.map(|(least, mean)| steady(mean, least))),
        recorded: days.first().zip(days.last()).map(|(first, last)| (first.date, last.date)),
        provisional: false,
    }
}

/// The release of a day as figures of the dam; `None` where nothing leaves it.
fn at_dam(site: &Site, day: &SeasonDay) -> Option<Figures> {
    let release = day.release?;
    let (temperature_c, oxygen) = (release.temperature_c, release.oxygen_below_mg_l);
    let saturation = site.saturation_below_mg_l(temperature_c, release.salt_g_per_kg);
    Some(Figures {
        mean_c: temperature_c,
        range_c: Some((temperature_c, temperature_c)),
        hourly_change_c: None,
        oxygen_mean_mg_l: oxygen,
        oxygen_min_mg_l: oxygen,
        oxygen_share: oxygen.filter(|_| saturation > 0.0).map(|o| (o / saturation, o / saturation)),
        flow_m3s: release.flow_m3s,
    })
}

/// Whether a statistic is made of the means of days alone.
fn is_of_means(statistic: Statistic) -> bool {
    matches!(
        statistic,
        Statistic::DailyMean
            | Statistic::MeanOfDays(_)
            | Statistic::DailyChange
            | Statistic::DegreeDays { .. }
    )
}
