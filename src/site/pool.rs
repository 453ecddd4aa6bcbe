//! The pool table: elevation, area, volume and width, and its look-ups.
//!
//! Methods: `docs/methods.md`, section 2.

use crate::problem::Problem;
use crate::units::say;

/// One row of the table as read, SI.
#[derive(Debug, Clone, Copy, Default, PartialEq)]
pub struct RawRow {
    /// Elevation, m.
    pub elevation_m: f64,
    /// Water surface area at that elevation, m2.
    pub area_m2: f64,
    /// Volume below that elevation, m3; absent, the area is integrated.
    pub volume_m3: Option<f64>,
    /// Width of the pool near the dam at that elevation, m.
    pub width_m: Option<f64>,
}

/// How the width enters the share of each slice of a withdrawal zone.
#[derive(Debug, Clone, Copy, Default, PartialEq, Eq)]
pub enum WidthSource {
    /// The fourth column of the table; uniform where there is none.
    #[default]
    Table,
    /// Area stands for width (a pool of one length at every elevation).
    FromArea,
}

/// The checked pool: elevations rise, area never falls, volume rises.
#[derive(Debug, Clone, PartialEq)]
pub struct Pool {
    /// Lowest water at the dam, m.
    pub bed_m: f64,
    /// Full pool, m.
    pub full_m: f64,
    /// Where widths come from.
    pub width: WidthSource,
    rows: Vec<Row>,
}

#[derive(Debug, Clone, Copy, PartialEq)]
struct Row {
    elevation_m: f64,
    area_m2: f64,
    volume_m3: f64,
    width_m: Option<f64>,
}

/// Volumes that differ from the integral of the areas by more than this share are flagged (choice).
const VOLUME_TOLERANCE: f64 = 0.05;

impl Pool {
    /// Checks the table and builds the pool. Every problem found is pushed to `problems`;
    /// `None` when one of them refuses the table.
    pub fn check(
        bed_m: f64,
        full_m: f64,
        table: &[RawRow],
        width: WidthSource,
        problems: &mut Vec<Problem>,
    ) -> Option<Self> {
        let before = problems.len();
        let mut refuse = |path: String, kind, words: String, cure: &str| {
            problems.push(Problem::refused(kind, words, cure).at(path));
        };
        if table.len() < 2 {
            refuse(
                "pool.table".into(),
                "table-short",
                format!("the pool table has {} row(s)", table.len()),
                "give at least two rows [elevation, area, volume], from bed to top",
            );
        }
        for (i, pair) in table.windows(2).enumerate() {
            let path = format!("pool.table[{}]", i + 1);
            if pair[1].elevation_m <= pair[0].elevation_m {
                refuse(
                    path.clone(),
                    "table-order",
                    format!(
                        "elevation {} is not above {} of the row before",
                        say::m(pair[1].elevation_m, 2),
                        say::m(pair[0].elevation_m, 2)
                    ),
                    "list the rows from the bed upward, each elevation once",
                );
            }
            if pair[1].area_m2 < pair[0].area_m2 {
                refuse(
                    path.clone(),
                    "table-order",
                    format!(
                        "area {} is smaller than {} of the row before",
                        say::m2(pair[1].area_m2, 0),
                        say::m2(pair[0].area_m2, 0)
                    ),
                    "area cannot shrink as the pool rises; look for swapped columns or rows",
                );
            }
            if let (Some(low), Some(high)) = (pair[0].volume_m3, pair[1].volume_m3)
                && high <= low
            {
                refuse(
                    path,
                    "table-order",
                    format!("volume {} is not above {} of the row before", say::m3(high, 0), say::m3(low, 0)),
                    "volume must rise with elevation; look for swapped columns or rows",
                );
            }
        }
        for (i, row) in table.iter().enumerate() {
            let negative = row.area_m2 < 0.0
                || row.volume_m3.is_some_and(|v| v < 0.0)
                || row.width_m.is_some_and(|w| w < 0.0);
            if negative {
                refuse(
                    format!("pool.table[{i}]"),
                    "negative",
                    "area, volume or width is negative".into(),
                    "correct the row",
                );
            }
        }
        for (given, what, else_) in [
            (
                table.iter().filter(|r| r.volume_m3.is_some()).count(),
                "volume",
                " (the areas are then integrated)",
            ),
            (table.iter().filter(|r| r.width_m.is_some()).count(), "width", ""),
        ] {
            if given != 0 && given != table.len() {
                refuse(
                    "pool.table".into(),
                    "table-gaps",
                    format!("{given} of {} rows give a {what}", table.len()),
                    &format!("give the {what} in every row, or in none{else_}"),
                );
            }
        }
        if full_m <= bed_m {
            refuse(
                "pool.full".into(),
                "pool-order",
                format!("full pool {} is not above the bed {}", say::m(full_m, 2), say::m(bed_m, 2)),
                "correct `bed` or `full`",
            );
        }
        if let (Some(first), Some(last)) = (table.first(), table.last()) {
            if first.elevation_m > bed_m + 1e-9 {
                refuse(
                    "pool.table[0]".into(),
                    "table-span",
                    format!(
                        "the table begins at {}, above the bed {}",
                        say::m(first.elevation_m, 2),
                        say::m(bed_m, 2)
                    ),
                    "add a first row at the bed; its area and volume may be 0",
                );
            }
            if last.elevation_m < full_m - 1e-9 {
                refuse(
                    format!("pool.table[{}]", table.len() - 1),
                    "table-span",
                    format!(
                        "the table ends at {}, below full pool {}",
                        say::m(last.elevation_m, 2),
                        say::m(full_m, 2)
                    ),
                    "add rows up to full pool or above",
                );
            }
        }
        if problems.len() > before {
            return None;
        }
        let mut rows: Vec<Row> = Vec::with_capacity(table.len());
        let mut integral = 0.0;
        for (i, raw) in table.iter().enumerate() {
            if let (Some(previous), true) = (rows.last(), i > 0) {
                let step = (raw.elevation_m - previous.elevation_m) * 0.5 * (raw.area_m2 + previous.area_m2);
                integral += step;
                if let Some(volume) = raw.volume_m3 {
                    let told = volume - previous.volume_m3;
                    if step <= 0.0 {
                        problems.push(
                            Problem::refused(
                                "volume-without-area",
                                format!("the row adds {} of water over an area of zero", say::m3(told, 0)),
                                "give the areas of this stretch",
                            )
                            .at(format!("pool.table[{i}]")),
                        );
                        return None;
                    }
                    if (told / step - 1.0).abs() > VOLUME_TOLERANCE {
                        problems.push(
                            Problem::flag(
                                "volume-area",
                                format!(
                                    "between {} and {} the volume column holds {} and the areas {} ({:+.1} %); \
                                     the volume column is used",
                                    say::m(previous.elevation_m, 2),
                                    say::m(raw.elevation_m, 2),
                                    say::m3(told, 0),
                                    say::m3(step, 0),
                                    100.0 * (step / told - 1.0)
                                ),
                                "check both columns here against the survey",
                            )
                            .at(format!("pool.table[{i}]")),
                        );
                    }
                }
            }
            rows.push(Row {
                elevation_m: raw.elevation_m,
                area_m2: raw.area_m2,
                volume_m3: raw.volume_m3.unwrap_or(integral),
                width_m: raw.width_m,
            });
        }
        if rows.windows(2).any(|w| w[1].area_m2 <= 0.0) {
            problems.push(
                Problem::refused(
                    "table-empty",
                    "a row above the first has no area",
                    "give the area of every row above the bed",
                )
                .at("pool.table"),
            );
            return None;
        }
        Some(Self { bed_m, full_m, width, rows })
    }

