//! The whole ranking of a large dam: how fast, on how many mixes.
//!
//! `cargo bench --bench rank` prints the figures and fails when one of them breaks its bound. The dam and its water
//! are invented.

#![expect(clippy::print_stdout, reason = "the figures are the product")]

use std::ops::ControlFlow;
use std::process::ExitCode;
use std::time::Instant;

use chrono::NaiveDate;
use gatemix::files::site::site;
use gatemix::mix::limits::Before;
use gatemix::mix::{Gate, Setting};
use gatemix::profile::{self, Profile};
use gatemix::rank::{Criterion, Question, rank};
use gatemix::site::Site;

/// A full ranking may take this long on two cores, s.
const SLOWEST_S: f64 = 0.5;
const SAMPLES: usize = 200;
const POOL_M: f64 = 72.0;
const FLOW_M3S: f64 = 60.0;
const ROUNDS: usize = 9;

/// A dam of two wells with `gates` gates each, `others` outlets beside them.
fn dam(gates: usize, others: &[&str]) -> Option<Site> {
    let mut text = String::from(
        "name: Bench Dam (invented)\nunits: { length: m, area: m2, volume: m3, flow: m3/s, temperature: C }\nutc_offset: \"+00:00\"\nplace: { altitude: 100 }\npool:\n  bed: 0\n  full: 75\n  table: [[0, 1e5], [75, 9e6]]\nwells:\n  - { name: North, conduit: 3, max_open: 2, max_head_loss: 2 }\n  - { name: South, conduit: 3, max_open: 2, max_head_loss: 2 }\noutlets:\n",
    );
    for well in ["North", "South"] {
        for i in 0..gates {
            let centre = 66.0 - 11.0 * i as f64;
            let letter = &well[..1];
            text += &format!(
                "  - {{ name: {letter}{}, well: {well}, centre: {centre}, height: 4, width: 5, loss: 1.5, positions: [0, 50, 100] }}\n",
                i + 1
            );
        }
    }
    for line in others {
        text += &format!("  - {line}\n");
    }
    text +=
        "targets:\n  - { name: cold, low: 9, preferred: 12, high: 14, oxygen_min: 7 }\ncold_water: [10]\n";
    site(&text, "site.yaml").site
}

fn water(site: &Site) -> Option<Profile> {
    let step = |z: f64, middle: f64, width: f64| 1.0 / (1.0 + ((middle - z) / width).exp());
    let rows = (0..SAMPLES).map(|i| {
        let z = POOL_M * i as f64 / (SAMPLES - 1) as f64;
        let hollow = (-((z - 47.0) / 5.0).powi(2)).exp();
        profile::RawRow {
            line: i + 1,
            elevation_m: Some(z),
            temperature_c: Some(5.2 + 0.012 * z + 16.0 * step(z, 54.0, 3.2)),
            oxygen_mg_l: Some(3.0 + 5.5 * step(z, 50.0, 4.0) - 2.4 * hollow),
            ..profile::RawRow::default()
        }
    });
    let raw = profile::Raw {
        file: "invented.csv".into(),
        taken: "2025-07-14T10:00:00Z".parse().ok(),
        pool_m: Some(POOL_M),
        rows: rows.collect(),
    };
    Profile::build(&raw, site, None).0
}

fn main() -> ExitCode {
    let others = [
        "{ name: Sluice, centre: 8, height: 3, width: 3 }",
        "{ name: Crest, kind: crest, gated: true, centre: 69, width: 30 }",
    ];
    let Some(site) = dam(5, &others) else { return ExitCode::FAILURE };
    let Some(profile) = water(&site) else { return ExitCode::FAILURE };
    let Some(date) = NaiveDate::from_ymd_opt(2025, 7, 14) else { return ExitCode::FAILURE };
    let now = Setting::of(vec![
        Gate { outlet: 1, opening: 1.0, flow_m3s: 30.0 },
        Gate { outlet: 6, opening: 1.0, flow_m3s: 30.0 },
    ]);
    // `once STEPS` ranks once, for an instruction count
    let mut arguments = std::env::args().skip_while(|a| a != "once").skip(1);
    let once = arguments.next().and_then(|a| a.parse::<usize>().ok());
    let steps = once.unwrap_or(50);
    let rounds = if once.is_some() { 1 } else { ROUNDS };
    let order = Criterion::NAMES.map(|c| c.1);
    let question = Question {
        site: &site,
        profile: &profile,
        date,
        blocks: &[(1.0, FLOW_M3S)],
        now: Some(&now),
        before: Before::default(),
        steps,
        order: &order,
        without: &[],
    };
    let mut best = f64::INFINITY;
    let mut times = Vec::new();
    for _ in 0..rounds {
        let start = Instant::now();
        let Ok(ranking) = rank(&question, &|_| ControlFlow::Continue(())) else { return ExitCode::FAILURE };
        let took = start.elapsed().as_secs_f64();
        times.push(took);
        best = best.min(took);
        if times.len() == rounds {
            println!(
                "{} mixes examined, {} judged, {} skipped, {} allowed, {} sets of outlets, {} limits",
                ranking.examined,
                ranking.judged,
                ranking.skipped,
                ranking.allowed,
                ranking.mixes.len(),
                ranking.rejected.len()
            );
            for idea in ranking.ideas(10) {
                println!("{:?} +{} {:?}", idea.best.open, idea.alike, idea.best.asked[0]);
            }
        }
    }
    times.sort_by(f64::total_cmp);
    println!("median {:.3} s, least {best:.3} s", times[rounds / 2]);
    if times[rounds / 2] < SLOWEST_S { ExitCode::SUCCESS } else { ExitCode::FAILURE }
}
