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
    if row.oxygen_mg_l.is_some_and(|o| o > 40.0) {
        problems.push(
            Problem::refused(
                "oxygen-range",
                "oxygen above 40 mg/L cannot be",
                "name the column oxygen_percent if the figures are percent of saturation",
            )
            .on_line(row.line),
        );
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
    let usable = kept.iter().filter(|p| p.row.temperature_c.is_some()).count();
    if usable < 2 {
        problems.push(Problem::refused(
            "too-few",
            format!("the cast has {usable} usable sample(s)"),
            "give at least two depths with a temperature",
        ));
        return None;
    }
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

/// Pools rows at one elevation into their mean and flags it.
pub(super) fn pool_duplicates(placed: &[Placed], problems: &mut Vec<Problem>) -> Vec<Placed> {
    let mut out: Vec<Placed> = Vec::with_capacity(placed.len());
    for group in placed.chunk_by(|a, b| (b.z - a.z).abs() < SAME_ELEVATION_M) {
        let Some(first) = group.first() else { continue };
        if group.len() > 1 {
            let temperatures = || group.iter().filter_map(|p| p.row.temperature_c);
            let spread = temperatures().fold(f64::NEG_INFINITY, f64::max)
                - temperatures().fold(f64::INFINITY, f64::min);
            let words = if spread.is_finite() {
                format!(
                    "{} rows at one depth, up to {} apart; their mean is used",
                    group.len(),
                    say::dc(spread, 2)
                )
            } else {
                format!("{} rows at one depth; their mean is used", group.len())
            };
            problems.push(
                Problem::flag("duplicate", words, "keep one row if they should not be averaged")
                    .on_line(first.row.line),
            );
        }
        let mean = |read: &dyn Fn(&RawRow) -> Option<f64>| {
            let values: Vec<f64> = group.iter().filter_map(|p| read(&p.row)).collect();
            (!values.is_empty()).then(|| values.iter().sum::<f64>() / values.len() as f64)
        };
        out.push(Placed {
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
        });
    }
    out
}
