//! The release each point would need for its rules today.
//!
//! Methods: `docs/methods.md`, section 6.

use crate::mix::RuleToday;
use crate::river::{self, Floor, Part, RELEASES_C, Wanted, course, least_oxygen};
use crate::target::{Air, Figure, OxygenFigure, Target, Today};
use crate::tasks::Context;

use super::Way;

/// Ends of a window that cross by less still meet, C (choice: round-off of a root).
const NEAR_C: f64 = 1e-6;

/// The release that keeps a point inside its rules today, as far as one does.
#[derive(Debug, Clone, PartialEq)]
pub struct Window {
    /// Index in the points of the river; `None` for the dam itself.
    pub point: Option<usize>,
    /// Coldest release that keeps every rule of the point, C; `None` where none asks for warmth.
    pub low_c: Option<f64>,
    /// Warmest, C; `None` where none asks for cold.
    pub high_c: Option<f64>,
    /// Rules, by their index in the targets, that set the ends.
    pub set_by: [Option<usize>; 2],
    /// Whether any release keeps them all; `None` where nothing of it can be told.
    pub reachable: Option<bool>,
    /// Whether a rule asks anything of the temperature.
    pub ranged: bool,
    /// Least oxygen of the release that keeps the floors at the temperature of the way spoken of, mg/L; `None` where
    /// there is no floor or it cannot be told.
    pub oxygen_min_mg_l: Option<f64>,
    /// The rule that sets it.
    pub oxygen_set_by: Option<usize>,
    /// Oxygen at saturation below the dam at that temperature, mg/L.
    pub saturation_mg_l: Option<f64>,
    /// What the point asks of its own temperature today, C, all its rules together.
    pub asked_c: [Option<f64>; 2],
    /// Its floor, mg/L.
    pub floor_mg_l: Option<f64>,
    /// What cannot be told, and why.
    pub unknown: Vec<String>,
}

/// The windows of the dam and of every point that rules speak of, under the flows of a way.
pub(super) fn windows(context: &Context, way: &Way) -> Vec<Window> {
    let site = context.site();
    let rules = context.day().rules(site);
    let points = site.river.as_ref().map_or(0, |r| r.points.len());
    let places = std::iter::once(None).chain((0..points).map(Some));
    let of = |point: Option<usize>| {
        let here: Vec<&RuleToday> =
            rules.iter().filter(|r| r.point == point && !is_wish(way, r.target)).collect();
        (!here.is_empty()).then(|| window(context, way, point, &here))
    };
    places.filter_map(of).collect()
}

/// Whether a rule is held as a wish: what is only wished for narrows no window.
fn is_wish(way: &Way, target: usize) -> bool {
    way.targets.iter().any(|s| s.target == target && s.wish)
}

/// The window of a place under its rules.
fn window(context: &Context, way: &Way, point: Option<usize>, rules: &[&RuleToday]) -> Window {
    let mut out = Window {
        point,
        low_c: None,
        high_c: None,
        set_by: [None, None],
        reachable: Some(true),
        ranged: rules.iter().any(|r| context.site().targets.get(r.target).is_some_and(Target::has_range)),
        oxygen_min_mg_l: None,
        oxygen_set_by: None,
        saturation_mg_l: None,
        asked_c: [None, None],
        floor_mg_l: None,
        unknown: Vec::new(),
    };
    for rule in rules {
        match &rule.today {
            Ok(today) => out.narrow(rule.target, ends(context, way, point, today)),
            Err(words) => out.unknown.push(words.clone()),
        }
        if let Some(air) = &rule.air {
            out.raise(rule.target, air, floor(context, way, point, air));
        }
    }
    let ordered = out.low_c.zip(out.high_c).is_none_or(|(low, high)| low <= high + NEAR_C);
    out.reachable = out.reachable.map(|reachable| reachable && ordered);
    out.asked_c = asked(context, way, &out, rules);
    if out.reachable == Some(false) {
        (out.low_c, out.high_c) = (None, None);
    }
    let nothing = out.low_c.is_none() && out.high_c.is_none() && out.oxygen_min_mg_l.is_none();
    if nothing && !out.unknown.is_empty() && out.reachable == Some(true) {
        out.reachable = None;
    }
    out.unknown.dedup();
    out
}

