//! Short stories of water and gates, where a plausible answer would be the wrong one.

use std::fmt::Write as _;

use serde_json::Value;

use crate::{CAST, Folder, SITE, run, with};

fn mix(folder: &Folder, more: &[&str]) -> Value {
    run(&[&["mix", folder.named(), "--json"], more].concat()).json()
}

fn folder(site: &str, cast: &str) -> Folder {
    Folder::new(site, &[("a.csv", cast.as_bytes())])
}

fn kinds(list: &Value) -> Vec<&str> {
    list.as_array().unwrap().iter().map(|w| w["kind"].as_str().unwrap()).collect()
}

fn number(value: &Value) -> f64 {
    value.as_f64().unwrap_or_else(|| panic!("{value} is no number"))
}

fn width(value: &Value) -> f64 {
    number(&value["release"]["band_c"][1]) - number(&value["release"]["band_c"][0])
}

#[test]
fn scenario_a_pool_moved_by_a_hair_leaves_the_water_at_the_bed() {
    let to_the_bed = folder(SITE, &with(CAST, "59,6.2,3.5", "60,6.0,1.0"));
    let still = mix(&to_the_bed, &["--set", "Sluice=5"]);
    for pool in ["60.001", "59.999"] {
        let moved = mix(&to_the_bed, &["--set", "Sluice=5", "--pool", pool]);
        for (key, near) in [("temperature_c", 0.01), ("oxygen_mg_l", 0.02)] {
            let by = number(&moved["release"][key]) - number(&still["release"][key]);
            assert!(by.abs() < near, "{key} moves by {by} at pool {pool}");
        }
        assert!(!kinds(&moved["profile"]["flags"]).contains(&"exposed"));
    }
}

#[test]
fn scenario_samples_of_a_few_millimetres_do_not_run_together() {
    let mut fine = "# taken: 2025-07-14T10:30\n# pool: 60\ndepth_m,temperature_C\n".to_owned();
    for i in 0..5_000 {
        let depth = f64::from(i) * 0.004;
        let _ = writeln!(fine, "{depth:.3},{:.3}", 24.0 - 0.5 * depth);
    }
    let answer = run(&["pool", folder(SITE, &fine).named(), "--json"]).json();
    assert!(number(&answer["profile"]["samples"]) > 2_000.0);
    assert!((number(&answer["layering"]["surface_c"]) - 24.0).abs() < 0.01);
    assert_eq!(kinds(&answer["profile"]["flags"]).iter().filter(|k| **k == "duplicate").count(), 1);
}

#[test]
fn scenario_two_rows_at_one_depth_are_no_profile() {
    let one = "# taken: 2025-07-14T10:30\n# pool: 60\ndepth_m,temperature_C\n30,10\n30,12\n";
    assert!(run(&["mix", folder(SITE, one).named()]).failed_with(3).contains("1 usable sample"));
}

#[test]
fn scenario_a_cast_of_unknown_age_has_the_widest_band() {
    let undated = folder(SITE, &with(CAST, "# taken: 2025-07-14T10:30\n", ""));
    let dated = folder(SITE, CAST);
    let on = |when: &'static str| ["--set", "N1=30", "--on", when];
    let widths = [
        width(&mix(&dated, &on("2025-07-14T10:30"))),
        width(&mix(&dated, &on("2025-07-24"))),
        width(&mix(&undated, &on("2025-07-14T10:30"))),
        width(&mix(&dated, &on("2025-08-30"))),
    ];
    assert!(widths[0] < widths[1] && widths[1] < widths[2], "{widths:?}");
    assert!((widths[2] - widths[3]).abs() < 1e-9, "past its limit age adds nothing: {widths:?}");
}

#[test]
fn scenario_cases_without_oxygen_leave_shares_unknown_and_say_why() {
    let mut half = "# taken: 2025-07-14T10:30\n# pool: 60\ndepth_m,temperature_C,oxygen_mg_l\n".to_owned();
    for depth in 0..60 {
        let oxygen = if depth <= 20 { "8" } else { "" };
        let _ = writeln!(half, "{depth},{:.2},{oxygen}", 6.0 + 18.0 * (-f64::from(depth) / 14.0).exp());
    }
    let answer = mix(&folder(SITE, &half), &["--set", "N1=24"]);
    assert!(number(&answer["release"]["oxygen_mg_l"]) > 7.9);
    assert!(kinds(&answer["warnings"]).contains(&"oxygen-band"), "{}", answer["warnings"]);
    assert!(answer["release"]["band_oxygen_mg_l"].is_null());
    assert!(answer["targets"][0]["oxygen_share_inside"].is_null());
    assert!(answer["targets"][0]["share_inside_both"].is_null());
    assert!(answer["targets"][0]["share_inside"].is_number());
}

