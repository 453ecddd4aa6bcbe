//! `river`: what arrives downstream, as a user asks for it.

use std::fs;

use approx::assert_abs_diff_eq;
use serde_json::{Value, json};

use crate::{CAST, Folder, SITE, run, with};

const EXAMPLE: &str = "example values, not your licence's";
pub(super) const PROVISIONAL: &str = "from provisional data; not a compliance determination";

/// Twenty kilometres that take nine hours at 20 m3/s, with a given equilibrium and exchange; a stage at the bridge.
pub(super) const RIVER: &str = "river:
  name: Test River
  equilibrium: 22
  exchange_w_m2_c: 30
  reaches:
    - { name: Upper, length_km: 20, width: 40, depth: 1.5, travel_hours: [[20, 9], [60, 5]] }
  points:
    - { name: Ford, at_km: 5 }
    - { name: Mill Bridge, at_km: 20, rating: [[0, 0], [100, 2]], warning_hours: 3 }
";

/// The usual site with a river and more rules.
pub(super) fn site(river: &str, rules: &str) -> Folder {
    let text =
        with(&with(SITE, "pool:", &format!("{river}pool:")), "targets:\n", &format!("targets:\n{rules}"));
    Folder::new(&text, &[("2025-07-14.csv", CAST.as_bytes())])
}

/// The site changed once more.
fn change(folder: &Folder, from: &str, to: &str) {
    let text = fs::read_to_string(folder.site_file()).unwrap();
    fs::write(folder.site_file(), with(&text, from, to)).unwrap();
}

pub(super) fn river(folder: &Folder, more: &[&str]) -> Value {
    run(&[&["river", folder.named(), "--json"], more].concat()).json()
}

/// The text with every run of white space as one blank, so that wrapping does not matter.
pub(super) fn told(arguments: &[&str]) -> String {
    let answer = run(arguments);
    assert_eq!(answer.code, Some(0), "{}", answer.err);
    joined(&answer.out)
}

fn joined(text: &str) -> String {
    text.split_whitespace().collect::<Vec<_>>().join(" ")
}

pub(super) fn number(value: &Value) -> f64 {
    value.as_f64().unwrap_or_else(|| panic!("{value} is no number"))
}

pub(super) fn list(value: &Value) -> &[Value] {
    value.as_array().unwrap()
}

pub(super) fn named<'a>(values: &'a Value, key: &str, name: &str) -> &'a Value {
    list(values).iter().find(|v| v[key] == name).unwrap_or_else(|| panic!("no {name} in {values}"))
}

/// Names of the ways that are told.
fn ways(answer: &Value) -> Vec<&str> {
    list(&answer["releases"]).iter().map(|w| w["of"].as_str().unwrap()).collect()
}

fn number_or_null(value: &Value) -> bool {
    value.is_number() || value.is_null()
}

#[test]
fn scenario_both_demonstrations_answer_with_every_key_of_its_type() {
    for demonstration in ["ashlar", "sorrel"] {
        let answer = run(&["river", demonstration, "--json"]).json();
        assert_eq!((&answer["of"], ways(&answer)), (&"now".into(), vec!["now", "best"]));
        let points = list(&answer["points"]);
        assert_eq!(points.len(), 2);
        for point in points {
            assert!(point["name"].is_string());
            for key in ["distance_km", "travel_h", "rise_first_h", "rise_h", "temperature_c", "oxygen_mg_l"] {
                assert!(number(&point[key]) > 0.0, "{demonstration} {key}");
            }
            let [first, bulk, water] = ["rise_first_h", "rise_h", "travel_h"].map(|key| number(&point[key]));
            assert!(first < bulk && bulk < water, "{point}");
            let band = list(&point["band_c"]);
            let mean = number(&point["temperature_c"]);
            assert!(band.len() == 2 && number(&band[0]) < mean && mean < number(&band[1]), "{band:?} {mean}");
            // hours are known where the weather is told by the hour
            assert_eq!(point["temperature_max_c"].is_number(), demonstration == "sorrel", "{point}");
            assert!(!list(&point["targets"]).is_empty());
            for target in list(&point["targets"]) {
                assert!(target["standing"].is_string() && target["point"] == point["name"], "{target}");
            }
        }
        for window in list(&answer["release_window"]) {
            assert!(window["point"].is_string() && window["reachable"].is_boolean(), "{window}");
            assert!(number_or_null(&window["low_c"]) && number_or_null(&window["high_c"]), "{window}");
        }
        assert!(!list(&answer["observed"]).is_empty());
        for record in list(&answer["observed"]) {
            assert!(record["target"].is_string() && number_or_null(&record["worst_by_c"]), "{record}");
            let [days, over, run] =
                ["days", "days_over", "longest_run"].map(|key| record[key].as_u64().unwrap());
            assert!(over + record["days_under"].as_u64().unwrap() <= days && run <= days, "{record}");
            assert_eq!(record["note"], PROVISIONAL);
        }
        assert!(!list(&answer["days"]).is_empty() && answer["conflicts"].is_array());
        assert!(answer["change_in_time"].is_array() && answer["caution"].is_string());
    }
}

