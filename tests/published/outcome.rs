//! What comes of a season, from days made by hand: cold water, reserves, reach, gates, moves, stages, cautions.

use std::collections::BTreeMap;
use std::sync::Arc;

use approx::assert_abs_diff_eq;
use chrono::{Days, NaiveDate};
use gatemix::files::site::site;
use gatemix::mix::{Asked, Blend, Gate};
use gatemix::profile::{self, Profile};
use gatemix::river::Conditions;
use gatemix::season::{
    Balance, Choosing, Decision, Exhausted, Layer, Layers, Outcome, Plan, Run, SeasonDay, Setup, Skies, Why,
    outcome,
};
use gatemix::site::{Case, Outage, Site, Strategy};

/// A box of a million square metres, two gates and a bottom outlet whose crews want notice.
pub(crate) const SITE: &str = r#"name: Outcome Dam (invented)
units: { length: m, area: m2, volume: m3, flow: m3/s, temperature: C }
utc_offset: "+00:00"
pool: { bed: 0, full: 60, table: [[0, 1.0e6], [60, 1.0e6]] }
outlets:
  - { name: High, centre: 45, height: 2, width: 4, min_submergence: 3, crew: { hours: 2, lead_days: 10 } }
  - { name: Middle, centre: 20, height: 2, width: 4, generation_lost: { flow: 10, power: 2 } }
  - { name: Low, centre: 5, height: 2, width: 4, crew: { hours: 3, lead_days: 2.5 } }
limits:
  max_drawdown_per_day: 0.6
  change_hours: 2
river:
  equilibrium: 15
  exchange_w_m2_c: 20
  reaches: [ { name: Upper, length_km: 10, width: 40, depth: 1.5, travel_hours: [[10, 5], [60, 3]] } ]
  points: [ { name: Ford, at_km: 5, rating: [[0, 0], [100, 2]] } ]
targets:
  - { name: summer, from: 06-01, to: 08-15, low: 8, high: 12 }
  - { name: autumn, from: 08-16, to: 11-30, high: 10 }
  - { name: wish, from: 06-01, to: 11-30, high: 5, soft: true }
cold_water: [10]
"#;

pub(crate) fn date(text: &str) -> NaiveDate {
    text.parse().unwrap()
}

/// The first day of every season here.
pub(crate) fn begin() -> NaiveDate {
    date("2026-08-01")
}

pub(crate) fn checked(text: &str) -> Site {
    let read = site(text, "site.yaml");
    read.site.unwrap_or_else(|| panic!("{:?}", read.problems))
}

/// Cold water of 6 C up to an elevation, 20 C above.
pub(crate) fn layers(cold_m: f64, pool_m: f64) -> Layers {
    let layer = |height_m: f64, temperature_c: f64| Layer {
        volume_m3: 1e6 * height_m,
        temperature_c,
        oxygen_mg_l: 8.0,
        salt_g_per_kg: 0.0,
        suspended_mg_l: 0.0,
    };
    // whole metres, from the bed up
    let metres = (1..=60).map(f64::from).filter(|top| *top < pool_m);
    let tops: Vec<f64> = metres.chain([pool_m]).collect();
    let heights = tops.iter().scan(0.0, |below, top| {
        let height = top - *below;
        *below = *top;
        Some((*top, height))
    });
    let all = heights.map(|(top, height)| layer(height, if top <= cold_m { 6.0 } else { 20.0 })).collect();
    Layers { layers: all, has_oxygen: true, thickness_m: 1.0 }
}

/// A day of 20 m3/s through the middle outlet, from a pool with cold water up to 10 m.
fn day(number: u64) -> SeasonDay {
    let release = Blend {
        flow_m3s: 20.0,
        temperature_c: 9.0,
        bias_c: 0.0,
        oxygen_mg_l: Some(8.0),
        oxygen_below_mg_l: Some(8.0),
        salt_g_per_kg: 0.0,
        suspended_mg_l: 0.0,
        oxygen_low_share: 0.0,
    };
    SeasonDay {
        date: begin() + Days::new(number),
        pool_m: 55.0,
        inflow_m3s: 10.0,
        gates: vec![Gate { outlet: 1, opening: 1.0, flow_m3s: 20.0 }],
        drawn: Vec::new(),
        release: Some(release),
        points: None,
        layers: layers(10.0, 55.0),
        balance: Balance::default(),
        overturned: false,
    }
}

