//! Checks of targets, and the figures of `band`, `bins` and `checks`.

use crate::problem::Problem;
use crate::site::{Raw, RawTarget};
use crate::target::{Span, Statistic, Target, YearDay};

use super::outlets::{not_negative, positive};

pub(super) fn target(t: &RawTarget, i: usize, problems: &mut Vec<Problem>) -> Option<Target> {
    let path = format!("targets[{i}]");
    let mut day = |text: &Option<String>, key: &str, fallback: YearDay| match text.as_deref() {
        None => Some(fallback),
        Some(text) => {
            let day = YearDay::parse(text);
            if day.is_none() {
                problems.push(
                    Problem::refused(
                        "date",
                        format!("`{text}` is not a day of the year"),
                        "write month-day, such as 05-01",
                    )
                    .at(format!("{path}.{key}")),
                );
            }
            day
        }
    };
    let from = day(&t.from, "from", Span::YEAR.from);
    let to = day(&t.to, "to", Span::YEAR.to);
    let statistic = match t.statistic.as_deref() {
        None => Some(Statistic::DailyMean),
        Some(name) => {
            let found = Statistic::parse(name);
            if found.is_none() {
                let known: Vec<&str> = Statistic::NAMES.iter().map(|(n, _)| *n).collect();
                problems.push(
                    Problem::refused(
                        "statistic",
                        format!("`{name}` is not a statistic"),
                        format!("use one of {}", known.join(", ")),
                    )
                    .at(format!("{path}.statistic")),
                );
            }
            found
        }
    };
    let point = t.point.clone().unwrap_or_else(|| "dam".into());
    let built = Target {
        name: t.name.clone()?,
        span: Span { from: from?, to: to? },
        statistic: statistic?,
        low_c: t.low_c,
        preferred_c: t.preferred_c,
        high_c: t.high_c,
        buffer_c: t.buffer_c.unwrap_or(0.0),
        oxygen_min_mg_l: t.oxygen_min_mg_l,
        point,
        source: t.source.clone(),
        ..Target::default()
    };
    problems.extend(built.problems(&path));
    Some(built)
}

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
