//! Targets and the events that end them of `site.yaml`.

use crate::files::cursor::{Map, Scalar, Value};
use crate::files::yaml::Node;
use crate::problem::Problem;
use crate::site::RawTarget;
use crate::target::Statistic;
use crate::units::Dimension;

use super::{In, text, whole};

/// Most degree days a rule can speak of, C days (choice: no water of a year has as many).
const MOST_DEGREE_DAYS: f64 = 2e4;

pub(super) fn target(read: &In, map: &Map) -> RawTarget {
    // in the order in which the keys are told
    let name = map.required("name").and_then(|v| v.text().map(str::to_owned));
    let (from, to) = (text(map, "from"), text(map, "to"));
    let statistic = text(map, "statistic");
    let reference = text(map, "reference");
    let kind = statistic.as_deref().and_then(Statistic::parse);
    let is_sum = kind.is_some_and(Statistic::is_sum);
    let is_difference = kind.is_some_and(Statistic::is_difference) || reference.is_some();
    let bound = |key| match (is_sum, is_difference) {
        (true, _) => degree_days(read, &map.optional(key)?),
        (_, true) => read.optional(map, key, Dimension::TemperatureDifference),
        _ => read.optional(map, key, Dimension::Temperature),
    };
    let share = |key| read.optional(map, key, Dimension::Percent).map(|percent| percent / 100.0);
    let listed = |key| map.optional(key).and_then(|v| v.text_list()).unwrap_or_default();
    RawTarget {
        name,
        from,
        to,
        days: whole(map, "days"),
        days_share: share("percent"),
        base_c: read.optional(map, "base", Dimension::Temperature),
        since: text(map, "since"),
        low_c: bound("low"),
        preferred_c: bound("preferred"),
        high_c: bound("high"),
        buffer_c: read.optional(map, "buffer", Dimension::TemperatureDifference),
        oxygen_min_mg_l: read.optional(map, "oxygen_min", Dimension::Concentration),
        oxygen_min_share: share("oxygen_min_percent"),
        oxygen_statistic: text(map, "oxygen_statistic"),
        point: text(map, "point"),
        years: listed("years").into_iter().map(str::to_owned).collect(),
        until: text(map, "until"),
        soft: map.optional("soft").and_then(|v| v.boolean()).unwrap_or(false),
        priority: whole(map, "priority"),
        authority: text(map, "authority"),
        source: text(map, "source"),
        example: map.optional("example").and_then(|v| v.boolean()),
        statistic,
        reference,
    }
}

/// A sum of degrees in the folder's degrees, C days.
pub(super) fn degree_days(read: &In, value: &Value) -> Option<f64> {
    let c_days = match value.scalar()? {
        Scalar::Number(number) => read.units.to_si(number, Dimension::TemperatureDifference),
        Scalar::Text(text) => match read.units.parse(text, Dimension::TemperatureDifference) {
            Ok(c_days) => c_days,
            Err(error) => {
                value.report(Problem::refused("quantity", error.to_string(), ""));
                return None;
            }
        },
    };
    if c_days.abs() <= MOST_DEGREE_DAYS {
        return Some(c_days);
    }
    value.report(Problem::refused("quantity", "more degree days than water has", "correct the figure"));
    None
}

/// Events by name with their dates; one left blank has not come yet.
pub(super) fn events(map: &Map) -> Vec<(String, Option<String>)> {
    let event = |(name, value): &(&str, Value)| {
        let date = if *value.node() == Node::Null { None } else { Some(value.text()?.to_owned()) };
        Some(((*name).to_owned(), date))
    };
    map.entries().iter().filter_map(event).collect()
}
