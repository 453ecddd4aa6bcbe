//! Is the cast sound: gaps, spikes, inversions, oxygen above saturation, stretches beyond the samples.
//!
//! Methods: `docs/methods.md`, section 2.

use crate::problem::Problem;
use crate::site::Site;
use crate::units::say;
use crate::water;

use super::levelled::levelled;
use super::samples::{OxygenSample, Sample};

/// Inversions up to this density difference are ordinary, kg/m3 (choice; most real casts invert a little).
const INVERSION_KG_M3: f64 = 0.01;
/// And up to the density of this temperature difference there, C (choice).
const INVERSION_C: f64 = 0.25;
/// Inversions up to the density of this temperature difference are a sensor's noise, C (choice).
const NOISE_C: f64 = 0.1;
/// And up to this density difference, kg/m3 (choice: near 4 C temperature hardly makes any).
const NOISE_KG_M3: f64 = 0.004;
/// Most large inversions told one by one; of more the largest, with their count (choice).
const TOLD: usize = 3;
/// Inversions smaller than this are below what a sensor resolves and only counted in the note, kg/m3.
const INVERSION_SEEN_KG_M3: f64 = 1e-4;
/// A one-row spike needs both neighbours this near, m: farther apart, a real layer may lie between (choice).
const SPIKE_REACH_M: f64 = 3.0;
/// A gap matters only where the water changes across it, C (choice).
const GAP_CHANGE_C: f64 = 0.5;

/// What the examination found.
pub(super) struct Found {
    pub(super) flags: Vec<Problem>,
    pub(super) large_inversion: bool,
}

/// Examines samples held against their site; every figure of the limits is the site's own `checks`.
pub(super) fn examine(
    site: &Site,
    pool_m: f64,
    samples: &[Sample],
    lines: &[usize],
    oxygen: &[OxygenSample],
    oxygen_lines: &[usize],
) -> Found {
    let mut flags = Vec::new();
    gaps(site, pool_m, samples, lines, &mut flags);
    spikes(site, samples, lines, oxygen, oxygen_lines, &mut flags);
    let large_inversion = inversions(site, samples, lines, &mut flags);
    saturation(site, pool_m, samples, oxygen, oxygen_lines, &mut flags);
    Found { flags, large_inversion }
}

fn gaps(site: &Site, pool_m: f64, samples: &[Sample], lines: &[usize], flags: &mut Vec<Problem>) {
    for (pair, line) in samples.windows(2).zip(lines) {
        let height = pair[1].elevation_m - pair[0].elevation_m;
        let change = (pair[1].temperature_c - pair[0].temperature_c).abs();
        if height > site.checks.gap_m && change > GAP_CHANGE_C {
            flags.push(
                Problem::flag(
                    "gap",
                    format!(
                        "no sample for {} between {} and {}, where the water changes by {}",
                        say::m(height, 1),
                        say::m(pair[0].elevation_m, 2),
                        say::m(pair[1].elevation_m, 2),
                        say::dc(change, 1)
                    ),
                    "a zone that ends in the gap is a guess; sample closer next time",
                )
                .on_line(*line),
            );
        }
    }
    let ends = samples.first().zip(lines.first()).zip(samples.last().zip(lines.last()));
    if let Some(((bottom, bottom_line), (top, top_line))) = ends {
        for (stretch, what, line) in [
            (bottom.elevation_m - site.pool.bed_m, "above the bed", bottom_line),
            (pool_m - top.elevation_m, "below the surface", top_line),
        ] {
            if stretch > site.checks.extrapolate_m {
                flags.push(
                    Problem::flag(
                        "extrapolated",
                        format!(
                            "the nearest sample is {} {what}; its reading is used over that stretch",
                            say::m(stretch, 1)
                        ),
                        "sample from the surface to the bed next time",
                    )
                    .on_line(*line),
                );
            }
        }
    }
}

