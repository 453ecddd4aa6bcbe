//! Rules at the dam and at a point in the river, as a user meets them.

use std::fmt::Write as _;
use std::fs;

use approx::assert_abs_diff_eq;
use serde_json::Value;

use crate::{CAST, Folder, SITE, run, with};

/// A river with a given equilibrium and exchange, and rules of several kinds.
fn ruled(rules: &str) -> Folder {
    let river = "river: { name: Test River, equilibrium: 22, exchange_w_m2_c: 30, reaches: [ { name: Upper, length_km: 20, width: 40, depth: 1.5, travel_hours: [[20, 9], [60, 5]] } ], points: [ { name: Mill Bridge, at_km: 20 } ] }
pool:";
    let site = with(&with(SITE, "pool:", river), "targets:\n", &format!("targets:\n{rules}"));
    Folder::new(&site, &[("2025-07-14.csv", CAST.as_bytes())])
}

fn number(value: &Value) -> f64 {
    value.as_f64().unwrap()
}

fn target<'a>(answer: &'a Value, name: &str) -> &'a Value {
    answer["targets"].as_array().unwrap().iter().find(|t| t["name"] == name).unwrap()
}

/// Nine hours at 20 m3/s: 22 + (T - 22) exp(-30 x 9 x 3600 / (4.18e6 x 1.5)), a closed form.
#[test]
fn scenario_a_rule_at_a_point_is_held_against_what_arrives_there() {
    let folder = ruled(
        "  - { name: bridge, point: Mill Bridge, high: 10, oxygen_min_percent: 99 }
  - { name: cooling, point: Mill Bridge, reference: natural, high: -10 }
  - { name: maxima, point: Mill Bridge, statistic: 7dadm, high: 16 }\n",
    );
    let answer = run(&["mix", folder.named(), "--set", "N1=15", "--set", "Sluice=5", "--json"]).json();
    let release = number(&answer["release"]["temperature_c"]);
    let expected = 22.0 + (release - 22.0) * (-30.0 * 9.0 * 3600.0 / (4.18e6_f64 * 1.5)).exp();
    let bridge = target(&answer, "bridge");
    assert_abs_diff_eq!(number(&bridge["value_c"]), expected, epsilon = 0.02);
    assert!(number(&bridge["value_c"]) > release + 0.5);
    assert_eq!((&bridge["point"], &bridge["basis"]), (&"Mill Bridge".into(), &"steady".into()));
    assert_eq!(bridge["standing"], "above");
    assert_abs_diff_eq!(number(&bridge["by_c"]), expected - 10.0, epsilon = 0.02);
    assert_eq!(bridge["oxygen_standing"], "below");
    assert!(number(&bridge["oxygen_percent"]) < 99.0);
    assert!(number(&bridge["share_inside"]) < 0.5);
    let cooling = target(&answer, "cooling");
    assert_eq!(cooling["reference"], "natural");
    assert_abs_diff_eq!(number(&cooling["value_c"]), expected - 22.0, epsilon = 0.02);
    assert_abs_diff_eq!(number(&cooling["today_high_c"]), 12.0, epsilon = 1e-9);
    // the greatest of a day is not known where the river is computed by days
    let maxima = target(&answer, "maxima");
    assert_eq!((&maxima["standing"], &maxima["value_c"]), (&"unknown".into(), &Value::Null));
    assert!(maxima["words"].as_str().unwrap().contains("by the hour"));
    let points = answer["points"].as_array().unwrap();
    assert_eq!((points.len(), &points[0]["name"]), (1, &"Mill Bridge".into()));
    assert_abs_diff_eq!(number(&points[0]["travel_h"]), 9.0, epsilon = 1e-6);
    assert_abs_diff_eq!(number(&points[0]["temperature_c"]), number(&bridge["value_c"]), epsilon = 1e-12);
}

