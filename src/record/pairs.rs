//! Days on which the release that was computed can be held against the gauge below the dam.
//!
//! Methods: `docs/methods.md`, section 9.

mod curve;

use std::ops::ControlFlow;
use std::sync::atomic::{AtomicUsize, Ordering};

use chrono::NaiveDate;
use rayon::prelude::*;

use crate::intake;
use crate::mix::{Perturbed, Setting, groups};
use crate::profile::Profile;
use crate::rank::Progress;
use crate::series::{Daily, Days};
use crate::site::{Learned, Site};

pub use curve::{Curve, ZONE_FACTORS};

/// One day as the caller knows it.
#[derive(Debug, Clone, Copy)]
pub struct Day<'a> {
    /// The date.
    pub date: NaiveDate,
    /// What was set; `None` where nobody wrote it down.
    pub setting: Option<&'a Setting>,
    /// The newest cast taken by then, under the pool of the day.
    pub profile: Option<&'a Profile>,
    /// Whether the setting was changed in the course of the day.
    pub changed: bool,
    /// An unplanned event of the day, in the words of the log.
    pub event: Option<&'a str>,
}

/// A day with both: what was computed, with nothing learned in it, and what the gauge read.
#[derive(Debug, Clone, PartialEq)]
pub struct Pair {
    /// The date.
    pub date: NaiveDate,
    /// File of the cast.
    pub cast: String,
    /// Days from the cast to the date.
    pub age_days: i64,
    /// Flow released, leaks included, m3/s.
    pub flow_m3s: f64,
    /// Share of the flow drawn by each level that gives any, by its place among [`groups`], from the lowest.
    pub shares: Vec<(usize, f64)>,
    /// Water before each level that the pool covers, C, by the same place.
    pub before_c: Vec<(usize, f64)>,
    /// Coldest and warmest water of the cast, C.
    pub cast_c: (f64, f64),
    /// The release as it would be with thinner and thicker zones.
    pub curve: Curve,
    /// Release computed, C.
    pub computed_c: f64,
    /// Oxygen below the dam computed, mg/L.
    pub computed_mg_l: Option<f64>,
    /// Its 10-90 % band, C.
    pub band_c: (f64, f64),
    /// Band of the oxygen, mg/L.
    pub band_mg_l: Option<(f64, f64)>,
    /// Mean of the day at the gauge, C.
    pub measured_c: Option<f64>,
    /// The same of the oxygen, mg/L.
    pub measured_mg_l: Option<f64>,
}

/// Why a day is no pair.
#[derive(Debug, Clone, PartialEq)]
pub enum Why {
    /// Something happened that was not planned.
    Event(String),
    /// Nobody wrote down what was set.
    NotSet,
    /// The setting was changed in the course of the day, so its mean belongs to neither.
    Changed,
    /// No cast had been taken.
    NoCast,
    /// The cast does not say when it was taken.
    Undated,
    /// The cast is older than the site lets it be, days.
    Stale(i64),
    /// The gauge has no valid mean of the day.
    NoGauge,
    /// What was set draws no water under the pool of the day.
    NoWater,
}

impl Why {
    /// The reason in words.
    pub fn words(&self) -> String {
        match self {
            Self::Event(words) => format!("unplanned event: {words}"),
            Self::NotSet => "no setting is known".into(),
            Self::Changed => "the setting was changed that day".into(),
            Self::NoCast => "no cast had been taken".into(),
            Self::Undated => "the cast does not say when it was taken".into(),
            Self::Stale(days) => format!("the cast is {days} days off"),
            Self::NoGauge => "the gauge has no valid mean of the day".into(),
            Self::NoWater => "what was set draws no water at this pool".into(),
        }
    }
}

/// A day left out.
#[derive(Debug, Clone, PartialEq)]
pub struct Left {
    /// The date.
    pub date: NaiveDate,
    /// Why.
    pub why: Why,
}

/// The pairs of a record, and the days that are none.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct Paired {
    /// By date.
    pub pairs: Vec<Pair>,
    /// Days left out, by date, each with its reason.
    pub left_out: Vec<Left>,
    /// What was computed of days left out, by date, where it could be: to be looked at, not to be learned from.
    pub beside: Vec<Pair>,
}

impl Paired {
    /// Drops what is of other dates.
    pub fn keep(&mut self, is_wanted: &dyn Fn(NaiveDate) -> bool) {
        self.pairs.retain(|pair| is_wanted(pair.date));
        self.left_out.retain(|left| is_wanted(left.date));
        self.beside.retain(|pair| is_wanted(pair.date));
    }
}

