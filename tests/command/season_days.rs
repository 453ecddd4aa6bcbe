//! Days without a release, and what counts first where the mix of a day is chosen.

use std::fs;

use serde_json::{Value, json};

use crate::river::{RIVER, list, named, number, told};
use crate::season::{PLAN, season, site, usual};
use crate::{run, with};

/// Nothing is released from 25 July to 2 August.
const WORKS: &str = "\
# name: works
date,release_m3s,inflow_m3s,inflow_temperature_C
2025-07-14,35,30,16
2025-07-25,0,30,16
2025-08-03,35,25,17
2025-08-26,35,20,15
";

#[test]
fn scenario_days_without_a_release_are_told_as_such() {
    let folder = site(&[("a.csv", WORKS)]);
    let answer = season(&folder, &[]);
    let days = list(&answer["days"]);
    assert_eq!((days.len(), &answer["stops_on"]), (44, &Value::Null));
    for (i, day) in days.iter().enumerate() {
        let is_closed = (11..20).contains(&i);
        assert_eq!(day["release"].is_null(), is_closed, "{day}");
        assert_eq!(day["points"].is_null(), is_closed, "{day}");
        assert_eq!(day["set"] == json!({}), is_closed, "{day}");
        assert!(number(&day["cold_water_m3"]) > 0.0, "{day}");
    }
    let holding = named(&answer["targets"], "name", "holding");
    assert_eq!((&holding["days"], &holding["days_unknown"]), (&35.into(), &9.into()));
    // due on 28 July, and decided with the first water
    let dates: Vec<&str> = list(&answer["decisions"]).iter().map(|d| d["date"].as_str().unwrap()).collect();
    assert_eq!(dates, ["2025-07-14", "2025-08-03", "2025-08-11", "2025-08-25"]);
    let arguments = ["season", folder.named(), "--on", "2025-07-14T10:30"];
    assert!(told(&arguments).contains("9 days not judged (nothing is released)"));
    let table = run(&[&arguments[..], &["--csv"]].concat()).out;
    let row = table.lines().find(|line| line.starts_with("2025-07-26,")).unwrap();
    assert!(row.contains(",29.4444,,,,,9.0000,14.0000,7.0000,,,"), "{row}");
}

#[test]
fn scenario_what_arrives_is_told_at_points_without_a_rule() {
    let folder = site(&[("a.csv", PLAN)]);
    let text = fs::read_to_string(folder.site_file()).unwrap();
    let rule = text.lines().find(|line| line.contains("point: Ford")).unwrap();
    fs::write(folder.site_file(), with(&text, &format!("{rule}\n"), "")).unwrap();
    let answer = season(&folder, &[]);
    let points = list(&answer["days"][3]["points"]);
    assert!(RIVER.contains("Mill Bridge") && points.len() == 2, "{points:?}");
    assert!(points.iter().all(|point| number(&point["temperature_c"]) > 5.0), "{points:?}");
    assert_eq!(answer["stage_falls"][0]["point"], "Mill Bridge");
    assert!(answer["stage_falls"][0]["allowed_m_per_hour"].is_null());
}

