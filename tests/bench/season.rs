//! A season: how long it takes, how that grows, and how far its release depends on the cut of layers and days.
//!
//! `cargo bench --bench season` prints the figures and fails when one of them breaks its bound; `-- strategies` runs the
//! site's own first plan by every strategy, `-- convergence` only cuts layers. The dam is the first demonstration site;
//! plan and weather are invented here.

#![expect(clippy::print_stdout, reason = "the figures are the product")]

use std::collections::BTreeMap;
use std::ops::ControlFlow;
use std::process::ExitCode;
use std::sync::Arc;
use std::time::Instant;

use chrono::{DateTime, Datelike, Days, NaiveDate};
use gatemix::mix::Setting;
use gatemix::season::{Choosing, Plan, PlanDay, Run, Score, Setup, Skies, outcome, run};
use gatemix::site::{Case, Strategy};
use gatemix::tasks::{Asked, Context, now_setting, open};
use gatemix::weather::{Air, Weather};
use rayon::prelude::*;

/// A season of `DAYS` days may take this long on one core, s.
const SLOWEST_S: f64 = 1.0;
/// `YEARS` of them may take this long on two cores, s.
const SLOWEST_YEARS_S: f64 = 60.0;
const DAYS: u32 = 214;
const YEARS: i32 = 100;
const EVERY: u32 = 7;
/// Twice the days or years may take this many times as long.
const LINEAR: f64 = 2.6;

struct Bench {
    context: Context,
    now: Setting,
    begins: NaiveDate,
}

impl Bench {
    fn open() -> Option<Self> {
        let clock = DateTime::from_timestamp(1_784_000_000, 0)?;
        let context = open(&Asked { site: Some("ashlar".into()), ..Asked::default() }, clock).ok()?;
        let now = now_setting(&context).ok()?.setting;
        let begins = context.on.date_naive();
        Some(Self { context, now, begins })
    }

    /// The pool goes down by a metre every seven days, the inflow cools from 14 C to 4 C.
    fn plan(&self, days: u32) -> Plan {
        let day = |i: u32| {
            let share = f64::from(i) / f64::from(DAYS);
            PlanDay {
                date: self.begins + Days::new(u64::from(i)),
                pool_m: Some(self.context.profile.pool_m - 30.0 * share),
                release_m3s: None,
                inflow_m3s: 25.0,
                inflow_c: 14.0 - 10.0 * share,
                inflow_mg_l: None,
                inflow_salt_g_per_kg: None,
                inflow_suspended_mg_l: None,
            }
        };
        Plan {
            name: "bench".into(),
            file: "bench.csv".into(),
            days: (0..days).map(day).collect(),
            outages: Vec::new(),
            notes: Vec::new(),
        }
    }

    fn skies(&self, plan: &Plan) -> Option<Skies> {
        let case = Case { name: "middling".into(), air_c: 0.0, wind: 1.0, inflow: 1.0, inflow_c: 0.0 };
        let last = plan.days.last()?.date;
        Skies::of_case(self.context.site(), &self.context.conditions, &case, self.begins, last).ok()
    }

    fn setup<'a>(&'a self, plan: &'a Plan, skies: &'a Skies, strategy: Strategy) -> Setup<'a> {
        Setup {
            start: &self.context.profile,
            begins: self.begins,
            decides: self.begins,
            now: Some(&self.now),
            plan,
            skies,
            choosing: Choosing::By(strategy),
            decide_days: EVERY,
            order: &gatemix::rank::Criterion::USUAL,
        }
    }

    fn season(&self, plan: &Plan, skies: &Skies, strategy: Strategy) -> Option<(Score, Run)> {
        let setup = self.setup(plan, skies, strategy);
        let run = run(&setup, &|_| ControlFlow::Continue(()))?;
        Some((Score::of(&setup, &run), run))
    }
}

/// The least time of three, s.
fn least_s(mut of: impl FnMut()) -> f64 {
    let one = |of: &mut dyn FnMut()| {
        let start = Instant::now();
        of();
        start.elapsed().as_secs_f64()
    };
    (0..3).map(|_| one(&mut of)).fold(f64::INFINITY, f64::min)
}

/// Years of daily weather: a yearly wave, and a seeded wander of a few degrees.
fn weather(begins: NaiveDate) -> Weather {
    let mut wander = 0.0_f64;
    let mut state = 1_u64;
    let mut random = move || {
        state = state.wrapping_mul(6_364_136_223_846_793_005).wrapping_add(1_442_695_040_888_963_407);
        (state >> 33) as f64 / f64::from(1_u32 << 31) - 0.5
    };
    let first = NaiveDate::from_ymd_opt(begins.year(), 1, 1).unwrap_or(begins);
    let count = 366 * (YEARS as usize + 2);
    let days: BTreeMap<NaiveDate, Air> = first
        .iter_days()
        .take(count)
        .map(|date| {
            wander = 0.8 * wander + 3.0 * random();
            let wave = -(std::f64::consts::TAU * (f64::from(date.ordinal()) - 20.0) / 365.25).cos();
            let temperature_c = 12.0 + 9.0 * wave + wander;
            let air = Air {
                temperature_c,
                dew_point_c: temperature_c - 5.0,
                wind_m_s: 2.5 + random(),
                cloud: 0.4,
                solar_w_m2: 170.0 + 110.0 * wave,
            };
            (date, air)
        })
        .collect();
    Weather { days, ..Weather::default() }
}

