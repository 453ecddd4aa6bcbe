//! What the pictures of a season are drawn from.

use chrono::{Datelike, NaiveDate};

use crate::plot::Stroke;
use crate::problem::harmless;
use crate::profile::{Sample, thermocline};
use crate::season::{Layer, Layers, SeasonDay, TargetTally};
use crate::site::Site;
use crate::target::{DAM, Mark, Target, YearDay};
use crate::tasks::season::SeasonRun;
use crate::tui::draw::season::{
    CurvesThrough, GateDay, GateThrough, LineThrough, SeasonPicture, WaterDay, WaterThrough,
};
use crate::tui::look::Role;
use crate::units::Dimension;

use super::Screen;

/// The pictures of the season shown. Scales hold every season of its answer, so that switching moves nothing else.
pub(super) fn picture(screen: &Screen) -> Option<SeasonPicture> {
    let run = screen.shown.run;
    let first = run.run.days.first()?.date;
    let day_of = |date: NaiveDate| usize::try_from((date - first).num_days()).ok();
    let outcome = &run.outcome;
    let moves = outcome
        .calendar
        .iter()
        .filter_map(|on| Some((day_of(on.date)?, on.moved.len(), on.forced.is_some())));
    Some(SeasonPicture {
        system: screen.model.system(),
        first,
        days: run.run.days.len(),
        cursor: screen.day(),
        water: water(screen),
        release: release(screen),
        cold: cold(screen),
        gates: gates(screen),
        moves: moves.collect(),
        outside: outside(screen),
    })
}

impl<'a> Screen<'a> {
    /// The site as opened, with what is changed.
    pub(super) fn site(&self) -> &'a Site {
        self.shown.ahead.context.site()
    }

    /// The day read, from 0.
    pub(super) fn day(&self) -> Option<usize> {
        self.session.day_read()
    }

    /// The point looked at; `None` for the dam.
    pub(super) fn point(&self) -> Option<usize> {
        let points = self.site().river.as_ref().map_or(0, |r| r.points.len());
        self.session.season.place.checked_sub(1).filter(|p| *p < points)
    }

    /// Its name.
    pub(super) fn place(&self) -> String {
        let points = self.site().river.as_ref().map(|r| &r.points);
        let point = self.point().and_then(|p| points?.get(p));
        point.map_or_else(|| DAM.to_owned(), |p| harmless(&p.name))
    }

    /// What is looked at there: the temperature of a day, or its oxygen.
    pub(super) fn value(&self, day: &SeasonDay) -> Option<f64> {
        match (self.point(), self.session.season.oxygen) {
            (None, false) => Some(day.release?.temperature_c),
            (None, true) => day.release?.oxygen_below_mg_l,
            (Some(p), false) => day.points.as_ref()?.get(p).map(|f| f.mean_c),
            (Some(p), true) => day.points.as_ref()?.get(p)?.oxygen_mean_mg_l,
        }
    }

    /// How that is coloured.
    pub(super) fn role(&self) -> Role {
        if self.session.season.oxygen { Role::Oxygen } else { Role::Temperature }
    }

    /// The hard rules there, each with how it came out.
    pub(super) fn rules(&self) -> impl Iterator<Item = (&'a Target, &'a TargetTally)> {
        let (site, place) = (self.site(), self.site().river.as_ref().zip(self.point()));
        let name = place.and_then(|(river, p)| river.points.get(p)).map_or(DAM, |p| p.name.as_str());
        let of = move |told: &'a TargetTally| {
            let rule = site.targets.get(told.target)?;
            Some((rule, told)).filter(|_| rule.point == name && !rule.soft)
        };
        self.shown.run.outcome.targets.iter().filter_map(of)
    }

    /// What they ask on a date: the highest of their lows, the lowest of their highs; days outside are counted by it.
    pub(super) fn asked(&self, date: NaiveDate) -> [Option<f64>; 2] {
        self.range(date, |rule| [rule.low_c, rule.high_c])
    }

    /// The same within the buffers that mixes are chosen with.
    pub(super) fn kept(&self, date: NaiveDate) -> [Option<f64>; 2] {
        self.range(date, |rule| [rule.low_kept_c(), rule.high_kept_c()])
    }

    fn range(&self, date: NaiveDate, ends: impl Fn(&Target) -> [Option<f64>; 2]) -> [Option<f64>; 2] {
        let year_type = self.site().year_type.as_deref();
        let rules = || self.rules().map(|r| r.0).filter(|rule| rule.valid_on(date, year_type));
        if self.session.season.oxygen {
            return [rules().filter_map(|r| r.oxygen_min_mg_l).reduce(f64::max), None];
        }
        let rules = || rules().filter(|r| r.is_of_temperature()).map(&ends);
        [rules().filter_map(|r| r[0]).reduce(f64::max), rules().filter_map(|r| r[1]).reduce(f64::min)]
    }

    /// How each of them stands on a date by what is looked at, as the season counts it.
    pub(super) fn marks(&self, date: NaiveDate) -> impl Iterator<Item = (&'a Target, Mark)> {
        self.marks_by(date, self.session.season.oxygen)
    }

    /// The same by its oxygen, or by its temperature.
    fn marks_by(&self, date: NaiveDate, oxygen: bool) -> impl Iterator<Item = (&'a Target, Mark)> {
        self.rules().filter_map(move |(rule, told)| {
            let days = days_by(told, oxygen);
            let at = days.binary_search_by_key(&date, |day| day.0).ok()?;
            Some((rule, days.get(at)?.1))
        })
    }
}

