//! How the season ahead is looked at, of `site.yaml`.

use crate::files::cursor::Map;
use crate::site::{RawCase, RawReserve, RawSeason, RawStages};
use crate::units::Dimension;

use super::limits::required_text;
use super::river::{monthly, share};
use super::targets::degree_days;
use super::{In, each, number, text, whole, within};

pub(super) fn season(read: &In, map: &Map) -> RawSeason {
    let mut out = RawSeason {
        strategy: text(map, "strategy"),
        decide_days: whole(map, "decide_days"),
        layer_m: read.optional(map, "layer", Dimension::Length),
        secchi_m: read.optional(map, "secchi", Dimension::Length),
        light_per_m: number(map, "light_per_m"),
        wind: share(read, map, "wind_share"),
        diffusion: number(map, "diffusion"),
        transfer_m_day: number(map, "transfer_m_per_day"),
        inflow_takes_in: share(read, map, "inflow_takes_in"),
        evaporates: map.optional("evaporation").and_then(|v| v.boolean()),
        weather: text(map, "weather"),
        years: text(map, "years"),
        reserves: each(map, "reserves", |m| RawReserve {
            from: required_text(m, "from"),
            colder_c: read.required(m, "colder_than", Dimension::Temperature),
            volume_m3: read.required(m, "volume", Dimension::Volume),
        }),
        stages: each(map, "stages", |m| stages(read, m)),
        ..RawSeason::default()
    };
    within(map, "oxygen_demand", |m| {
        out.water_demand_mg_l_day = number(m, "water");
        out.bed_demand_g_m2_day = number(m, "bed");
    });
    within(map, "monthly", |m| out.monthly = Some(monthly(read, m)));
    out.cases = map.optional("cases").map(|_| each(map, "cases", |m| case(read, m)));
    out
}

fn case(read: &In, map: &Map) -> RawCase {
    let step = |key| read.optional(map, key, Dimension::TemperatureDifference);
    RawCase {
        name: required_text(map, "name"),
        air_c: step("air"),
        wind: share(read, map, "wind"),
        inflow: share(read, map, "inflow"),
        inflow_c: step("inflow_temperature"),
    }
}

fn stages(read: &In, map: &Map) -> RawStages {
    let mut out = RawStages {
        name: required_text(map, "name"),
        point: text(map, "point"),
        from: required_text(map, "from"),
        base_c: read.optional(map, "base", Dimension::Temperature),
        at: Vec::new(),
    };
    if let Some(inner) = map.required("at").and_then(|v| v.map()) {
        let stage = |(name, value): &(&str, _)| Some(((*name).to_owned(), degree_days(read, value)?));
        out.at = inner.entries().iter().filter_map(stage).collect();
        inner.finish();
    }
    out
}
