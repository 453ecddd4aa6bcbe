//! Every caution and flag once where it belongs and once where it does not.

use serde_json::Value;

use crate::{CAST, Folder, SITE, run, with};

fn mix(site: &str, cast: &str, more: &[&str]) -> Value {
    let folder = Folder::new(site, &[("a.csv", cast.as_bytes())]);
    run(&[&["mix", folder.named(), "--json"], more].concat()).json()
}

/// Sentence of a kind in a list of warnings or flags.
fn said<'a>(list: &'a Value, kind: &str) -> Option<&'a str> {
    list.as_array().unwrap().iter().find(|w| w["kind"] == kind)?["text"].as_str()
}

#[test]
fn scenario_mostly_airless_water_makes_the_oxygen_an_upper_bound() {
    let airless = with(&with(CAST, "45,6.5,4.5", "45,6.5,0.3"), "59,6.2,3.5", "59,6.2,0.1");
    let low = mix(SITE, &airless, &["--set", "Sluice=5"]);
    let told = said(&low["warnings"], "oxygen-upper-bound").unwrap();
    let percent: f64 = told.split(" %").next().unwrap().parse().unwrap();
    assert!((50.0..=100.0).contains(&percent) && told.ends_with("upper bound"), "{told}");
    // 0.5 of 30.5 m3/s is under the twentieth part
    let little = mix(SITE, &airless, &["--set", "N1=30", "--set", "Sluice=0.5"]);
    assert_eq!(said(&little["warnings"], "oxygen-upper-bound"), None);
}

#[test]
fn scenario_a_pool_wider_than_rotation_lets_it_be_is_told() {
    // N H/(pi f): about 3.6 km for this cast at 44.1 degrees north
    let wide = |metres: &str| {
        let rows = ["2.0e7", "9.0e7", "2.44e8"].iter().fold(SITE.to_owned(), |site, volume| {
            with(&site, &format!("{volume}]"), &format!("{volume}, {metres}]"))
        });
        with(&rows, "[0, 0, 0]", &format!("[0, 0, 0, {metres}]"))
    };
    let [broad, narrow] = ["20000", "500"].map(|w| mix(&wide(w), CAST, &["--set", "N1=30"]));
    assert!(said(&broad["warnings"], "rotation").is_some());
    assert_eq!(said(&narrow["warnings"], "rotation"), None);
    // with widths nothing is assumed; without, it is said
    assert_eq!(said(&narrow["warnings"], "width-assumed"), None);
    assert!(said(&mix(SITE, CAST, &["--set", "N1=30"])["warnings"], "width-assumed").is_some());
}

#[test]
fn scenario_a_zone_thinner_than_its_opening_is_told() {
    let thin = mix(SITE, CAST, &["--set", "N1=2"]);
    assert!(said(&thin["warnings"], "thin-zone").unwrap().starts_with("N1"));
    assert_eq!(said(&mix(SITE, CAST, &["--set", "N1=60"])["warnings"], "thin-zone"), None);
}

#[test]
fn scenario_a_limit_in_mixed_water_is_told() {
    // one temperature from the depth of 30 m down, and a zone that ends there
    let mixed = with(&with(CAST, "45,6.5,4.5", "45,7.5,4.5"), "59,6.2,3.5", "59,7.5,3.5");
    let told = mix(SITE, &mixed, &["--set", "N1=60"]);
    let limit = told["levels"][0]["zone"]["lower_m"].as_f64().unwrap();
    assert!(limit < 30.0 && told["levels"][0]["zone"]["lower_end"] == "free", "{limit}");
    assert!(said(&told["warnings"], "mixed-layer-limit").unwrap().contains("lower limit"));
    assert_eq!(said(&mix(SITE, CAST, &["--set", "N1=60"])["warnings"], "mixed-layer-limit"), None);
}

