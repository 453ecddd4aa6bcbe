//! What was learned, pasted into the site file: every answer applies it, and tells what it would be without.

use std::fs;

use chrono::NaiveDate;
use gatemix::files::site::site;
use gatemix::record::{Learned, Learning};
use gatemix::report::text::learned::learned_yaml;
use serde_json::Value;

use crate::{CAST, Folder, SITE, run, with};

/// Everything that can be learned at once, of the levels of [`SITE`].
fn everything() -> Learning {
    let day = |month, day| NaiveDate::from_ymd_opt(2025, month, day).unwrap();
    let learned = Learned {
        bias_c: Some(0.437_61),
        by_level_c: vec![(0, -0.2), (1, 0.123_4)],
        zone_factor: Some(0.9),
        zone_range: Some((0.82, 0.97)),
        oxygen_gain_mg_l: Some(0.25),
        window: Some((day(5, 1), day(7, 1))),
        n: 41,
        release_c: Some(0.3),
        release_mg_l: Some(0.4),
    };
    Learning { learned, candidates: Vec::new(), alike: Vec::new(), suspect: None }
}

fn folder(pasted: &str) -> Folder {
    Folder::new(&format!("{SITE}{pasted}"), &[("2025-07-14.csv", CAST.as_bytes())])
}

/// The lines of a bias alone.
fn bias(site: &str, bias_c: f64) -> String {
    let mut learning = everything();
    let Learned { window, n, .. } = learning.learned;
    learning.learned = Learned { bias_c: Some(bias_c), window, n, ..Learned::default() };
    learned_yaml(&gatemix::files::site::site(site, "site.yaml").site.unwrap(), &learning).unwrap()
}

#[test]
fn scenario_the_lines_to_paste_read_back_as_what_was_learned_in_any_unit() {
    let customary = with(SITE, "temperature: C", "temperature: F");
    let customary = with(&customary, "low: 9, preferred: 12, high: 14", "low: 48, preferred: 54, high: 57");
    let customary = with(&customary, "cold_water: [12]", "cold_water: [54]");
    for text in [SITE, &customary] {
        let before = site(text, "site.yaml").site.unwrap();
        let learning = everything();
        let lines = learned_yaml(&before, &learning).unwrap();
        let read = site(&format!("{text}{lines}"), "site.yaml");
        let read = read.site.unwrap_or_else(|| panic!("{lines}{:#?}", read.problems));
        let (found, told) = (read.learned().unwrap(), &learning.learned);
        let near = |a: Option<f64>, b: Option<f64>| {
            assert!(a.zip(b).is_some_and(|(a, b)| (a - b).abs() < 1e-4), "{a:?} {b:?}: {lines}");
        };
        near(found.bias_c, told.bias_c);
        near(found.zone_factor, told.zone_factor);
        near(found.oxygen_gain_mg_l, told.oxygen_gain_mg_l);
        near(found.release_c, told.release_c);
        near(found.release_mg_l, told.release_mg_l);
        near(found.zone_range.map(|r| r.0), Some(0.82));
        near(found.zone_range.map(|r| r.1), Some(0.97));
        for (a, b) in found.by_level_c.iter().zip(&told.by_level_c) {
            assert_eq!(a.0, b.0);
            near(Some(a.1), Some(b.1));
        }
        assert_eq!((found.by_level_c.len(), found.window, found.n), (2, told.window, told.n));
    }
    let nothing = Learning { learned: Learned { n: 41, ..Learned::default() }, ..everything() };
    assert_eq!(learned_yaml(&site(SITE, "site.yaml").site.unwrap(), &nothing), None);
}