#[test]
fn scenario_a_leak_is_told_and_counted() {
    let leaky = with(SITE, "flow: { max: 40 } }", "flow: { max: 40 }, leakage: { flow: 3, head: 50 } }");
    let leaky = folder(&leaky, CAST);
    let answer = mix(&leaky, &["--set", "N1=10"]);
    let told = answer["warnings"].as_array().unwrap().iter().find(|w| w["kind"] == "leak").unwrap();
    assert!(told["text"].as_str().unwrap().ends_with("Sluice"));
    // a shut port under 52 m of water: 3 sqrt(52/50)
    let leak = number(&answer["release"]["flow_m3s"]) - 10.0;
    assert!((leak - 3.0 * (52.0_f64 / 50.0).sqrt()).abs() < 1e-9, "{leak}");
    let text = run(&["mix", leaky.named(), "--set", "N1=10"]).out;
    assert!(text.contains("in total, leaks included"), "{text}");
    assert!(!run(&["mix", folder(SITE, CAST).named(), "--set", "N1=10"]).out.contains("leaks included"));
}

#[test]
fn scenario_stacked_leaves_draw_at_the_lowest_edge_they_can_have() {
    let leaves = "  - { name: Leaves, kind: crest, gated: true, centre: 55, width: 6, positions: [ { name: two, crest: 50 }, { name: three, crest: 55 } ] }\n";
    let site = with(SITE, "now:", &format!("{leaves}now:"));
    let answer = mix(&folder(&site, CAST), &["--set", "Leaves=5"]);
    assert!((number(&answer["levels"][0]["elevation_m"]) - 50.0).abs() < 1e-9);
    assert_eq!(answer["levels"][0]["zone"]["upper_end"], "surface");
    let outside = with(&site, "crest: 50 }", "crest: 500 }");
    assert!(run(&["check", folder(&outside, CAST).named()]).out.contains("outlets[2].positions[0]"));
}

#[test]
fn scenario_an_opening_half_out_of_the_water_is_told() {
    let low = mix(&folder(SITE, CAST), &["--set", "N1=10", "--pool", "45.5"]);
    assert!(kinds(&low["warnings"]).contains(&"half-dry"), "{}", low["warnings"]);
    let high = mix(&folder(SITE, CAST), &["--set", "N1=10"]);
    assert!(!kinds(&high["warnings"]).contains(&"half-dry"));
}

#[test]
fn scenario_a_setting_now_that_cannot_be_shown_says_why() {
    let well = with(SITE, "outlets:", "wells:\n  - { name: North, conduit: 2 }\noutlets:");
    let well = with(&well, "name: N1,", "name: N1, well: North,");
    for (now, why) in [
        ("now: { N1: 500 }\n", "above its capacity"),
        ("now: { N1: 50% }\n", "under `now`, North: 30"),
        ("", "gives none"),
    ] {
        let site = with(&well, "now: { N1: 30, Sluice: 5 }\n", now);
        let answer = mix(&folder(&site, CAST), &["--set", "N1=20"]);
        assert!(answer["now"].is_null());
        let note =
            answer["warnings"].as_array().unwrap().iter().find(|w| w["kind"] == "now-not-shown").unwrap();
        assert!(note["text"].as_str().unwrap().contains(why), "{note}");
    }
}

#[test]
fn scenario_figures_no_reservoir_has_are_refused() {
    for (from, to, place) in [
        ("[62, 9.0e6, 2.44e8]", "[62, 9.0e200, 2.44e208]", "pool.table[3]"),
        ("cold_water: [12]", "band: { cast: 1e30 }", "band.cast"),
        ("flow: { max: 40 }", "flow: { max: 1e12 }", "outlets[1].flow.max"),
        ("flow: { max: 40 } }", "flow: { max: 40 }, leakage: { flow: 1, head: 1e-9 } }", "leakage.head"),
    ] {
        let run = run(&["check", folder(&with(SITE, from, to), CAST).named()]);
        assert_eq!((run.code, run.out.contains(place)), (Some(3), true), "{to}: {}", run.out);
    }
    for (column, value) in [("oxygen_percent", "5000"), ("solids_mg_l", "1e6"), ("suspended_mg_l", "1e9")] {
        let cast = with(CAST, "oxygen_mg_l", column);
        let cast = with(&cast, "0.5,22.0,8.5", &format!("0.5,22.0,{value}"));
        let run = run(&["mix", folder(SITE, &cast).named()]);
        assert!(run.failed_with(3).contains("a.csv:4"), "{column}: {}", run.err);
    }
}

#[test]
fn scenario_readings_a_little_below_zero_are_read_as_zero_and_said_so() {
    let cast = with(CAST, "59,6.2,3.5", "59,6.2,-0.2");
    let answer = run(&["pool", folder(SITE, &cast).named(), "--json"]).json();
    assert!(kinds(&answer["profile"]["notes"]).contains(&"below-zero"));
    assert!(number(&answer["layering"]["oxygen_min_mg_l"]).abs() < 1e-12);
}

#[test]
fn scenario_a_time_may_leave_out_seconds_beside_its_offset() {
    for on in ["2025-07-14T17:30Z", "2025-07-14T10:30-07:00", "2025-07-14T10:30", "2025-07-14 10:30:00"] {
        let answer = run(&["pool", folder(SITE, CAST).named(), "--json", "--on", on]).json();
        assert_eq!(answer["on"], "2025-07-14T10:30:00-07:00", "{on}");
    }
    assert!(run(&["pool", folder(SITE, CAST).named(), "--on", "0000-01-01"]).failed_with(2).contains("0000"));
    let later = run(&["pool", folder(SITE, CAST).named(), "--on", "2025-07-01"]).out;
    assert!(later.contains("later than the date"), "{later}");
}
