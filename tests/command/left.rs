//! `season --left`: how much cold water must be left on a date.

use std::fs;

use approx::assert_abs_diff_eq;
use serde_json::Value;

use crate::river::{list, named, number};
use crate::season::{season, usual};
use crate::{Run, run, with};

const ON: &str = "2025-07-14T10:30";

fn left(folder: &str, more: &[&str]) -> Run {
    run(&[&["season", folder, "--on", ON, "--left"], more].concat())
}

/// The text of an answer as one line.
fn unwrapped(run: &Run) -> String {
    run.out.split_whitespace().collect::<Vec<_>>().join(" ")
}

/// What every case of an answer keeps, whatever its figures.
fn is_sound(answer: &Value) {
    for case in list(&answer["needed"]["cases"]) {
        let (left, needed) = (&case["left"], &case["needed"]);
        if needed.is_null() {
            assert!(case["unknown"].is_string(), "{case}");
            continue;
        }
        assert!(case["unknown"].is_null(), "{case}");
        let spare = number(&left["usable_m3"]) - number(&needed["usable_m3"]);
        assert_abs_diff_eq!(number(&case["to_spare_m3"]), spare, epsilon = 1.0);
        let tried = list(&case["tried"]);
        let outside = |one: &Value| (one["days_not_reached"].as_u64(), one["days_outside"].as_u64());
        let fewest = tried.iter().map(outside).min().unwrap();
        assert_eq!(outside(needed), fewest, "{case}");
        assert_eq!(tried.iter().find(|one| outside(one) == fewest).unwrap(), needed, "the least of them");
        assert!(tried.contains(left));
        let remain: u64 = list(&case["remain"]).iter().map(|row| row["days"].as_u64().unwrap()).sum();
        assert_eq!(Some(remain), needed["days_outside"].as_u64());
        assert_eq!(case["enough"], remain == 0 && needed["days_not_reached"] == 0, "{case}");
        if !case["next_less"].is_null() {
            assert!(outside(&case["next_less"]) > fewest, "{case}");
        }
    }
}

#[test]
fn scenario_what_must_be_left_stands_beside_what_is_left_in_every_case() {
    let folder = usual();
    let answer = left(folder.named(), &["--json"]).json();
    is_sound(&answer);
    let needed = &answer["needed"];
    assert_eq!((&needed["date"], &needed["plan"]), (&"2025-08-01".into(), &"steady".into()));
    assert_abs_diff_eq!(number(&needed["threshold_c"]), 12.0);
    let cases: Vec<&str> = list(&needed["cases"]).iter().map(|c| c["case"].as_str().unwrap()).collect();
    assert_eq!(cases, ["middling", "warm", "cool"]);
    assert!(
        answer["caution"].as_str().unwrap().starts_with("Advisory") && !list(&answer["warnings"]).is_empty()
    );
    // the season as it is says the same of what is left on that day
    let as_it_is = season(&folder, &[]);
    let own = named(&as_it_is["left"], "date", "2025-08-01");
    let middling = &list(&needed["cases"])[0];
    assert_eq!(middling["left"]["usable_m3"], own["usable_m3"]);

    let text = left(folder.named(), &["2025-08-01"]);
    assert_eq!(text.code, Some(0), "{}", text.err);
    for case in list(&needed["cases"]) {
        let row =
            text.out.lines().find(|l| l.trim_start().starts_with(case["case"].as_str().unwrap())).unwrap();
        let hm3 = |of: &Value| format!("{:.2} hm3", number(&of["usable_m3"]) / 1e6);
        assert!(row.contains(&hm3(&case["left"])) && row.contains(&hm3(&case["needed"])), "{row} {case}");
        let spare = number(&case["to_spare_m3"]);
        assert!(row.contains(if spare < 0.0 { "short " } else { "spare " }), "{row}");
        assert!(row.contains(&format!("{} d", case["left"]["days_outside"])), "{row}");
    }
    assert!(text.out.lines().all(|line| line.chars().count() <= 80), "{}", text.out);
    for word in ["compliant", "legal", "acceptable", "probability", "chance"] {
        assert!(!text.out.contains(word), "{word}");
    }
    let customary = left(folder.named(), &["--units", "us"]).out;
    assert!(customary.contains("acre-ft") && !customary.contains("hm3"), "{customary}");
}