#[test]
fn scenario_rules_that_leave_nothing_in_common_are_a_conflict() {
    let folder = ruled(
        "  - { name: eggs, high: 8 }
  - { name: mussels, point: Mill Bridge, low: 15, priority: 2 }
  - { name: anglers, high: 5, soft: true }\n",
    );
    let set = ["mix", folder.named(), "--set", "N1=15", "--set", "Sluice=5"];
    let answer = run(&[&set[..], &["--json"]].concat()).json();
    let conflicts: Vec<&Value> =
        answer["conflicts"].as_array().unwrap().iter().map(|c| &c["targets"]).collect();
    // 8 at most, 9 at least at the dam; 15 at the bridge takes 13.8 at the dam; a wish conflicts with nothing
    assert_eq!(conflicts, [&serde_json::json!(["eggs", "mussels"]), &serde_json::json!(["eggs", "holding"])]);
    let told = answer["warnings"].as_array().unwrap().iter().filter(|w| w["kind"] == "conflict");
    let texts: Vec<&str> = told.map(|w| w["text"].as_str().unwrap()).collect();
    assert!(
        texts.iter().any(|t| t.contains("`eggs` and `holding` leave no temperature at the dam in common"))
    );
    assert!(texts.iter().any(|t| t.contains("`eggs` and `mussels` leave no temperature of the release")));
    let mussels = target(&answer, "mussels");
    assert_eq!((&mussels["held_as_wish"], &mussels["soft"]), (&true.into(), &false.into()));
    assert_eq!(target(&answer, "eggs")["governs"], true);
    let text = run(&set).out;
    assert!(text.contains("held as a wish"), "{text}");
}

#[test]
fn scenario_a_wish_is_never_missed() {
    let wish = ["  - { name: anglers, high: 5, soft: true }\n", "  - { name: anglers, high: 5 }\n"];
    let codes = wish.map(|rule| {
        let folder = ruled(rule);
        // 12 C of the deeper gate and the sluice keeps `holding` in temperature; its oxygen is another matter
        let site = std::fs::read_to_string(folder.site_file()).unwrap();
        std::fs::write(folder.site_file(), with(&with(&site, ", oxygen_min: 7", ""), "low: 9", "low: 2"))
            .unwrap();
        run(&["mix", folder.named(), "--set", "N1=15", "--set", "Sluice=5", "--strict"]).code
    });
    assert_eq!(codes, [Some(0), Some(4)]);
}

#[test]
fn scenario_every_output_says_that_values_are_an_example() {
    let folder = ruled("  - { name: licence, high: 14, example: false, source: \"site licence\" }\n");
    let words = "example values, not your licence's";
    for task in ["mix", "rank"] {
        let mut arguments = vec![task, folder.named()];
        arguments.extend(if task == "rank" { vec!["--release", "30"] } else { vec!["--set", "N1=15"] });
        let joined = run(&arguments).out.split_whitespace().collect::<Vec<_>>().join(" ");
        assert!(joined.contains(words), "{task}: {joined}");
        arguments.push("--json");
        let answer = run(&arguments).json();
        let answer = if task == "rank" { answer["mixes"][0].clone() } else { answer };
        let [holding, licence] = ["holding", "licence"].map(|name| target(&answer, name));
        assert_eq!((&holding["example"], &holding["example_words"]), (&true.into(), &words.into()));
        assert_eq!((&licence["example"], &licence["example_words"]), (&false.into(), &Value::Null));
    }
}

/// The ranking orders by what arrives at the bridge: with a rule there alone, its first mix comes nearest to it.
#[test]
fn scenario_rank_lists_the_points_and_orders_by_them() {
    let folder = ruled("  - { name: bridge, point: Mill Bridge, low: 12, preferred: 13, high: 14 }\n");
    let site = std::fs::read_to_string(folder.site_file()).unwrap();
    let holding = site.lines().find(|l| l.contains("name: holding")).unwrap().to_owned() + "\n";
    std::fs::write(folder.site_file(), with(&site, &holding, "")).unwrap();
    let answer = run(&["rank", folder.named(), "--release", "40", "--step", "5%", "--json"]).json();
    let first = &answer["mixes"][0];
    let bridge = target(first, "bridge");
    assert_eq!(bridge["standing"], "inside");
    assert_abs_diff_eq!(number(&bridge["value_c"]), 13.0, epsilon = 0.5 + 0.05);
    assert!(number(&first["release"]["temperature_c"]) < number(&bridge["value_c"]));
    assert_eq!(first["points"][0]["name"], "Mill Bridge");
    assert_abs_diff_eq!(
        number(&first["points"][0]["temperature_c"]),
        number(&bridge["value_c"]),
        epsilon = 1e-9
    );
}

