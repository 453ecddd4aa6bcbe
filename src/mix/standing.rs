//! How a day's release stands against every target, over time as a gauge sees it.
//!
//! Methods: `docs/methods.md`, section 7.

use crate::problem::Problem;
use crate::river::AtPoint;
use crate::site::Site;
use crate::target::{Basis, OxygenFigure, Standing, Statistic, Target, Today};

use super::band::Spread;
use super::blend::Blend;
use super::conflict::{Conflict, conflicts};
use super::day::{Day, RuleToday};
use super::place::{Places, Water};

/// How the release stands against one target.
#[derive(Debug, Clone, PartialEq)]
pub struct TargetStanding {
    /// Index in the site's targets.
    pub target: usize,
    /// What the rule's range is of, by its statistic: C, a difference or C days.
    pub value_c: Option<f64>,
    /// Days above, or percent of days above, where the rule counts them and a record tells of them.
    pub count: Option<f64>,
    /// Today's temperature that it is held against, C.
    pub figure_c: Option<f64>,
    /// Least and greatest that the rule leaves to it, buffer and days already observed counted in, C.
    pub left_c: [Option<f64>; 2],
    /// Standing of the temperature and distance outside, C or C days.
    pub temperature: (Standing, Option<f64>),
    /// Oxygen below the dam, mg/L.
    pub oxygen_mg_l: Option<f64>,
    /// Oxygen over saturation.
    pub oxygen_share: Option<f64>,
    /// Least that the rule leaves to today's oxygen, mg/L.
    pub floor_mg_l: Option<f64>,
    /// Standing of the oxygen and distance below, mg/L.
    pub oxygen: (Standing, Option<f64>),
    /// Share of the perturbed cases inside the temperature range.
    pub share_inside: Option<f64>,
    /// Share of the perturbed cases above the oxygen minimum.
    pub oxygen_share_inside: Option<f64>,
    /// Share of the perturbed cases inside both.
    pub share_inside_both: Option<f64>,
    /// What it rests on.
    pub basis: Basis,
    /// What is to be said of it: why it is not known, or what was assumed.
    pub words: Option<String>,
    /// It is held as a wish, and never missed: it is soft, or a rule of smaller priority number leaves it nothing.
    pub wish: bool,
    /// The strictest rule valid on that date.
    pub governs: bool,
}

impl TargetStanding {
    /// Whether either standing is a miss; a wish is never missed.
    pub fn missed(&self) -> bool {
        let outside = |s: &Standing| matches!(s, Standing::Below | Standing::Above);
        !self.wish && [self.temperature.0, self.oxygen.0].iter().any(outside)
    }

    /// How far the temperature lies outside, C; of a sum of degrees how far today's lies from what is left to it.
    pub fn by_c(&self, site: &Site) -> Option<f64> {
        if !site.targets[self.target].statistic.is_sum() {
            return self.temperature.1;
        }
        let [low, high] = self.left_c;
        let figure = self.figure_c?;
        Some(low.map_or(0.0, |low| low - figure).max(high.map_or(0.0, |high| figure - high)).max(0.0))
    }

    /// Whether a bound the rule sets cannot be judged.
    pub fn unknown(&self, site: &Site) -> bool {
        let rule = &site.targets[self.target];
        !self.wish
            && ((rule.has_range() && self.temperature.0 == Standing::Unknown)
                || (rule.has_floor() && self.oxygen.0 == Standing::Unknown))
    }
}

/// A part of the day: its share of it, what is then released, and its perturbed cases. The parts follow one another
/// from midnight.
pub type Part<'a> = (f64, &'a Blend, &'a Spread);

/// A day's release held against every target valid on the date.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct Held {
    /// Standings, in the order of the site's targets.
    pub targets: Vec<TargetStanding>,
    /// Hard rules that leave nothing in common.
    pub conflicts: Vec<Conflict>,
    /// What arrives at the points of the river; empty where no rule speaks of one, or the way is not known.
    pub points: Vec<AtPoint>,
    /// What to beware of on the way down.
    pub flags: Vec<Problem>,
}

/// Standing of the parts of a day against every target valid on a date; a steady day is one part.
pub fn standings(site: &Site, parts: &[Part], day: impl Into<Day>) -> Vec<TargetStanding> {
    held(site, parts, day).targets
}

