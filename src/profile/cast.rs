//! From the rows of a cast to a profile held against its site.
//!
//! Readings become SI, depths become elevations, rows are put in order and rows at one elevation pooled; each
//! of these is said in a note or flag with its line, and nothing else is changed.

use chrono::{DateTime, FixedOffset};

use crate::problem::{Problem, any_refused};
use crate::site::Site;
use crate::units::say;
use crate::water;

use super::column::{Column, Source, Widths};
use super::quality;
use super::raw::{Raw, RawRow};
use super::rows::{Placed, order, place, pool_duplicates, possible};
use super::samples::{OxygenSample, Sample};

/// A cast held against its site, ready to be asked.
#[derive(Debug, Clone)]
pub struct Profile {
    /// File as the user named it.
    pub file: String,
    /// When it was taken.
    pub taken: Option<DateTime<FixedOffset>>,
    /// Water surface, m.
    pub pool_m: f64,
    /// Samples, rising.
    pub samples: Vec<Sample>,
    /// Line of the file each sample stands on.
    pub lines: Vec<usize>,
    /// Oxygen samples, rising.
    pub oxygen: Vec<OxygenSample>,
    /// Whether solids were measured.
    pub has_solids: bool,
    /// The column built from them.
    pub column: Column,
    /// Whether an inversion was large enough to double the band.
    pub large_inversion: bool,
    /// Flags and notes in the order of the file.
    pub flags: Vec<Problem>,
}

/// Surface water denser than bed water by more than this is an upside-down profile, kg/m3 (choice).
const UPSIDE_DOWN_KG_M3: f64 = 0.5;

impl Profile {
    /// Builds the profile of a cast. `pool_m` stands for the cast's own pool where the cast has none.
    ///
    /// The list holds every refusal, flag and note; `None` when any refuses.
    pub fn build(raw: &Raw, site: &Site, pool_m: Option<f64>) -> (Option<Self>, Vec<Problem>) {
        let mut problems = Vec::new();
        let profile = build(raw, site, pool_m, &mut problems);
        for p in &mut problems {
            p.place.file.get_or_insert_with(|| raw.file.clone());
        }
        if any_refused(&problems) {
            return (None, problems);
        }
        let profile = profile.map(|mut p| {
            p.flags.clone_from(&problems);
            p
        });
        (profile, problems)
    }

    /// Age at a moment, days.
    pub fn age_days(&self, on: DateTime<FixedOffset>) -> Option<f64> {
        Some((on - self.taken?).num_seconds() as f64 / 86_400.0)
    }

    /// The same water with other samples: for a moved pool and for perturbed cases.
    pub fn column_of(
        site: &Site,
        pool_m: f64,
        samples: &[Sample],
        oxygen: &[OxygenSample],
    ) -> Option<Column> {
        let width = |z: f64| site.pool.width(z).unwrap_or(1.0);
        let widths = site
            .pool
            .width(site.pool.bed_m)
            .map(|_| Widths { nodes_m: site.pool.nodes_m().collect(), at: &width });
        Column::new(&Source {
            bed_m: site.pool.bed_m,
            surface_m: pool_m,
            samples,
            oxygen,
            solids_kg_m3: site.water.solids_kg_m3,
            widths,
        })
    }
}

fn build(raw: &Raw, site: &Site, pool_m: Option<f64>, problems: &mut Vec<Problem>) -> Option<Profile> {
    let Some(pool) = raw.pool_m.or(pool_m) else {
        problems.push(Problem::refused(
            "no-pool",
            "the cast does not say the pool elevation",
            "add a line `# pool: ELEVATION`, or give --pool",
        ));
        return None;
    };
    if !(site.pool.bed_m..=site.pool.top_m()).contains(&pool) || pool <= site.pool.bed_m {
        problems.push(Problem::refused(
            "pool-outside",
            format!("pool {} lies outside the pool table ({})", say::m(pool, 2), site.pool.extent()),
            "check the elevation, its unit and its datum",
        ));
        return None;
    }
    if pool > site.pool.full_m + 1e-9 {
        problems.push(Problem::flag(
            "pool-above-full",
            format!("pool {} is above full pool {}", say::m(pool, 2), say::m(site.pool.full_m, 2)),
            "check the elevation unless this is a flood",
        ));
    }
    for row in &raw.rows {
        possible(row, problems);
    }
    if any_refused(problems) {
        return None;
    }
    let mut placed = place(raw, site, pool, problems)?;
    order(&mut placed, problems);
    let placed = pool_duplicates(&placed, problems);
    finish(raw, site, pool, &placed, problems)
}