/// The site with other rules than its own.
fn alone(rules: &str, more: &str) -> Folder {
    let folder = ruled(rules);
    let site = std::fs::read_to_string(folder.site_file()).unwrap();
    let holding = site.lines().find(|l| l.contains("name: holding")).unwrap().to_owned() + "\n";
    let site = with(&with(&site, &holding, ""), "cold_water:", &format!("{more}cold_water:"));
    std::fs::write(folder.site_file(), site).unwrap();
    folder
}

/// Blocks bring hours, so the greatest of the day at the bridge is known and ordered by: mixes inside come first.
#[test]
fn scenario_with_blocks_rank_orders_by_the_greatest_of_the_day_at_a_point() {
    let blocks = "blocks: [ { name: peak, hours: 6, flow: 60 }, { name: off-peak, hours: 18, flow: 20 } ]\n";
    let rule = "  - { name: warmest, point: Mill Bridge, statistic: daily_max, high: 12 }\n";
    let folder = alone(rule, blocks);
    let answer = run(&["rank", folder.named(), "--step", "5%", "--top", "50", "--json"]).json();
    let mixes = answer["mixes"].as_array().unwrap();
    let by_c: Vec<f64> = mixes.iter().map(|mix| number(&target(mix, "warmest")["by_c"])).collect();
    assert!(by_c[0] <= 0.0 && by_c.iter().any(|c| *c > 0.5), "{by_c:?}");
    let apart = number(&answer["largest_difference_c"]);
    // of misses more than a bin and twice that difference apart the smaller comes first
    for (i, first) in by_c.iter().enumerate() {
        assert!(by_c[i..].iter().all(|c| *c > first - 0.5 - 2.0 * apart), "{by_c:?}");
    }
    assert!(apart > 0.0 && apart < 0.5, "{apart}");
}

/// 18 at most comes first, 20 at least is overruled by it, and so leaves 17 at most as it is.
#[test]
fn scenario_a_rule_that_is_overruled_overrules_none() {
    let folder = alone(
        "  - { name: first, high: 18 }
  - { name: second, low: 20, priority: 2 }
  - { name: third, high: 17, priority: 3 }\n",
        "",
    );
    let set = ["mix", folder.named(), "--set", "N1=15", "--set", "Sluice=5"];
    let answer = run(&[&set[..], &["--json"]].concat()).json();
    let wishes = ["first", "second", "third"].map(|name| target(&answer, name)["held_as_wish"].clone());
    assert_eq!(wishes, [false, true, false].map(Value::from));
    assert_eq!(answer["conflicts"].as_array().unwrap().len(), 2);
    let text = run(&set).out.split_whitespace().collect::<Vec<_>>().join(" ");
    assert!(text.contains("held as a wish") && text.contains("leave no temperature at the dam in common"));
}

#[test]
fn scenario_rules_of_other_water_years_are_said_to_be_off() {
    let folder = alone(
        "  - { name: any, high: 18 }
  - { name: wet, low: 20, years: [wet] }
  - { name: mistyped, low: 20, years: [drry] }
  - { name: over, high: 20, until: 2025-07-01 }\n",
        "year_type: dry\n",
    );
    let words =
        "rules of this season that do not hold today: 2 by the type of water year, 1 ended by an event";
    let set = ["mix", folder.named(), "--on", "2025-07-15", "--set", "N1=15"];
    let mix = run(&set).out.split_whitespace().collect::<Vec<_>>().join(" ");
    assert!(mix.contains(words), "{mix}");
    let rank = run(&["rank", folder.named(), "--on", "2025-07-15", "--release", "20"]).out;
    let rank = rank.split_whitespace().collect::<Vec<_>>().join(" ");
    assert!(rank.contains(words), "{rank}");
    let none = run(&["mix", folder.named(), "--on", "2025-06-15", "--set", "N1=15", "--json"]).json();
    let notes = none["warnings"].as_array().unwrap();
    let off = notes.iter().find(|w| w["kind"] == "rules-off").unwrap();
    assert!(!off["text"].as_str().unwrap().contains("event"), "{off}");
}

/// Without hours the least oxygen of the day at the bridge is its mean, and that is said; at the dam it is known.
#[test]
fn scenario_the_least_oxygen_without_hours_is_said_to_be_the_mean() {
    let folder = alone(
        "  - { name: bridge, point: Mill Bridge, oxygen_min: 6, oxygen_statistic: daily_min }
  - { name: mean, point: Mill Bridge, oxygen_min: 6, oxygen_statistic: daily_mean }
  - { name: below, oxygen_min: 6, oxygen_statistic: daily_min }\n",
        "",
    );
    let answer = run(&["mix", folder.named(), "--set", "N1=15", "--json"]).json();
    let told = ["bridge", "mean", "below"].map(|name| target(&answer, name)["words"].clone());
    assert!(told[0].as_str().unwrap().contains("only the mean oxygen of the day is known"), "{told:?}");
    assert_eq!((&told[1], &told[2]), (&Value::Null, &Value::Null));
}

