//! Limits, parts of the day and the setting now of `site.yaml`.

use crate::files::cursor::{Map, Scalar, Value};
use crate::site::{Bins, Block, RawLimits, RawNow, RawOutage, RawOutlet, RawReserved, RawShare, RawUndrawn};
use crate::units::Dimension;

use super::{In, each, number, pair, text, whole};

pub(super) fn limits(read: &In, map: &Map) -> RawLimits {
    let step = |key| read.optional(map, key, Dimension::TemperatureDifference);
    let flow = |key| read.optional(map, key, Dimension::Flow);
    RawLimits {
        outages: each(map, "outages", |m| RawOutage {
            outlet: required_text(m, "outlet"),
            from: required_text(m, "from"),
            to: text(m, "to"),
            reason: reason(m),
        }),
        shares: each(map, "shares", |m| RawShare {
            name: required_text(m, "name"),
            outlets: names(m, "outlets"),
            min: share(read, m, "min"),
            max: share(read, m, "max"),
        }),
        reserved: each(map, "reserved", |m| RawReserved {
            outlet: required_text(m, "outlet"),
            flow_m3s: read.required(m, "flow", Dimension::Flow),
            reason: reason(m),
        }),
        undrawn: each(map, "undrawn", |m| RawUndrawn {
            from_m: read.optional(m, "from", Dimension::Length),
            to_m: read.optional(m, "to", Dimension::Length),
            depths_m: m
                .optional("depth")
                .and_then(|v| pair(read, &v, [Dimension::Length, Dimension::Length])),
            oxygen_below_mg_l: read.optional(m, "oxygen_below", Dimension::Concentration),
            reason: reason(m),
        }),
        flow_change_m3s_per_hour: flow("max_flow_change_per_hour"),
        flow_change_m3s_per_day: flow("max_flow_change_per_day"),
        temperature_change_c_per_hour: step("max_temperature_change_per_hour"),
        temperature_change_c_per_day: step("max_temperature_change_per_day"),
        change_hours: number(map, "change_hours"),
        drawdown_m_per_day: read.optional(map, "max_drawdown_per_day", Dimension::Length),
        solids_max_mg_l: read.optional(map, "solids_max", Dimension::Concentration),
        max_moves: whole(map, "max_moves"),
        max_crew_hours: number(map, "max_crew_hours"),
    }
}

pub(super) fn blocks(read: &In, map: &Map) -> Vec<Block> {
    let listed = each(map, "blocks", |m| {
        let name = required_text(m, "name");
        let hours = m.required("hours").and_then(|v| v.number());
        let flow = read.required(m, "flow", Dimension::Flow);
        Some(Block { name: name?, hours: hours?, flow_m3s: flow? })
    });
    listed.into_iter().flatten().collect()
}

pub(super) fn bins(read: &In, map: &Map, bins: &mut Bins) {
    read.set(map, "temperature", Dimension::TemperatureDifference, &mut bins.temperature_c);
    read.set(map, "oxygen", Dimension::Concentration, &mut bins.oxygen_mg_l);
    if let Some(share) = share(read, map, "cold_water") {
        bins.cold_share = share;
    }
}

/// Flows, openings in percent, and positions by name.
pub(super) fn now(read: &In, map: &Map, outlets: &[RawOutlet]) -> Vec<(String, RawNow)> {
    let set = |(name, value): &(&str, Value)| {
        let is_position = |text: &str| {
            let begins = text.trim_start().starts_with(|c: char| c.is_ascii_digit() || "+-.".contains(c));
            let mut own =
                outlets.iter().filter(|o| o.name.as_deref() == Some(*name)).flat_map(|o| &o.positions);
            !begins || (text.parse::<f64>().is_err() && own.any(|p| p.name == text))
        };
        let set = match value.scalar()? {
            Scalar::Text(text) if is_position(text) => RawNow::Position(text.to_owned()),
            Scalar::Text(text) if text.trim_end().ends_with('%') => {
                RawNow::Opening(read.quantity(value, Dimension::Percent)? / 100.0)
            }
            _ => RawNow::Flow(read.quantity(value, Dimension::Flow)?),
        };
        Some(((*name).to_owned(), set))
    };
    map.entries().iter().filter_map(set).collect()
}

/// Percent as a share of 1.
fn share(read: &In, map: &Map, key: &'static str) -> Option<f64> {
    read.optional(map, key, Dimension::Percent).map(|percent| percent / 100.0)
}

pub(super) fn required_text(map: &Map, key: &'static str) -> Option<String> {
    map.required(key).and_then(|v| v.text().map(str::to_owned))
}

/// Why a rule stands; nothing where the file does not say.
pub(super) fn reason(map: &Map) -> String {
    text(map, "reason").unwrap_or_default()
}

fn names(map: &Map, key: &'static str) -> Vec<String> {
    let listed = map.required(key).and_then(|v| v.text_list()).unwrap_or_default();
    listed.into_iter().map(str::to_owned).collect()
}