/// 22 + (T - 22) exp(-30 t/(rho cp h)), the closed form of a river with given equilibrium and exchange.
fn arriving(release_c: f64, hours: f64) -> f64 {
    22.0 + (release_c - 22.0) * (-30.0 * 3600.0 * hours / (998.2 * 4182.0 * 1.5)).exp()
}

#[test]
fn scenario_what_is_tried_stands_beside_what_is_set_now_and_the_best() {
    let folder = site(RIVER, "  - { name: bridge, point: Mill Bridge, low: 11, preferred: 12, high: 14 }\n");
    let now = river(&folder, &["--release", "35"]);
    assert_eq!(ways(&now), ["now", "best"]);
    let tried = river(&folder, &["--set", "N1=15", "--set", "Sluice=5"]);
    assert_eq!(ways(&tried)[..2], ["now", "tried"]);
    assert_eq!(tried["of"], "tried");
    let release = named(&tried["releases"], "of", "tried");
    assert_abs_diff_eq!(number(&release["flow_m3s"]), 20.0, epsilon = 1e-9);
    let bridge = named(&tried["points"], "name", "Mill Bridge");
    assert_abs_diff_eq!(number(&bridge["travel_h"]), 9.0, epsilon = 1e-6);
    let there = arriving(number(&release["temperature_c"]), 9.0);
    assert_abs_diff_eq!(number(&bridge["temperature_c"]), there, epsilon = 1e-3);
    let ford = named(&tried["points"], "name", "Ford");
    let there = arriving(number(&release["temperature_c"]), 9.0 / 4.0);
    assert_abs_diff_eq!(number(&ford["temperature_c"]), there, epsilon = 1e-3);
    // the stage follows from the flow: 2 m at 100 m3/s
    assert_abs_diff_eq!(number(&bridge["stage_m"]), 0.4, epsilon = 1e-9);
    assert!(ford["stage_m"].is_null() && bridge["warning_h"] == 3.0);
    // what `mix` says of the same setting is said here
    let mix = run(&["mix", folder.named(), "--set", "N1=15", "--set", "Sluice=5", "--json"]).json();
    assert_eq!(mix["release"]["temperature_c"], release["temperature_c"]);
    assert_eq!(named(&mix["targets"], "name", "bridge")["value_c"], bridge["targets"][0]["value_c"]);
    // what is tried and stands now is told once
    assert_eq!(ways(&river(&folder, &["--set", "N1=30", "--set", "Sluice=5"]))[0], "now");
    let same = river(&folder, &["--set", "N1=30", "--set", "Sluice=5"]);
    assert!(!ways(&same).contains(&"tried"), "{:?}", ways(&same));
}

#[test]
fn scenario_gates_opened_in_a_well_are_tried_with_the_flow_of_the_well() {
    let answer = run(&["river", "sorrel", "--open", "Middle=100%", "--release", "8", "--json"]).json();
    assert_eq!(answer["of"], "tried");
    let tried = named(&answer["releases"], "of", "tried");
    assert_abs_diff_eq!(number(&tried["flow_m3s"]), 8.0, epsilon = 1e-9);
    // the brook's 1.3 m3/s joins above the ford
    let ford = number(&answer["points"][0]["flow_m3s"]);
    assert!(ford > 8.0, "{ford}");
}