#[test]
fn scenario_days_that_no_amount_cures_are_told_by_name_and_date() {
    let folder = usual();
    let text = fs::read_to_string(folder.site_file()).unwrap();
    // no water of the pool comes up to it
    fs::write(folder.site_file(), with(&text, "low: 9, preferred: 12, high: 14", "low: 26, high: 28"))
        .unwrap();
    let answer = left(folder.named(), &["2025-08-20", "--json"]).json();
    is_sound(&answer);
    let case = &list(&answer["needed"]["cases"])[0];
    let rows: Vec<&Value> = list(&case["remain"]).iter().filter(|row| row["target"] == "holding").collect();
    assert_eq!(rows.len(), 1, "{case}");
    assert_eq!((&rows[0]["side"], &rows[0]["days"]), (&"below".into(), &6.into()));
    let told = unwrapped(&left(folder.named(), &["2025-08-20"]));
    assert!(told.contains("holding at dam below 08-21 to 08-26"), "{told}");
    assert!(told.contains("outside remain however much is left"), "{told}");
}

#[test]
fn scenario_a_date_that_is_none_and_one_outside_the_season() {
    let folder = usual();
    let soon = left(folder.named(), &["soon"]);
    assert!(soon.failed_with(2).contains("--left soon: give a date such as 2025-07-14"), "{soon:?}");
    for date in ["2025-07-13", "2025-08-26", "2026-08-01"] {
        let outside = left(folder.named(), &[date]);
        let told = outside.failed_with(3);
        assert!(
            told.contains(&format!("{date} is no day of the season, 2025-07-14 to 2025-08-26")),
            "{told}"
        );
        assert!(told.contains("give a day from 2025-07-14 on and before 2025-08-26"), "{told}");
    }
    for beside in [&["--csv"][..], &["--strict"], &["--learn"]] {
        left(folder.named(), beside).failed_with(2);
    }
    let text = fs::read_to_string(folder.site_file()).unwrap();
    fs::write(folder.site_file(), with(&text, "cold_water: [12]\n", "")).unwrap();
    let none = left(folder.named(), &[]);
    assert!(none.failed_with(3).contains("give `cold_water` in the site file"), "{none:?}");
}

/// A demonstration site, decided seldom to take less time: every case is told, and some lack what is needed.
fn demonstrated(site: &str, date: &str) {
    let answer = run(&["season", site, "--left", date, "--every", "70", "--json"]).json();
    is_sound(&answer);
    let cases = list(&answer["needed"]["cases"]);
    assert!(cases.len() == 3 && cases.iter().all(|case| case["needed"].is_object()));
    assert!(cases.iter().any(|case| number(&case["to_spare_m3"]) < 0.0));
}

#[test]
fn scenario_the_third_site_says_what_must_be_left() {
    demonstrated("tessel", "2026-09-20");
}

#[test]
fn scenario_the_first_site_says_what_must_be_left() {
    demonstrated("ashlar", "2026-10-10");
}

#[test]
fn scenario_where_no_cold_water_is_left_and_none_is_needed_that_is_told() {
    let folder = usual();
    let text = fs::read_to_string(folder.site_file()).unwrap();
    let text = with(&text, "cold_water: [12]", "cold_water: [4]");
    let text = with(&text, "low: 9, preferred: 12, high: 14", "low: 2, high: 29");
    fs::write(folder.site_file(), with(&text, "high: 15", "high: 35")).unwrap();
    let answer = left(folder.named(), &["2025-08-20", "--json"]).json();
    is_sound(&answer);
    for case in list(&answer["needed"]["cases"]) {
        assert_eq!((&case["needed"], &case["enough"]), (&case["left"], &true.into()), "{case}");
        assert_abs_diff_eq!(number(&case["needed"]["usable_m3"]), 0.0);
    }
    // nor less than all of it, where all of it is that cold
    fs::write(folder.site_file(), with(&text, "cold_water: [4]", "cold_water: [30]")).unwrap();
    let told = unwrapped(&left(folder.named(), &["2025-08-20"]));
    assert!(told.contains("all water of the pool is that cold on 2025-08-20"), "{told}");
}