/// How each day stands against a rule by its oxygen, or by its temperature.
pub(super) fn days_by(told: &TargetTally, oxygen: bool) -> &[(NaiveDate, Mark)] {
    if oxygen { &told.oxygen_days } else { &told.temperature_days }
}

/// The days outside by what is looked at, then by the other; what no rule asks is left out.
fn outside(screen: &Screen) -> Vec<(String, Vec<usize>)> {
    let looked_at = screen.session.season.oxygen;
    let of = |oxygen: bool| {
        let days = screen.shown.run.run.days.iter().enumerate();
        let days = days.filter(|(_, day)| screen.marks_by(day.date, oxygen).any(|m| m.1.outside()));
        let what = if oxygen { "O2" } else { screen.model.system().unit(Dimension::Temperature).symbol() };
        (format!("outside {what}"), days.map(|day| day.0).collect())
    };
    let asked = |oxygen: &bool| screen.rules().any(|(_, told)| !days_by(told, *oxygen).is_empty());
    let out: Vec<(String, Vec<usize>)> = [looked_at, !looked_at].into_iter().filter(asked).map(of).collect();
    if out.is_empty() { vec![of(looked_at)] } else { out }
}

/// Least and greatest of some values; between 0 and 1 where there are none.
fn span(values: impl Iterator<Item = f64>) -> (f64, f64) {
    let ends = values.fold(None, |ends: Option<(f64, f64)>, v| {
        Some(ends.map_or((v, v), |(low, high)| (low.min(v), high.max(v))))
    });
    ends.unwrap_or((0.0, 1.0))
}

