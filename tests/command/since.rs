//! The pool against the cast before: a box of water, so that every figure follows by hand.

use gatemix::tasks::{self, Asked, Changed, ColdWater};
use serde_json::Value;

use crate::{Folder, run, with};

/// A basin of 1 km2 at every elevation. At 50 m the low gate lacks the water it asks for, at 55 m it has it.
const BOX: &str = r#"name: Box Dam (invented)
demonstration: true
units: { length: m, area: m2, volume: m3, flow: m3/s, temperature: C }
utc_offset: "-07:00"
pool: { bed: 0, full: 60, table: [[0, 1.0e6], [60, 1.0e6]] }
outlets:
  - { name: Mid, centre: 30, height: 2, width: 2, min_submergence: 5 }
  - { name: Low, centre: 10, height: 2, width: 2, min_submergence: 42 }
cold_water: [12, 9]
"#;

/// 10 C throughout under 50 m.
const MIXED: &str = "\
# taken: 2025-06-11T10:00
# pool: 50
elevation_m,temperature_C,oxygen_mg_l
50,10,8
0,10,8
";

/// Twenty days later under 55 m: 20 C above, 10 C below, a straight line between 45 and 35 m.
const LAYERED: &str = "\
# taken: 2025-07-01T10:00
# pool: 55
elevation_m,temperature_C,oxygen_mg_l
55,20,8
45,20,8
35,10,7
0,10,6
";

/// No pool: it can be read, but not be held against the site.
const UNSOUND: &str = "# taken: 2025-06-25T10:00\nelevation_m,temperature_C\n50,11\n0,10\n";

fn folder(casts: &[(&str, &str)]) -> Folder {
    let bytes: Vec<_> = casts.iter().map(|(name, text)| (*name, text.as_bytes())).collect();
    Folder::new(BOX, &bytes)
}

fn since(folder: &Folder, more: &[&str]) -> Value {
    run(&[&["pool", folder.named(), "--json"], more].concat()).json()["since"].take()
}

fn near(value: &Value, expected: f64) {
    let found = value.as_f64().unwrap_or_else(|| panic!("{value} is no number"));
    assert!((found - expected).abs() <= 1e-9 * expected.abs().max(1.0), "{found} for {expected}");
}

#[test]
fn published_the_change_of_a_box_of_water_is_the_one_computed_by_hand() {
    let folder = folder(&[("a.csv", MIXED), ("b.csv", LAYERED)]);
    let since = since(&folder, &[]);
    assert_eq!(since["file"], folder.profile("a.csv").to_str().unwrap());
    assert_eq!(since["taken"], "2025-06-11T10:00:00-07:00");
    near(&since["days"], 20.0);
    near(&since["surface_change_c"], 10.0);
    near(&since["bed_change_c"], 0.0);
    // (10 m of 20 C + 10 m of 15 C + 35 m of 10 C) / 55 m = 700/55 C, against 10 C
    near(&since["mean_change_c"], 150.0 / 55.0);
    near(&since["pool_change_m"], 5.0);
    assert_eq!(since["thermocline_then_m"], Value::Null);
    near(&since["thermocline_now_m"], 40.0);
    near(&since["oxygen_min_then_mg_l"], 8.0);
    near(&since["oxygen_min_now_mg_l"], 6.0);
    // 55 m gained 150/55 C in 20 days
    near(&since["heat_w_m2"], 999.1 * 4188.0 * 150.0 / (20.0 * 86_400.0));
    // below 12 C: all 50 m then, 37 m now; the reach was 30 m with Mid alone and is 10 m with Low
    let cold = &since["cold_water"];
    near(&cold[0]["threshold_c"], 12.0);
    near(&cold[0]["total_change_m3"], 37.0e6 - 50.0e6);
    near(&cold[0]["usable_change_m3"], (37.0e6 - 10.0e6) - (50.0e6 - 30.0e6));
    near(&cold[1]["total_change_m3"], 0.0);
    assert_eq!(cold.as_array().unwrap().len(), 2);
}

#[test]
fn scenario_the_text_says_the_same_in_two_lines_and_in_either_system() {
    let folder = folder(&[("a.csv", MIXED), ("b.csv", LAYERED)]);
    let si = run(&["pool", folder.named()]).out;
    let lines = "\
Since 2025-06-11 (20 days): surface +10.0, bed 0.0, mean +2.7 C; pool +5.0 m;
 thermocline none to 40.0 m; lowest oxygen 8.0 to 6.0 mg/L; heat +363 W/m2
";
    assert!(si.contains(lines), "{si}");
    let cold = "\
since 2025-06-11: below 12.0 C +7.00 hm3 usable, -13.00 in all; below 9.0 C 0.00
  hm3 usable, 0.00 in all
";
    assert!(si.contains(cold), "{si}");
    let us = run(&["pool", folder.named(), "--units", "us"]).out;
    assert!(us.contains("surface +18.0, bed 0.0, mean +4.9 F; pool +16.4 ft;"), "{us}");
    assert!(us.contains("below 53.6 F +5,675 acre-ft usable, -10,539 in all"), "{us}");
    let back = run(&["pool", folder.named(), "--profile", "a.csv"]).out;
    assert!(!back.contains("Since") && !back.contains("since"), "the first cast has none before: {back}");
}

