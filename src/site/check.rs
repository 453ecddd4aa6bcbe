//! From raw to checked site: every problem at once, each at its path.

use std::collections::HashMap;

use chrono::FixedOffset;

use crate::problem::{Problem, any_refused};
use crate::target::{Span, Statistic, Target, YearDay};
use crate::units::{Datum, say};

use super::{
    Kind, Outlet, Pool, Raw, RawOutlet, RawTarget, ReleaseLimits, SetNow, Shape, Site, Well, Whereabouts,
};

/// How far a conduit may lie below the bed of the pool table, m (a tower's foot stands deeper than silt).
pub const CONDUIT_SLACK_M: f64 = 5.0;
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
        let wells = wells(raw, pool.as_ref(), &mut problems);
        let outlets: Vec<Option<Outlet>> = raw
            .outlets
            .iter()
            .enumerate()
            .map(|(i, o)| outlet(o, i, raw, pool.as_ref(), &mut problems))
            .collect();
        if raw.outlets.is_empty() {
            problems.push(
                Problem::refused("no-outlet", "the site has no outlet", "list at least one under `outlets`")
                    .at("outlets"),
            );
        }
        mixed_losses(raw, &mut problems);
        let release = ReleaseLimits { min_m3s: raw.release_min_m3s, max_m3s: raw.release_max_m3s };
        if let (Some(min), Some(max)) = (release.min_m3s, release.max_m3s)
            && min > max
        {
            problems.push(
                Problem::refused(
                    "release-order",
                    format!("release.min {} is above release.max {}", say::m3s(min, 2), say::m3s(max, 2)),
                    "swap them",
                )
                .at("release.min"),
            );
        }
        let targets: Vec<Option<Target>> =
            raw.targets.iter().enumerate().map(|(i, t)| target(t, i, &mut problems)).collect();
        let now = now(raw, &outlets, &mut problems);
        spread(raw, &mut problems);
        if any_refused(&problems) {
            return (None, problems);
        }
        let site = (|| {
            Some(Self {
                name: raw.name.clone()?,
                river: raw.river.clone(),
                units: raw.units,
                datum: datum?,
                offset,
                place,
                pool: pool?,
                wells: wells.into_iter().collect::<Option<_>>()?,
                outlets: outlets.into_iter().collect::<Option<_>>()?,
                release,
                now,
                targets: targets.into_iter().collect::<Option<_>>()?,
                cold_water_c: raw.cold_water_c.clone(),
                water: raw.water,
                checks: raw.checks,
                band: raw.band,
                columns: raw.columns.clone(),
                casts: raw.casts.clone(),
                demonstration: raw.demonstration,
            })
        })();
        (site, problems)
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

fn positive(value: Option<f64>, path: String, what: &str, problems: &mut Vec<Problem>) -> Option<f64> {
    if value.is_some_and(|v| v <= 0.0) {
        problems.push(
            Problem::refused("not-positive", format!("{what} must be above zero"), "correct the figure")
                .at(path),
        );
    }
    value
}

fn not_negative(value: Option<f64>, path: String, what: &str, problems: &mut Vec<Problem>) -> Option<f64> {
    if value.is_some_and(|v| v < 0.0) {
        problems.push(
            Problem::refused("negative", format!("{what} cannot be negative"), "correct the figure").at(path),
        );
    }
    value
}

fn wells(raw: &Raw, pool: Option<&Pool>, problems: &mut Vec<Problem>) -> Vec<Option<Well>> {
    let build = |(i, w): (usize, &super::RawWell)| {
        let at = |key: &str| format!("wells[{i}].{key}");
        if let (Some(conduit), Some(pool)) = (w.conduit_m, pool)
            && !(pool.bed_m - CONDUIT_SLACK_M..=pool.top_m()).contains(&conduit)
        {
            problems.push(
                Problem::refused(
                    "outside-pool",
                    format!("conduit {} lies outside the pool ({})", say::m(conduit, 2), pool.extent()),
                    "check the elevation, its unit and its datum",
                )
                .at(at("conduit")),
            );
        }
        let max_open = w.max_open.and_then(|n| {
            let count = (1..=1000_u16).find(|&k| f64::from(k).total_cmp(&n).is_eq());
            if count.is_none() {
                problems.push(
                    Problem::refused(
                        "max-open",
                        "max_open must count gates",
                        "give a whole number, 1 or more",
                    )
                    .at(at("max_open")),
                );
            }
            count.map(usize::from)
        });
        Some(Well {
            name: w.name.clone()?,
            conduit_m: w.conduit_m?,
            max_open,
            max_head_loss_m: positive(w.max_head_loss_m, at("max_head_loss"), "max_head_loss", problems),
            max_flow_m3s: positive(w.max_flow_m3s, at("max_flow"), "max_flow", problems),
        })
    };
    raw.wells.iter().enumerate().map(build).collect()
}

