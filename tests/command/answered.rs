//! Answers: their JSON, their sources, and that the same question has the same answer.

use std::fs;

use serde_json::Value;

use crate::{CAST, Folder, SITE, run, run_with, with};

fn keys(value: &Value) -> Vec<&str> {
    value.as_object().unwrap().keys().map(String::as_str).collect()
}

fn has(value: &Value, wanted: &[&str]) {
    for key in wanted {
        assert!(keys(value).contains(key), "no `{key}` in {:?}", keys(value));
    }
}

const HEAD: [&str; 7] = ["site", "on", "datum", "version", "method", "fingerprint", "profile"];

#[test]
fn scenario_the_json_of_mix_has_every_key_of_its_shape() {
    let folder = Folder::usual();
    let mix = run(&["mix", folder.named(), "--set", "N1=20", "--json"]).json();
    has(&mix, &HEAD);
    has(&mix, &["levels", "release", "targets", "not_checked", "warnings", "caution", "now"]);
    has(&mix["profile"], &["taken", "pool_m", "flags"]);
    has(
        &mix["levels"][0],
        &["elevation_m", "outlets", "flow_m3s", "angle_deg", "zone", "temperature_c", "oxygen_mg_l"],
    );
    has(
        &mix["levels"][0]["zone"],
        &["lower_m", "upper_m", "thickness_m", "peak_m", "lower_end", "upper_end"],
    );
    has(&mix["release"], &["flow_m3s", "temperature_c", "oxygen_mg_l", "band_c", "band_oxygen_mg_l"]);
    has(
        &mix["targets"][0],
        &[
            "name",
            "point",
            "statistic",
            "basis",
            "value_c",
            "low_c",
            "preferred_c",
            "high_c",
            "buffer_c",
            "standing",
            "by_c",
            "oxygen_mg_l",
            "oxygen_min_mg_l",
            "oxygen_standing",
            "oxygen_by_mg_l",
            "share_inside",
            "oxygen_share_inside",
            "share_inside_both",
            "governs",
        ],
    );
    has(&mix["warnings"][0], &["kind", "text"]);
    assert_eq!(mix["site"], "Test Dam (invented)");
    assert_eq!(mix["datum"], "local");
    assert_eq!(mix["on"], "2025-07-14T10:30:00-07:00");
    assert_eq!(mix["profile"]["taken"], "2025-07-14T10:30:00-07:00");
    assert_eq!(mix["profile"]["pool_m"], 60.0);
    assert_eq!(mix["now"]["set"]["N1"], 30.0);
    let print = mix["fingerprint"].as_str().unwrap();
    assert!(print.len() == 12 && print.chars().all(|c| c.is_ascii_hexdigit()), "{print}");
    let target = &mix["targets"][0];
    assert_eq!((&target["low_c"], &target["basis"]), (&9.0.into(), &"steady".into()));
}

#[test]
fn scenario_the_json_of_pool_has_every_key_of_its_shape() {
    let folder = Folder::usual();
    let pool = run(&["pool", folder.named(), "--json"]).json();
    has(&pool, &HEAD);
    has(&pool, &["layering", "cold_water", "outlets", "caution"]);
    has(
        &pool["layering"],
        &["surface_c", "bed_c", "thermocline_m", "mixed_base_m", "volume_m3", "schmidt_stability_j_m2"],
    );
    has(&pool["cold_water"][0], &["threshold_c", "usable_m3", "total_m3", "unreachable_m3"]);
    assert_eq!(pool["layering"]["surface_c"], 22.0);
    assert_eq!(pool["layering"]["bed_c"], 6.2);
    assert_eq!(pool["profile"]["samples"], 8);
}