#[test]
fn scenario_without_a_setting_now_only_the_best_is_told() {
    let folder = site(RIVER, "");
    change(&folder, "now: { N1: 30, Sluice: 5 }\n", "");
    let best = river(&folder, &["--release", "30"]);
    assert_eq!((ways(&best), &best["of"]), (vec!["best"], &"best".into()));
    let tried = river(&folder, &["--set", "N1=20"]);
    assert_eq!(ways(&tried)[0], "tried");
    assert!(list(&tried["warnings"]).iter().any(|w| w["kind"] == "no-best"), "{}", tried["warnings"]);
    // nothing set, nothing now, nothing to rank: as `mix`, it asks for a setting
    assert!(run(&["river", folder.named()]).failed_with(2).contains("no setting"));
}

#[test]
fn scenario_a_site_without_a_river_or_its_weather_says_so_and_judges_the_dam() {
    let plain = Folder::usual();
    let answer = river(&plain, &[]);
    assert_eq!((list(&answer["points"]).len(), &answer["conflicts"]), (0, &json!([])));
    assert_eq!(answer["release_window"][0]["point"], "dam");
    assert!(list(&answer["warnings"]).iter().any(|w| w["kind"] == "no-river"));
    assert!(told(&["river", plain.named()]).contains("tells nothing of the river"));

    let rules = "  - { name: bridge, point: Mill Bridge, high: 14, oxygen_min: 6 }\n";
    let folder = site(&with(RIVER, "  equilibrium: 22\n  exchange_w_m2_c: 30\n", ""), rules);
    let answer = river(&folder, &[]);
    let bridge = named(&answer["points"], "name", "Mill Bridge");
    for key in ["temperature_c", "temperature_max_c", "oxygen_mg_l", "band_c"] {
        assert!(bridge[key].is_null(), "{key}: {bridge}");
    }
    assert_eq!(bridge["targets"][0]["standing"], "unknown");
    assert!(list(&answer["warnings"]).iter().any(|w| w["kind"] == "no-weather"));
    assert!(number(&answer["releases"][0]["temperature_c"]) > 0.0);
    let text = told(&["river", folder.named()]);
    assert!(text.contains("temperatures below the dam are not known"), "{text}");
}

#[test]
fn scenario_a_point_that_no_release_can_keep_is_out_of_reach() {
    // towards 22 C for nine hours: even water of 35 C, the warmest that is looked at, arrives at 33.1 C
    let rules = "  - { name: hot, point: Mill Bridge, low: 34 }\n  - { name: cool, point: Ford, high: 20 }\n";
    let folder = site(RIVER, rules);
    let answer = river(&folder, &["--set", "N1=15", "--set", "Sluice=5"]);
    let bridge = named(&answer["release_window"], "point", "Mill Bridge");
    assert_eq!(
        (&bridge["reachable"], &bridge["low_c"], &bridge["high_c"]),
        (&false.into(), &Value::Null, &Value::Null)
    );
    let ford = named(&answer["release_window"], "point", "Ford");
    assert_eq!(ford["reachable"], true);
    // put forward again it lands on the rule
    assert_abs_diff_eq!(arriving(number(&ford["high_c"]), 9.0 / 4.0), 20.0, epsilon = 0.01);
    let text = told(&["river", folder.named(), "--set", "N1=15", "--set", "Sluice=5"]);
    assert!(text.contains("Mill Bridge: OUT OF REACH"), "{text}");
    assert!(text.contains(&format!("Ford: to {:.1} C", number(&ford["high_c"]))), "{text}");
}

