//! Rows of a cast: what water cannot be, elevations, order, rows at one depth.

use crate::problem::Problem;
use crate::site::Site;
use crate::units::say;

use super::raw::{Raw, RawRow};

/// Samples up to this far above the pool count as at the surface, m (choice).
pub const ABOVE_SURFACE_M: f64 = 0.1;
/// Water outside this range cannot be, C (choice).
pub const WATER_C: std::ops::RangeInclusive<f64> = -1.0..=45.0;
/// Samples closer than this are one elevation, m.
const SAME_ELEVATION_M: f64 = 0.005;

/// One row placed: elevation, line and readings.
#[derive(Debug, Clone, Copy)]
pub(super) struct Placed {
    pub(super) z: f64,
    pub(super) row: RawRow,
}

/// Most that a reading of reservoir water can be (choice, wide): oxygen mg/L and percent, conductance uS/cm,
/// dissolved and suspended solids mg/L.
const MOST: [f64; 5] = [40.0, 500.0, 100_000.0, 50_000.0, 100_000.0];

/// Refuses what water cannot be.
pub(super) fn possible(row: &RawRow, problems: &mut Vec<Problem>) {
    if let Some(t) = row.temperature_c
        && !WATER_C.contains(&t)
    {
        let cure = if (32.0..=113.0).contains(&t) {
            "name the column temperature_F if the figures are Fahrenheit"
        } else {
            "blank the cell if the sensor failed"
        };
        problems.push(
            Problem::refused(
                "temperature-range",
                format!(
                    "water of {} is outside {} to {}",
                    say::c(t, 2),
                    say::c(*WATER_C.start(), 0),
                    say::c(*WATER_C.end(), 0)
                ),
                cure,
            )
            .on_line(row.line),
        );
    }
    let negative = [
        (row.oxygen_mg_l, "oxygen"),
        (row.oxygen_percent, "oxygen"),
        (row.specific_us_cm, "conductance"),
        (row.conductivity_us_cm, "conductivity"),
        (row.solids_mg_l, "dissolved solids"),
        (row.suspended_mg_l, "suspended solids"),
    ];
    for (value, what) in negative {
        if value.is_some_and(|v| v < -0.5) {
            problems.push(
                Problem::refused(
                    "negative",
                    format!("{what} cannot be negative"),
                    "blank the cell if the sensor failed",
                )
                .on_line(row.line),
            );
        }
    }
    let most = [
        (
            row.oxygen_mg_l,
            MOST[0],
            "oxygen",
            "mg/L",
            "oxygen-range",
            "name the column oxygen_percent if the figures are percent of saturation",
        ),
        (
            row.oxygen_percent,
            MOST[1],
            "oxygen",
            "%",
            "oxygen-range",
            "name the column oxygen_mg_l if the figures are concentrations",
        ),
        (row.specific_us_cm, MOST[2], "conductance", "uS/cm", "solids-range", "check the unit of the column"),
        (
            row.conductivity_us_cm,
            MOST[2],
            "conductivity",
            "uS/cm",
            "solids-range",
            "check the unit of the column",
        ),
        (
            row.solids_mg_l,
            MOST[3],
            "dissolved solids",
            "mg/L",
            "solids-range",
            "check the unit of the column",
        ),
        (
            row.suspended_mg_l,
            MOST[4],
            "suspended solids",
            "mg/L",
            "solids-range",
            "check the unit of the column",
        ),
    ];
    for (value, limit, what, unit, kind, cure) in most {
        if value.is_some_and(|v| v > limit) {
            let words = format!("{what} above {limit:.0} {unit} is not reservoir water's");
            problems.push(Problem::refused(kind, words, cure).on_line(row.line));
        }
    }
}

/// Gives each row its elevation; leaves out rows above the water, with a flag.
pub(super) fn place(raw: &Raw, site: &Site, pool: f64, problems: &mut Vec<Problem>) -> Option<Vec<Placed>> {
    let mut placed: Vec<Placed> = Vec::with_capacity(raw.rows.len());
    for row in &raw.rows {
        let z = match (row.elevation_m, row.depth_m) {
            (Some(z), _) => z,
            (None, Some(depth)) => pool - depth,
            (None, None) => continue,
        };
        if row.temperature_c.is_some() || row.oxygen_mg_l.is_some() || row.oxygen_percent.is_some() {
            placed.push(Placed { z, row: *row });
        }
    }
    let wholly_outside = !placed.is_empty()
        && placed.iter().all(|p| p.z < site.pool.bed_m || p.z > site.pool.top_m() + ABOVE_SURFACE_M);
    if wholly_outside {
        let depths = raw.rows.iter().any(|r| r.elevation_m.is_some());
        problems.push(Problem::refused(
            "elevations-outside",
            format!("every sample lies outside the pool table ({})", site.pool.extent()),
            if depths {
                "name the column depth_m or depth_ft if the figures are depths"
            } else {
                "check depths and units"
            },
        ));
        return None;
    }
    let (kept, above): (Vec<Placed>, Vec<Placed>) =
        placed.into_iter().partition(|p| p.z <= pool + ABOVE_SURFACE_M);
    if let Some(first) = above.first() {
        let highest = above.iter().map(|p| p.z).fold(first.z, f64::max);
        problems.push(
            Problem::flag(
                "exposed",
                format!(
                    "{} sample(s) above the water left out, the highest by {}",
                    above.len(),
                    say::m(highest - pool, 2)
                ),
                "check depths and pool elevation; a sensor may hang in the air",
            )
            .on_line(first.row.line),
        );
    }
    let below: Vec<&Placed> = kept.iter().filter(|p| p.z < site.pool.bed_m - ABOVE_SURFACE_M).collect();
    if let Some(first) = below.first() {
        let deepest = below.iter().map(|p| p.z).fold(first.z, f64::min);
        problems.push(
            Problem::flag(
                "below-bed",
                format!(
                    "{} sample(s) below the bed, the lowest by {}",
                    below.len(),
                    say::m(site.pool.bed_m - deepest, 2)
                ),
                "check depths, pool elevation and the bed in the site file",
            )
            .on_line(first.row.line),
        );
    }
    let kept: Vec<Placed> = kept.into_iter().map(|p| Placed { z: p.z.min(pool), ..p }).collect();
    Some(kept)
}