#[test]
fn scenario_a_cast_without_oxygen_leaves_it_null_and_unknown() {
    let cast: String = CAST
        .lines()
        .map(|line| match line.rsplit_once(',') {
            Some((kept, _)) => format!("{kept}\n"),
            None => format!("{line}\n"),
        })
        .collect();
    let folder = Folder::new(SITE, &[("a.csv", cast.as_bytes())]);
    let mix = run(&["mix", folder.named(), "--json"]).json();
    let (release, target) = (&mix["release"], &mix["targets"][0]);
    assert!(release["temperature_c"].is_f64() && release["band_c"].is_array());
    for absent in [
        &release["oxygen_mg_l"],
        &release["band_oxygen_mg_l"],
        &mix["levels"][0]["oxygen_mg_l"],
        &target["oxygen_mg_l"],
        &target["oxygen_by_mg_l"],
        &target["oxygen_share_inside"],
        &target["share_inside_both"],
    ] {
        assert_eq!(absent, &Value::Null);
    }
    assert_eq!(target["oxygen_standing"], "unknown");
    assert_eq!(target["oxygen_min_mg_l"], 7.0);
    let pool = run(&["pool", folder.named(), "--json"]).json();
    assert_eq!(pool["layering"]["oxygen_min_mg_l"], Value::Null);
    assert!(run(&["mix", folder.named()]).out.contains("oxygen UNKNOWN"));
}

#[test]
fn scenario_nothing_now_is_null() {
    let site = with(SITE, "now: { N1: 30, Sluice: 5 }\n", "");
    let folder = Folder::new(&site, &[("a.csv", CAST.as_bytes())]);
    let mix = run(&["mix", folder.named(), "--set", "N1=20", "--json"]).json();
    assert_eq!(mix["now"], Value::Null);
}

#[test]
fn unchanged_the_same_question_has_the_same_bytes() {
    let folder = Folder::usual();
    for arguments in [
        &["pool", folder.named()][..],
        &["mix", folder.named()],
        &["pool", folder.named(), "--json"],
        &["mix", folder.named(), "--json"],
        &["check", folder.named()],
        &["mix", "ashlar", "--set", "N1=500", "--set", "S4=300cfs", "--units", "si"],
    ] {
        let first = run(arguments);
        assert_eq!(first.code, Some(0), "{}", first.err);
        assert_eq!(first, run(arguments), "{arguments:?}");
    }
}

/// A key of the site in another order, a comment, a blank: other bytes, the same numbers.
#[test]
fn law_the_fingerprint_follows_the_bytes_of_site_and_cast() {
    let print = |site: &str, cast: &str| {
        let folder = Folder::new(site, &[("a.csv", cast.as_bytes())]);
        let mut mix = run(&["mix", folder.named(), "--json"]).json();
        mix["profile"]["file"].take();
        let print = mix["fingerprint"].take();
        (print, mix)
    };
    let usual = print(SITE, CAST);
    let site = print(&format!("# a comment\n{SITE}"), CAST);
    let cast = print(SITE, &format!("{CAST}\n"));
    assert_eq!(usual.1, site.1);
    assert_ne!(usual.0, site.0);
    assert_ne!(usual.0, cast.0);
    assert_ne!(site.0, cast.0);
}

#[test]
fn scenario_standard_input_answers_as_the_file_does() {
    let folder = Folder::usual();
    let path = folder.profile("2025-07-14.csv");
    for task in ["pool", "mix"] {
        let arguments = |from| [task, folder.named(), "--json", "--profile", from];
        let mut file = run(&arguments(path.to_str().unwrap())).json();
        let mut named = run(&arguments("2025-07-14.csv")).json();
        let mut stream = run_with(&arguments("-"), CAST).json();
        assert_eq!(stream["profile"]["file"].take(), "standard input");
        file["profile"]["file"].take();
        named["profile"]["file"].take();
        assert_eq!(file, stream);
        assert_eq!(file, named);
    }
    let [file, stream] = [path.to_str().unwrap(), "-"]
        .map(|from| run_with(&["mix", folder.named(), "--profile", from], CAST).out);
    assert_eq!(file, stream);
}

