//! From raw to checked site: every problem at once, each at its path.

mod aeration;
mod learned;
mod limits;
mod months;
mod operation;
mod order_texts;
mod outlets;
mod reaches;
mod river;
mod rules;
mod season;
mod spread;
mod statistic;

use std::collections::HashMap;

use chrono::FixedOffset;

use crate::problem::{Problem, any_refused};
use crate::target::Target;
use crate::units::{Datum, say};

use super::{Outlet, Pool, Raw, Site, WINDOW_DAYS, Whereabouts};

/// Altitudes of settled land, m (choice, wide).
const ALTITUDE_M: std::ops::RangeInclusive<f64> = -450.0..=6000.0;

impl Site {
    /// Checks a raw site. The list holds every refusal, flag and note; the site is `None` when any
    /// refuses. Missing keys were already reported by whoever read the document and stay silent here.
    pub fn check(raw: &Raw) -> (Option<Self>, Vec<Problem>) {
        let mut problems = Vec::new();
        let pool =
            raw.pool.bed_m.zip(raw.pool.full_m).and_then(|(bed, full)| {
                Pool::check(bed, full, &raw.pool.table, raw.pool.width, &mut problems)
            });
        let datum = match raw.datum.as_deref().map_or_else(|| Ok(Datum::default()), Datum::new) {
            Ok(datum) => Some(datum),
            Err(error) => {
                problems.push(Problem::refused("datum", error.to_string(), "").at("datum"));
                None
            }
        };
        let offset = offset(raw, &mut problems);
        let place = place(raw, &mut problems);
        names(raw, &mut problems);
        let wells = outlets::wells(raw, pool.as_ref(), &mut problems);
        let outlets: Vec<Option<Outlet>> = raw
            .outlets
            .iter()
            .enumerate()
            .map(|(i, o)| outlets::outlet(o, i, raw, pool.as_ref(), &mut problems))
            .collect();
        if raw.outlets.is_empty() {
            problems.push(
                Problem::refused("no-outlet", "the site has no outlet", "list at least one under `outlets`")
                    .at("outlets"),
            );
        }
        outlets::mixed_losses(raw, &mut problems);
        let river = river::river(raw, &mut problems);
        river::points_of_targets(raw, &mut problems);
        aeration::on_gates(raw, &mut problems);
        let release = limits::release(raw, &mut problems);
        limits::blocks(&raw.blocks, &mut problems);
        let limits = limits::limits(raw, pool.as_ref(), &mut problems);
        let targets: Vec<Option<Target>> =
            (0..raw.targets.len()).map(|i| rules::target(raw, i, &mut problems)).collect();
        let events = rules::events(raw, &mut problems);
        if raw.river.is_none() || river.is_some() {
            rules::references(&targets, river.as_ref(), &mut problems);
        }
        let (now, now_wells) = operation::now(raw, &outlets, &mut problems);
        spread::spread(raw, &mut problems);
        let learned = learned::learned(raw, &outlets, &mut problems);
        let season = season::season(raw, &mut problems);
        let order = order_texts::texts(raw, &mut problems);
        coverage(raw, &mut problems);
        if any_refused(&problems) {
            return (None, problems);
        }
        let site = (|| {
            Some(Self {
                name: raw.name.clone()?,
                river_name: raw.river_name.clone(),
                river,
                year_type: raw.year_type.clone(),
                events,
                coverage: raw.coverage,
                units: raw.units,
                datum: datum?,
                offset,
                place,
                pool: pool?,
                wells: wells.into_iter().collect::<Option<_>>()?,
                outlets: outlets.into_iter().collect::<Option<_>>()?,
                release,
                limits,
                blocks: raw.blocks.clone(),
                inflow_m3s: raw.inflow_m3s,
                bins: raw.bins,
                now,
                now_wells,
                targets: targets.into_iter().collect::<Option<_>>()?,
                cold_water_c: raw.cold_water_c.clone(),
                water: raw.water,
                checks: raw.checks,
                band: raw.band,
                applied: None,
                learning_days: raw.learning_days.unwrap_or(WINDOW_DAYS),
                columns: raw.columns.clone(),
                casts: raw.casts.clone(),
                season,
                order,
                demonstration: raw.demonstration,
            })
        })();
        (site.map(|site: Self| site.with_learned(learned)), problems)
    }
}

