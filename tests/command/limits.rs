//! Limits as a user meets them: in words, in JSON, and listed where they are not checked.

use serde_json::Value;

use crate::{CAST, Folder, SITE, run, with};

/// The site of the other tests with limits of every kind that a setting alone can miss.
fn limited() -> String {
    let gate = with(SITE, "min_submergence: 4", "min_submergence: 4, pool_window: [40, 59], uncertain: true");
    let lines = "inflow: 20
limits:
  outages: [ { outlet: Sluice, from: 2025-07-01, reason: \"seal \\e[31mrepair\" } ]
  shares: [ { name: upper, outlets: [N1], min: 90 } ]
  reserved: [ { outlet: Sluice, flow: 6, reason: hatchery } ]
  undrawn: [ { depth: [0, 2], reason: scum }, { from: 0, to: 5, reason: sulphide } ]
  max_drawdown_per_day: 0.1
cold_water:";
    with(&gate, "cold_water:", lines)
}

fn told(answer: &Value) -> Vec<&str> {
    let warnings = answer["warnings"].as_array().unwrap().iter();
    warnings.filter(|w| w["kind"] == "limit").map(|w| w["text"].as_str().unwrap()).collect()
}

#[test]
fn scenario_every_missed_limit_is_told_with_its_reason_and_cure() {
    let folder = Folder::new(&limited(), &[("a.csv", CAST.as_bytes())]);
    let answer = run(&["mix", folder.named(), "--set", "N1=30", "--set", "Sluice=5", "--json"]).json();
    let told = told(&answer);
    let wanted = [
        "pool_window of `N1`: the pool at 60.00 m, 59.00 m the highest it may be used at; use another outlet",
        "outage of `Sluice`: out of use, no end told (seal \\u{1b}[31mrepair); use another outlet",
        "reserved of `Sluice`: 5.00 m3/s given, 6.00 m3/s required (hatchery); give it that flow",
        // 15 m3/s more than comes in, for a day, from 8.636 km2
        "max_drawdown_per_day: the pool falls 0.15 m in a day, 0.10 m allowed; release less",
        "share.min of `upper`: 86 % of the release, 90 % required; give these outlets more",
    ];
    let whole: Vec<&str> = told.iter().copied().filter(|t| !t.starts_with("undrawn")).collect();
    assert_eq!(whole, wanted);
    let sulphide = told.iter().find(|t| t.starts_with("undrawn of `Sluice`")).unwrap();
    assert!(sulphide.contains("into the water between 0.00 m and 5.00 m (sulphide)"), "{sulphide}");
    let text = run(&["mix", folder.named(), "--set", "N1=30", "--set", "Sluice=5", "--units", "us"]);
    let joined = text.out.split_whitespace().collect::<Vec<_>>().join(" ");
    for words in ["the pool falls 0.5 ft in a day, 0.3 ft allowed", "(hatchery)", "share.min of `upper`"] {
        assert!(joined.contains(words), "{words}: {}", text.out);
    }
}

#[test]
fn scenario_a_shut_outlet_that_owes_a_flow_is_told() {
    let folder = Folder::new(&limited(), &[("a.csv", CAST.as_bytes())]);
    let answer = run(&["mix", folder.named(), "--set", "N1=30", "--json"]).json();
    assert!(told(&answer).iter().any(|t| t.starts_with("reserved of `Sluice`: 0.00 m3/s given")));
}

#[test]
fn scenario_what_is_not_checked_is_named_once_with_its_outlets() {
    let folder = Folder::new(&limited(), &[("a.csv", CAST.as_bytes())]);
    let answer = run(&["mix", folder.named(), "--set", "N1=30", "--set", "Sluice=5", "--json"]).json();
    let told: Vec<&str> =
        answer["not_checked"].as_array().unwrap().iter().map(|n| n.as_str().unwrap()).collect();
    assert_eq!(
        told,
        [
            "pool_window of Sluice",
            "min_submergence of Sluice",
            "moves_under_flow of N1, Sluice",
            "max_entrance_velocity of N1, Sluice",
            "release.min",
            "release.max",
            "max_flow_change_per_hour",
            "max_flow_change_per_day",
            "max_temperature_change_per_hour",
            "max_temperature_change_per_day",
            "solids_max",
            "max_moves",
            "max_crew_hours",
        ]
    );
}

/// Taking the other gates alone would be a setting nobody made.
#[test]
fn scenario_a_wells_total_is_not_taken_for_flows_of_gates() {
    let site = with(SITE, "outlets:\n", "wells: [ { name: Shaft, conduit: 2 } ]\noutlets:\n");
    let site = with(&site, "name: N1,", "name: N1, well: Shaft,");
    let site = with(&site, "now: { N1: 30, Sluice: 5 }", "now: { Shaft: 30, Sluice: 5 }");
    let folder = Folder::new(&site, &[("a.csv", CAST.as_bytes())]);
    assert!(run(&["mix", folder.named()]).failed_with(2).contains("no setting"));
    let answer = run(&["mix", folder.named(), "--set", "Sluice=5", "--json"]).json();
    let shown = answer["warnings"].as_array().unwrap().iter().find(|w| w["kind"] == "now-not-shown").unwrap();
    assert!(shown["text"].as_str().unwrap().contains("none of its gates is open"), "{shown}");
}
