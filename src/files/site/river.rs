//! The river of `site.yaml`: its name alone, or a map of reaches, points and weather.

use crate::files::cursor::{Map, Value};
use crate::files::yaml::Node;
use crate::problem::Problem;
use crate::site::{
    Raw, RawAfterbay, RawInflow, RawMonthly, RawPoint, RawReach, RawRiver, RawSeepage, Yearly,
};
use crate::units::Dimension;

use super::{In, each, number, pair, text, within};

/// A text is the river's name and no more.
pub(super) fn river(read: &In, map: &Map, raw: &mut Raw) {
    let Some(value) = map.optional("river") else { return };
    if let Node::Text(name) = value.node() {
        raw.river_name = Some(name.clone());
    } else if let Some(inner) = value.map() {
        raw.river_name = text(&inner, "name");
        raw.river = Some(described(read, &inner));
        inner.finish();
    }
}

fn described(read: &In, map: &Map) -> RawRiver {
    let mut out = RawRiver {
        equilibrium_c: yearly(read, map, "equilibrium", Dimension::Temperature),
        exchange_w_m2_c: figures(map, "exchange_w_m2_c", plain),
        weather: text(map, "weather"),
        reaches: each(map, "reaches", |m| reach(read, m)),
        points: each(map, "points", |m| point(read, m)),
        ..RawRiver::default()
    };
    within(map, "monthly", |m| out.monthly = Some(monthly(read, m)));
    within(map, "afterbay", |m| {
        out.afterbay = Some(RawAfterbay {
            volume_m3: read.required(m, "volume", Dimension::Volume),
            area_m2: read.required(m, "area", Dimension::Area),
            mixed: share(read, m, "mixed"),
        });
    });
    within(map, "decay", |m| {
        let demand = read.required(m, "demand", Dimension::Concentration);
        out.decay = Some((demand, m.required("per_day").and_then(|v| v.number())));
    });
    out
}

pub(super) fn monthly(read: &In, map: &Map) -> RawMonthly {
    RawMonthly {
        air_c: months(map, "air", |v| read.quantity(v, Dimension::Temperature)),
        humidity: shares(read, map, "humidity"),
        dew_point_c: yearly(read, map, "dew_point", Dimension::Temperature),
        wind_m_s: months(map, "wind", |v| read.quantity(v, Dimension::Velocity)),
        wind_height_m: read.optional(map, "wind_height", Dimension::Length),
        cloud: shares(read, map, "cloud"),
        radiation_w_m2: figures(map, "radiation_w_m2", plain),
        sunshine_h: figures(map, "sunshine_h", plain),
    }
}

fn reach(read: &In, map: &Map) -> RawReach {
    let mut out = RawReach {
        name: map.required("name").and_then(|v| v.text().map(str::to_owned)),
        length_m: distance(read, map, "length_km", "length"),
        width_m: read.required(map, "width", Dimension::Length),
        depth_m: read.required(map, "depth", Dimension::Length),
        slope: number(map, "slope"),
        roughness: number(map, "roughness"),
        travel_h: hours(read, map, "travel_hours"),
        rise_h: hours(read, map, "rise_hours"),
        shade: share(read, map, "shade"),
        inflows: each(map, "inflows", |m| inflow(read, m)),
        seepage: None,
        reaeration_per_day: number(map, "reaeration_per_day"),
    };
    within(map, "seepage", |m| {
        out.seepage = Some(RawSeepage {
            flow_m3s: months(m, "flow", |v| read.quantity(v, Dimension::Flow)),
            temperature_c: months(m, "temperature", |v| read.quantity(v, Dimension::Temperature)),
            oxygen_mg_l: yearly(read, m, "oxygen", Dimension::Concentration),
        });
    });
    out
}

