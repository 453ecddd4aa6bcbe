//! The answer of `river` as JSON.

use serde::Serialize;

use crate::mix::{Spread, TargetStanding};
use crate::report::text::river::unit_si;
use crate::target::DAM;
use crate::tasks::Context;
use crate::tasks::river::{Arriving, RiverAnswer, Timely, Way, Window};

use super::applied::{PlainJson, without};
use super::shape::{Head, SettingJson, WarningJson};
use super::targets::{ConflictJson, TargetJson};
use super::{caution, head, setting, targets, warnings, written};

/// Metres of a kilometre.
const KM_M: f64 = 1000.0;

#[derive(Serialize)]
struct RiverJson {
    #[serde(flatten)]
    head: Head,
    /// Which release `points` are of.
    of: Option<&'static str>,
    points: Vec<PointJson>,
    release_window: Vec<WindowJson>,
    conflicts: Vec<ConflictJson>,
    observed: Vec<super::river_record::ObservedJson>,
    releases: Vec<WayJson>,
    days: Vec<DayJson>,
    change_in_time: Vec<TimelyJson>,
    warnings: Vec<WarningJson>,
    caution: &'static str,
}

#[derive(Serialize)]
struct WayJson {
    of: &'static str,
    parts: Vec<PartJson>,
    flow_m3s: f64,
    temperature_c: f64,
    oxygen_mg_l: Option<f64>,
    band_c: Option<[f64; 2]>,
    /// With nothing learned; null where nothing is.
    plain: Option<PlainJson>,
    targets: Vec<TargetJson>,
    points: Vec<PointJson>,
    along: Vec<PlaceJson>,
}

#[derive(Serialize)]
struct PartJson {
    share: f64,
    #[serde(flatten)]
    setting: SettingJson,
    flow_m3s: f64,
    temperature_c: f64,
    oxygen_mg_l: Option<f64>,
}

#[derive(Serialize)]
struct PlaceJson {
    distance_km: f64,
    temperature_c: f64,
    oxygen_mg_l: Option<f64>,
}

#[derive(Serialize)]
struct PointJson {
    name: String,
    distance_km: f64,
    travel_h: Option<f64>,
    rise_first_h: Option<f64>,
    rise_h: Option<f64>,
    warning_h: Option<f64>,
    flow_m3s: Option<f64>,
    stage_m: Option<f64>,
    temperature_c: Option<f64>,
    temperature_max_c: Option<f64>,
    temperature_min_c: Option<f64>,
    oxygen_mg_l: Option<f64>,
    oxygen_min_mg_l: Option<f64>,
    band_c: Option<[f64; 2]>,
    band_oxygen_mg_l: Option<[f64; 2]>,
    /// With nothing learned; null where nothing is.
    plain_temperature_c: Option<f64>,
    targets: Vec<TargetJson>,
}

#[derive(Serialize)]
struct WindowJson {
    point: String,
    low_c: Option<f64>,
    high_c: Option<f64>,
    reachable: Option<bool>,
    low_set_by: Option<String>,
    high_set_by: Option<String>,
    oxygen_min_mg_l: Option<f64>,
    oxygen_set_by: Option<String>,
    saturation_mg_l: Option<f64>,
    unknown: Vec<String>,
}

#[derive(Serialize)]
struct DayJson {
    date: String,
    forecast: bool,
    repeated: bool,
    air_c: Option<f64>,
    arrives: Vec<ArrivesJson>,
}

#[derive(Serialize)]
struct ArrivesJson {
    of: &'static str,
    point: String,
    temperature_c: f64,
    temperature_max_c: Option<f64>,
    oxygen_mg_l: Option<f64>,
}

#[derive(Serialize)]
struct TimelyJson {
    of: &'static str,
    point: String,
    target: String,
    day: String,
    days: usize,
    worst_on: String,
    worst_value: f64,
    worst_by: f64,
    unit: &'static str,
    leave_by: String,
    late: bool,
    travel_h: f64,
    rise_first_h: f64,
    rise_h: f64,
}

/// The answer of `river`.
pub fn river(context: &Context, answer: &RiverAnswer) -> String {
    let spoken = answer.spoken();
    let shown = RiverJson {
        head: head(context, &context.fingerprint, &[]),
        of: spoken.map(|w| w.which.word()),
        points: spoken.map_or_else(Vec::new, |way| points(context, way)),
        release_window: answer.windows.iter().map(|w| window(context, w)).collect(),
        conflicts: super::targets::conflicts(context.site(), answer.conflicts()),
        observed: super::river_record::observed(context, answer),
        releases: answer.ways.iter().map(|w| way(context, w)).collect(),
        days: answer.days.iter().map(|d| day(context, answer, d)).collect(),
        change_in_time: answer.timely.iter().filter_map(|t| timely(context, t)).collect(),
        warnings: warnings(&answer.notes),
        caution: caution(),
    };
    written(&shown)
}