fn outlet(
    o: &RawOutlet,
    i: usize,
    raw: &Raw,
    pool: Option<&Pool>,
    problems: &mut Vec<Problem>,
) -> Option<Outlet> {
    let at = |key: &str| format!("outlets[{i}].{key}");
    let well = o.well.as_deref().and_then(|name| {
        let found = raw.wells.iter().position(|w| w.name.as_deref() == Some(name));
        if found.is_none() {
            problems.push(
                Problem::refused(
                    "unknown-well",
                    format!("no well is named `{name}`"),
                    "list it under `wells`, or correct the name",
                )
                .at(at("well")),
            );
        }
        found
    });
    for (value, key) in [
        (o.height_m, "height"),
        (o.width_m, "width"),
        (o.diameter_m, "diameter"),
        (o.loss, "loss"),
        (o.discharge, "discharge"),
    ] {
        positive(value, at(key), key, problems);
    }
    not_negative(o.min_submergence_m, at("min_submergence"), "min_submergence", problems);
    not_negative(o.flow_min_m3s, at("flow.min"), "flow.min", problems);
    positive(o.flow_max_m3s, at("flow.max"), "flow.max", problems);
    if let (Some(min), Some(max)) = (o.flow_min_m3s, o.flow_max_m3s)
        && min > max
    {
        problems.push(
            Problem::refused(
                "flow-order",
                format!("flow.min {} is above flow.max {}", say::m3s(min, 2), say::m3s(max, 2)),
                "swap them",
            )
            .at(at("flow.min")),
        );
    }
    if o.angle_deg.is_some_and(|a| !(0.0..=360.0).contains(&a) || a == 0.0) {
        problems.push(
            Problem::refused(
                "angle",
                "the withdrawal angle must be above 0 and at most 360 degrees",
                "give 180 for a straight face, 360 for a free-standing tower, 90 in a corner",
            )
            .at(at("angle")),
        );
    }
    if let Some(leak) = &o.leakage {
        not_negative(Some(leak.flow_m3s), at("leakage.flow"), "leakage.flow", problems);
        positive(Some(leak.head_m), at("leakage.head"), "leakage.head", problems);
        if leak.range_m3s.is_some_and(|(low, high)| low < 0.0 || low > leak.flow_m3s || high < leak.flow_m3s)
        {
            problems.push(
                Problem::refused(
                    "leak-range",
                    "leakage.flow lies outside leakage.range",
                    "give the range as [least, most] around the flow",
                )
                .at(at("leakage.range")),
            );
        }
    }
    let crest = match o.kind.as_deref() {
        None | Some("orifice") => false,
        Some("crest") => true,
        Some(other) => {
            problems.push(
                Problem::refused(
                    "kind",
                    format!("`{other}` is not a kind of outlet"),
                    "use `orifice` or `crest`",
                )
                .at(at("kind")),
            );
            return None;
        }
    };
    positions(o, i, crest, problems);
    let kind = if crest { crest_kind(o, i, problems) } else { orifice_kind(o, i, problems) };
    let (centre_m, kind) = (o.centre_m?, kind?);
    let built = Outlet {
        name: o.name.clone()?,
        well,
        kind,
        centre_m,
        angle_rad: o.angle_deg.unwrap_or(180.0).to_radians(),
        loss: o.loss,
        discharge: o.discharge,
        opens: o.opens,
        positions: o.positions.clone(),
        min_submergence_m: o.min_submergence_m,
        flow_min_m3s: o.flow_min_m3s.unwrap_or(0.0),
        flow_max_m3s: o.flow_max_m3s,
        leakage: o.leakage,
    };
    if let Some(pool) = pool
        && (built.sill_m() < pool.bed_m - 1e-9 || centre_m > pool.top_m())
    {
        problems.push(
            Problem::refused(
                "outside-pool",
                format!(
                    "`{}` (sill {}, centre {}) lies outside the pool ({})",
                    built.name,
                    say::m(built.sill_m(), 2),
                    say::m(centre_m, 2),
                    pool.extent()
                ),
                "check the elevation, its unit and its datum",
            )
            .at(at("centre")),
        );
    }
    Some(built)
}

fn orifice_kind(o: &RawOutlet, i: usize, problems: &mut Vec<Problem>) -> Option<Kind> {
    let mut refuse = |key: &str, words: &str, cure: &str| {
        problems.push(Problem::refused("shape", words, cure).at(format!("outlets[{i}].{key}")));
        None
    };
    if o.gated.is_some() || !o.rating.is_empty() {
        return refuse("kind", "`gated` and `rating` belong to a crest", "add `kind: crest`, or drop them");
    }
    match (o.height_m, o.width_m, o.diameter_m) {
        (Some(height_m), Some(width_m), None) => Some(Kind::Orifice(Shape::Rectangle { height_m, width_m })),
        (None, None, Some(diameter_m)) => Some(Kind::Orifice(Shape::Circle { diameter_m })),
        (_, _, Some(_)) => refuse(
            "diameter",
            "the outlet has a diameter and a height or width",
            "give the diameter alone, or height and width",
        ),
        (None, _, None) => refuse("height", "height is missing", "give height and width, or a diameter"),
        (_, None, None) => refuse("width", "width is missing", "give height and width, or a diameter"),
    }
}