#[test]
fn scenario_spill_brings_its_caution_on_dissolved_gas() {
    let crest = "  - { name: Spillway, kind: crest, gated: true, centre: 58, width: 20 }\nnow:";
    let site = with(SITE, "now:", crest);
    let spills = mix(&site, CAST, &["--set", "Spillway=10"]);
    assert!(said(&spills["warnings"], "dissolved-gas").unwrap().contains("110 %"));
    assert_eq!(said(&mix(&site, CAST, &["--set", "N1=10"])["warnings"], "dissolved-gas"), None);
}

#[test]
fn scenario_gates_set_by_flow_are_said_to_be_open() {
    let answer = mix(SITE, CAST, &["--set", "Sluice=5", "--set", "N1=10"]);
    assert!(said(&answer["warnings"], "opening-assumed").unwrap().ends_with("N1, Sluice"));
}

#[test]
fn scenario_old_and_later_casts_are_flagged() {
    let flags = |on: &str| mix(SITE, CAST, &["--on", on])["profile"]["flags"].clone();
    assert!(said(&flags("2025-08-20"), "stale").is_some());
    assert_eq!(said(&flags("2025-07-20"), "stale"), None);
    assert!(said(&flags("2025-07-10"), "later").is_some());
    assert_eq!(said(&flags("2025-07-20"), "later"), None);
    let undated = mix(SITE, &with(CAST, "# taken: 2025-07-14T10:30\n", ""), &[]);
    assert!(said(&undated["profile"]["flags"], "no-time").is_some());
    assert!(undated["profile"]["taken"].is_null());
}

/// A record of every hour of some dates at one temperature.
fn tailwater(dates: &[&str], temperature_c: f64) -> String {
    let rows = dates
        .iter()
        .flat_map(|date| (0..24).map(move |hour| format!("{date}T{hour:02}:00,{temperature_c}\n")));
    "time,temperature_C\n".to_owned() + &rows.collect::<String>()
}

#[test]
fn scenario_a_river_outside_all_waters_of_the_cast_is_flagged() {
    // the cast of 2025-07-14 holds water of 6.2 to 22.0 C, and 1 C more is let pass
    let flags = |site: &str, dates: &[&str], temperature_c: f64, task: &[&str]| {
        let folder = Folder::new(site, &[("a.csv", CAST.as_bytes())]);
        std::fs::write(folder.path().join("tailwater.csv"), tailwater(dates, temperature_c)).unwrap();
        let answer = run(&[&[task[0], folder.named(), "--json"], &task[1..]].concat()).json();
        said(&answer["profile"]["flags"], "tailwater-apart").map(str::to_owned)
    };
    let days = ["2025-07-13", "2025-07-14"];
    for task in [&["pool"][..], &["mix"], &["rank", "--release", "30", "--step", "20%"]] {
        let told = flags(SITE, &days, 23.2, task).unwrap();
        let words = "a mean of 23.2 C on 2025-07-14, 1.2 C above the warmest water of the cast, 22.0 C";
        assert!(told.contains(words), "{told}");
        assert_eq!(flags(SITE, &days, 22.9, task), None, "{task:?}");
    }
    let cold = flags(SITE, &days, 5.0, &["mix"]).unwrap();
    assert!(cold.contains("1.2 C below the coldest water of the cast, 6.2 C"), "{cold}");
    assert_eq!(flags(SITE, &days, 5.3, &["mix"]), None);
    // a day before or after speaks where the day itself was not recorded; two days before say nothing of the cast
    assert!(flags(SITE, &["2025-07-15"], 25.0, &["mix"]).unwrap().contains("on 2025-07-15"));
    assert_eq!(flags(SITE, &["2025-07-12", "2025-07-16"], 25.0, &["mix"]), None);
    let loose = with(SITE, "cold_water: [12]", "cold_water: [12]\nchecks: { tailwater: 3.5 }");
    assert_eq!(flags(&loose, &days, 25.0, &["mix"]), None);
    // every text that speaks of the cast tells it too
    let folder = Folder::usual();
    std::fs::write(folder.path().join("tailwater.csv"), tailwater(&days, 25.0)).unwrap();
    for task in [&["pool"][..], &["mix"], &["rank", "--release", "30", "--step", "20%"], &["river"]] {
        let text = run(&[&[task[0], folder.named()], &task[1..]].concat()).out;
        assert_eq!(text.matches("tailwater.csv has a mean").count(), 1, "{task:?}: {text}");
    }
}

