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
use gatemix::rank::{Criterion, Question, Ranking, rank};
use gatemix::site::Site;

/// A full ranking may take this long on two cores, s.
const SLOWEST_S: f64 = 0.5;
const SAMPLES: usize = 200;
const POOL_M: f64 = 72.0;
const FLOW_M3S: f64 = 60.0;
/// What every gate of a well is.
const GATE: &str = "height: 4, width: 5, loss: 1.5, positions: [0, 50, 100]";
/// Steps of 2 %.
const STEPS: usize = 50;
const ROUNDS: usize = 9;
/// Outlets beside the wells: any flow.
const OTHERS: [&str; 2] = [
    "{ name: Sluice, centre: 8, height: 3, width: 3 }",
    "{ name: Crest, kind: crest, gated: true, centre: 69, width: 30 }",
];

/// A dam of two wells with `gates` gates each, `others` outlets beside them.
fn dam(gates: usize, others: &[&str]) -> Option<Site> {
    let mut text = String::from(
        "name: Bench Dam (invented)\nunits: { length: m, area: m2, volume: m3, flow: m3/s, temperature: C }\nutc_offset: \"+00:00\"\nplace: { altitude: 100 }\npool:\n  bed: 0\n  full: 75\n  table: [[0, 1e5], [75, 9e6]]\nwells:\n  - { name: North, conduit: 3, max_open: 2, max_head_loss: 2 }\n  - { name: South, conduit: 3, max_open: 2, max_head_loss: 2 }\noutlets:\n",
    );
    let mut lines = Vec::new();
    for well in ["North", "South"] {
        for i in 0..gates {
            let centre = 66.0 - 11.0 * i as f64;
            let letter = &well[..1];
            let number = i + 1;
            lines.push(format!("{{ name: {letter}{number}, well: {well}, centre: {centre}, {GATE} }}"));
        }
    }
    lines.extend(others.iter().map(|line| (*line).to_owned()));
    for line in lines {
        text += "  - ";
        text += &line;
        text += "\n";
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

/// Ranks a dam of so many gates in each of its two wells, beside a sluice and a crest.
fn ranked(gates: usize, steps: usize) -> Option<(Ranking, f64)> {
    let site = dam(gates, &OTHERS)?;
    let profile = water(&site)?;
    let now = Setting::of(vec![
        Gate { outlet: 0, opening: 1.0, flow_m3s: 0.5 * FLOW_M3S },
        Gate { outlet: gates, opening: 1.0, flow_m3s: 0.5 * FLOW_M3S },
    ]);
    let order = Criterion::NAMES.map(|c| c.1);
    let question = Question {
        site: &site,
        profile: &profile,
        day: &NaiveDate::from_ymd_opt(2025, 7, 14)?.into(),
        blocks: &[(1.0, FLOW_M3S)],
        now: Some(&now),
        before: Before::default(),
        steps,
        order: &order,
        without: &[],
    };
    let start = Instant::now();
    let ranking = rank(&question, &|_| ControlFlow::Continue(())).ok()?;
    Some((ranking, start.elapsed().as_secs_f64()))
}

fn run() -> Option<bool> {
    // `once STEPS` ranks once, for an instruction count
    let mut arguments = std::env::args().skip_while(|a| a != "once").skip(1);
    if let Some(steps) = arguments.next() {
        let (ranking, took_s) = ranked(5, steps.parse().ok()?)?;
        println!("{} judged, {} allowed, {took_s:.3} s", ranking.judged, ranking.allowed);
        return Some(true);
    }
    println!("outlets      examined        judged       allowed   median s   least s");
    let mut kept = true;
    for gates in 1..=5 {
        let mut times = Vec::new();
        let mut last = None;
        for _ in 0..ROUNDS {
            let (ranking, took_s) = ranked(gates, STEPS)?;
            times.push(took_s);
            last = Some(ranking);
        }
        times.sort_by(f64::total_cmp);
        let (ranking, median) = (last?, times[ROUNDS / 2]);
        println!(
            "{:>7} {:>13} {:>13} {:>13} {median:>10.3} {:>9.3}",
            2 * gates + OTHERS.len(),
            ranking.examined,
            ranking.judged,
            ranking.allowed,
            times[0]
        );
        kept = ranking.examined == ranking.judged + ranking.skipped && median < SLOWEST_S;
    }
    Some(kept)
}

fn main() -> ExitCode {
    match run() {
        Some(true) => ExitCode::SUCCESS,
        Some(false) | None => ExitCode::FAILURE,
    }
}