fn crest_kind(o: &RawOutlet, i: usize, problems: &mut Vec<Problem>) -> Option<Kind> {
    let at = |key: &str| format!("outlets[{i}].{key}");
    if o.diameter_m.is_some() || o.height_m.is_some() {
        problems.push(
            Problem::refused(
                "shape",
                "a crest has neither height nor diameter",
                "give its length as `width`",
            )
            .at(at("kind")),
        );
    }
    let rises = o.rating.windows(2).all(|w| w[1].0 > w[0].0 && w[1].1 >= w[0].1);
    if !rises || o.rating.len() == 1 {
        problems.push(
            Problem::refused(
                "rating",
                "the rating needs at least two rows, with head and flow rising",
                "list rows [head, flow] from the lowest head up",
            )
            .at(at("rating")),
        );
    }
    let Some(length_m) = o.width_m else {
        problems.push(
            Problem::refused("shape", "width is missing", "give the crest's length as `width`")
                .at(at("width")),
        );
        return None;
    };
    Some(Kind::Crest { length_m, gated: o.gated.unwrap_or(false), rating: o.rating.clone() })
}

fn positions(o: &RawOutlet, i: usize, crest: bool, problems: &mut Vec<Problem>) {
    for (k, p) in o.positions.iter().enumerate() {
        let path = format!("outlets[{i}].positions[{k}]");
        if !(0.0..=1.0).contains(&p.opening) {
            problems.push(
                Problem::refused(
                    "position",
                    format!("position `{}` lies outside 0 to 100 %", p.name),
                    "give percent of the full opening",
                )
                .at(path.clone()),
            );
        }
        if p.crest_m.is_some() && !crest {
            problems.push(
                Problem::refused(
                    "position",
                    "a position with a crest needs an outlet of `kind: crest`",
                    "add `kind: crest`",
                )
                .at(path.clone()),
            );
        }
        if o.positions[..k].iter().any(|q| q.name == p.name) {
            problems.push(
                Problem::refused(
                    "position",
                    format!("position `{}` is listed twice", p.name),
                    "list each position once",
                )
                .at(path),
            );
        }
    }
}

/// A well in which some ports give a loss and others do not cannot be split.
fn mixed_losses(raw: &Raw, problems: &mut Vec<Problem>) {
    for (i, well) in raw.wells.iter().enumerate() {
        let Some(name) = well.name.as_deref() else { continue };
        let ports: Vec<&RawOutlet> = raw.outlets.iter().filter(|o| o.well.as_deref() == Some(name)).collect();
        let given = ports.iter().filter(|o| o.loss.is_some()).count();
        if given != 0 && given != ports.len() {
            problems.push(
                Problem::refused(
                    "mixed-loss",
                    format!("{given} of {} gates of well `{name}` give a loss", ports.len()),
                    "give `loss` for all gates of the well, or for none",
                )
                .at(format!("wells[{i}]")),
            );
        }
        if ports.is_empty() {
            problems.push(
                Problem::flag(
                    "empty-well",
                    format!("no outlet belongs to well `{name}`"),
                    "name it in an outlet's `well`, or drop the well",
                )
                .at(format!("wells[{i}]")),
            );
        }
    }
}

fn target(t: &RawTarget, i: usize, problems: &mut Vec<Problem>) -> Option<Target> {
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
    if point != "dam" {
        problems.push(
            Problem::refused("unknown-point", format!("no point is named `{point}`"), "use `dam`")
                .at(format!("{path}.point")),
        );
    }
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
    };
    problems.extend(built.problems(&path));
    Some(built)
}

fn now(raw: &Raw, outlets: &[Option<Outlet>], problems: &mut Vec<Problem>) -> Vec<(usize, SetNow)> {
    let mut out = Vec::new();
    for (name, set) in &raw.now {
        let path = format!("now.{name}");
        let Some(index) = raw.outlets.iter().position(|o| o.name.as_deref() == Some(name)) else {
            problems.push(
                Problem::refused(
                    "unknown-outlet",
                    format!("no outlet is named `{name}`"),
                    "correct the name",
                )
                .at(path),
            );
            continue;
        };
        match set {
            SetNow::Flow(flow) if *flow < 0.0 => {
                not_negative(Some(*flow), path, "flow", problems);
            }
            SetNow::Opening(share) => {
                let stands = outlets[index].as_ref().is_none_or(|o| {
                    o.positions.is_empty() || o.positions.iter().any(|p| (p.opening - share).abs() < 1e-9)
                });
                if !(0.0..=1.0).contains(share) || !stands {
                    problems.push(
                        Problem::refused(
                            "position",
                            format!("`{name}` has no position {:.0} %", share * 100.0),
                            "use one of its positions",
                        )
                        .at(path),
                    );
                }
                out.push((index, *set));
            }
            SetNow::Flow(_) => out.push((index, *set)),
        }
    }
    out
}

/// The figures of `band` and `checks` must be possible spreads.
fn spread(raw: &Raw, problems: &mut Vec<Problem>) {
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
        (c.heat_w_m2, "heat"),
    ] {
        positive(Some(value), format!("checks.{key}"), key, problems);
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