/// Puts the rows in order of elevation and says where the file turned round.
pub(super) fn order(placed: &mut [Placed], problems: &mut Vec<Problem>) {
    let mut turns = Vec::new();
    let mut way = 0.0;
    for pair in placed.windows(2) {
        let step = pair[1].z - pair[0].z;
        if step.abs() > SAME_ELEVATION_M {
            if way * step < 0.0 {
                turns.push(pair[1].row.line);
            }
            way = step;
        }
    }
    if let Some(&first) = turns.first() {
        let words = if turns.len() == 1 {
            "the cast turns round here; both ways are used, sorted by depth".to_owned()
        } else {
            format!("the rows are not in order of depth ({} turns); sorted", turns.len())
        };
        problems.push(
            Problem::flag("order", words, "put the way down and the way up into two files").on_line(first),
        );
    }
    placed.sort_by(|a, b| a.z.total_cmp(&b.z).then(a.row.line.cmp(&b.row.line)));
}

/// Most duplicates told one by one; more are told together (choice).
const TOLD: usize = 3;

/// Pools rows at one elevation into their mean and flags it. A group reaches no farther than from its first row, so
/// that closely spaced samples do not run together.
pub(super) fn pool_duplicates(placed: &[Placed], problems: &mut Vec<Problem>) -> Vec<Placed> {
    let mut groups: Vec<&[Placed]> = Vec::with_capacity(placed.len());
    let mut rest = placed;
    while let Some(first) = rest.first() {
        let count = rest.partition_point(|p| p.z - first.z < SAME_ELEVATION_M);
        let (group, others) = rest.split_at(count.max(1));
        groups.push(group);
        rest = others;
    }
    duplicate_flags(&groups, problems);
    groups.into_iter().filter_map(pooled).collect()
}

/// Rows of one elevation and how far apart their temperatures are, C.
fn spread_c(group: &[Placed]) -> f64 {
    let temperatures = || group.iter().filter_map(|p| p.row.temperature_c);
    let spread =
        temperatures().fold(f64::NEG_INFINITY, f64::max) - temperatures().fold(f64::INFINITY, f64::min);
    spread.max(0.0)
}

fn duplicate_flags(groups: &[&[Placed]], problems: &mut Vec<Problem>) {
    let doubled: Vec<(&[Placed], usize)> =
        groups.iter().filter(|g| g.len() > 1).filter_map(|g| Some((*g, g.first()?.row.line))).collect();
    let mut flag = |words: String, line: usize| {
        let cure = "keep one row if they should not be averaged";
        problems.push(Problem::flag("duplicate", words, cure).on_line(line));
    };
    if doubled.len() > TOLD {
        let most = doubled.iter().map(|(g, _)| spread_c(g)).fold(0.0, f64::max);
        let words = format!(
            "{} depths have several rows, up to {} apart; their means are used",
            doubled.len(),
            say::dc(most, 2)
        );
        flag(words, doubled[0].1);
        return;
    }
    for (group, line) in doubled {
        let (rows, apart) = (group.len(), say::dc(spread_c(group), 2));
        flag(format!("{rows} rows at one depth, up to {apart} apart; their mean is used"), line);
    }
}

/// The mean of a group of rows, at its first.
fn pooled(group: &[Placed]) -> Option<Placed> {
    let first = group.first()?;
    let mean = |read: &dyn Fn(&RawRow) -> Option<f64>| {
        let values: Vec<f64> = group.iter().filter_map(|p| read(&p.row)).collect();
        (!values.is_empty()).then(|| values.iter().sum::<f64>() / values.len() as f64)
    };
    Some(Placed {
        z: first.z,
        row: RawRow {
            line: first.row.line,
            temperature_c: mean(&|r| r.temperature_c),
            oxygen_mg_l: mean(&|r| r.oxygen_mg_l),
            oxygen_percent: mean(&|r| r.oxygen_percent),
            specific_us_cm: mean(&|r| r.specific_us_cm),
            conductivity_us_cm: mean(&|r| r.conductivity_us_cm),
            solids_mg_l: mean(&|r| r.solids_mg_l),
            suspended_mg_l: mean(&|r| r.suspended_mg_l),
            ..first.row
        },
    })
}