/// What leaves on a day, to be changed.
pub(crate) fn left(day: &mut SeasonDay) -> &mut Blend {
    day.release.as_mut().unwrap()
}

pub(crate) fn decision(number: u64, attainable_c: Option<[f64; 2]>) -> Decision {
    Decision {
        date: begin() + Days::new(number),
        why: if number == 0 { Why::Begin } else { Why::Due },
        asked: Asked::default(),
        moves: 0,
        moved: Vec::new(),
        crew_hours: 0.0,
        lead_days: 0.0,
        attainable_c,
        past: Vec::new(),
    }
}

/// A season of days and decisions, and what comes of it at a site with the outages of a plan.
pub(crate) fn of(
    site: &Site,
    days: Vec<SeasonDay>,
    decisions: Vec<Decision>,
    outages: Vec<Outage>,
) -> Outcome {
    let start = cast(site);
    let plan = Plan { name: "p".into(), file: "p.csv".into(), days: Vec::new(), outages, notes: Vec::new() };
    let case = Case { name: "c".into(), air_c: 0.0, wind: 1.0, inflow: 1.0, inflow_c: 0.0 };
    let skies = Skies {
        case,
        year: None,
        days: BTreeMap::new(),
        site: Arc::new(site.clone()),
        conditions: Arc::new(Conditions::default()),
        from: String::new(),
    };
    let setup = Setup {
        start: &start,
        begins: begin(),
        decides: begin(),
        now: None,
        plan: &plan,
        skies: &skies,
        choosing: Choosing::By(Strategy::Best),
        decide_days: 7,
        order: &gatemix::rank::Criterion::USUAL,
    };
    let run = Run {
        plan: "p".into(),
        case: "c".into(),
        strategy: "best".into(),
        start: layers(10.0, 55.5),
        days,
        decisions,
        ended: None,
        aims: None,
    };
    outcome(&setup, &run)
}

fn cast(site: &Site) -> Profile {
    let row = |(i, (z, t)): (usize, (f64, f64))| profile::RawRow {
        line: i + 1,
        elevation_m: Some(z),
        temperature_c: Some(t),
        ..profile::RawRow::default()
    };
    let raw = profile::Raw {
        file: "cast".into(),
        taken: None,
        pool_m: Some(55.0),
        rows: [(0.0, 6.0), (10.0, 6.0), (12.0, 20.0), (55.0, 20.0)]
            .into_iter()
            .enumerate()
            .map(row)
            .collect(),
    };
    Profile::build(&raw, site, None).0.unwrap()
}

pub(crate) fn days(count: u64) -> Vec<SeasonDay> {
    (0..count).map(day).collect()
}

#[test]
fn scenario_cold_water_is_what_the_deepest_usable_outlet_can_draw() {
    let site = checked(SITE);
    let out = of(&site, days(3), Vec::new(), Vec::new());
    // the low outlet reaches the bed: nothing stops its zone in water of one temperature
    let cold = &out.cold[0].days[0];
    assert_abs_diff_eq!(cold.total_m3, 1e7, epsilon = 1e-3);
    assert_abs_diff_eq!(cold.usable_m3.unwrap(), 1e7, epsilon = 1e-3);
    // with it out of use the middle one at 20 m cannot come down through the step of 14 C
    let outage = Outage { outlet: 2, from: begin(), to: Some(begin()), reason: "r".into() };
    let out = of(&site, days(2), Vec::new(), vec![outage]);
    let [first, second] = [0, 1].map(|i| out.cold[0].days[i].usable_m3.unwrap());
    assert!(first < 0.2e7, "{first}");
    assert_abs_diff_eq!(second, 1e7, epsilon = 1e-3);
    assert_abs_diff_eq!(out.cold[0].days[0].unreachable_m3(), 1e7 - first, epsilon = 1e-3);
}