#[test]
fn scenario_a_bias_pasted_shifts_every_answer_and_each_tells_itself_without() {
    let (plain, learned) = (folder(""), folder(&bias(SITE, 0.5)));
    let json = |folder: &Folder, command: &str| run(&[command, folder.named(), "--json"]).json();
    let number = |value: &Value| value.as_f64().unwrap();
    let near = |a: f64, b: f64| assert!((a - b).abs() < 1e-9, "{a} {b}");
    let (was, is) = (json(&plain, "mix"), json(&learned, "mix"));
    assert_eq!((&was["learned"], &was["release"]["plain"]), (&Value::Null, &Value::Null));
    assert_eq!((&is["learned"]["bias_c"], &is["learned"]["n"]), (&0.5.into(), &41.into()));
    assert_eq!(is["learned"]["window"], serde_json::json!(["2025-05-01", "2025-07-01"]));
    near(number(&is["release"]["temperature_c"]), number(&was["release"]["temperature_c"]) + 0.5);
    near(number(&is["release"]["band_c"][0]), number(&was["release"]["band_c"][0]) + 0.5);
    for (key, of) in [
        ("temperature_c", "temperature_c"),
        ("oxygen_mg_l", "oxygen_below_mg_l"),
        ("band_c", "band_c"),
        ("band_oxygen_mg_l", "band_oxygen_mg_l"),
    ] {
        assert_eq!(is["release"]["plain"][key], was["release"][of], "{key}");
    }
    assert_eq!(is["levels"], was["levels"]);
    let ranked = json(&learned, "rank");
    for mix in ranked["mixes"].as_array().unwrap() {
        let release = &mix["release"];
        near(number(&release["plain"]["temperature_c"]) + 0.5, number(&release["temperature_c"]));
    }
    let river = json(&learned, "river");
    let now = &river["releases"][0];
    near(number(&now["plain"]["temperature_c"]) + 0.5, number(&now["temperature_c"]));
    assert_eq!(now["temperature_c"], is["release"]["temperature_c"]);
    for command in ["mix", "rank", "river"] {
        let told = run(&[command, learned.named()]).out.split_whitespace().collect::<Vec<_>>().join(" ");
        let words = "bias +0.50 C, of 41 days, 2025-05-01 to 2025-07-01, is applied; without it";
        assert!(told.contains(words), "{command}: {told}");
        assert!(!run(&[command, plain.named()]).out.contains("Learned"), "{command}");
    }
    // what is written down is both
    let logged =
        run(&["log", learned.named(), "--decide", "--by", "A", "--why", "b", "--set", "N1=30", "--json"]);
    let expected = &logged.json()["logged"]["expected"][0];
    near(number(&expected["plain_temperature_c"]) + 0.5, number(&expected["temperature_c"]));
    let considered = &logged.json()["logged"]["considered"][0];
    near(number(&considered["plain_temperature_c"]) + 0.5, number(&considered["temperature_c"]));
}

#[test]
fn scenario_a_window_of_long_ago_and_a_level_without_bias_are_flagged() {
    let learned = "learned: { by_level: { N1: 0.3 }, window: [2022-05-01, 2022-10-31], n: 30 }\n";
    let said = run(&["mix", folder(learned).named(), "--json"]).json()["warnings"].clone();
    let kinds: Vec<&str> = said.as_array().unwrap().iter().filter_map(|w| w["kind"].as_str()).collect();
    assert!(kinds.contains(&"learned-old") && kinds.contains(&"learned-levels"), "{kinds:?}");
    let fresh = "learned: { by_level: { N1: 0.3, Sluice: 0 }, window: [2024-05-01, 2024-10-31], n: 30 }\n";
    let said = run(&["mix", folder(fresh).named(), "--json"]).json()["warnings"].clone();
    assert!(said.as_array().unwrap().iter().all(|w| !w["kind"].as_str().unwrap().starts_with("learned")));
}

#[test]
fn scenario_a_season_releases_with_the_bias_and_its_pool_loses_the_heat_that_leaves_it() {
    let folder = crate::season::usual();
    let hold = |folder: &Folder| crate::season::season(folder, &["--strategy", "hold"]);
    let was = hold(&folder);
    let text = fs::read_to_string(folder.site_file()).unwrap();
    fs::write(folder.site_file(), format!("{text}{}", bias(&text, 0.5))).unwrap();
    let is = hold(&folder);
    let days = |season: &Value| season["days"].as_array().unwrap().clone();
    assert_eq!(was["plain"], Value::Null);
    let plain = is["plain"]["days"].as_array().unwrap();
    assert_eq!(days(&was).len(), days(&is).len());
    for ((was, is), plain) in days(&was).iter().zip(&days(&is)).zip(plain) {
        let release = |day: &Value| day["release"]["temperature_c"].as_f64().unwrap();
        assert!((release(is) - release(was) - 0.5).abs() < 1e-9, "{is} {was}");
        for key in ["pool_m", "cold_water_m3", "set", "balance_heat_j"] {
            assert_eq!(is[key], was[key], "the pool is the same: {key}");
        }
        assert_eq!(
            (&plain["temperature_c"], &plain["date"]),
            (&was["release"]["temperature_c"], &was["date"])
        );
    }
    assert_eq!(is["plain"]["score"], was["score"]);
    let told = run(&["season", folder.named(), "--on", "2025-07-14T10:30", "--strategy", "hold"]).out;
    let told = told.split_whitespace().collect::<Vec<_>>().join(" ");
    assert!(told.contains("of 41 days, 2025-05-01 to 2025-07-01, is applied: the release is"), "{told}");
}