    /// Highest elevation of the table, m.
    pub fn top_m(&self) -> f64 {
        self.rows.last().map_or(self.full_m, |r| r.elevation_m)
    }

    /// Bed to top, as a sentence gives it.
    pub(crate) fn extent(&self) -> String {
        format!("{} to {}", say::m(self.bed_m, 2), say::m(self.top_m(), 2))
    }

    /// Elevations at which the table has a row, rising, m.
    pub fn nodes_m(&self) -> impl Iterator<Item = f64> + '_ {
        self.rows.iter().map(|r| r.elevation_m)
    }

    fn pair(&self, elevation_m: f64) -> (&Row, &Row) {
        let i = self.rows.partition_point(|r| r.elevation_m <= elevation_m).clamp(1, self.rows.len() - 1);
        (&self.rows[i - 1], &self.rows[i])
    }

    /// Area of the water surface at an elevation, m2; linear between rows, held outside the table.
    pub fn area_m2(&self, elevation_m: f64) -> f64 {
        let (a, b) = self.pair(elevation_m);
        let t = ((elevation_m - a.elevation_m) / (b.elevation_m - a.elevation_m)).clamp(0.0, 1.0);
        a.area_m2 + t * (b.area_m2 - a.area_m2)
    }

    /// The area that integrates to the table's volumes, m2: the linear area times the share by which the
    /// volumes of its stretch differ from the areas. `dV = effective area * dz` holds exactly inside a stretch.
    pub fn effective_area_m2(&self, elevation_m: f64) -> f64 {
        let (a, b) = self.pair(elevation_m);
        let linear = 0.5 * (a.area_m2 + b.area_m2) * (b.elevation_m - a.elevation_m);
        self.area_m2(elevation_m) * (b.volume_m3 - a.volume_m3) / linear
    }

    /// Volume below an elevation, m3: the table's at its rows, between them the quadratic of the linear area
    /// scaled to meet both. Held outside the table.
    pub fn volume_m3(&self, elevation_m: f64) -> f64 {
        let (a, b) = self.pair(elevation_m);
        let h = b.elevation_m - a.elevation_m;
        let t = ((elevation_m - a.elevation_m) / h).clamp(0.0, 1.0);
        let part = t * (a.area_m2 + 0.5 * t * (b.area_m2 - a.area_m2));
        let whole = 0.5 * (a.area_m2 + b.area_m2);
        a.volume_m3 + (b.volume_m3 - a.volume_m3) * part / whole
    }

    /// Elevation below which a volume stands, m; the inverse of [`Pool::volume_m3`]. `None` outside the table.
    pub fn elevation_of_volume_m(&self, volume_m3: f64) -> Option<f64> {
        let (first, last) = (self.rows.first()?, self.rows.last()?);
        if !(first.volume_m3..=last.volume_m3).contains(&volume_m3) {
            return None;
        }
        let i = self.rows.partition_point(|r| r.volume_m3 <= volume_m3).clamp(1, self.rows.len() - 1);
        let (a, b) = (&self.rows[i - 1], &self.rows[i]);
        let share = (volume_m3 - a.volume_m3) / (b.volume_m3 - a.volume_m3);
        let t = linear_share_inverse(a.area_m2, b.area_m2, share * 0.5 * (a.area_m2 + b.area_m2));
        Some(a.elevation_m + t * (b.elevation_m - a.elevation_m))
    }

    /// Elevation at which the surface has an area, m; the inverse of [`Pool::area_m2`], the lowest where the
    /// area stands still. `None` outside the table.
    pub fn elevation_of_area_m(&self, area_m2: f64) -> Option<f64> {
        let (first, last) = (self.rows.first()?, self.rows.last()?);
        if !(first.area_m2..=last.area_m2).contains(&area_m2) {
            return None;
        }
        let i = self.rows.partition_point(|r| r.area_m2 < area_m2).clamp(1, self.rows.len() - 1);
        let (a, b) = (&self.rows[i - 1], &self.rows[i]);
        let rise = b.area_m2 - a.area_m2;
        let t = if rise > 0.0 { (area_m2 - a.area_m2) / rise } else { 0.0 };
        Some(a.elevation_m + t.clamp(0.0, 1.0) * (b.elevation_m - a.elevation_m))
    }

    /// Width for the withdrawal zone at an elevation, any constant factor; `None` when the site gives none.
    pub fn width(&self, elevation_m: f64) -> Option<f64> {
        match self.width {
            WidthSource::FromArea => Some(self.area_m2(elevation_m)),
            WidthSource::Table => {
                let (a, b) = self.pair(elevation_m);
                let t = ((elevation_m - a.elevation_m) / (b.elevation_m - a.elevation_m)).clamp(0.0, 1.0);
                Some(a.width_m? + t * (b.width_m? - a.width_m?))
            }
        }
    }

    /// Width of the pool in metres at an elevation, where the table gives one.
    pub fn width_m(&self, elevation_m: f64) -> Option<f64> {
        if self.width == WidthSource::Table { self.width(elevation_m) } else { None }
    }
}