#[test]
fn scenario_a_conflict_is_told_with_both_rules() {
    let rules =
        "  - { name: eggs, high: 8 }\n  - { name: mussels, point: Mill Bridge, low: 15, priority: 2 }\n";
    let folder = site(RIVER, rules);
    let set = ["--set", "N1=15", "--set", "Sluice=5"];
    let answer = river(&folder, &set);
    assert!(
        list(&answer["conflicts"]).iter().any(|c| c["targets"] == json!(["eggs", "mussels"])),
        "{}",
        answer["conflicts"]
    );
    let text = told(&[&["river", folder.named()], &set[..]].concat());
    assert!(text.contains("`eggs` and `mussels` leave no temperature of the release"), "{text}");
    let wish = format!("mussels at Mill Bridge (daily mean, from 15.0 C, {EXAMPLE}, held as a wish");
    assert!(text.contains(&wish), "{text}");
}

#[test]
fn scenario_strict_ends_with_4_where_a_point_is_missed() {
    for (high, code) in [(30, 0), (5, 4)] {
        let folder = site(RIVER, &format!("  - {{ name: bridge, point: Mill Bridge, high: {high} }}\n"));
        let holding = fs::read_to_string(folder.site_file()).unwrap();
        let holding = holding.lines().find(|l| l.contains("name: holding")).unwrap().to_owned() + "\n";
        change(&folder, &holding, "");
        let ended = |more: &[&str]| run(&[&["river", folder.named()], more].concat()).code;
        assert_eq!((ended(&["--strict"]), ended(&[])), (Some(code), Some(0)), "high {high}");
    }
}

#[test]
fn scenario_units_change_the_text_and_not_the_numbers() {
    let folder = site(RIVER, "  - { name: bridge, point: Mill Bridge, high: 14 }\n");
    let [us, si] = ["us", "si"].map(|units| river(&folder, &["--units", units]));
    for key in ["points", "releases", "release_window", "observed", "days", "fingerprint"] {
        assert_eq!(without_words(&us[key]), without_words(&si[key]), "{key}");
    }
    let us = told(&["river", folder.named(), "--units", "us"]);
    assert!(
        us.contains("from the dam - 3.1 mi 12.4 mi") && us.contains(" cfs") && us.contains("to 57.2 F"),
        "{us}"
    );
    let si = told(&["river", folder.named(), "--units", "si"]);
    assert!(si.contains("from the dam - 5.0 km 20.0 km") && si.contains("to 14.0 C"), "{si}");
}

/// A value without its sentences, which follow the display.
fn without_words(value: &Value) -> Value {
    match value {
        Value::Array(values) => values.iter().map(without_words).collect(),
        Value::Object(map) => {
            let kept = map.iter().filter(|(key, _)| !key.ends_with("words"));
            kept.map(|(key, value)| (key.clone(), without_words(value))).collect()
        }
        other => other.clone(),
    }
}

#[test]
fn scenario_an_unknown_gate_or_number_is_no_command() {
    let folder = site(RIVER, "");
    assert!(run(&["river", folder.named(), "--set", "N9=15"]).failed_with(2).contains("N9"));
    run(&["river", folder.named(), "--set", "N1=many"]).failed_with(2);
    run(&["river", folder.named(), "--sett", "N1=15"]).failed_with(2);
    // understood, but no gate passes that much
    run(&["river", folder.named(), "--set", "N1=500"]).failed_with(3);
}

#[test]
fn scenario_text_and_json_tell_the_same_and_tell_it_twice() {
    for demonstration in ["ashlar", "sorrel"] {
        let first = run(&["river", demonstration, "--units", "si"]);
        assert_eq!(first, run(&["river", demonstration, "--units", "si"]));
        let [one, two] = [0, 1].map(|_| run(&["river", demonstration, "--json"]));
        assert_eq!(one, two);
        let answer = one.json();
        // a row of the table of places, from its label on, holds the figures of the points in their order
        let row = |label: &str| {
            let line = first.out.lines().find(|l| l.starts_with(label)).unwrap_or_else(|| panic!("{label}"));
            joined(&line[20..])
        };
        let of = |key: &str| list(&answer["points"]).iter().map(|p| number(&p[key])).collect::<Vec<_>>();
        let unit = |values: Vec<f64>, unit: &str| {
            values.iter().map(|v| format!("{v:.1} {unit}")).collect::<Vec<_>>().join(" ")
        };
        assert_eq!(row("from the dam"), format!("- {}", unit(of("distance_km"), "km")));
        assert_eq!(row("water takes"), format!("- {}", unit(of("travel_h"), "h")));
        assert_eq!(row("first rise possible"), format!("- {}", unit(of("rise_first_h"), "h")));
        assert_eq!(row("bulk of a rise"), format!("- {}", unit(of("rise_h"), "h")));
        assert!(row("now mean").ends_with(&unit(of("temperature_c"), "C")));
        assert!(row("now oxygen").ends_with(&unit(of("oxygen_mg_l"), "mg/L")));
        if demonstration == "sorrel" {
            assert!(row("now greatest").ends_with(&unit(of("temperature_max_c"), "C")));
        }
    }
}