fn way(context: &Context, way: &Way) -> WayJson {
    let site = context.site();
    let part = |p: &crate::tasks::river::WayPart| PartJson {
        share: p.share,
        setting: setting(site, &p.setting),
        flow_m3s: p.release.flow_m3s,
        temperature_c: p.release.temperature_c,
        oxygen_mg_l: p.release.oxygen_below_mg_l,
    };
    let along = way.course.iter().flat_map(|course| &course.along).map(|p| PlaceJson {
        distance_km: p.at_m / KM_M,
        temperature_c: p.figures.mean_c,
        oxygen_mg_l: p.figures.oxygen_mean_mg_l,
    });
    WayJson {
        of: way.which.word(),
        parts: way.parts.iter().map(part).collect(),
        flow_m3s: way.flow_m3s(),
        temperature_c: way.temperature_c(),
        oxygen_mg_l: way.oxygen_mg_l(),
        band_c: way.at_dam().band_c().map(<[f64; 2]>::from),
        plain: way.without.as_ref().map(without),
        targets: at(context, way, DAM),
        points: points(context, way),
        along: along.collect(),
    }
}

/// Standings at a place.
fn at(context: &Context, way: &Way, place: &str) -> Vec<TargetJson> {
    let site = context.site();
    let here = |s: &&TargetStanding| site.targets.get(s.target).is_some_and(|rule| rule.point == place);
    let standings: Vec<TargetStanding> = way.targets.iter().filter(here).cloned().collect();
    targets(site, &standings)
}

fn points(context: &Context, way: &Way) -> Vec<PointJson> {
    let Some(river) = &context.site().river else { return Vec::new() };
    let point = |(i, p): (usize, &crate::site::Point)| {
        let there = way.course.as_ref().and_then(|c| c.points.iter().find(|a| a.point == i));
        let figures = there.map(|a| a.figures);
        let plain = way.without_course.as_ref().and_then(|c| c.points.iter().find(|a| a.point == i));
        let spread = way.spreads.get(i);
        PointJson {
            name: p.name.clone(),
            distance_km: p.at_m / KM_M,
            travel_h: there.map(|a| a.travel_h),
            rise_first_h: there.map(|a| a.rise_first_h),
            rise_h: there.map(|a| a.rise_h),
            warning_h: p.warning_h,
            flow_m3s: figures.map(|f| f.flow_m3s),
            stage_m: figures.and_then(|f| p.stage_m(f.flow_m3s)),
            temperature_c: figures.map(|f| f.mean_c),
            temperature_max_c: figures.and_then(|f| Some(f.range_c?.0)),
            temperature_min_c: figures.and_then(|f| Some(f.range_c?.1)),
            oxygen_mg_l: figures.and_then(|f| f.oxygen_mean_mg_l),
            oxygen_min_mg_l: figures.and_then(|f| f.oxygen_min_mg_l),
            band_c: spread.and_then(Spread::band_c).map(<[f64; 2]>::from),
            band_oxygen_mg_l: spread.and_then(Spread::band_oxygen_mg_l).map(<[f64; 2]>::from),
            plain_temperature_c: plain.map(|a| a.figures.mean_c),
            targets: at(context, way, &p.name),
        }
    };
    river.points.iter().enumerate().map(point).collect()
}

fn window(context: &Context, w: &Window) -> WindowJson {
    let rule = |i: Option<usize>| Some(context.site().targets.get(i?)?.name.clone());
    WindowJson {
        point: w.point.map_or_else(|| DAM.to_owned(), |i| name(context, i)),
        low_c: w.low_c,
        high_c: w.high_c,
        reachable: w.reachable,
        low_set_by: rule(w.set_by[0]),
        high_set_by: rule(w.set_by[1]),
        oxygen_min_mg_l: w.oxygen_min_mg_l,
        oxygen_set_by: rule(w.oxygen_set_by),
        saturation_mg_l: w.saturation_mg_l,
        unknown: w.unknown.clone(),
    }
}

fn name(context: &Context, point: usize) -> String {
    let river = context.site().river.as_ref();
    river.and_then(|r| r.points.get(point)).map_or_else(String::new, |p| p.name.clone())
}

fn day(context: &Context, answer: &RiverAnswer, day: &Arriving) -> DayJson {
    let arrives = answer.ways.iter().zip(&day.ways).flat_map(|(way, points)| {
        points.iter().enumerate().map(|(i, f)| ArrivesJson {
            of: way.which.word(),
            point: name(context, i),
            temperature_c: f.mean_c,
            temperature_max_c: f.range_c.map(|r| r.0),
            oxygen_mg_l: f.oxygen_mean_mg_l,
        })
    });
    DayJson {
        date: day.date.to_string(),
        forecast: day.forecast,
        repeated: day.repeated,
        air_c: day.air_c,
        arrives: arrives.collect(),
    }
}

fn timely(context: &Context, t: &Timely) -> Option<TimelyJson> {
    let rule = context.site().targets.get(t.target)?;
    Some(TimelyJson {
        of: t.which.word(),
        point: name(context, t.point),
        target: rule.name.clone(),
        day: t.day.to_string(),
        days: t.days,
        worst_on: t.worst.0.to_string(),
        worst_value: t.worst.1,
        worst_by: t.worst.2,
        unit: unit_si(rule),
        leave_by: t.leave_by.to_rfc3339(),
        late: t.late,
        travel_h: t.travel_h,
        rise_first_h: t.rise_first_h,
        rise_h: t.rise_h,
    })
}