/// A reading that stands off both neighbours to the same side.
fn stands_off(before: f64, here: f64, after: f64, limit: f64) -> Option<f64> {
    let (a, b) = (here - before, here - after);
    (a * b > 0.0 && a.abs().min(b.abs()) > limit).then(|| a.abs().min(b.abs()) * a.signum())
}

/// Rows that stand off both near neighbours, with how far; of two spikes side by side only the larger, since a
/// slipped reading makes its neighbour stand off too.
fn spike_rows(rows: &[(f64, f64)], limit: f64) -> Vec<(usize, f64)> {
    let near = |w: &[(f64, f64)]| w[2].0 - w[1].0 <= SPIKE_REACH_M && w[1].0 - w[0].0 <= SPIKE_REACH_M;
    let found: Vec<(usize, f64)> = rows
        .windows(3)
        .enumerate()
        .filter(|(_, w)| near(w))
        .filter_map(|(i, w)| Some((i + 1, stands_off(w[0].1, w[1].1, w[2].1, limit)?)))
        .collect();
    let beside = |a: usize, b: usize| a.abs_diff(b) == 1;
    let lesser = |row: usize, off: f64| found.iter().any(|o| beside(o.0, row) && o.1.abs() > off.abs());
    found.iter().copied().filter(|&(row, off)| !lesser(row, off)).collect()
}

fn spikes(
    site: &Site,
    samples: &[Sample],
    lines: &[usize],
    oxygen: &[OxygenSample],
    oxygen_lines: &[usize],
    flags: &mut Vec<Problem>,
) {
    let mut flag = |words: String, line: usize| {
        flags.push(Problem::flag("spike", words, "blank the cell if the sensor slipped").on_line(line));
    };
    let rows: Vec<(f64, f64)> = samples.iter().map(|s| (s.elevation_m, s.temperature_c)).collect();
    for (i, off) in spike_rows(&rows, site.checks.spike_c) {
        let words = format!(
            "temperature {} at {} is {} off both neighbours; kept",
            say::c(rows[i].1, 2),
            say::m(rows[i].0, 2),
            say::dc(off, 2).signed()
        );
        flag(words, lines[i]);
    }
    let rows: Vec<(f64, f64)> = oxygen.iter().map(|o| (o.elevation_m, o.oxygen_mg_l)).collect();
    for (i, off) in spike_rows(&rows, site.checks.spike_mg_l) {
        let words = format!(
            "oxygen {:.2} mg/L at {} is {off:+.2} mg/L off both neighbours; kept",
            rows[i].1,
            say::m(rows[i].0, 2)
        );
        flag(words, oxygen_lines[i]);
    }
}

/// Density that a temperature difference makes at a temperature, kg/m3.
fn density_of_kg_m3(difference_c: f64, temperature_c: f64) -> f64 {
    (water::pure_water_kg_m3(temperature_c + difference_c) - water::pure_water_kg_m3(temperature_c)).abs()
}

/// A stretch that inverts: by how much (kg/m3), from which sample to which.
type Inverted = (f64, usize, usize);