#[test]
fn scenario_stage_is_told_by_a_rating_or_said_to_be_not_computed() {
    let folder = site(RIVER, "");
    // from 35 m3/s to 20 m3/s at 2 m for 100 m3/s
    let text = told(&["river", folder.named(), "--set", "N1=15", "--set", "Sluice=5"]);
    assert!(text.contains("Mill Bridge: tried fall of stage 0.3 m"), "{text}");
    assert!(text.contains("Ford: stage rise not computed: no rating given"), "{text}");
    assert!(text.contains("first rise possible") && text.contains("warning time - - 3.0 h"), "{text}");
}

#[test]
fn scenario_every_rule_of_a_demonstration_says_that_it_is_an_example() {
    for demonstration in ["ashlar", "sorrel"] {
        for task in ["mix", "rank", "river"] {
            let answer = run(&[task, demonstration, "--json"]).json();
            let rules: Vec<&Value> = match task {
                "mix" => list(&answer["targets"]).iter().collect(),
                "rank" => list(&answer["mixes"]).iter().flat_map(|m| list(&m["targets"])).collect(),
                _ => {
                    let at_dam = list(&answer["releases"]).iter().flat_map(|w| list(&w["targets"]));
                    at_dam.chain(list(&answer["points"]).iter().flat_map(|p| list(&p["targets"]))).collect()
                }
            };
            assert!(!rules.is_empty());
            assert!(rules.iter().all(|r| r["example_words"] == EXAMPLE), "{task} {demonstration}");
            let mut names: Vec<&str> = rules.iter().map(|r| r["name"].as_str().unwrap()).collect();
            names.sort_unstable();
            names.dedup();
            // in the text the words stand in the sentence of the rule, before that of the next
            let text = told(&[task, demonstration]);
            for name in &names {
                let said = text
                    .split(name)
                    .skip(1)
                    .any(|rest| rest.chars().take(230).collect::<String>().contains(EXAMPLE));
                assert!(said, "{task} {demonstration}: {name}: {text}");
            }
        }
    }
}

/// A junction right below the dam: flow-weighted, by hand, some three minutes down the river; the place of the junction
/// sees the mixed water.
#[test]
fn scenario_a_stream_that_joins_at_the_dam_mixes_by_flow() {
    let stream = "5]], inflows: [{ name: Tansy, at_km: 0.1, flow: 10, temperature: 20, oxygen: 9 }]";
    let folder = site(&with(&with(RIVER, "5]]", stream), "at_km: 5 }", "at_km: 0.1 }"), "");
    let answer = river(&folder, &["--set", "N1=15", "--set", "Sluice=5"]);
    let release = named(&answer["releases"], "of", "tried");
    let ford = named(&answer["points"], "name", "Ford");
    let mixed = |a: f64, b: f64| (20.0 * a + 10.0 * b) / 30.0;
    assert_abs_diff_eq!(number(&ford["flow_m3s"]), 30.0, epsilon = 1e-9);
    let warm = mixed(number(&release["temperature_c"]), 20.0);
    assert_abs_diff_eq!(number(&ford["temperature_c"]), warm, epsilon = 0.01);
    let oxygen = mixed(number(&release["oxygen_mg_l"]), 9.0);
    assert_abs_diff_eq!(number(&ford["oxygen_mg_l"]), oxygen, epsilon = 0.02);
}