#[test]
fn scenario_a_reserve_counts_from_its_day_on() {
    let text = format!("{SITE}season:\n  reserves: [ {{ from: 08-03, colder_than: 10, volume: 9.0e6 }} ]\n");
    let site = checked(&text);
    let mut season = days(6);
    // under it on the second day, which does not count yet, and from the fifth on
    for i in [1, 4, 5] {
        season[i].layers = layers(8.0, 55.0);
    }
    let out = of(&site, season, Vec::new(), Vec::new());
    assert_eq!(out.under_reserve, Some(Exhausted::On(date("2026-08-05"))));
    let kept = of(&site, days(6), Vec::new(), Vec::new());
    assert_eq!(kept.under_reserve, Some(Exhausted::NotBy(date("2026-08-06"))));
    assert_eq!(of(&checked(SITE), days(2), Vec::new(), Vec::new()).under_reserve, None);
    // it goes on counting across the new year
    let mut long = days(160);
    long[157].layers = layers(8.0, 55.0);
    let out = of(&site, long, Vec::new(), Vec::new());
    assert_eq!(out.under_reserve, Some(Exhausted::On(date("2027-01-05"))));
}

#[test]
fn scenario_it_runs_out_on_the_first_day_no_mix_comes_down_to_the_high() {
    let site = checked(SITE);
    let on = |coldest: [f64; 5]| {
        let told = coldest.iter().enumerate();
        let decisions = told.map(|(i, c)| decision(7 * i as u64, Some([*c, 20.0]))).collect();
        let out = of(&site, days(30), decisions, Vec::new());
        let spells: Vec<_> = out.spells.iter().map(|s| (s.from, s.to, s.until, s.most_c)).collect();
        (out.exhausted, spells)
    };
    let spell = |from: &str, to: &str, until: Option<&str>, most_c: f64| {
        (date(from), date(to), until.map(date), most_c)
    };
    let from = |from: &str, to: &str, until: Option<&str>, most_c: f64| {
        (Exhausted::On(date(from)), vec![spell(from, to, until, most_c)])
    };
    // 1, 8 and 15 August are the summer rule's (high 12), 22 and 29 the autumn rule's (high 10)
    assert_eq!(on([12.0, 8.0, 8.0, 10.0, 8.0]), (Exhausted::NotBy(date("2026-08-30")), Vec::new()));
    assert_eq!(on([8.0, 8.0, 8.0, 10.0, 10.5]), from("2026-08-29", "2026-08-29", None, 0.5));
    assert_eq!(on([8.0, 8.0, 8.0, 11.0, 10.0]), from("2026-08-22", "2026-08-22", Some("2026-08-29"), 1.0));
    assert_eq!(on([12.5, 12.5, 12.5, 10.5, 9.0]), from("2026-08-01", "2026-08-22", Some("2026-08-29"), 0.5));
    let twice = vec![
        spell("2026-08-01", "2026-08-01", Some("2026-08-08"), 1.0),
        spell("2026-08-15", "2026-08-22", Some("2026-08-29"), 2.0),
    ];
    assert_eq!(on([13.0, 8.0, 12.5, 12.0, 8.0]), (Exhausted::On(begin()), twice));
    let out = of(&site, days(3), vec![decision(0, Some([13.0, 20.0]))], Vec::new());
    assert_eq!(out.reached[0].range_c(), (Some(8.0), Some(12.0)), "a wish bounds nothing");
    assert_abs_diff_eq!(out.reached[0].by_c().unwrap(), 1.0, epsilon = 1e-12);
    assert!(matches!(of(&site, days(3), Vec::new(), Vec::new()).exhausted, Exhausted::Unknown(_)));
}