fn offset(raw: &Raw, problems: &mut Vec<Problem>) -> FixedOffset {
    let utc = FixedOffset::east_opt(0);
    let read = match raw.utc_offset.as_deref() {
        None => {
            problems.push(
                Problem::note("offset-assumed", "no utc_offset given: times that carry none are read as UTC")
                    .at("utc_offset"),
            );
            utc
        }
        Some(text) => {
            let parsed = parse_offset(text);
            if parsed.is_none() {
                problems.push(
                    Problem::refused(
                        "offset",
                        format!("`{text}` is not an offset from UTC"),
                        "write it as \"-07:00\" (standard time, all year)",
                    )
                    .at("utc_offset"),
                );
            }
            parsed.or(utc)
        }
    };
    // an offset of zero always exists; the fallback only satisfies the type
    read.unwrap_or_else(|| chrono::Offset::fix(&chrono::Utc))
}

fn parse_offset(text: &str) -> Option<FixedOffset> {
    let text = text.trim();
    if text == "Z" {
        return FixedOffset::east_opt(0);
    }
    let sign = match text.chars().next()? {
        '+' => 1,
        '-' => -1,
        _ => return None,
    };
    let (hours, minutes) = text.get(1..)?.split_once(':')?;
    if hours.len() != 2
        || minutes.len() != 2
        || !text.get(1..)?.bytes().all(|b| b.is_ascii_digit() || b == b':')
    {
        return None;
    }
    let (hours, minutes): (i32, i32) = (hours.parse().ok()?, minutes.parse().ok()?);
    (hours <= 14 && minutes < 60).then(|| FixedOffset::east_opt(sign * (hours * 3600 + minutes * 60)))?
}

fn place(raw: &Raw, problems: &mut Vec<Problem>) -> Whereabouts {
    if let Some(altitude_m) = raw.altitude_m.filter(|a| !ALTITUDE_M.contains(a)) {
        problems.push(
            Problem::refused(
                "altitude",
                format!(
                    "altitude {} lies outside {} to {}",
                    say::m(altitude_m, 0),
                    say::m(*ALTITUDE_M.start(), 0),
                    say::m(*ALTITUDE_M.end(), 0)
                ),
                "give the altitude of elevation 0 above sea level; check its unit",
            )
            .at("place.altitude"),
        );
    }
    if raw.latitude_deg.is_some_and(|l| !(-90.0..=90.0).contains(&l)) {
        problems.push(
            Problem::refused(
                "latitude",
                "latitude lies outside -90 to 90 degrees",
                "give degrees, north positive",
            )
            .at("place.latitude"),
        );
    }
    if raw.altitude_m.is_none() {
        problems.push(
            Problem::note(
                "altitude-unknown",
                "no place.altitude given: oxygen saturation is that of sea level",
            )
            .at("place"),
        );
    }
    Whereabouts { altitude_m: raw.altitude_m, latitude_deg: raw.latitude_deg }
}

/// How much of a day and of a week must be recorded: no more than there is.
fn coverage(raw: &Raw, problems: &mut Vec<Problem>) {
    let of = &raw.coverage;
    for (value, most, key) in [(of.hours, 24, "hours"), (of.days, 7, "days")] {
        if !(1..=most).contains(&value) {
            problems.push(
                Problem::refused(
                    "coverage",
                    format!("{key} must be 1 to {most}"),
                    "the usual is 22 hours and 6 days",
                )
                .at(format!("coverage.{key}")),
            );
        }
    }
}

fn names(raw: &Raw, problems: &mut Vec<Problem>) {
    let mut seen: HashMap<String, String> = HashMap::new();
    let wells = raw.wells.iter().enumerate().map(|(i, w)| (format!("wells[{i}]"), w.name.as_deref()));
    let outlets = raw.outlets.iter().enumerate().map(|(i, o)| (format!("outlets[{i}]"), o.name.as_deref()));
    for (path, name) in wells.chain(outlets) {
        let Some(name) = name else { continue };
        if name.trim().is_empty() || name.contains(['=', '%', ',']) {
            problems.push(
                Problem::refused(
                    "name",
                    format!("`{name}` cannot name an outlet or a well"),
                    "give a name without `=`, `%` or `,`: it is typed on the command line",
                )
                .at(format!("{path}.name")),
            );
        }
        if let Some(first) = seen.get(name) {
            problems.push(
                Problem::refused(
                    "name-twice",
                    format!("the name `{name}` is already used by {first}"),
                    "give every outlet and well a name of its own",
                )
                .at(format!("{path}.name")),
            );
        } else {
            seen.insert(name.to_owned(), path);
        }
    }
    let mut targets: HashMap<&str, usize> = HashMap::new();
    for (i, name) in raw.targets.iter().enumerate().filter_map(|(i, t)| Some((i, t.name.as_deref()?))) {
        if let Some(first) = targets.insert(name, i) {
            problems.push(
                Problem::refused(
                    "name-twice",
                    format!("the name `{name}` is already used by targets[{first}]"),
                    "give every target a name of its own",
                )
                .at(format!("targets[{i}].name")),
            );
        }
    }
}