/// The same with the conflicts among the rules and what arrives at the points.
///
/// A statistic of temperature is taken over time, not over flow.
pub fn held(site: &Site, parts: &[Part], day: impl Into<Day>) -> Held {
    let day: Day = day.into();
    let rules = day.rules(site);
    let places = Places::new(site, parts, &day, rules.iter().any(|r| r.point.is_some()));
    let conflicts = conflicts(site, &rules, &places.links);
    let judge = Judge { site, parts, places: &places, conflicts: &conflicts };
    let (mut targets, mut rooms) = (Vec::new(), Vec::new());
    for asked in rules.iter() {
        let (standing, room) = judge.rule(asked);
        targets.push(standing);
        rooms.push(room);
    }
    if let Some(i) = governing(site, &targets, &rooms) {
        targets[i].governs = true;
    }
    let (points, flags) = places.course.map(|c| (c.points, c.flags)).unwrap_or_default();
    Held { targets, conflicts, points, flags }
}

/// Of the rules with a bound that can be judged, hard before soft: among those missed the one that comes first by
/// priority, then the one with the least room.
fn governing(site: &Site, targets: &[TargetStanding], rooms: &[Option<f64>]) -> Option<usize> {
    let order = |i: usize, room: f64| {
        let first = if targets[i].missed() { site.targets[targets[i].target].priority } else { u32::MAX };
        (targets[i].wish, first, room)
    };
    let known = rooms.iter().enumerate().filter_map(|(i, room)| Some((i, order(i, (*room)?))));
    known.min_by(|(_, a), (_, b)| (a.0, a.1).cmp(&(b.0, b.1)).then(a.2.total_cmp(&b.2))).map(|(i, _)| i)
}

/// Whether a rule is held as a wish: it is soft, or a hard rule of smaller priority number leaves it nothing that is not
/// itself held as a wish.
pub fn is_wish(site: &Site, target: usize, conflicts: &[Conflict]) -> bool {
    site.targets.get(target).is_some_and(|rule| rule.soft) || overruled(site, conflicts).contains(&target)
}

/// The rules that conflicts make wishes, by priority: whoever is overruled overrules nobody.
fn overruled(site: &Site, conflicts: &[Conflict]) -> Vec<usize> {
    let mut order: Vec<(u32, usize)> = conflicts
        .iter()
        .flat_map(|c| c.targets)
        .filter_map(|t| Some((site.targets.get(t)?.priority, t)))
        .collect();
    order.sort_unstable();
    order.dedup();
    let mut out: Vec<usize> = Vec::new();
    for &(priority, target) in &order {
        let stands = |&&(first, other): &&(u32, usize)| first < priority && !out.contains(&other);
        let meets = |other: usize| {
            conflicts.iter().any(|c| c.targets.contains(&target) && c.targets.contains(&other))
        };
        if order.iter().filter(stands).any(|&(_, other)| meets(other)) {
            out.push(target);
        }
    }
    out
}

struct Judge<'a> {
    site: &'a Site,
    parts: &'a [Part<'a>],
    places: &'a Places<'a>,
    conflicts: &'a [Conflict],
}

/// A standing and how far outside.
type Stands = (Standing, Option<f64>);