/// Holds every day against the gauge, as computed with nothing learned. `None` where `progress` stopped it.
pub fn pairs(site: &Site, days: &[Day], gauge: &Daily, progress: Progress) -> Option<Paired> {
    // so that nothing is learned on top of what was
    let plain = site.without_learned();
    let site = plain.as_ref().unwrap_or(site);
    let groups = groups(site);
    let done = AtomicUsize::new(0);
    let one = |day: &Day| {
        let before = done.fetch_add(1, Ordering::Relaxed);
        if progress(before as f64 / days.len() as f64) == ControlFlow::Break(()) {
            return None;
        }
        let computed = computed(site, &groups, day, gauge);
        let why = barred(day, gauge, &computed);
        Some((day.date, computed.ok(), why))
    };
    let all: Vec<(NaiveDate, Option<Pair>, Option<Why>)> = days.par_iter().map(one).collect::<Option<_>>()?;
    let mut out = Paired::default();
    for (date, pair, why) in all {
        let is_left = why.is_some();
        out.left_out.extend(why.map(|why| Left { date, why }));
        if is_left { out.beside.extend(pair) } else { out.pairs.extend(pair) }
    }
    out.pairs.sort_by_key(|pair| pair.date);
    out.left_out.sort_by_key(|left| left.date);
    out.beside.sort_by_key(|pair| pair.date);
    Some(out)
}

/// Why a day is no pair, though it may have been computed.
fn barred(day: &Day, gauge: &Daily, computed: &Result<Pair, Why>) -> Option<Why> {
    let measured = |of: &Days| of.days.contains_key(&day.date);
    if let Some(words) = day.event {
        return Some(Why::Event(words.to_owned()));
    }
    match computed {
        Err(Why::NotSet) => Some(Why::NotSet),
        _ if day.changed => Some(Why::Changed),
        Err(why) => Some(why.clone()),
        Ok(_) if !measured(&gauge.temperature_c) && !measured(&gauge.oxygen_mg_l) => Some(Why::NoGauge),
        Ok(_) => None,
    }
}

/// What was set on a day, computed on its cast, with what the gauge read.
fn computed(site: &Site, groups: &[Vec<usize>], day: &Day, gauge: &Daily) -> Result<Pair, Why> {
    let setting = day.setting.ok_or(Why::NotSet)?;
    let profile = day.profile.ok_or(Why::NoCast)?;
    let taken = profile.taken.ok_or(Why::Undated)?.with_timezone(&site.offset).date_naive();
    let age_days = (day.date - taken).num_days();
    // a cast of the days after shows the same water; how the caller chose it is not asked here
    if age_days.abs() as f64 > site.checks.stale_days {
        return Err(Why::Stale(age_days.abs()));
    }
    let mean = |of: &Days| Some(of.days.get(&day.date)?.mean);
    let (measured_c, measured_mg_l) = (mean(&gauge.temperature_c), mean(&gauge.oxygen_mg_l));
    let (curve, drawn, release) = Curve::of(site, groups, profile, setting).ok_or(Why::NoWater)?;
    let perturbed = Perturbed::new(site, profile, Some(age_days as f64));
    let spread = perturbed.spread(site, groups, setting, &release);
    let level = |outlet: &usize| groups.iter().position(|group| group.contains(outlet));
    let shares = drawn
        .iter()
        .filter(|d| d.draw.is_some())
        .filter_map(|d| Some((level(d.level.outlets.first()?)?, d.level.sink.flow_m3s / release.flow_m3s)));
    let temperatures = || profile.samples.iter().map(|s| s.temperature_c);
    Ok(Pair {
        date: day.date,
        cast: profile.file.clone(),
        age_days,
        flow_m3s: release.flow_m3s,
        shares: shares.collect(),
        before_c: before_c(site, groups, profile),
        cast_c: (
            temperatures().fold(f64::INFINITY, f64::min),
            temperatures().fold(f64::NEG_INFINITY, f64::max),
        ),
        curve,
        computed_c: release.temperature_c,
        computed_mg_l: release.oxygen_below_mg_l,
        band_c: spread.band_c().ok_or(Why::NoWater)?,
        band_mg_l: spread.band_oxygen_mg_l(),
        measured_c,
        measured_mg_l,
    })
}

/// The water before each level, at the middle of its lowest outlet that the pool covers.
fn before_c(site: &Site, groups: &[Vec<usize>], profile: &Profile) -> Vec<(usize, f64)> {
    let wet = |group: &Vec<usize>| {
        let outlets = group.iter().filter_map(|&i| site.outlets.get(i));
        let outlet = outlets.into_iter().find(|o| intake::is_wet(o, 1.0, profile.pool_m))?;
        Some(profile.column.reading(outlet.centre_m).temperature_c)
    };
    groups.iter().enumerate().filter_map(|(level, group)| Some((level, wet(group)?))).collect()
}

impl Pair {
    /// The level that carries most of the flow.
    pub fn level(&self) -> Option<usize> {
        self.shares.iter().copied().reduce(|a, b| if b.1 > a.1 { b } else { a }).map(|most| most.0)
    }

    /// Temperature (C) and oxygen below the dam (mg/L) with what was learned put to what was computed.
    pub fn with(&self, learned: &Learned) -> (f64, Option<f64>) {
        let (temperature_c, oxygen_mg_l) = self.curve.at(learned.zone_factor.unwrap_or(1.0));
        let gained = |oxygen: f64| (oxygen + learned.oxygen_gain_mg_l.unwrap_or(0.0)).max(0.0);
        (temperature_c + learned.shift_c(&self.shares), oxygen_mg_l.map(gained))
    }
}