fn one_core() -> Option<rayon::ThreadPool> {
    rayon::ThreadPoolBuilder::new().num_threads(1).build().ok()
}

fn seasons() -> Option<bool> {
    let bench = Bench::open()?;
    let one_core = one_core()?;
    let time = |days: u32| {
        let plan = bench.plan(days);
        let skies = bench.skies(&plan)?;
        let mut last = None;
        let took_s = one_core.install(|| least_s(|| last = bench.season(&plan, &skies, Strategy::Best)));
        Some((took_s, last?))
    };
    let (took_s, (score, run)) = time(DAYS)?;
    println!(
        "{} of {DAYS} days, {} decisions, one core: {took_s:.3} s; {score:?}; {:?}",
        run.days.len(),
        run.decisions.len(),
        run.ended
    );
    let (half_s, _) = time(DAYS / 2)?;
    println!("half the days: {half_s:.3} s, {:.2} times less", took_s / half_s);
    let plan = bench.plan(DAYS);
    let last = plan.days.last()?.date;
    let site = bench.context.site();
    let years = Skies::of_years(site, &bench.context.conditions, &weather(bench.begins), bench.begins, last);
    let of_years = |count: usize| {
        let start = Instant::now();
        let runs: Vec<_> =
            years.par_iter().take(count).map(|skies| bench.season(&plan, skies, Strategy::Best)).collect();
        let whole = runs.iter().flatten().filter(|(_, run)| run.ended.is_none()).count();
        (start.elapsed().as_secs_f64(), whole)
    };
    let count = YEARS as usize;
    let (half_s, _) = of_years(count / 2);
    let (years_s, whole) = of_years(count);
    println!(
        "{count} years: {years_s:.2} s, {whole} to their end; {:.2} times half of them",
        years_s / half_s
    );
    Some(
        took_s < SLOWEST_S
            && years_s < SLOWEST_YEARS_S
            && whole == count
            && took_s / half_s < LINEAR
            && years_s / half_s < LINEAR,
    )
}

/// How far the release moves when layers are half as thick, and when steps are half as long.
fn convergence() -> Option<()> {
    let bench = Bench::open()?;
    let plan = bench.plan(DAYS);
    let skies = bench.skies(&plan)?;
    let at = |layer_m: f64, hours: f64| {
        let mut site = (*skies.site).clone();
        (site.season.layer_m, site.season.step_s) = (layer_m, 3600.0 * hours);
        let skies = Skies { site: Arc::new(site), ..skies.clone() };
        bench.season(&plan, &skies, Strategy::Hold).map(|found| found.1)
    };
    let halved = [
        ("layers of 2 m", (2.0, 24.0), (1.0, 24.0)),
        ("layers of 1 m", (1.0, 24.0), (0.5, 24.0)),
        ("steps of 24 h", (1.0, 24.0), (1.0, 12.0)),
        ("steps of 12 h", (1.0, 12.0), (1.0, 6.0)),
    ];
    for (what, whole, half) in halved {
        let (whole, half) = (at(whole.0, whole.1)?, at(half.0, half.1)?);
        let days = whole.days.iter().zip(&half.days);
        let apart: Vec<f64> = days
            .filter_map(|(a, b)| Some((a.release?.temperature_c - b.release?.temperature_c).abs()))
            .collect();
        let mean = apart.iter().sum::<f64>() / apart.len().max(1) as f64;
        let most = apart.iter().copied().fold(0.0, f64::max);
        println!("{what} halved: the release moves by {mean:.3} C in the mean, {most:.3} C at most");
    }
    Some(())
}

/// The site's own first plan in its own first case, by every strategy: how long, and what comes of it.
fn strategies() -> Option<()> {
    let bench = Bench::open()?;
    let plan = bench.context.folder.plans().iter().find_map(|listed| listed.plan.clone())?;
    let site = bench.context.site();
    for case in &site.season.cases {
        let last = plan.days.last()?.date;
        let skies = Skies::of_case(site, &bench.context.conditions, case, bench.begins, last).ok()?;
        for strategy in [Strategy::Hold, Strategy::Best, Strategy::Thrift] {
            let start = Instant::now();
            let (score, run) = bench.season(&plan, &skies, strategy)?;
            let took_s = start.elapsed().as_secs_f64();
            let setup = bench.setup(&plan, &skies, strategy);
            let out = outcome(&setup, &run);
            println!(
                "{}, {}: {took_s:.2} s; {score:?}; exhausted {:?}; reserve {:?}; ended {:?}; aims {:?}",
                case.name, run.strategy, out.exhausted, out.under_reserve, run.ended, run.aims
            );
        }
    }
    Some(())
}

fn main() -> ExitCode {
    if std::env::args().any(|word| word == "strategies") {
        return strategies().map_or(ExitCode::FAILURE, |()| ExitCode::SUCCESS);
    }
    if std::env::args().any(|word| word == "convergence") {
        return convergence().map_or(ExitCode::FAILURE, |()| ExitCode::SUCCESS);
    }
    let kept = seasons();
    let _ = convergence();
    match kept {
        Some(true) => ExitCode::SUCCESS,
        Some(false) | None => ExitCode::FAILURE,
    }
}