fn inflow(read: &In, map: &Map) -> RawInflow {
    RawInflow {
        name: map.required("name").and_then(|v| v.text().map(str::to_owned)),
        at_m: distance(read, map, "at_km", "at"),
        flow_m3s: yearly(read, map, "flow", Dimension::Flow),
        temperature_c: yearly(read, map, "temperature", Dimension::Temperature),
        oxygen_mg_l: yearly(read, map, "oxygen", Dimension::Concentration),
        series: text(map, "series"),
        release: map.optional("release").and_then(|v| v.boolean()).unwrap_or(false),
    }
}

fn point(read: &In, map: &Map) -> RawPoint {
    RawPoint {
        name: map.required("name").and_then(|v| v.text().map(str::to_owned)),
        at_m: distance(read, map, "at_km", "at"),
        observed: text(map, "observed"),
        rating: map
            .optional("rating")
            .and_then(|v| v.list())
            .unwrap_or_default()
            .iter()
            .filter_map(|row| pair(read, row, [Dimension::Flow, Dimension::Length]))
            .collect(),
        stage_fall_m_per_hour: read.optional(map, "max_stage_fall_per_hour", Dimension::Length),
        warning_h: number(map, "warning_hours"),
    }
}

/// A way along the river: a number of kilometres under one key, or a quantity under the other.
fn distance(read: &In, map: &Map, in_km: &'static str, with_unit: &'static str) -> Option<f64> {
    let km = map.optional(in_km);
    let other = map.optional(with_unit);
    match (km, other) {
        (Some(km), None) => km.number().map(|km| km * 1000.0),
        (None, Some(other)) => read.quantity(&other, Dimension::Distance),
        (both, _) => {
            let word = if both.is_some() { "both" } else { "none" };
            map.report(Problem::refused(
                "distance",
                format!("of {in_km} and {with_unit} {word} is given"),
                format!("give {in_km}: 12.5, or {with_unit}: 12.5 mi"),
            ));
            None
        }
    }
}

/// Rows of flow and hours.
fn hours(read: &In, map: &Map, key: &'static str) -> Vec<(f64, f64)> {
    let row = |row: &Value| {
        let cells = row.list()?;
        let [flow, hours] = cells.as_slice() else {
            row.report(Problem::refused("pair", "two numbers belong here", "write [flow, hours]"));
            return None;
        };
        Some((read.quantity(flow, Dimension::Flow)?, hours.number()?))
    };
    map.optional(key).and_then(|v| v.list()).unwrap_or_default().iter().filter_map(row).collect()
}

/// Percent as a share of 1.
pub(super) fn share(read: &In, map: &Map, key: &'static str) -> Option<f64> {
    read.optional(map, key, Dimension::Percent).map(|percent| percent / 100.0)
}

fn yearly(read: &In, map: &Map, key: &'static str, dimension: Dimension) -> Option<Yearly> {
    figures(map, key, |v| read.quantity(v, dimension))
}

fn figures(map: &Map, key: &'static str, one: impl Fn(&Value) -> Option<f64>) -> Option<Yearly> {
    twelve(&map.optional(key)?, one)
}

fn months(map: &Map, key: &'static str, one: impl Fn(&Value) -> Option<f64>) -> Option<Yearly> {
    twelve(&map.required(key)?, one)
}

/// One figure for all the year, or a list of twelve.
fn twelve(value: &Value, one: impl Fn(&Value) -> Option<f64>) -> Option<Yearly> {
    if !matches!(value.node(), Node::List(_)) {
        return one(value).map(Yearly::Constant);
    }
    let listed = value.list()?;
    let found: Option<Vec<f64>> = listed.iter().map(one).collect();
    let twelve = found.map(<[f64; 12]>::try_from);
    if let Some(Err(other)) = &twelve {
        value.report(Problem::refused(
            "months",
            format!("{} figures stand where a year has 12", other.len()),
            "give one figure, or one for each month, January first",
        ));
    }
    twelve?.ok().map(Yearly::Monthly)
}

/// Percent as shares of 1.
fn shares(read: &In, map: &Map, key: &'static str) -> Option<Yearly> {
    figures(map, key, |v| read.quantity(v, Dimension::Percent).map(|percent| percent / 100.0))
}

fn plain(value: &Value) -> Option<f64> {
    value.number()
}