#[test]
fn scenario_the_newest_cast_is_the_latest_taken_and_then_the_last_by_name() {
    let taken = |stamp: &str| with(CAST, "2025-07-14T10:30", stamp);
    let undated = with(CAST, "# taken: 2025-07-14T10:30\n", "");
    let folder = Folder::new(
        SITE,
        &[
            ("1.csv", taken("2025-07-16").as_bytes()),
            ("2.csv", taken("2025-07-16T12:00:00-07:00").as_bytes()),
            ("3.csv", taken("2025-07-16T18:59:00+00:00").as_bytes()),
            ("9.csv", undated.as_bytes()),
            ("8.csv", b"this is no cast\n"),
        ],
    );
    let pool = run(&["pool", folder.named(), "--json"]).json();
    assert!(pool["profile"]["file"].as_str().unwrap().ends_with("2.csv"), "{}", pool["profile"]);
    let kinds: Vec<&str> =
        pool["profile"]["flags"].as_array().unwrap().iter().map(|f| f["kind"].as_str().unwrap()).collect();
    assert!(kinds.contains(&"same-time") && kinds.contains(&"cast-unreadable"), "{kinds:?}");
}

#[test]
fn scenario_what_is_told_beside_a_cast_fills_it_and_a_difference_is_flagged() {
    let kinds = |answer: &Value| -> Vec<String> {
        answer["profile"]["flags"]
            .as_array()
            .unwrap()
            .iter()
            .map(|f| f["kind"].as_str().unwrap().into())
            .collect()
    };
    let bare = CAST.lines().skip(2).collect::<Vec<_>>().join("\n");
    let listed = format!(
        "{SITE}casts:\n  - {{ file: a.csv, taken: 2025-07-10, pool: 59 }}\n  - {{ file: gone.csv }}\n"
    );
    let folder = Folder::new(&listed, &[("a.csv", bare.as_bytes()), ("b.csv", CAST.as_bytes())]);
    let told = run(&["pool", folder.named(), "--profile", "a.csv", "--json"]).json();
    assert_eq!(told["profile"]["taken"], "2025-07-10T12:00:00-07:00");
    assert_eq!(told["profile"]["pool_m"], 59.0);
    assert!(!kinds(&told).contains(&"told-otherwise".to_owned()));
    let taken =
        run(&["pool", folder.named(), "--profile", "b.csv", "--taken", "2025-07-13 09:00", "--json"]).json();
    assert_eq!(taken["profile"]["taken"], "2025-07-13T09:00:00-07:00");
    assert!(kinds(&taken).contains(&"told-otherwise".to_owned()));
    let checked = run(&["check", folder.named()]);
    let line = crate::line_of(&listed, "gone.csv");
    assert!(checked.out.contains(&format!("site.yaml:{line}: flag: ")), "{}", checked.out);
    fs::write(folder.profile("a.csv"), CAST).unwrap();
    let differs = run(&["pool", folder.named(), "--profile", "a.csv", "--json"]).json();
    assert_eq!(differs["profile"]["pool_m"], 59.0);
    assert_eq!(kinds(&differs).iter().filter(|k| *k == "told-otherwise").count(), 2);
}

#[test]
fn scenario_a_pool_on_the_command_line_moves_or_completes_the_cast() {
    let folder = Folder::usual();
    let moved = run(&["pool", folder.named(), "--pool", "57.5", "--json"]).json();
    assert_eq!(moved["profile"]["pool_m"], 57.5);
    assert!(moved["profile"]["flags"].as_array().unwrap().iter().any(|f| f["kind"] == "pool-moved"));
    let feet = run(&["pool", folder.named(), "--pool", "200 ft", "--json"]).json();
    assert!((feet["profile"]["pool_m"].as_f64().unwrap() - 60.96).abs() < 1e-9);
    let bare = with(CAST, "# pool: 60\n", "");
    let arguments = ["pool", folder.named(), "--profile", "-", "--pool", "60", "--json"];
    let told = run_with(&arguments, bare).json();
    let own = run(&["pool", folder.named(), "--json"]).json();
    assert_eq!(told["layering"], own["layering"]);
}
