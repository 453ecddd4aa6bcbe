//! One mix of six levels: how fast, how near a careful answer, and how it stands against the peer in NumPy.
//!
//! `cargo bench --bench mix` prints the figures and fails when one of them breaks its bound. Both programs
//! are timed as prepared: the column is made ready once, a mix is six zones, six draws and their blend.
//! The profile is invented.

#![expect(clippy::print_stdout, reason = "the figures are the product")]

mod careful;

use std::error::Error;
use std::hint::black_box;
use std::path::Path;
use std::process::{Command, ExitCode, Stdio};
use std::time::Instant;

use gatemix::profile::{Column, OxygenSample, Sample, Source};
use gatemix::water::SEDIMENT_DENSITY_KG_M3;
use gatemix::withdrawal::{Opening, Sink, Zone, zone};
use serde_json::{Value, json};

/// A mix may take this long, us.
const SLOWEST_US: f64 = 10.0;
/// Temperature (C) and oxygen (mg/L) may differ by this much from either other answer.
const APART: f64 = 0.01;
/// The peer must be slower at least this many times, the best of each held together: neither then pays for
/// what else the machine does.
const TIMES_FASTER: f64 = 100.0;

const SURFACE_M: f64 = 72.0;
const SAMPLES: u32 = 200;
/// Centre-line (m) and flow (m3/s): small and large flows, some zones cut by the surface or the bed.
const LEVELS: [[f64; 2]; 6] =
    [[67.0, 25.0], [60.0, 6.0], [53.0, 30.0], [42.0, 2.0], [25.0, 45.0], [6.0, 60.0]];
/// Mixes timed together, and how many such batches; the middle one counts.
const BATCH: u32 = 50;
const BATCHES: usize = 4001;

/// A summer pool: cool below, a thermocline, oxygen least just under it.
fn water_at(elevation_m: f64) -> [f64; 2] {
    let step = |middle: f64, width: f64| 1.0 / (1.0 + ((middle - elevation_m) / width).exp());
    let temperature = 5.2 + 0.012 * elevation_m + 16.0 * step(54.0, 3.2);
    let hollow = (-((elevation_m - 47.0) / 5.0).powi(2)).exp();
    [temperature, 3.0 + 5.5 * step(50.0, 4.0) - 2.4 * hollow]
}

/// Elevation, temperature, oxygen.
fn rows() -> Vec<[f64; 3]> {
    (0..SAMPLES)
        .map(|i| {
            let z = SURFACE_M * f64::from(i) / f64::from(SAMPLES - 1);
            let [temperature, oxygen] = water_at(z);
            [z, temperature, oxygen]
        })
        .collect()
}

fn column(rows: &[[f64; 3]]) -> Option<Column> {
    let samples: Vec<Sample> = rows
        .iter()
        .map(|&[elevation_m, temperature_c, _]| Sample {
            elevation_m,
            temperature_c,
            salt_g_per_kg: 0.0,
            suspended_mg_l: 0.0,
        })
        .collect();
    let oxygen: Vec<OxygenSample> =
        rows.iter().map(|&[elevation_m, _, oxygen_mg_l]| OxygenSample { elevation_m, oxygen_mg_l }).collect();
    Column::new(&Source {
        bed_m: 0.0,
        surface_m: SURFACE_M,
        samples: &samples,
        oxygen: &oxygen,
        solids_kg_m3: SEDIMENT_DENSITY_KG_M3,
        widths: None,
    })
}

fn sinks() -> [Sink; 6] {
    LEVELS.map(|[centre_m, flow_m3s]| Sink { centre_m, flow_m3s, opening: Opening::FACE })
}

/// Temperature and oxygen of the mix. `None` when a level gives nothing or its oxygen is missing.
fn mix(column: &Column, sinks: &[Sink]) -> Option<[f64; 2]> {
    let (mut flow, mut sums) = (0.0, [0.0; 2]);
    for sink in sinks {
        let drawn = zone(column, sink, 1.0)?.draw(column)?;
        flow += sink.flow_m3s;
        sums[0] += sink.flow_m3s * drawn.temperature_c;
        sums[1] += sink.flow_m3s * drawn.oxygen_mg_l?;
    }
    Some(sums.map(|sum| sum / flow))
}

/// Middle and least time of a mix over many batches, us.
fn time_us(column: &Column, sinks: &[Sink]) -> [f64; 2] {
    let mut times: Vec<f64> = (0..BATCHES)
        .map(|_| {
            let start = Instant::now();
            for _ in 0..BATCH {
                black_box(mix(black_box(column), black_box(sinks)));
            }
            start.elapsed().as_secs_f64() * 1e6 / f64::from(BATCH)
        })
        .collect();
    times.sort_by(f64::total_cmp);
    [times[BATCHES / 2], times[0]]
}

