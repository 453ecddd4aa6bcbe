//! A release on its way down the river.

use crate::mix::{Blend, Conflict, Mix, Setting, Spread, TargetStanding};
use crate::river::{self, AtPoint, Course, Curve, Part, links};
use crate::tasks::Context;
use crate::tasks::MixAnswer;
use crate::tasks::learned::Without;
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
    /// The release with nothing learned, where something is.
    pub without: Option<Without>,
    /// What becomes of that.
    pub without_course: Option<Course>,
}

impl Way {
    /// Of a setting judged as `mix` does.
    pub(in crate::tasks) fn of_mix(context: &Context, which: Which, answer: &MixAnswer) -> Self {
        let day = answer.day.as_ref();
        let parts: Vec<(f64, &Setting, &Mix)> = match day {
            Some(day) => day.blocks.iter().map(|b| (b.share, &b.setting, &b.mix)).collect(),
            None => vec![(1.0, &answer.setting, &answer.mix)],
        };
        let (targets, conflicts) = day
            .map_or((&answer.mix.targets, &answer.mix.conflicts), |d| (&d.held.targets, &d.held.conflicts));
        Self::new(context, which, &parts, targets, conflicts)
    }

    /// Of a ranked mix.
    pub(in crate::tasks) fn of_ranked(context: &Context, which: Which, shown: &Shown) -> Self {
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
        let without = Without::of(parts.iter().map(|p| (p.0, p.2)));
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
        let course = river::course(site, &context.conditions, date, &released(&parts));
        let spreads = course.as_ref().map_or_else(Vec::new, |course| spreads(context, &parts, course));
        let plain =
            without.as_ref().map(|without| without.parts.iter().map(|p| part(p.0, &p.1.release)).collect());
        let without_course =
            plain.and_then(|parts: Vec<Part>| river::course(site, &context.conditions, date, &parts));
        let (targets, conflicts) = (targets.to_vec(), conflicts.to_vec());
        Self { which, parts, targets, conflicts, course, spreads, without, without_course }
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

    /// Time mean of the oxygen below the dam, mg/L.
    pub fn oxygen_mg_l(&self) -> Option<f64> {
        self.parts.iter().map(|p| Some(p.share * p.release.oxygen_below_mg_l?)).sum()
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
    parts.iter().map(|p| part(p.share, &p.release)).collect()
}

fn part(share: f64, release: &Blend) -> Part {
    Part {
        hours: DAY_H * share,
        flow_m3s: release.flow_m3s,
        temperature_c: release.temperature_c,
        oxygen_mg_l: release.oxygen_below_mg_l,
    }
}

/// The perturbed cases of the release as every point sees them, as time means: each differs from what arrives by what
/// the point makes of the difference of the release.
fn spreads(context: &Context, parts: &[WayPart], course: &Course) -> Vec<Spread> {
    let count = parts.iter().map(|p| p.spread.cases.len()).min().unwrap_or(0);
    let centre = by_flow(parts, |p| Some((p.release.temperature_c, p.release.oxygen_below_mg_l)));
    let Some(centre) = centre else { return Vec::new() };
    let cases: Vec<(f64, Option<f64>)> =
        (0..count).filter_map(|i| by_flow(parts, |p| p.spread.cases.get(i).copied())).collect();
    let warmth = || cases.iter().map(|c| c.0).chain([centre.0]);
    let Some(span_c) = warmth().reduce(f64::min).zip(warmth().reduce(f64::max)) else { return Vec::new() };
    let flows: Vec<(f64, f64)> = parts.iter().map(|p| (DAY_H * p.share, p.release.flow_m3s)).collect();
    let links = links(context.site(), &context.conditions, context.on.date_naive(), &flows, span_c);
    let seen = |there: &AtPoint| {
        let link = links.iter().find(|link| link.point == Some(there.point));
        let case = |&(c, mg_l): &(f64, Option<f64>)| {
            let shift = |curve: Curve| curve.at(c) - curve.at(centre.0);
            let warmer = link.map_or(0.0, |link| shift(link.mean_c));
            let aired = link.and_then(|link| link.oxygen_mean).zip(mg_l.zip(centre.1));
            let richer = aired.map(|((without, each), (o, at))| shift(without) + each * (o - at));
            let oxygen = there.figures.oxygen_mean_mg_l.zip(richer).map(|(o, by)| (o + by).max(0.0));
            (there.figures.mean_c + warmer, oxygen)
        };
        Spread { cases: cases.iter().map(case).collect() }
    };
    course.points.iter().map(seen).collect()
}

/// Temperature (C) and oxygen (mg/L) over the parts of a day, by their flow.
fn by_flow(
    parts: &[WayPart],
    of: impl Fn(&WayPart) -> Option<(f64, Option<f64>)>,
) -> Option<(f64, Option<f64>)> {
    let flow: f64 = parts.iter().map(|p| p.share * p.release.flow_m3s).sum();
    let weight = |p: &WayPart| p.share * p.release.flow_m3s / flow;
    let warmth = parts.iter().map(|p| Some(weight(p) * of(p)?.0)).sum::<Option<f64>>()?;
    let oxygen = parts.iter().map(|p| Some(weight(p) * of(p)?.1?)).sum();
    (flow > 0.0).then_some((warmth, oxygen))
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
