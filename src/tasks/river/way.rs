//! A release on its way down the river.

use crate::mix::{Blend, Conflict, Mix, Setting, Spread, TargetStanding};
use crate::river::{Course, Link, Part, course, links};
use crate::tasks::Context;
use crate::tasks::MixAnswer;
use crate::tasks::rank::Shown;

/// Hours of a day.
const DAY_H: f64 = 24.0;

/// Which release it is.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Which {
    /// Of the setting now.
    Now,
    /// Of the setting that is tried.
    Tried,
    /// Of the best of the ranking.
    Best,
}

impl Which {
    /// As every output names it.
    pub fn word(self) -> &'static str {
        match self {
            Self::Now => "now",
            Self::Tried => "tried",
            Self::Best => "best",
        }
    }
}

/// A part of the day: its share, what is set, what comes out, its perturbed cases.
#[derive(Debug, Clone)]
pub struct WayPart {
    /// Share of the day.
    pub share: f64,
    /// What is set.
    pub setting: Setting,
    /// What comes out.
    pub release: Blend,
    /// The perturbed cases.
    pub spread: Spread,
}

/// A release on its way down.
#[derive(Debug, Clone)]
pub struct Way {
    /// Which it is.
    pub which: Which,
    /// The parts of the day; one for a steady day.
    pub parts: Vec<WayPart>,
    /// Standing against every target valid on the date, at the dam and at every point.
    pub targets: Vec<TargetStanding>,
    /// Rules that leave no release in common.
    pub conflicts: Vec<Conflict>,
    /// What becomes of it; `None` where the site has no river or nothing is known of the air above it.
    pub course: Option<Course>,
    /// The perturbed cases at every point, as time means; empty without a course.
    pub spreads: Vec<Spread>,
}

impl Way {
    /// Of a setting judged as `mix` does.
    pub(super) fn of_mix(context: &Context, which: Which, answer: &MixAnswer) -> Self {
        let day = answer.day.as_ref();
        let parts: Vec<(f64, &Setting, &Mix)> = match day {
            Some(day) => day.blocks.iter().map(|b| (b.share, &b.setting, &b.mix)).collect(),
            None => vec![(1.0, &answer.setting, &answer.mix)],
        };
        let targets = day.map_or(&answer.mix.targets, |day| &day.held.targets);
        Self::new(context, which, &parts, targets, &answer.mix.conflicts)
    }

    /// Of a ranked mix.
    pub(super) fn of_ranked(context: &Context, which: Which, shown: &Shown) -> Self {
        let parts: Vec<_> = shown.parts.iter().map(|p| (p.share, &p.setting, &p.mix)).collect();
        Self::new(context, which, &parts, &shown.targets, &shown.conflicts)
    }

    pub(super) fn new(
        context: &Context,
        which: Which,
        parts: &[(f64, &Setting, &Mix)],
        targets: &[TargetStanding],
        conflicts: &[Conflict],
    ) -> Self {
        let parts: Vec<WayPart> = parts
            .iter()
            .map(|(share, setting, mix)| WayPart {
                share: *share,
                setting: (*setting).clone(),
                release: mix.release,
                spread: mix.spread.clone(),
            })
            .collect();
        let (site, date) = (context.site(), context.on.date_naive());
        let course = course(site, &context.conditions, date, &released(&parts));
        let spreads = if course.is_some() { spreads(context, &parts) } else { Vec::new() };
        let (targets, conflicts) = (targets.to_vec(), conflicts.to_vec());
        Self { which, parts, targets, conflicts, course, spreads }
    }

    /// The parts of the day as the river takes them.
    pub fn released(&self) -> Vec<Part> {
        released(&self.parts)
    }

    /// Time mean of the flow, m3/s.
    pub fn flow_m3s(&self) -> f64 {
        self.mean(|b| b.flow_m3s)
    }

    /// Time mean of the temperature, C.
    pub fn temperature_c(&self) -> f64 {
        self.mean(|b| b.temperature_c)
    }

    /// Time mean of the oxygen, mg/L.
    pub fn oxygen_mg_l(&self) -> Option<f64> {
        self.parts.iter().map(|p| Some(p.share * p.release.oxygen_mg_l?)).sum()
    }

    /// The perturbed cases at the dam, as time means.
    pub fn at_dam(&self) -> Spread {
        Spread { cases: over_day(&self.parts) }
    }

    /// Whether another sets the same.
    pub(super) fn sets_as(&self, other: &Self) -> bool {
        let settings = |way: &Self| way.parts.iter().map(|p| p.setting.clone()).collect::<Vec<_>>();
        settings(self) == settings(other)
    }

    fn mean(&self, of: impl Fn(&Blend) -> f64) -> f64 {
        self.parts.iter().map(|p| p.share * of(&p.release)).sum()
    }
}

fn released(parts: &[WayPart]) -> Vec<Part> {
    let part = |p: &WayPart| Part {
        hours: DAY_H * p.share,
        flow_m3s: p.release.flow_m3s,
        temperature_c: p.release.temperature_c,
        oxygen_mg_l: p.release.oxygen_mg_l,
    };
    parts.iter().map(part).collect()
}

/// The perturbed cases of the release as every point sees them, as time means.
fn spreads(context: &Context, parts: &[WayPart]) -> Vec<Spread> {
    let cases = over_day(parts);
    let warmth = || cases.iter().map(|c| c.0);
    let Some(span_c) = warmth().reduce(f64::min).zip(warmth().reduce(f64::max)) else { return Vec::new() };
    let flows: Vec<(f64, f64)> = parts.iter().map(|p| (DAY_H * p.share, p.release.flow_m3s)).collect();
    let links = links(context.site(), &context.conditions, context.on.date_naive(), &flows, span_c);
    let seen = |link: &Link| {
        let case = |&(c, mg_l): &(f64, Option<f64>)| {
            let oxygen = link.oxygen_mean.zip(mg_l).map(|((without, each), o)| without.at(c) + each * o);
            (link.mean_c.at(c), oxygen)
        };
        Spread { cases: cases.iter().map(case).collect() }
    };
    links.iter().map(seen).collect()
}

/// Time means of temperature (C) and oxygen (mg/L) of the perturbed cases.
fn over_day(parts: &[WayPart]) -> Vec<(f64, Option<f64>)> {
    let count = parts.iter().map(|p| p.spread.cases.len()).min().unwrap_or(0);
    let case = |i: usize| {
        let of = |p: &WayPart| p.spread.cases.get(i).copied();
        let warmth = parts.iter().filter_map(|p| Some(p.share * of(p)?.0)).sum();
        let oxygen = parts.iter().map(|p| Some(p.share * of(p)?.1?)).sum();
        (warmth, oxygen)
    };
    (0..count).map(case).collect()
}
