//! The season: how long, growing how.
//!
//! `cargo bench --bench season` prints the figures and fails when one of them breaks its bound.

#![expect(clippy::print_stdout, reason = "the figures are the product")]

use std::ops::ControlFlow;
use std::process::ExitCode;
use std::time::Instant;

use chrono::DateTime;
use gatemix::mix::limits::Before;
use gatemix::rank::{Criterion, Question, rank};
use gatemix::tasks::{Asked, now_setting, open};

fn ranking() -> Option<()> {
    let clock = DateTime::from_timestamp(1_784_000_000, 0)?;
    let site = std::env::args().skip_while(|a| a != "once").nth(1).unwrap_or_else(|| "ashlar".into());
    let steps =
        std::env::args().skip_while(|a| a != "once").nth(2).and_then(|s| s.parse().ok()).unwrap_or(10);
    let context = open(&Asked { site: Some(site), ..Asked::default() }, clock).ok()?;
    let now = now_setting(&context).ok()?.setting;
    let order = Criterion::NAMES.map(|c| c.1);
    let day = context.day();
    let flow_m3s: f64 = now.gates.iter().map(|g| g.flow_m3s).sum();
    for _ in 0..5 {
        let question = Question {
            site: context.site(),
            profile: &context.profile,
            day: &day,
            blocks: &[(1.0, flow_m3s)],
            now: Some(&now),
            before: Before { flow_m3s: Some(flow_m3s), temperature_c: Some(11.0) },
            steps,
            order: &order,
            without: &[],
        };
        let start = Instant::now();
        let ranking = rank(&question, &|_| ControlFlow::Continue(())).ok()?;
        println!(
            "{} judged, {} allowed, {} mixes, {:.4} s",
            ranking.judged,
            ranking.allowed,
            ranking.mixes.len(),
            start.elapsed().as_secs_f64()
        );
        for m in ranking.mixes.iter().take(3) {
            println!("  {:?} {:.3}", m.open, m.temperature_c);
        }
    }
    Some(())
}

fn main() -> ExitCode {
    match ranking() {
        Some(()) => ExitCode::SUCCESS,
        None => ExitCode::FAILURE,
    }
}