#[test]
fn scenario_what_counts_first_can_be_said_and_a_nearer_season_beside_is_told() {
    let folder = usual();
    let usually = season(&folder, &[]);
    let range = season(&folder, &["--order", "range"]);
    assert_eq!(usually["order"], json!(["oxygen", "range", "preferred", "cold_water", "moves"]));
    assert_eq!(range["order"], json!(["range", "oxygen", "preferred", "cold_water", "moves"]));
    let worst = |answer: &Value| number(&answer["score"]["worst_c"]);
    let oxygen = |answer: &Value| number(&answer["oxygen_min_mg_l"]);
    assert!(worst(&range) + 0.2 < worst(&usually), "{} {}", worst(&range), worst(&usually));
    assert!(oxygen(&range) + 0.2 < oxygen(&usually), "{} {}", oxygen(&range), oxygen(&usually));
    // what is set now, held, is nearer to the range than the usual order comes
    let hold = named(&usually["runs"], "strategy", "hold");
    let note = named(&usually["warnings"], "kind", "order-of-the-day")["text"].as_str().unwrap();
    assert!(worst(hold) + 0.1 <= worst(&usually), "{} {}", worst(hold), worst(&usually));
    let said = format!("of {:.1} C against {:.1} C", worst(hold), worst(&usually));
    assert!(note.starts_with("`hold` has") && note.contains(&said), "{note}");
    assert!(note.contains("in the order oxygen, range, preferred, cold_water, moves"), "{note}");
    let kinds: Vec<&Value> = list(&range["warnings"]).iter().map(|w| &w["kind"]).collect();
    let nearer = |answer: &Value| worst(named(&answer["runs"], "strategy", "hold")) + 0.1 <= worst(answer);
    assert!(!nearer(&range) && !kinds.contains(&&json!("order-of-the-day")), "{kinds:?}");
    let arguments = ["season", folder.named(), "--on", "2025-07-14T10:30"];
    let text = told(&[&arguments[..], &["--order", "range,moves"]].concat());
    assert!(text.contains("ordered by range, moves, oxygen, preferred, cold_water"), "{text}");
    assert!(text.contains("runs out reserve worst outside deg.d moves"), "{text}");
    assert!(text.contains("temperature oxygen least oxygen end pool"), "{text}");
    // what is released outside the range though a mix within it is allowed
    let passed_over = "C: oxygen comes first";
    assert!(told(&arguments).contains(passed_over) && !text.contains(passed_over), "{text}");
    let words = run(&[&arguments[..], &["--order", "cold"]].concat());
    assert!(words.failed_with(2).contains("`cold` is no criterion"));
    // prices go by the order of the list
    let list_of = |order: &str| {
        let more = ["--release", "35", "--top", "2", "--season", "--json", "--order", order];
        let folder = [&["rank", folder.named(), "--on", "2025-07-14T10:30"], &more[..]].concat();
        run(&folder).json()["season"]["mixes"].clone()
    };
    assert_ne!(list_of("oxygen"), list_of("range"));
}

#[test]
fn scenario_a_limit_of_the_stage_is_held_against_the_season_and_the_river() {
    let folder = site(&[("a.csv", &with(WORKS, "2025-07-25,0,", "2025-07-25,15,"))]);
    let text = fs::read_to_string(folder.site_file()).unwrap();
    let limited = with(&text, "[100, 2]],", "[100, 2]], max_stage_fall_per_hour: 0.1,");
    fs::write(folder.site_file(), limited).unwrap();
    let answer = season(&folder, &[]);
    // 20 m3/s less are 0.4 m, made in one hour
    assert_eq!(answer["stage_falls"][0]["allowed_m_per_hour"], 0.1);
    let told_of = named(&answer["beware"], "kind", "max_stage_fall_per_hour");
    assert_eq!(told_of["date"], "2025-07-25");
    assert!(told_of["text"].as_str().unwrap().contains("by up to 0.400 m"), "{told_of}");
    let arguments = ["season", folder.named(), "--on", "2025-07-14T10:30"];
    assert!(told(&arguments).contains("0.100 m allowed"));
    let lower = ["river", folder.named(), "--set", "N1=10", "--set", "Sluice=5"];
    assert!(
        told(&lower).contains("by up to 0.400 m in an hour, MORE THAN THE 0.100 m allowed"),
        "{}",
        told(&lower)
    );
    let raise = ["river", folder.named(), "--set", "N1=40", "--set", "Sluice=5"];
    assert!(!told(&raise).contains("allowed"), "a rise is not held against it");
}

#[test]
fn scenario_a_cast_that_leaves_no_water_is_refused_and_not_said_to_be_stopped() {
    let folder = usual();
    let answer = run(&["season", folder.named(), "--on", "2025-07-14T10:30", "--pool", "0.1"]);
    let words = answer.failed_with(3);
    assert!(words.contains("samples") && !words.contains("stopped"), "{words}");
}
