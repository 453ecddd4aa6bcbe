//! The second demonstration site: what it was invented for can be seen in the answers.

use serde_json::Value;

use crate::run;

/// How far a mix misses the range of the summer release (C) and the floor of the fish (mg/L), 0 inside.
fn misses(mix: &Value) -> (f64, f64) {
    let of = |name: &str, key: &str| {
        let targets = mix["targets"].as_array().unwrap();
        targets.iter().find(|target| target["name"] == name).unwrap()[key].as_f64().unwrap()
    };
    (of("summer release", "by_c"), of("fish oxygen below the dam", "oxygen_by_mg_l"))
}

#[test]
fn scenario_temperature_and_oxygen_below_the_dam_cannot_both_be_kept() {
    let answer = run(&["rank", "sorrel", "--top", "50", "--json"]).json();
    let mixes = answer["mixes"].as_array().unwrap();
    let missed: Vec<(f64, f64)> = mixes.iter().map(misses).collect();
    assert!(missed.iter().all(|&(c, mg_l)| c > 0.0 || mg_l > 0.0), "no mix keeps both: {missed:?}");
    let warm = missed.iter().find(|m| m.1 <= 0.0).expect("a mix that keeps the floor and is too warm");
    let short = missed.iter().find(|m| m.0 <= 0.0).expect("a mix of the right temperature, short of oxygen");
    let between = missed.iter().filter(|m| m.0 > 0.0 && m.1 > 0.0);
    let mut useful = between.filter(|m| m.0 < 0.5 * warm.0 && m.1 < 0.5 * short.1);
    assert!(useful.next().is_some(), "one that misses both by less than half: {missed:?}");
}

#[test]
fn scenario_only_the_planted_faults_are_flagged() {
    let checked = run(&["check", "sorrel"]);
    assert_eq!(checked.code, Some(0), "{}", checked.out);
    let flags: Vec<&str> = checked.out.lines().filter(|line| line.contains(": flag: ")).collect();
    assert!(checked.out.contains("0 refused, 1 flagged"), "{flags:?}");
    assert!(flags[0].contains("pell-ford.csv") && flags[0].contains("out of the water"), "{flags:?}");
}

#[test]
fn scenario_rules_speak_of_both_points_with_observed_days() {
    let answer = run(&["mix", "sorrel", "--json"]).json();
    let targets = answer["targets"].as_array().unwrap();
    for (point, name) in [("Pell Ford", "mussels in heat"), ("Cotter Bridge", "warm-water fish")] {
        let target = targets.iter().find(|target| target["name"] == name).unwrap();
        assert_eq!((&target["point"], &target["basis"]), (&point.into(), &"with observed days".into()));
        assert!(target["value_c"].is_f64() || target["value"].is_f64(), "{target}");
    }
}
