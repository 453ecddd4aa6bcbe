//! `learned` of a site file: what was learned from the record and is to be applied.

use crate::files::cursor::{Map, Value};
use crate::problem::Problem;
use crate::site::RawLearned;
use crate::units::Dimension;

use super::{In, number, whole};

pub(super) fn learned(read: &In, map: &Map) -> RawLearned {
    let mut out = RawLearned {
        bias_c: read.optional(map, "bias", Dimension::TemperatureDifference),
        zone_factor: number(map, "zone_factor"),
        zone_range: two(map, "zone_range", Value::number).map(|[low, high]| (low, high)),
        oxygen_gain_mg_l: read.optional(map, "oxygen_gain", Dimension::Concentration),
        window: two(map, "window", |value| value.text().map(str::to_owned)),
        n: whole(map, "n"),
        release_c: read.optional(map, "release", Dimension::TemperatureDifference),
        release_mg_l: read.optional(map, "release_oxygen", Dimension::Concentration),
        ..RawLearned::default()
    };
    if let Some(levels) = map.optional("by_level").and_then(|v| v.map()) {
        let bias = |(name, value): &(&str, Value)| {
            Some(((*name).to_owned(), read.quantity(value, Dimension::TemperatureDifference)?))
        };
        out.by_level_c = levels.entries().iter().filter_map(bias).collect();
        levels.finish();
    }
    out
}

/// The two entries of a list.
fn two<'d, T>(map: &Map<'d>, key: &'static str, read: impl Fn(&Value<'d>) -> Option<T>) -> Option<[T; 2]> {
    let value = map.optional(key)?;
    let cells = value.list()?;
    let [first, second] = cells.as_slice() else {
        value.report(Problem::refused("pair", "two belong here", "write [first, second]"));
        return None;
    };
    Some([read(first)?, read(second)?])
}