/// `t` in 0..1 with `a t + (b - a) t^2 / 2 = part`; the stable form of the quadratic's root.
fn linear_share_inverse(a: f64, b: f64, part: f64) -> f64 {
    let root = (a * a + 2.0 * (b - a) * part).max(0.0).sqrt();
    if a + root > 0.0 { (2.0 * part / (a + root)).clamp(0.0, 1.0) } else { 0.0 }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::units::{Dimension, Folder, System};

    #[test]
    fn scenario_a_customary_site_is_answered_in_feet() {
        let mut units = Folder::default();
        units.set(Dimension::Length, "ft").unwrap();
        let ft = |value| units.to_si(value, Dimension::Length);
        let row = |elevation_m, area_m2| RawRow { elevation_m, area_m2, ..RawRow::default() };
        let table = [row(ft(1000.0), 0.0), row(ft(1190.5), 9.0e6)];
        let mut found = Vec::new();
        assert_eq!(Pool::check(ft(1000.0), ft(1200.0), &table, WidthSource::Table, &mut found), None);
        let [problem] = found.as_slice() else { panic!("{found:?}") };
        assert_eq!(
            problem.text(System::Us),
            "refused: pool.table[1]: the table ends at 1,190.5 ft, below full pool 1,200.0 ft; \
             add rows up to full pool or above"
        );
        assert_eq!(problem.sentence(System::Si), "the table ends at 362.86 m, below full pool 365.76 m");
    }

    #[test]
    fn scenario_a_table_at_odds_with_its_areas_says_both_volumes() {
        let row = |elevation_m, area_m2, volume_m3| RawRow {
            elevation_m,
            area_m2,
            volume_m3: Some(volume_m3),
            width_m: None,
        };
        let table = [row(0.0, 2.0e6, 0.0), row(10.0, 2.0e6, 2.5e7)];
        let mut found = Vec::new();
        assert!(Pool::check(0.0, 10.0, &table, WidthSource::Table, &mut found).is_some());
        let said: Vec<String> = found.iter().map(|p| p.sentence(System::Us)).collect();
        assert_eq!(
            said,
            [
                "between 0.0 ft and 32.8 ft the volume column holds 20,268 acre-ft and the areas 16,214 acre-ft \
              (-20.0 %); the volume column is used"
            ]
        );
    }
}