impl Judge<'_> {
    /// How the day stands against a rule, and the room it leaves, 1 C counted like 1 mg/L (choice: bins of both are
    /// 0.5); `None` where no bound can be judged.
    fn rule(&self, asked: &RuleToday) -> (TargetStanding, Option<f64>) {
        let rule = &self.site.targets[asked.target];
        let water = self.places.water(asked.point);
        let today = asked.today.as_ref().ok();
        let figure_c = water.zip(today).and_then(|(w, today)| w.figure_c(today));
        let (temperature, warm_room) = warm(rule, today, figure_c);
        let (oxygen, air_room) = aired(asked, water);
        let air_today = asked.air.zip(water).and_then(|(air, w)| w.oxygen_mg_l(&air));
        let value_c = today.zip(figure_c).map(|(today, f)| {
            let value = today.value(f);
            if rule.statistic == Statistic::DailyChange { value.abs() } else { value }
        });
        let count = today.zip(figure_c).and_then(|(today, f)| {
            Some(today.count?.with_today(rule.high_kept_c().is_some_and(|high| f > high)))
        });
        let saturation = water.and_then(|w| w.saturation_mg_l(rule.oxygen_figure())).filter(|s| *s > 0.0);
        // without a floor the oxygen is still told: the least of the day
        let told = air_today.or_else(|| water.and_then(|w| w.least_mg_l(rule.oxygen_figure())));
        let (share_inside, oxygen_share_inside, share_inside_both) = self.shares(asked, rule);
        let observed = today.is_some_and(|t| t.observed) || asked.air.is_some_and(|a| a.observed);
        let basis = match (observed, self.parts.len()) {
            (true, _) => Basis::Observed,
            (_, 0 | 1) => Basis::Steady,
            _ => Basis::Blocks,
        };
        let in_mg_l = asked.air.filter(|air| !air.share);
        let standing = TargetStanding {
            target: asked.target,
            value_c,
            count,
            figure_c,
            left_c: today.map_or([None; 2], |today| [today.low_c, today.high_c]),
            temperature,
            oxygen_mg_l: told.map(|o| in_mg_l.map_or(o, |air| air.value(o))),
            oxygen_share: told.zip(saturation).map(|(o, s)| {
                let share = o / s;
                asked.air.filter(|air| air.share).map_or(share, |air| air.value(share))
            }),
            floor_mg_l: asked.air.zip(water).and_then(|(air, w)| w.floor_mg_l(&air)),
            oxygen,
            share_inside,
            oxygen_share_inside,
            share_inside_both,
            basis,
            words: words(asked, rule, water, figure_c),
            wish: is_wish(self.site, asked.target, self.conflicts),
            governs: false,
        };
        (standing, [warm_room, air_room].into_iter().flatten().reduce(f64::min))
    }

    /// Shares of the perturbed cases inside the range, above the floor, and both.
    fn shares(&self, asked: &RuleToday, rule: &Target) -> (Option<f64>, Option<f64>, Option<f64>) {
        let count = self.parts.iter().map(|p| p.2.cases.len()).min().unwrap_or(0);
        let (range, floor) = (rule.has_range(), rule.has_floor());
        let (mut warm_cases, mut air_cases, mut both) = (0_u32, 0_u32, 0_u32);
        // a case that cannot be judged is neither inside nor outside, so one such case leaves the shares unknown
        let (mut warm_known, mut air_known) = (count > 0, count > 0);
        for case in 0..count {
            let water = self.places.case(asked.point, case);
            let today = asked.today.as_ref().ok();
            let figure_c = water.zip(today).and_then(|(w, today)| w.figure_c(today));
            let is_warm = warm(rule, today, figure_c).0.0;
            let is_aired = aired(asked, water).0.0;
            warm_known &= !range || is_warm != Standing::Unknown;
            air_known &= !floor || is_aired != Standing::Unknown;
            let inside = |standing, asked: bool| !asked || standing == Standing::Inside;
            let (w, a) = (inside(is_warm, range), inside(is_aired, floor));
            warm_cases += u32::from(w);
            air_cases += u32::from(a);
            both += u32::from(w && a);
        }
        let share = |inside: u32, known: bool| known.then(|| f64::from(inside) / count as f64);
        (
            share(warm_cases, warm_known && range),
            share(air_cases, air_known && floor),
            share(both, warm_known && air_known),
        )
    }
}

/// Standing of a temperature and how far outside; the room it leaves, C.
fn warm(rule: &Target, today: Option<&Today>, figure_c: Option<f64>) -> (Stands, Option<f64>) {
    let (Some(today), Some(figure_c), true) = (today, figure_c, rule.has_range()) else {
        return ((Standing::Unknown, None), None);
    };
    let outside = today.outside_c(figure_c);
    let by = outside.abs() * today.times;
    let standing = match outside {
        o if o > 0.0 => Standing::Above,
        // a change is too large whichever way it goes
        o if o < 0.0 && rule.statistic == Statistic::DailyChange => Standing::Above,
        o if o < 0.0 => Standing::Below,
        _ => Standing::Inside,
    };
    ((standing, Some(by)), today.room_c(figure_c))
}

/// Standing of the oxygen and how far below, mg/L; the room it leaves.
fn aired(asked: &RuleToday, water: Option<Water>) -> (Stands, Option<f64>) {
    let found =
        asked.air.zip(water).and_then(|(air, w)| Some((air, w.oxygen_mg_l(&air)?, w.floor_mg_l(&air)?)));
    let Some((air, oxygen, floor)) = found else { return ((Standing::Unknown, None), None) };
    if oxygen < floor {
        ((Standing::Below, Some((floor - oxygen) * air.times)), Some(oxygen - floor))
    } else {
        ((Standing::Inside, Some(0.0)), Some(oxygen - floor))
    }
}

/// Why a bound cannot be judged, or what was assumed.
fn words(asked: &RuleToday, rule: &Target, water: Option<Water>, figure_c: Option<f64>) -> Option<String> {
    let today = match &asked.today {
        Err(why) => return Some(why.clone()),
        Ok(today) => today,
    };
    if water.is_none() {
        return Some(format!("what arrives at {} on this day is not known", rule.point));
    }
    if rule.has_range() && figure_c.is_none() {
        return Some("only the mean of the day is known there: give weather by the hour".into());
    }
    let mean_only =
        water.is_some_and(|w| w.mean_only()) && asked.air.is_some_and(|air| air.figure == OxygenFigure::Min);
    let oxygen = mean_only
        .then(|| "only the mean oxygen of the day is known there, and stands for its least: give weather by the hour".to_owned());
    let words: Vec<String> = today.words.iter().cloned().chain(oxygen).collect();
    (!words.is_empty()).then(|| words.join("; "))
}
