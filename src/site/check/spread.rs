//! Checks of the figures of `band`, `bins` and `checks`.

use crate::problem::Problem;
use crate::site::Raw;

use super::outlets::{not_negative, positive};

/// The figures of `band`, `bins` and `checks` must be possible spreads.
pub(super) fn spread(raw: &Raw, problems: &mut Vec<Problem>) {
    let b = &raw.band;
    if !(10..=10_000).contains(&b.members) {
        problems.push(
            Problem::refused("band", "members must be 10 to 10000", "200 is enough").at("band.members"),
        );
    }
    let spreads = [
        (b.cast_c, "cast"),
        (b.cast_mg_l, "cast_oxygen"),
        (b.heave_m, "heave"),
        (b.heave_m_per_day, "heave_per_day"),
        (b.heave_max_m, "heave_max"),
        (b.flow_share, "flow"),
        (b.release_c, "release"),
        (b.release_mg_l, "release_oxygen"),
    ];
    for (value, key) in spreads {
        not_negative(Some(value), format!("band.{key}"), key, problems);
    }
    if b.zone_low <= 0.0 || b.zone_low > 1.0 || b.zone_high < 1.0 {
        problems.push(
            Problem::refused(
                "band",
                "the range of the zone factor must include 1",
                "the default is [0.70, 1.15]",
            )
            .at("band.zone"),
        );
    }
    let c = &raw.checks;
    for (value, key) in [
        (c.gap_m, "gap"),
        (c.extrapolate_m, "extrapolate"),
        (c.spike_c, "spike"),
        (c.spike_mg_l, "spike_oxygen"),
        (c.oxygen_share, "oxygen_percent"),
        (c.stale_days, "stale_days"),
        (c.ageing_days, "ageing_days"),
        (c.heat_w_m2, "heat_w_m2"),
        (c.tailwater_c, "tailwater"),
    ] {
        positive(Some(value), format!("checks.{key}"), key, problems);
    }
    let bins = [
        (raw.bins.temperature_c, "temperature"),
        (raw.bins.oxygen_mg_l, "oxygen"),
        (raw.bins.cold_share, "cold_water"),
    ];
    for (value, key) in bins {
        positive(Some(value), format!("bins.{key}"), key, problems);
    }
    positive(Some(raw.water.tds_per_us_cm), "water.tds_factor".into(), "tds_factor", problems);
    if raw.water.solids_kg_m3 <= 1000.0 {
        problems.push(
            Problem::refused(
                "solids",
                "suspended solids must be denser than water",
                "mineral silt is about 2650 kg/m3",
            )
            .at("water.solids_density"),
        );
    }
}