fn water(screen: &Screen) -> WaterThrough {
    let (site, oxygen) = (screen.site(), screen.session.season.oxygen);
    let value = |layers: &Layers, layer: &Layer| {
        if oxygen { layers.has_oxygen.then_some(layer.oxygen_mg_l) } else { Some(layer.temperature_c) }
    };
    let of_run = |run: &SeasonRun| {
        let days = run.run.days.iter();
        let values = days.flat_map(|d| d.layers.layers.iter().filter_map(|l| value(&d.layers, l)));
        span(values)
    };
    let spans: Vec<(f64, f64)> = screen.shown.ahead.answer.runs().map(of_run).collect();
    let pools = screen.shown.ahead.answer.runs().flat_map(|r| r.run.days.iter().map(|d| d.pool_m));
    let top_m = span(pools).1;
    let day = |day: &SeasonDay| {
        let edges = day.layers.edges_m(&site.pool);
        let layers = day.layers.layers.iter().zip(edges.get(1..).unwrap_or_default());
        WaterDay {
            layers: layers.map(|(layer, top_m)| (*top_m, value(&day.layers, layer))).collect(),
            thermocline_m: thermocline(&samples(&day.layers, &edges)).map(|t| t.elevation_m),
        }
    };
    let floor = site.targets.iter().filter(|t| !t.soft).find_map(|t| t.oxygen_min_mg_l);
    WaterThrough {
        dimension: if oxygen { Dimension::Concentration } else { Dimension::Temperature },
        span: span(spans.iter().flat_map(|s| [s.0, s.1])),
        threshold: if oxygen { floor } else { site.cold_water_c.first().copied() },
        elevations_m: (site.pool.bed_m, top_m.max(site.pool.bed_m + 1.0)),
        days: screen.shown.run.run.days.iter().map(day).collect(),
    }
}

/// Layers as samples at their middles.
fn samples(layers: &Layers, edges: &[f64]) -> Vec<Sample> {
    let middle = |(layer, ends): (&Layer, &[f64])| Sample {
        elevation_m: 0.5 * ends.iter().sum::<f64>(),
        temperature_c: layer.temperature_c,
        salt_g_per_kg: layer.salt_g_per_kg,
        suspended_mg_l: layer.suspended_mg_l,
    };
    layers.layers.iter().zip(edges.windows(2)).map(middle).collect()
}

