//! What a season is told to beware of, from days made by hand: deep water, falls of pool and stage, outages.

use approx::assert_abs_diff_eq;
use chrono::NaiveDate;
use gatemix::river::Figures;
use gatemix::site::{Outage, Site};

use crate::outcome::{SITE, begin, checked, date, days, left, of};

/// What arrives at a point of so much water.
fn figures(flow_m3s: f64) -> Figures {
    Figures {
        mean_c: 10.0,
        range_c: None,
        hourly_change_c: None,
        oxygen_mean_mg_l: None,
        oxygen_min_mg_l: None,
        oxygen_share: None,
        flow_m3s,
    }
}

#[test]
fn scenario_deep_water_drawn_from_the_start_is_told_where_it_grows() {
    let (site, mut season) = (checked(SITE), days(3));
    for (day, share) in season.iter_mut().zip([0.2, 0.24, 0.26]) {
        left(day).oxygen_low_share = share;
    }
    let told = &of(&site, season, Vec::new(), Vec::new()).warnings[0];
    assert_eq!((told.kind, told.date), ("deep-water", date("2026-08-03")));
    assert!(told.words.starts_with("26 % of the release") && told.words.contains("20 % on the first day"));
}

#[test]
fn scenario_what_to_beware_of() {
    let site = checked(SITE);
    let mut season = days(5);
    left(&mut season[2]).oxygen_low_share = 0.2;
    left(&mut season[3]).oxygen_below_mg_l = Some(5.5);
    season[3].overturned = true;
    // 55.5 at the start; half a metre, then a whole one
    season[4].pool_m = 54.0;
    for (day, flow) in season.iter_mut().zip([50.0, 50.0, 30.0, 40.0, 40.0]) {
        day.points = Some(vec![figures(flow)]);
    }
    let out = of(&site, season, Vec::new(), Vec::new());
    let told: Vec<(&str, NaiveDate)> = out.warnings.iter().map(|w| (w.kind, w.date)).collect();
    assert_eq!(told, [("deep-water", date("2026-08-03")), ("max_drawdown_per_day", date("2026-08-05"))]);
    assert!(out.warnings[0].words.starts_with("20 % of the release"));
    assert_eq!(out.least_oxygen, Some((5.5, date("2026-08-04"))));
    assert_eq!(out.turnover, Some(date("2026-08-04")));
    let (fall_m, on) = out.fastest_fall.unwrap();
    assert_abs_diff_eq!(fall_m, 1.0, epsilon = 1e-9);
    assert_eq!(on, date("2026-08-05"));
    assert_abs_diff_eq!(out.stage_falls[0].m_per_hour, 0.2, epsilon = 1e-9);
    // 20 m3/s past the machines for five days of 24 hours: 4 MW
    assert_abs_diff_eq!(out.generation_lost_mwh.unwrap(), 4.0 * 24.0 * 5.0, epsilon = 1e-9);
    assert!(out.warnings[0].words.contains("against 0 % on the first day"));
    assert!(out.warnings[1].words.contains("on 1 of 5 days"));
    let mut near = days(2);
    (near[0].pool_m, near[1].pool_m) = (54.895, 54.29);
    assert!(of(&site, near, Vec::new(), Vec::new()).warnings.is_empty());
    // what was drawn from the start is not new
    let mut all = days(3);
    for day in &mut all {
        left(day).oxygen_low_share = 0.2;
    }
    assert!(of(&site, all, Vec::new(), Vec::new()).warnings.is_empty());
}

#[test]
fn scenario_a_stage_that_falls_faster_than_allowed_is_told() {
    let limited = |most: &str| checked(&SITE.replace("[100, 2]]", &format!("[100, 2]], {most}")));
    let mut season = days(5);
    // a change is made in two hours and 50 m3/s are a metre of stage: 0.2, 0, 0.1 and 0.1 m an hour
    for (day, flow) in season.iter_mut().zip([60.0, 40.0, 40.0, 30.0, 20.0]) {
        day.points = Some(vec![figures(flow)]);
    }
    let told = |site: &Site| -> Vec<(&'static str, NaiveDate, String)> {
        let out = of(site, season.clone(), Vec::new(), Vec::new());
        out.warnings.into_iter().map(|w| (w.kind, w.date, w.words)).collect()
    };
    let over = told(&limited("max_stage_fall_per_hour: 0.15"));
    assert_eq!((over.len(), over[0].0, over[0].1), (1, "max_stage_fall_per_hour", date("2026-08-02")));
    assert!(over[0].2.starts_with("the stage at Ford can fall by more than"), "{}", over[0].2);
    assert!(over[0].2.contains("on 1 of 5 days"), "{}", over[0].2);
    assert!(told(&limited("max_stage_fall_per_hour: 0.05 m"))[0].2.contains("on 3 of 5 days"));
    assert!(told(&limited("max_stage_fall_per_hour: 0.2")).is_empty(), "just at the limit");
    assert!(told(&checked(SITE)).is_empty());
}

#[test]
fn scenario_an_outage_is_told_by_its_dates() {
    let site = checked(SITE);
    let outage = |to: Option<NaiveDate>, reason: &str| {
        vec![Outage { outlet: 2, from: begin(), to, reason: reason.into() }]
    };
    let why = |outages: Vec<Outage>| {
        let out = of(&site, days(6), Vec::new(), outages);
        let low = out.gates.into_iter().find(|g| g.outlet == 2).unwrap();
        (low.first_day, low.reason.unwrap().1)
    };
    let until = Some(date("2026-08-03"));
    assert_eq!(
        why(outage(until, "hoists renewed")),
        (Some(date("2026-08-04")), "outage until 2026-08-03, hoists renewed".to_owned())
    );
    assert_eq!(why(outage(None, "")), (None, "outage with no end told".to_owned()));
}