/// Says where denser water lies above lighter: a note within a sensor's noise, a flag beyond it, a flag of its
/// own for each large stretch. Returns whether one is large.
fn inversions(site: &Site, samples: &[Sample], lines: &[usize], flags: &mut Vec<Problem>) -> bool {
    let z: Vec<f64> = samples.iter().map(|s| s.elevation_m).collect();
    let density: Vec<f64> = samples
        .iter()
        .map(|s| {
            water::density_kg_m3(s.temperature_c, s.salt_g_per_kg, s.suspended_mg_l, site.water.solids_kg_m3)
        })
        .collect();
    let level = levelled(&z, &density);
    let mut seen: Vec<Inverted> = Vec::new();
    let mut noise: Vec<Inverted> = Vec::new();
    let mut large: Vec<Inverted> = Vec::new();
    let mut from = 0;
    while from < level.len() {
        let mut to = from;
        while to + 1 < level.len() && level[to + 1].to_bits() == level[from].to_bits() {
            to += 1;
        }
        // how far the water of this block stands the wrong way round: greatest rise upward inside it
        let mut least = f64::INFINITY;
        let mut rise = 0.0_f64;
        for &rho in &density[from..=to] {
            least = least.min(rho);
            rise = rise.max(rho - least);
        }
        if to > from && rise >= INVERSION_SEEN_KG_M3 {
            let t = samples[from].temperature_c;
            if rise > density_of_kg_m3(INVERSION_C, t).max(INVERSION_KG_M3) {
                large.push((rise, from, to));
            } else if rise > density_of_kg_m3(NOISE_C, t).max(NOISE_KG_M3) {
                seen.push((rise, from, to));
            } else {
                noise.push((rise, from, to));
            }
        }
        from = to + 1;
    }
    let most = |list: &[Inverted]| list.iter().copied().max_by(|a, b| a.0.total_cmp(&b.0));
    let count = |list: &[Inverted]| match list.len() {
        1 => "one stretch".to_owned(),
        n => format!("{n} stretches"),
    };
    let told = if large.len() > TOLD { most(&large).into_iter().collect() } else { large.clone() };
    for (rise, from, to) in told {
        let others = if large.len() > TOLD {
            format!(", the largest of {} such stretches", large.len())
        } else {
            String::new()
        };
        let words = format!(
            "between {} and {} denser water lies above lighter, by {rise:.3} kg/m3{others}; levelled for the zone, and the band doubled",
            say::m(z[from], 2),
            say::m(z[to], 2)
        );
        flags.push(
            Problem::flag("inversion-large", words, "check the sensor and its depth here")
                .on_line(lines[from]),
        );
    }
    if let Some((rise, from, to)) = most(&seen) {
        let words = format!(
            "denser water lies a little above lighter in {}, at most by {rise:.4} kg/m3, between {} and {}; levelled for the zone only",
            count(&seen),
            say::m(z[from], 2),
            say::m(z[to], 2)
        );
        flags.push(
            Problem::flag("inversion", words, "most casts do this; a slow sensor does it more")
                .on_line(lines[from]),
        );
    }
    if let Some((rise, from, _)) = most(&noise) {
        let words = format!(
            "denser water above lighter within a sensor's noise in {}, at most by {rise:.4} kg/m3; levelled for the zone only",
            count(&noise)
        );
        flags.push(Problem::note("levelled", words).on_line(lines[from]));
    }
    !large.is_empty()
}

fn saturation(
    site: &Site,
    pool_m: f64,
    samples: &[Sample],
    oxygen: &[OxygenSample],
    lines: &[usize],
    flags: &mut Vec<Problem>,
) {
    let pressure = site.surface_pressure_atm(pool_m);
    let pressure_words = if site.place.altitude_m.is_some() { "" } else { " at sea level" };
    let mut over: Vec<(f64, &OxygenSample, usize)> = Vec::new();
    for (o, line) in oxygen.iter().zip(lines) {
        let near = samples.iter().min_by(|a, b| {
            (a.elevation_m - o.elevation_m).abs().total_cmp(&(b.elevation_m - o.elevation_m).abs())
        });
        let Some(near) = near else { continue };
        let share = o.oxygen_mg_l / water::saturation_mg_l(near.temperature_c, near.salt_g_per_kg, pressure);
        if share > site.checks.oxygen_share {
            over.push((share, o, *line));
        }
    }
    if let Some((share, o, line)) = over.iter().max_by(|a, b| a.0.total_cmp(&b.0)) {
        flags.push(
            Problem::flag(
                "oxygen-above-saturation",
                format!(
                    "{} oxygen reading(s) above {:.0} % of saturation{pressure_words}, at most {:.0} % ({:.2} mg/L at {}); kept",
                    over.len(),
                    100.0 * site.checks.oxygen_share,
                    100.0 * share,
                    o.oxygen_mg_l,
                    say::m(o.elevation_m, 2)
                ),
                "an algal bloom does this; if there is none, calibrate the sensor",
            )
            .on_line(*line),
        );
    }
}