/// A curve and how it is drawn.
fn line(
    name: &str,
    (role, stroke, mark): (Role, Stroke, &'static str),
    values: Vec<Option<f64>>,
) -> LineThrough {
    LineThrough { name: name.to_owned(), role, stroke, mark, values }
}

/// How what comes is drawn, what is asked, what is kept in reserve, what is usable.
pub(super) const COMES: (Stroke, &str) = (Stroke::Broad, "*");
pub(super) const ASKED: (Stroke, &str) = (Stroke::Thin, "-");
const RESERVE: (Role, Stroke, &str) = (Role::Range, Stroke::Dotted, "-");
pub(super) const USABLE: (Stroke, &str) = (Stroke::Broad, "*");

fn release(screen: &Screen) -> CurvesThrough {
    let oxygen = screen.session.season.oxygen;
    let days = &screen.shown.run.run.days;
    let (lows, highs): (Vec<_>, Vec<_>) =
        days.iter().map(|d| screen.asked(d.date)).map(|[low, high]| (low, high)).unzip();
    let reach = attainable(screen);
    let all =
        screen.shown.ahead.answer.runs().flat_map(|r| r.run.days.iter().filter_map(|d| screen.value(d)));
    let asked = lows.iter().chain(&highs).copied().flatten();
    let reached = screen.shown.ahead.answer.runs().filter(|_| !oxygen && screen.point().is_none());
    let reached = reached.flat_map(|r| r.outcome.reached.iter().filter_map(|on| on.attainable_c)).flatten();
    let asks = (Role::Range, ASKED.0, ASKED.1);
    let comes = (screen.role(), COMES.0, COMES.1);
    let name = match screen.point() {
        None => "release".to_owned(),
        Some(_) => screen.place(),
    };
    CurvesThrough {
        name,
        dimension: if oxygen { Dimension::Concentration } else { Dimension::Temperature },
        span: span(all.chain(asked).chain(reached)),
        shaded: ("attainable".to_owned(), reach),
        lines: vec![
            line("", asks, lows),
            line("asked", asks, highs),
            line("what comes", comes, days.iter().map(|d| screen.value(d)).collect()),
        ],
    }
}

/// The range within reach at the dam, as the last decision found it.
fn attainable(screen: &Screen) -> Vec<Option<[f64; 2]>> {
    if screen.session.season.oxygen || screen.point().is_some() {
        return Vec::new();
    }
    let reached = &screen.shown.run.outcome.reached;
    let last = |date: NaiveDate| reached.iter().rev().find(|on| on.date <= date);
    screen.shown.run.run.days.iter().map(|d| last(d.date)?.attainable_c).collect()
}

fn cold(screen: &Screen) -> Option<CurvesThrough> {
    let (site, run) = (screen.site(), screen.shown.run);
    let cold = run.outcome.cold.first()?;
    let days = &cold.days;
    let greatest = screen.shown.ahead.answer.runs().filter_map(|r| r.outcome.cold.first());
    let greatest = greatest.flat_map(|c| c.days.iter().map(|d| d.total_m3));
    let reserve = site.season.reserves.iter().find(|r| r.colder_c.total_cmp(&cold.threshold_c).is_eq());
    let kept = |date: NaiveDate| {
        let today = YearDay { month: date.month(), day: date.day() };
        reserve.filter(|r| today >= r.from).map(|r| r.volume_m3)
    };
    let mut lines = vec![
        line("all", (Role::Plain, Stroke::Thin, "."), days.iter().map(|d| Some(d.total_m3)).collect()),
        line("usable", (Role::Cold, USABLE.0, USABLE.1), days.iter().map(|d| d.usable_m3).collect()),
    ];
    if reserve.is_some() {
        lines.insert(0, line("reserve", RESERVE, days.iter().map(|d| kept(d.date)).collect()));
    }
    let kept = reserve.map(|r| r.volume_m3);
    Some(CurvesThrough {
        name: "cold".to_owned(),
        dimension: Dimension::Volume,
        span: (0.0, span(greatest.chain(kept)).1),
        shaded: (String::new(), Vec::new()),
        lines,
    })
}

/// Outlets this near in elevation share a row, m (choice).
const SAME_M: f64 = 0.1;

/// The gates, the highest first; those at one elevation as one.
fn gates(screen: &Screen) -> Vec<GateThrough> {
    let (site, days) = (screen.site(), &screen.shown.run.run.days);
    let mut outlets: Vec<usize> = (0..site.outlets.len()).collect();
    let place = |i: &usize| site.outlets.get(*i).map_or(0.0, |o| o.centre_m);
    outlets.sort_by(|a, b| place(b).total_cmp(&place(a)));
    let gate = |level: &[usize]| {
        let names = level.iter().filter_map(|i| site.outlets.get(*i)).map(|o| harmless(&o.name));
        GateThrough {
            name: names.collect::<Vec<_>>().join(" "),
            elevation_m: level.first().map_or(0.0, place),
            days: days.iter().map(|day| state(screen, level, day)).collect(),
        }
    };
    outlets.chunk_by(|a, b| (place(a) - place(b)).abs() < SAME_M).map(gate).collect()
}

/// Whether any of some outlets is open on a day, or could be.
fn state(screen: &Screen, level: &[usize], day: &SeasonDay) -> GateDay {
    let open = day.gates.iter().find(|g| level.contains(&g.outlet) && g.flow_m3s > 0.0);
    if let Some(gate) = open {
        let drawn = day.drawn.iter().find(|d| d.level.outlets.contains(&gate.outlet));
        let zone = drawn.and_then(|d| d.zone.as_ref());
        return GateDay::Open(zone.map(|z| [z.lower.limit_m, z.upper.limit_m]));
    }
    let lives = &screen.shown.run.outcome.gates;
    let usable = lives.iter().filter(|life| level.contains(&life.outlet)).any(|life| {
        let begun = life.first_day.is_some_and(|first| first <= day.date);
        begun && life.last_day.is_none_or(|last| day.date <= last)
    });
    if usable { GateDay::Shut } else { GateDay::Lost }
}