/// A stream whose record ends the day before is held, and said to be.
#[test]
fn scenario_a_reference_that_is_held_over_is_said_to_be() {
    let hours = |days: std::ops::RangeInclusive<u32>| {
        let hour = |i: u32| format!("2025-07-{:02}T{:02}:00,15\n", i / 24, i % 24);
        let rows: String = (days.start() * 24..(days.end() + 1) * 24).map(hour).collect();
        format!("time,temperature_C\n{rows}")
    };
    let folder = ruled("  - { name: cooling, reference: Tansy Creek, high: -1 }\n");
    let site = std::fs::read_to_string(folder.site_file()).unwrap();
    let stream = "travel_hours: [[20, 9], [60, 5]], inflows: [ { name: Tansy Creek, at_km: 12, flow: 3, series: tansy.csv } ] }";
    let site = with(&site, "travel_hours: [[20, 9], [60, 5]] }", stream);
    std::fs::write(folder.site_file(), site).unwrap();
    let cooling = |days| {
        std::fs::write(folder.site_file().with_file_name("tansy.csv"), hours(days)).unwrap();
        let answer = run(&["mix", folder.named(), "--on", "2025-07-14", "--set", "N1=15", "--json"]).json();
        target(&answer, "cooling").clone()
    };
    assert_eq!(cooling(12..=14)["words"], Value::Null);
    let held = cooling(10..=12);
    assert!(held["words"].as_str().unwrap().contains("Tansy Creek is taken as on 2025-07-12"), "{held}");
    assert_eq!(held["standing"], "inside");
    assert_eq!(cooling(8..=10)["standing"], "unknown");
}

/// Three blocks of rising flow: the change from the last back to the first is over midnight, and not of this day.
#[test]
fn scenario_the_change_within_a_day_does_not_run_over_midnight() {
    let blocks = "blocks: [ { name: low, hours: 8, flow: 10 }, { name: middle, hours: 8, flow: 30 }, { name: high, hours: 8, flow: 80 } ]\n";
    let folder = alone("  - { name: steps, statistic: hourly_change, high: 1 }\n", blocks);
    let answer = run(&["rank", folder.named(), "--step", "10%", "--json"]).json();
    let mix = &answer["mixes"][0];
    let parts = mix["blocks"].as_array().unwrap();
    let c: Vec<f64> = parts.iter().map(|part| number(&part["release"]["temperature_c"])).collect();
    let [first, second] = [(c[1] - c[0]).abs(), (c[2] - c[1]).abs()];
    assert!((c[2] - c[0]).abs() > first.max(second) + 1e-3, "{c:?}");
    assert_abs_diff_eq!(number(&target(mix, "steps")["value_c"]), first.max(second), epsilon = 1e-9);
}

#[test]
fn scenario_a_bound_no_water_can_have_is_no_conflict() {
    // six days of 12 C leave nothing of a week of 8 C: what is left to today lies below freezing
    let folder = ruled("  - { name: cool week, statistic: mean_of_days, days: 7, high: 8 }\n");
    let mut record = String::from("# invented\n# data: reviewed\ntime,temperature_C\n");
    for day in 7..14 {
        for hour in 0..24 {
            let _ = writeln!(record, "2025-07-{day:02}T{hour:02}:00,12");
        }
    }
    fs::write(folder.path().join("tailwater.csv"), record).unwrap();
    let answer = run(&["mix", folder.named(), "--set", "N1=15", "--set", "Sluice=5", "--json"]).json();
    let week = target(&answer, "cool week");
    // (6 x 12 + today) / 7 at most 8 leaves today -16 C
    assert!((week["today_high_c"].as_f64().unwrap() + 16.0).abs() < 1e-9, "{week}");
    assert_eq!(week["standing"], "above");
    let none = |c: &Value| !c["targets"].as_array().unwrap().contains(&"cool week".into());
    assert!(answer["conflicts"].as_array().unwrap().iter().all(none), "{}", answer["conflicts"]);
}
