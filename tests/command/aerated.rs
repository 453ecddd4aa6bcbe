//! Oxygen leaving the pool and below the dam, as the outputs name them.

use crate::{CAST, Folder, SITE, run, with};

/// The sluice drops its water; the site says how far.
fn airy() -> Folder {
    let site = with(SITE, "flow: { max: 40 } }", "flow: { max: 40 }, aeration: { fall: 3 } }");
    Folder::new(&site, &[("2025-07-14.csv", CAST.as_bytes())])
}

#[test]
fn scenario_without_a_gain_the_oxygen_is_that_leaving_the_pool() {
    let folder = Folder::usual();
    let json = run(&["mix", folder.named(), "--json"]).json();
    assert_eq!(json["release"]["oxygen_below_mg_l"], json["release"]["oxygen_mg_l"]);
    assert_eq!(json["targets"][0]["oxygen_mg_l"], json["release"]["oxygen_mg_l"]);
    let text = run(&["mix", folder.named()]).out;
    assert!(text.contains("leaving the pool; brackets hold") && !text.contains("below the dam"), "{text}");
    assert!(!run(&["rank", folder.named(), "--step", "20%"]).out.contains("below the dam"));
}

#[test]
fn scenario_with_a_gain_both_are_named_and_targets_stand_below_the_dam() {
    let folder = airy();
    let json = run(&["mix", folder.named(), "--json"]).json();
    let number = |key: &str| json["release"][key].as_f64().unwrap();
    let (pool, below) = (number("oxygen_mg_l"), number("oxygen_below_mg_l"));
    let plain = run(&["mix", Folder::usual().named(), "--json"]).json();
    assert_eq!(json["release"]["oxygen_mg_l"], plain["release"]["oxygen_mg_l"]);
    // a seventh of the water, at 4 mg/L of 12, makes up about two thirds of its deficit
    assert!((0.3..1.2).contains(&(below - pool)), "{pool} {below}");
    assert_eq!(json["targets"][0]["oxygen_mg_l"], json["release"]["oxygen_below_mg_l"]);
    let kinds: Vec<&str> =
        json["warnings"].as_array().unwrap().iter().map(|w| w["kind"].as_str().unwrap()).collect();
    assert!(kinds.contains(&"oxygen-gain") && !kinds.contains(&"dissolved-gas"), "{kinds:?}");
    let text = run(&["mix", folder.named()]).out.split_whitespace().collect::<Vec<_>>().join(" ");
    let named = format!("oxygen below the dam, with what the conduits add; {pool:.1} mg/L leaving the pool");
    assert!(text.contains(&named) && text.contains(&format!("oxygen {below:.1} mg/L (")), "{text}");
    // the ranking takes the setting now for the same water
    let rank = run(&["rank", folder.named(), "--step", "20%", "--json"]).json();
    let now = rank["now"]["release"]["oxygen_below_mg_l"].as_f64().unwrap();
    assert!((now - below).abs() < 1e-9, "{now} {below}");
    assert!(run(&["rank", folder.named(), "--step", "20%"]).out.contains("below the dam"));
}