impl Window {
    /// Takes the releases in that a rule allows.
    fn narrow(&mut self, target: usize, ends: Result<Ends, String>) {
        let ends = match ends {
            Ok(ends) => ends,
            Err(words) => {
                self.unknown.push(words);
                return;
            }
        };
        self.reachable = self.reachable.map(|reachable| reachable && ends.reachable);
        if ends.step {
            self.unknown.push("the point passes an end of its range in a step".to_owned());
        }
        if let Some(low) = ends.low_c.filter(|low| self.low_c.is_none_or(|l| *low > l)) {
            (self.low_c, self.set_by[0]) = (Some(low), Some(target));
        }
        if let Some(high) = ends.high_c.filter(|high| self.high_c.is_none_or(|h| *high < h)) {
            (self.high_c, self.set_by[1]) = (Some(high), Some(target));
        }
    }

    /// Takes the oxygen in that a floor asks of the release.
    fn raise(&mut self, target: usize, air: &Air, asked: Result<Breath, String>) {
        match asked {
            Ok(Breath { least_mg_l: None, .. }) => {
                self.reachable = Some(false);
                self.unknown.push("no oxygen of the release keeps its floor".to_owned());
            }
            Ok(Breath { least_mg_l: Some(least), floor_mg_l: floor, saturation_mg_l }) => {
                self.saturation_mg_l = Some(saturation_mg_l);
                if self.oxygen_min_mg_l.is_none_or(|l| least > l) {
                    (self.oxygen_min_mg_l, self.oxygen_set_by) = (Some(least), Some(target));
                }
                if !air.share {
                    self.floor_mg_l = Some(self.floor_mg_l.map_or(floor, |f| f.max(floor)));
                }
            }
            Err(words) => self.unknown.push(words),
        }
    }
}

/// Releases that a rule allows.
struct Ends {
    low_c: Option<f64>,
    high_c: Option<f64>,
    reachable: bool,
    step: bool,
}

/// Releases that keep a place in what a rule asks of today.
fn ends(context: &Context, way: &Way, point: Option<usize>, today: &Today) -> Result<Ends, String> {
    let (low_c, high_c) = (today.low_asked_c(), today.high_c);
    // a figure that counts no lower than its base cannot be brought below it
    if today.base_c.zip(high_c).is_some_and(|(base, high)| high < base) {
        return Ok(Ends { low_c: None, high_c: None, reachable: false, step: false });
    }
    if low_c.is_none() && high_c.is_none() {
        return Ok(Ends { low_c, high_c, reachable: true, step: false });
    }
    if today.figure == Figure::HourlyChange {
        return Err("a change from hour to hour follows from no one release temperature".to_owned());
    }
    let Some(point) = point else {
        let (coldest, warmest) = RELEASES_C;
        let reachable = low_c.is_none_or(|low| low <= warmest) && high_c.is_none_or(|high| high >= coldest);
        return Ok(Ends { low_c, high_c, reachable, step: false });
    };
    let there = way.course.as_ref().and_then(|c| c.points.iter().find(|p| p.point == point));
    let Some(there) = there else { return Err("what arrives there is not known".to_owned()) };
    if today.figure != Figure::Mean && there.figures.range_c.is_none() {
        return Err("the greatest and least of its day need weather by the hour".to_owned());
    }
    // of every reading the greatest stays below the upper end and the least above the lower
    let wanted = match today.figure {
        Figure::Max => vec![(low_c, high_c, river::Figure::Greatest)],
        Figure::Min => vec![(low_c, high_c, river::Figure::Least)],
        Figure::Both => {
            vec![(low_c, None, river::Figure::Least), (None, high_c, river::Figure::Greatest)]
        }
        _ => vec![(low_c, high_c, river::Figure::Mean)],
    };
    let mut out = Ends { low_c: None, high_c: None, reachable: true, step: false };
    for (low_c, high_c, of) in wanted {
        let wanted = Wanted { low_c, high_c, of };
        let (site, conditions) = (context.site(), &context.conditions);
        let found = river::window(site, conditions, context.on.date_naive(), &flows(way), point, wanted);
        let Some(found) = found else { return Err("what arrives there is not known".to_owned()) };
        out.low_c = out.low_c.or(found.low_c);
        out.high_c = out.high_c.or(found.high_c);
        out.reachable &= found.reachable;
        out.step |= found.step;
    }
    Ok(out)
}