/// Slices that a zone draws from.
fn touched(column: &Column, zone: &Zone) -> usize {
    let inside = |w: &&[f64]| w[1] > zone.lower.limit_m && w[0] < zone.upper.limit_m;
    column.slices().edges_m.windows(2).filter(inside).count()
}

/// The peer's answer to the same case.
fn peer(rows: &[[f64; 3]]) -> Result<Value, Box<dyn Error>> {
    let levels: Vec<Value> =
        LEVELS.iter().map(|[centre, flow]| json!({ "centre": centre, "flow": flow })).collect();
    let case = json!({ "bed": 0.0, "surface": SURFACE_M, "samples": rows, "levels": levels, "repeat": 200 });
    let file = Path::new(env!("CARGO_TARGET_TMPDIR")).join("mix-of-six.json");
    std::fs::write(&file, serde_json::to_vec_pretty(&case)?)?;
    let script = Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/peer/run.sh");
    let output = Command::new(script).arg(&file).stderr(Stdio::inherit()).output()?;
    if !output.status.success() {
        return Err(format!("the peer ended with {}", output.status).into());
    }
    Ok(serde_json::from_slice(&output.stdout)?)
}

/// Prints a figure beside its bound and tells whether it keeps it.
fn keeps(name: &str, figure: f64, bound: f64, most: bool) -> bool {
    let kept = if most { figure <= bound } else { figure >= bound };
    let sign = if most { "<=" } else { ">=" };
    println!("{name:<42} {figure:>12.3e} {sign} {bound:<6} {}", if kept { "kept" } else { "BROKEN" });
    kept
}

fn run() -> Result<bool, Box<dyn Error>> {
    let rows = rows();
    let column = column(&rows).ok_or("no column")?;
    let sinks = sinks();
    let ours = mix(&column, &sinks).ok_or("no mix")?;
    let mut flow = 0.0;
    let mut careful = [0.0; 2];
    let mut limits = 0.0_f64;
    for sink in &sinks {
        let zone = zone(&column, sink, 1.0).ok_or("no zone")?;
        let told = careful::level(&rows, sink.centre_m, sink.flow_m3s);
        println!(
            "{:>5} m {:>5} m3/s: {:.3} to {:.3} m, {:.4} C, {} slices",
            sink.centre_m,
            sink.flow_m3s,
            zone.lower.limit_m,
            zone.upper.limit_m,
            told.water[0],
            touched(&column, &zone)
        );
        limits = limits
            .max((zone.lower.limit_m - told.lower_m).abs())
            .max((zone.upper.limit_m - told.upper_m).abs());
        flow += sink.flow_m3s;
        careful = [0, 1].map(|i| careful[i] + sink.flow_m3s * told.water[i]);
    }
    let careful = careful.map(|sum| sum / flow);
    println!(
        "limits within {limits:.1e} m of bisection; {} slices in the column",
        column.slices().edges_m.len() - 1
    );
    let [middle, least] = time_us(&column, &sinks);
    println!("one mix of six levels: {middle:.3} us (median), {least:.3} us (least)");
    let told = peer(&rows)?;
    let number = |key: &str| told[key].as_f64().ok_or(format!("the peer gives no {key}"));
    let peer_us = 1e6 * number("seconds_per_mix")?;
    println!("the peer: {peer_us:.1} us (best of its loops)");
    let figures = [
        keeps("time of a mix, us", middle, SLOWEST_US, true),
        keeps("temperature off the careful answer, C", (ours[0] - careful[0]).abs(), APART, true),
        keeps("oxygen off the careful answer, mg/L", (ours[1] - careful[1]).abs(), APART, true),
        keeps("temperature off the peer, C", (ours[0] - number("temperature")?).abs(), APART, true),
        keeps("oxygen off the peer, mg/L", (ours[1] - number("oxygen")?).abs(), APART, true),
        keeps("times faster than the peer", peer_us / least, TIMES_FASTER, false),
    ];
    Ok(figures.iter().all(|&kept| kept))
}

fn main() -> ExitCode {
    match run() {
        Ok(true) => ExitCode::SUCCESS,
        Ok(false) => ExitCode::FAILURE,
        Err(error) => {
            println!("no answer: {error}");
            ExitCode::FAILURE
        }
    }
}
