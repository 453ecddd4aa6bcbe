//! The days ahead on the second demonstration site: what would be missed, and when a change must leave the dam.

use std::fs;

use chrono::{DateTime, Duration, FixedOffset, NaiveDate};
use serde_json::Value;
use tempfile::TempDir;

use crate::run;

/// The second site with one rule of its own at Pell Ford in place of the mussels' in heat.
fn river_with(rule: &str) -> Value {
    let folder = TempDir::new().unwrap();
    let named = folder.path().to_str().unwrap().to_owned();
    assert_eq!(run(&["demo", &named]).code, Some(0));
    let file = folder.path().join("sorrel/site.yaml");
    let site = fs::read_to_string(&file).unwrap();
    let line = site.lines().find(|l| l.contains("name: mussels in heat")).unwrap().to_owned();
    fs::write(&file, site.replace(&line, &format!("  - {{ {rule}, point: Pell Ford, example: true }}")))
        .unwrap();
    run(&["river", folder.path().join("sorrel").to_str().unwrap(), "--json"]).json()
}

/// Mean temperature at Pell Ford of the water that leaves the dam on each day, C.
fn leaving(answer: &Value) -> Vec<(NaiveDate, f64)> {
    let of = |day: &Value| {
        let arrives = day["arrives"].as_array().unwrap();
        let here = arrives.iter().find(|a| a["of"] == "now" && a["point"] == "Pell Ford").unwrap();
        (day["date"].as_str().unwrap().parse().unwrap(), here["temperature_c"].as_f64().unwrap())
    };
    answer["days"].as_array().unwrap().iter().map(of).collect()
}

fn told<'a>(answer: &'a Value, rule: &str) -> Option<&'a Value> {
    answer["change_in_time"].as_array().unwrap().iter().find(|t| t["target"] == rule)
}

#[test]
fn scenario_the_first_day_too_warm_by_arrival_and_the_hour_to_leave_the_dam() {
    let answer = river_with("name: own mean, statistic: daily_mean, high: 24.85");
    let travel_h = answer["points"][0]["travel_h"].as_f64().unwrap();
    let leaving = leaving(&answer);
    // a day at the point holds the end of one day's water and most of the next one's
    let at_point = |pair: &[(NaiveDate, f64)]| {
        let late = travel_h / 24.0;
        (pair[1].0, late * pair[0].1 + (1.0 - late) * pair[1].1)
    };
    let days: Vec<(NaiveDate, f64)> = leaving.windows(2).map(at_point).collect();
    let (day, value) = *days.iter().find(|d| d.1 > 24.85).unwrap();
    let before = days.iter().rev().find(|d| d.0 < day).unwrap();
    assert!(value > 24.95 && before.1 < 24.75, "the days must lie clear of the rule: {days:?}");
    let told = told(&answer, "own mean").unwrap();
    assert_eq!(told["day"], day.to_string());
    let leave_by: DateTime<FixedOffset> = told["leave_by"].as_str().unwrap().parse().unwrap();
    let begins = day.and_hms_opt(0, 0, 0).unwrap().and_local_timezone(*leave_by.offset()).unwrap();
    let hours = (begins - leave_by).as_seconds_f64() / 3600.0;
    // the brook carries a little less by then
    assert!((hours - travel_h).abs() < 0.2, "{hours} against {travel_h}");
    assert!((told["travel_h"].as_f64().unwrap() - hours).abs() < 1e-3, "{told}");
    assert_eq!((&told["late"], &told["unit"]), (&Value::Bool(false), &"C".into()));
    assert!(leave_by - begins < Duration::zero());
}

#[test]
fn scenario_three_days_in_a_row_are_awaited_before_the_third_is_told() {
    let own = river_with("name: own heat, statistic: days_in_a_row, days: 3, high: 27.5");
    let once = river_with("name: own max, statistic: daily_max, high: 27.5");
    let (row, one) = (told(&own, "own heat").unwrap(), told(&once, "own max").unwrap());
    let day = |t: &Value| t["day"].as_str().unwrap().parse::<NaiveDate>().unwrap();
    // the first hot day is no miss of the rule of three; the third of them in a row is
    assert_eq!(day(row) - day(one), Duration::days(2), "{row} {one}");
}

#[test]
fn scenario_what_is_only_wished_for_warns_of_nothing() {
    let hard = river_with("name: own max, statistic: daily_max, high: 27.5");
    let soft = river_with("name: own max, statistic: daily_max, high: 27.5, soft: true");
    assert!(told(&hard, "own max").is_some() && told(&soft, "own max").is_none());
}