#[test]
fn scenario_how_near_it_comes_to_running_out_is_told() {
    let site = checked(SITE);
    let on = |coldest: [f64; 5]| {
        let told = coldest.iter().enumerate();
        let decisions = told.map(|(i, c)| decision(7 * i as u64, Some([*c, 20.0]))).collect();
        of(&site, days(30), decisions, Vec::new())
    };
    // 12 C at most until 15 August, 10 C from the next decision on
    let near = on([8.0, 11.5, 9.0, 9.75, 9.5]);
    assert_eq!(
        (near.exhausted, near.nearest),
        (Exhausted::NotBy(date("2026-08-30")), Some((0.25, date("2026-08-22"))))
    );
    // a hair above is no more than can be told, and shown as nothing
    let hair = on([8.0, 8.0, 8.0, 10.04, 8.0]);
    assert!(hair.spells.is_empty() && hair.reached[3].by_c() == Some(0.0), "{:?}", hair.spells);
    assert!(hair.nearest.unwrap().0 < 0.0);
    let above = on([8.0, 8.0, 8.0, 10.06, 8.0]);
    assert_eq!(
        (above.exhausted.on(), above.nearest.unwrap().1),
        (Some(date("2026-08-22")), date("2026-08-22"))
    );
    assert_abs_diff_eq!(above.reached[3].by_c().unwrap(), 0.06, epsilon = 1e-9);
    assert_eq!(of(&site, days(3), Vec::new(), Vec::new()).nearest, None);
}

#[test]
fn scenario_releases_beyond_their_bounds_are_told() {
    let site = checked(&format!("{SITE}release: {{ min: 15, max: 30 }}\n"));
    let mut season = days(8);
    for (day, flow_m3s) in season.iter_mut().zip([20.0, 14.9, 12.0, 13.0, 15.0, 30.1, 30.0, 34.0]) {
        left(day).flow_m3s = flow_m3s;
    }
    let out = of(&site, season, Vec::new(), Vec::new());
    let told: Vec<(&str, NaiveDate)> = out.warnings.iter().map(|w| (w.kind, w.date)).collect();
    assert_eq!(told, [("release.min", date("2026-08-03")), ("release.max", date("2026-08-08"))]);
    assert!(out.warnings[0].words.contains("on 2 of 8 days, first on this one, at worst"));
    assert!(of(&site, days(3), Vec::new(), Vec::new()).warnings.is_empty());
}

/// Days on which the summer rule is outside by its temperature, those by its oxygen, and what was left.
#[test]
fn scenario_a_day_outside_by_warmth_and_oxygen_counts_once() {
    let site = checked(&SITE.replace("low: 8, high: 12", "low: 8, high: 12, oxygen_min: 7"));
    let mut season: Vec<SeasonDay> = (0..40).map(day).collect();
    for (i, warm, poor) in [(2, true, true), (3, false, true), (5, true, false), (35, true, false)] {
        if warm {
            left(&mut season[i]).temperature_c = 13.0;
        }
        if poor {
            left(&mut season[i]).oxygen_below_mg_l = Some(6.0);
        }
    }
    let out = of(&site, season, Vec::new(), Vec::new());
    let summer = &out.targets[0];
    assert_eq!((summer.days_outside(), summer.longest_run()), (3, 2));
    assert_eq!(summer.days_outside_after(date("2026-08-04")), 1);
    // on 1 August and 1 September: the autumn rule's only day is 5 September
    let left: Vec<(NaiveDate, u32)> = out.left.iter().map(|l| (l.date, l.days_outside)).collect();
    assert_eq!(left, [(date("2026-08-01"), 4), (date("2026-09-01"), 1)]);
    assert_eq!((out.score.days_outside, out.score.worst_c), (4, 3.0));
}

#[test]
fn scenario_degree_days_reach_their_stages() {
    let mut site = checked(SITE);
    let since = |month, day| gatemix::target::YearDay { month, day };
    let stages = |point: &str, since| gatemix::site::Stages {
        name: "eggs".into(),
        point: point.into(),
        since,
        base_c: 4.0,
        at: vec![("eyed".into(), 14.9), ("out".into(), 1000.0)],
    };
    site.season.stages =
        vec![stages("dam", since(8, 2)), stages("Ford", since(8, 2)), stages("dam", since(10, 1))];
    // 5 degree-days a day from 2 August on: 15 on the third of them
    let out = of(&site, days(6), Vec::new(), Vec::new());
    let on: Vec<&Exhausted> = out.stages.iter().map(|s| &s.on).collect();
    assert_eq!(on[0], &Exhausted::On(date("2026-08-04")));
    assert_eq!(on[1], &Exhausted::NotBy(date("2026-08-06")));
    assert!(matches!(on[2], Exhausted::Unknown(_)), "what arrives at the ford is not known");
    assert!(matches!(on[4], Exhausted::Unknown(_)), "the season ends before counting begins");
}