/// Hours and flows of the parts of the day.
fn flows(way: &Way) -> Vec<(f64, f64)> {
    way.released().iter().map(|p| (p.hours, p.flow_m3s)).collect()
}

/// What a floor at a place asks of the oxygen of the release, mg/L.
struct Breath {
    /// Least oxygen of the release; `None` where none serves.
    least_mg_l: Option<f64>,
    /// The floor itself.
    floor_mg_l: f64,
    /// Saturation below the dam at the temperature of the release.
    saturation_mg_l: f64,
}

/// What a floor at a place asks of the oxygen of the release.
fn floor(context: &Context, way: &Way, point: Option<usize>, air: &Air) -> Result<Breath, String> {
    let site = context.site();
    let release_c = way.temperature_c();
    let salt = way.parts.first().map_or(0.0, |p| p.release.salt_g_per_kg);
    let saturation_mg_l = site.saturation_below_mg_l(release_c, salt);
    let Some(point) = point else {
        let floor_mg_l = air.floor_mg_l(saturation_mg_l);
        return Ok(Breath { least_mg_l: Some(floor_mg_l), floor_mg_l, saturation_mg_l });
    };
    let floor = match (air.figure, air.share) {
        (OxygenFigure::Mean, false) => Floor::Mean(air.floor),
        (OxygenFigure::Mean, true) => Floor::MeanShare(air.floor),
        (OxygenFigure::Min, false) => Floor::Least(air.floor),
        (OxygenFigure::Min, true) => Floor::LeastShare(air.floor),
    };
    let (conditions, date) = (&context.conditions, context.on.date_naive());
    let found = least_oxygen(site, conditions, date, &flows(way), (point, release_c), floor);
    match found {
        Some(found) => Ok(Breath { least_mg_l: found.least_mg_l, floor_mg_l: air.floor, saturation_mg_l }),
        None => Err("the oxygen there is not known".to_owned()),
    }
}

/// What a place asks of its own mean temperature today, C: at a point the mean that goes with the ends of the window.
fn asked(context: &Context, way: &Way, window: &Window, rules: &[&RuleToday]) -> [Option<f64>; 2] {
    let of_means = |end: fn(&Today) -> Option<f64>, stricter: fn(f64, f64) -> f64| {
        let means = rules.iter().filter_map(|r| r.today.as_ref().ok()).filter(|t| t.figure == Figure::Mean);
        means.filter_map(end).reduce(stricter)
    };
    let Some(point) = window.point.filter(|_| window.reachable == Some(true)) else {
        return [of_means(|t| t.low_c, f64::max), of_means(|t| t.high_c, f64::min)];
    };
    let mean_c = |release_c: f64| {
        let parts: Vec<Part> =
            way.released().into_iter().map(|part| Part { temperature_c: release_c, ..part }).collect();
        let there = course(context.site(), &context.conditions, context.on.date_naive(), &parts)?;
        Some(there.points.iter().find(|p| p.point == point)?.figures.mean_c)
    };
    [window.low_c.and_then(mean_c), window.high_c.and_then(mean_c)]
}