#[test]
fn scenario_the_cast_before_is_the_last_sound_one() {
    let folder = folder(&[("a.csv", MIXED), ("b.csv", UNSOUND), ("c.csv", LAYERED), ("d.csv", "depth_m\n")]);
    assert_eq!(since(&folder, &["--profile", "c.csv"])["file"], folder.profile("a.csv").to_str().unwrap());
    assert_eq!(since(&folder, &["--profile", "a.csv"]), Value::Null);
    let undated = with(LAYERED, "# taken: 2025-07-01T10:00\n", "");
    std::fs::write(folder.profile("e.csv"), undated).unwrap();
    assert_eq!(
        since(&folder, &["--profile", "e.csv"]),
        Value::Null,
        "a cast without a time is before nothing"
    );
}

#[test]
fn scenario_what_was_not_there_then_or_is_not_now_is_said_so() {
    let no_oxygen = LAYERED.replace(",oxygen_mg_l", "").replace(",8\n", "\n").replace(",7\n", "\n");
    let no_oxygen = with(&no_oxygen, "0,10,6", "0,10");
    let cooled = with(MIXED, "2025-06-11", "2025-07-15");
    let folder = folder(&[("a.csv", &no_oxygen), ("b.csv", &cooled)]);
    let text = run(&["pool", folder.named()]).out.replace("\n ", " ");
    assert!(
        text.contains("; thermocline 40.0 m to none; lowest oxygen unknown to 8.0 mg/L; heat -"),
        "{text}"
    );
    // Low has lost its water: what could be drawn then is drawn from 10 m, what can now from 30 m
    near(&since(&folder, &[])["cold_water"][0]["usable_change_m3"], 20.0e6 - 27.0e6);

    let dry = BOX.replace("centre: 30", "centre: 58");
    std::fs::write(folder.site_file(), dry).unwrap();
    let cold = since(&folder, &[])["cold_water"][0].take();
    assert_eq!(cold["usable_change_m3"], Value::Null, "no outlet is usable at 50 m");
    near(&cold["total_change_m3"], 13.0e6);
    let text = run(&["pool", folder.named()]).out;
    assert!(text.contains("since 2025-07-01: below 12.0 C +13.00 hm3 in all; below 9.0 C"), "{text}");
}

#[test]
fn scenario_casts_within_half_a_day_tell_no_heat() {
    let soon = with(LAYERED, "2025-07-01T10:00", "2025-06-11T16:00");
    let folder = folder(&[("a.csv", MIXED), ("b.csv", &soon)]);
    let answer = run(&["pool", folder.named(), "--json"]).json();
    near(&answer["since"]["days"], 0.25);
    assert_eq!(answer["since"]["heat_w_m2"], Value::Null);
    assert!(!answer["profile"]["flags"].to_string().contains("heat-change"));
    let text = run(&["pool", folder.named()]).out;
    assert!(text.contains("Since 2025-06-11 (6 hours): ") && !text.contains("heat"), "{text}");
}

#[test]
fn scenario_cold_water_of_any_threshold_is_counted_as_that_of_the_site() {
    let folder = folder(&[("b.csv", LAYERED)]);
    let asked = Asked { site: Some(folder.named().into()), ..Asked::default() };
    let context = tasks::open(&asked, chrono::Utc::now()).unwrap();
    let answer = tasks::pool(&context);
    for cold in &answer.cold {
        assert_eq!(tasks::cold_water(&context, &answer, cold.threshold_c), *cold);
    }
    let at = |threshold_c: f64, to_m: f64| {
        let ColdWater { total_m3, usable_m3, .. } = tasks::cold_water(&context, &answer, threshold_c);
        near(&total_m3.into(), 1.0e6 * to_m);
        near(&usable_m3.unwrap().into(), 1.0e6 * (to_m - 10.0_f64).max(0.0));
    };
    at(5.0, 0.0);
    at(15.0, 40.0);
    at(19.0, 44.0);
    at(25.0, 55.0);
}

#[test]
fn scenario_what_is_tried_on_an_opened_site_reads_no_cast_again() {
    let folder = folder(&[("a.csv", MIXED), ("b.csv", LAYERED)]);
    let asked = Asked { site: Some(folder.named().into()), ..Asked::default() };
    let context = tasks::open(&asked, chrono::Utc::now()).unwrap();
    let read = tasks::pool(&context);
    assert!(read.since.is_some());
    std::fs::remove_dir_all(folder.site_file().with_file_name("profiles")).unwrap();
    let lower = Changed { pool_m: Some(54.0), ..Changed::default() };
    let tried = tasks::pool(&context.changed(&lower).unwrap());
    near(&tried.since.unwrap().pool_m.into(), 4.0);
    assert_eq!(tried.fingerprint, read.fingerprint);
    let gone = Changed { cast: Some("a.csv".into()), ..Changed::default() };
    assert!(context.changed(&gone).is_err(), "another cast is read when it is taken");
}