fn finish(
    raw: &Raw,
    site: &Site,
    pool: f64,
    placed: &[Placed],
    problems: &mut Vec<Problem>,
) -> Option<Profile> {
    let warm: Vec<&Placed> = placed.iter().filter(|p| p.row.temperature_c.is_some()).collect();
    if warm.len() < 2 {
        problems.push(Problem::refused(
            "too-few",
            format!("the cast has {} usable sample(s)", warm.len()),
            "give at least two depths with a temperature",
        ));
        return None;
    }
    below_zero(placed, problems);
    let dissolved: Vec<Option<f64>> = warm.iter().map(|p| dissolved_mg_l(&p.row, site)).collect();
    let suspended: Vec<Option<f64>> = warm.iter().map(|p| p.row.suspended_mg_l.map(|v| v.max(0.0))).collect();
    let elevations: Vec<f64> = warm.iter().map(|p| p.z).collect();
    let (dissolved, suspended) = (bridged(&elevations, &dissolved), bridged(&elevations, &suspended));
    let samples: Vec<Sample> = warm
        .iter()
        .enumerate()
        .filter_map(|(i, p)| {
            let temperature_c = p.row.temperature_c?;
            Some(Sample {
                elevation_m: p.z,
                temperature_c,
                salt_g_per_kg: water::dissolved_g_per_kg(
                    dissolved.as_ref().map_or(0.0, |d| d[i]),
                    temperature_c,
                ),
                suspended_mg_l: suspended.as_ref().map_or(0.0, |s| s[i]),
            })
        })
        .collect();
    let oxygen = oxygen(placed, site, pool, &samples);
    notes(raw, warm.len(), placed, site, problems);
    let (Some(bottom), Some(top)) = (samples.first(), samples.last()) else { return None };
    let density = |s: &Sample| {
        water::density_kg_m3(s.temperature_c, s.salt_g_per_kg, s.suspended_mg_l, site.water.solids_kg_m3)
    };
    if density(top) > density(bottom) + UPSIDE_DOWN_KG_M3 {
        problems.push(Problem::refused(
            "upside-down",
            format!(
                "surface water ({}) is denser than bed water ({}) by {:.2} kg/m3",
                say::c(top.temperature_c, 2),
                say::c(bottom.temperature_c, 2),
                density(top) - density(bottom)
            ),
            "check that the header does not call depths elevations, or elevations depths",
        ));
        return None;
    }
    let lines: Vec<usize> = warm.iter().map(|p| p.row.line).collect();
    let oxygen_lines: Vec<usize> =
        placed.iter().filter(|p| oxygen_of(&p.row).is_some()).map(|p| p.row.line).collect();
    let found = quality::examine(site, pool, &samples, &lines, &oxygen, &oxygen_lines);
    let column = Profile::column_of(site, pool, &samples, &oxygen)?;
    problems.extend(found.flags);
    Some(Profile {
        file: raw.file.clone(),
        taken: raw.taken,
        pool_m: pool,
        samples,
        lines,
        oxygen,
        has_solids: dissolved.is_some() || suspended.is_some(),
        column,
        large_inversion: found.large_inversion,
        flags: Vec::new(),
    })
}

/// Says where a sensor's zero drifted below zero; such readings count as zero.
fn below_zero(placed: &[Placed], problems: &mut Vec<Problem>) {
    let negative = |p: &&Placed| {
        let r = &p.row;
        let all = [
            r.oxygen_mg_l,
            r.oxygen_percent,
            r.specific_us_cm,
            r.conductivity_us_cm,
            r.solids_mg_l,
            r.suspended_mg_l,
        ];
        all.into_iter().flatten().any(|v| v < 0.0)
    };
    let found: Vec<&Placed> = placed.iter().filter(negative).collect();
    if let Some(first) = found.first() {
        let words = format!("{} row(s) hold a reading a little below zero; read as zero", found.len());
        problems.push(Problem::note("below-zero", words).on_line(first.row.line));
    }
}

fn oxygen_of(row: &RawRow) -> Option<f64> {
    row.oxygen_mg_l.or(row.oxygen_percent)
}