#[test]
fn scenario_a_pool_above_full_and_a_cast_that_ends_early_are_flagged() {
    let high = with(SITE, "full: 62", "full: 58");
    let high = mix(&high, CAST, &[]);
    assert!(said(&high["profile"]["flags"], "pool-above-full").is_some());
    let short = mix(SITE, &with(CAST, "45,6.5,4.5\n59,6.2,3.5\n", ""), &[]);
    assert!(said(&short["profile"]["flags"], "extrapolated").unwrap().contains("30.0 m"));
    let whole = mix(SITE, CAST, &[]);
    for kind in ["pool-above-full", "extrapolated"] {
        assert_eq!(said(&whole["profile"]["flags"], kind), None);
    }
}

#[test]
fn scenario_volumes_at_odds_with_areas_are_flagged_by_check() {
    let site = with(SITE, "[40, 5.0e6, 9.0e7]", "[40, 5.0e6, 12.0e7]");
    let folder = Folder::new(&site, &[("a.csv", CAST.as_bytes())]);
    let run = run(&["check", folder.named()]);
    assert!(run.code == Some(0) && run.out.contains("pool.table[2]"), "{}", run.out);
}

#[test]
fn scenario_more_heat_than_weather_brings_is_flagged_and_part_of_the_fingerprint() {
    let before = |degrees: &str| {
        let cast = with(CAST, "2025-07-14", "2025-07-12");
        let cast = ["22.0", "21.8", "18.0", "12.5", "9.5", "7.5", "6.5", "6.2"]
            .iter()
            .fold(cast, |cast, t| with(&cast, &format!(",{t},"), &format!(",{degrees},")));
        let folder = Folder::new(SITE, &[("a.csv", cast.as_bytes()), ("b.csv", CAST.as_bytes())]);
        run(&["pool", folder.named(), "--json"]).json()
    };
    // the pool's mean is 13 C; 10 C two days before is some 1900 W/m2 over 26 m of mean depth
    let (cold, same) = (before("10"), before("13.3"));
    assert!(said(&cold["profile"]["flags"], "heat-change").unwrap().contains('+'));
    assert_eq!(said(&same["profile"]["flags"], "heat-change"), None);
    assert_ne!(cold["fingerprint"], same["fingerprint"], "an input that decides a flag is fingerprinted");
}

#[test]
fn scenario_an_unreadable_cast_is_told_at_the_head_and_by_name() {
    let broken = ("z.csv", &b"depth_m,temp\n1,20\n"[..]);
    let folder = Folder::new(SITE, &[("a.csv", CAST.as_bytes()), broken]);
    let run = run(&["mix", folder.named()]);
    let head: Vec<&str> = run.out.lines().take(5).collect();
    assert!(head.iter().any(|l| l.contains("cannot be read")), "{head:?}");
    assert!(run.out.replace('\n', " ").contains("z.csv"), "{}", run.out);
}

#[test]
fn scenario_cold_water_of_a_pool_with_only_a_crest_is_what_the_crest_reaches() {
    let outlets = "outlets:\n  - { name: Crest, kind: crest, gated: true, centre: 50, width: 20 }\nrelease: { min: 5 }\n";
    let (head, rest) = SITE.split_once("outlets:\n").unwrap();
    let (_, tail) = rest.split_once("now: { N1: 30, Sluice: 5 }\n").unwrap();
    let site = format!("{head}{outlets}{tail}");
    let folder = Folder::new(&site, &[("a.csv", CAST.as_bytes())]);
    let pool = run(&["pool", folder.named(), "--json"]).json();
    let mix = run(&["mix", folder.named(), "--json", "--set", "Crest=5"]).json();
    assert_eq!(pool["cold_water_above_m"], mix["levels"][0]["zone"]["lower_m"]);
}
