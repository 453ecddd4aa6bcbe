//! What stations recorded, and files beside the casts that are not sound, as `river` and the other commands tell them.

use std::fs;

use approx::assert_abs_diff_eq;
use serde_json::json;

use crate::river::{PROVISIONAL, RIVER, list, named, number, river, site, told};
use crate::{run, with};

/// A record of some days, one reading an hour, as cells of temperature.
fn record(days: &[(&str, f64)]) -> String {
    let rows = days.iter().flat_map(|(day, c)| (0..24).map(move |h| format!("{day}T{h:02}:00,{c:.2}\n")));
    format!("time,temperature_C\n{}", rows.collect::<String>())
}

#[test]
fn scenario_a_record_is_counted_against_its_rule_and_marked() {
    let folder = site(RIVER, "");
    let days = [("2025-07-10", 15.5), ("2025-07-11", 14.5), ("2025-07-12", 13.0), ("2025-07-13", 14.2)];
    fs::write(folder.path().join("tailwater.csv"), record(&days)).unwrap();
    let answer = river(&folder, &[]);
    let holding = named(&answer["observed"], "target", "holding");
    // to 14 C: over on the 10th, 11th and 13th, at most two in a row, by 1.5 C at worst
    assert_eq!((&holding["days"], &holding["days_over"]), (&json!(4), &json!(3)));
    assert_eq!((&holding["longest_run"], &holding["worst_on"]), (&json!(2), &"2025-07-10".into()));
    assert_abs_diff_eq!(number(&holding["worst_by_c"]), 1.5, epsilon = 1e-9);
    assert_eq!(holding["months"][0]["of"], "2025-07");
    let text = told(&["river", folder.named()]);
    let line = format!("3 of 4 days above, by up to 1.5 C (2025-07-10), 2 in a row at most; {PROVISIONAL}");
    assert!(text.contains(&line), "{text}");
    // every count of every record carries the words, in the demonstrations too
    for demonstration in ["ashlar", "sorrel"] {
        let json = run(&["river", demonstration, "--json"]).json();
        let text = told(&["river", demonstration]);
        assert_eq!(text.matches(PROVISIONAL).count(), list(&json["observed"]).len(), "{text}");
    }
}

#[test]
fn scenario_a_sensor_out_of_the_water_is_told_by_name_and_its_days_are_not_counted() {
    let folder = site(RIVER, "");
    let usual: Vec<String> = (1..=14).map(|day| format!("2025-07-{day:02}")).collect();
    let usual: Vec<(&str, f64)> = usual.iter().map(|day| (day.as_str(), 13.0)).collect();
    let mut text = record(&usual);
    for hour in 0..24 {
        // on the 8th it lies in the sun: 10 C at night, 34 C in the afternoon
        let c = 10.0 + if (11..19).contains(&hour) { 24.0 } else { 0.0 };
        text = with(
            &text,
            &format!("2025-07-08T{hour:02}:00,13.00"),
            &format!("2025-07-08T{hour:02}:00,{c:.2}"),
        );
    }
    fs::write(folder.path().join("tailwater.csv"), text).unwrap();
    let answer = river(&folder, &[]);
    let holding = named(&answer["observed"], "target", "holding");
    assert_eq!(
        (&holding["days"], &holding["days_over"], &holding["days_unknown"]),
        (&json!(13), &json!(0), &json!(1))
    );
    let flag = named(&answer["warnings"], "kind", "out-of-water");
    assert!(flag["text"].as_str().unwrap().contains("2025-07-08"), "{flag}");
    assert!(told(&["river", folder.named()]).contains("out of the water on 2025-07-08"));
    let checked = run(&["check", folder.named()]);
    assert!(checked.code == Some(0) && checked.out.contains("tailwater.csv"), "{}", checked.out);
}

#[test]
fn scenario_a_broken_file_beside_the_casts_is_named_and_passed_over() {
    let folder = site(RIVER, "");
    fs::write(folder.path().join("tailwater.csv"), "time,temperature_C\n2025-07-10T10:00,warm\n").unwrap();
    for task in [&["mix"][..], &["pool"], &["rank", "--release", "30", "--step", "20%"], &["river"]] {
        let arguments = [&[task[0], folder.named(), "--json"], &task[1..]].concat();
        let answer = run(&arguments).json();
        let told = if task[0] == "river" { &answer["warnings"] } else { &answer["profile"]["flags"] };
        let flag = named(told, "kind", "file-unreadable");
        assert!(flag["text"].as_str().unwrap().contains("tailwater.csv"), "{task:?}: {flag}");
    }
    let checked = run(&["check", folder.named()]);
    assert_eq!(checked.code, Some(3), "{}", checked.err);
    assert!(checked.out.contains("tailwater.csv:2") && checked.out.contains("warm"), "{}", checked.out);
}