/// Oxygen samples; percent of saturation at the pressure of the water surface becomes mg/L.
fn oxygen(placed: &[Placed], site: &Site, pool: f64, samples: &[Sample]) -> Vec<OxygenSample> {
    let pressure = site.surface_pressure_atm(pool);
    placed
        .iter()
        .filter_map(|p| {
            let oxygen_mg_l = match (p.row.oxygen_mg_l, p.row.oxygen_percent) {
                (Some(oxygen), _) => oxygen,
                (None, Some(percent)) => {
                    let near = samples
                        .iter()
                        .min_by(|a, b| (a.elevation_m - p.z).abs().total_cmp(&(b.elevation_m - p.z).abs()))?;
                    let t = p.row.temperature_c.unwrap_or(near.temperature_c);
                    water::oxygen_from_percent_mg_l(
                        percent,
                        water::saturation_mg_l(t, near.salt_g_per_kg, pressure),
                    )
                }
                (None, None) => return None,
            };
            Some(OxygenSample { elevation_m: p.z, oxygen_mg_l: oxygen_mg_l.max(0.0) })
        })
        .collect()
}

/// Dissolved solids of a row, mg/L: as measured, else from conductance.
fn dissolved_mg_l(row: &RawRow, site: &Site) -> Option<f64> {
    if let Some(solids) = row.solids_mg_l {
        return Some(solids.max(0.0));
    }
    let specific = row.specific_us_cm.or_else(|| {
        Some(water::specific_conductance_us_cm(
            row.conductivity_us_cm?,
            row.temperature_c?,
            water::CONDUCTIVITY_PER_C,
        ))
    })?;
    Some(water::dissolved_from_conductance_mg_l(specific.max(0.0), site.water.tds_per_us_cm))
}

/// Absent values linear between their neighbours, held beyond; `None` when all are absent.
fn bridged(z: &[f64], values: &[Option<f64>]) -> Option<Vec<f64>> {
    let known: Vec<(f64, f64)> = z.iter().zip(values).filter_map(|(&z, v)| Some((z, (*v)?))).collect();
    let (first, last) = (known.first()?, known.last()?);
    let at = |z: f64| {
        let i = known.partition_point(|k| k.0 <= z);
        match (i.checked_sub(1).map(|k| known[k]), known.get(i)) {
            (Some(a), Some(b)) => a.1 + (b.1 - a.1) * (z - a.0) / (b.0 - a.0),
            (Some(_), None) => last.1,
            (None, _) => first.1,
        }
    };
    Some(z.iter().map(|&z| at(z)).collect())
}

/// Says what was converted or is absent.
fn notes(raw: &Raw, with_temperature: usize, placed: &[Placed], site: &Site, problems: &mut Vec<Problem>) {
    let has = |read: &dyn Fn(&RawRow) -> Option<f64>| placed.iter().any(|p| read(&p.row).is_some());
    if with_temperature < placed.len() {
        let first = placed.iter().find(|p| p.row.temperature_c.is_none());
        let note = Problem::note(
            "no-temperature",
            format!("{} row(s) have no temperature", placed.len() - with_temperature),
        );
        problems.push(match first {
            Some(p) => note.on_line(p.row.line),
            None => note,
        });
    }
    if !has(&oxygen_of) {
        problems.push(Problem::note("no-oxygen", "the cast has no oxygen: release oxygen stays unknown"));
    } else if !has(&|r| r.oxygen_mg_l) {
        problems.push(Problem::note(
            "oxygen-converted",
            if site.place.altitude_m.is_some() {
                "oxygen converted from percent of saturation at the altitude of the pool"
            } else {
                "oxygen converted from percent of saturation at sea level (no altitude given)"
            },
        ));
    }
    let conductance = has(&|r| r.specific_us_cm) || has(&|r| r.conductivity_us_cm);
    if !has(&|r| r.solids_mg_l) && conductance {
        problems.push(Problem::note(
            "solids-from-conductance",
            format!(
                "dissolved solids taken as {:.2} mg/L per uS/cm of specific conductance",
                site.water.tds_per_us_cm
            ),
        ));
        if !has(&|r| r.specific_us_cm) {
            problems.push(Problem::note(
                "conductance-converted",
                "raw conductivity converted to 25 C by 1.91 % per C",
            ));
        }
    }
    if raw.taken.is_none() {
        problems.push(Problem::flag(
            "no-time",
            "the cast does not say when it was taken: its age is unknown",
            "add a line `# taken: 2025-07-14T10:30`, or give --profile with --taken",
        ));
    }
}
