//! What happened, by the built program: a past made by hand, whose days, scores and causes are known.

use std::f64::consts::PI;
use std::fmt::Write as _;
use std::fs;

use approx::assert_abs_diff_eq;
use serde_json::Value;

use crate::river::{list, named, number};
use crate::{CAST, Folder, SITE, run, with};

/// What was set up to the 18th, and from the 19th on.
const BEFORE: [&str; 2] = ["N1=30", "Sluice=5"];
const AFTER: [&str; 2] = ["N1=20", "Sluice=15"];
/// Days of July with the error of the gauge, C; on the 23rd to 25th the sluice stood shut, which nobody wrote down.
const ERRORS: [(u32, f64); 12] = [
    (15, 0.2),
    (16, -0.2),
    (17, 0.3),
    (18, 0.1),
    (19, 0.4),
    (20, 0.1),
    (21, -0.1),
    (22, 0.1),
    (23, 0.0),
    (24, 0.0),
    (25, 0.0),
    (26, 0.1),
];

/// Release of a setting on the cast, as `mix` tells it.
fn release(folder: &Folder, set: &[&str]) -> f64 {
    let set: Vec<&str> = set.iter().flat_map(|gate| ["--set", gate]).collect();
    let cast = ["mix", folder.named(), "--profile", "2025-07-14.csv", "--json"];
    number(&run(&[&cast[..], &set].concat()).json()["release"]["temperature_c"])
}

/// Two casts of one water, the gauge of the days between them.
pub(crate) fn folder() -> (Folder, [f64; 3]) {
    let later = with(CAST, "2025-07-14", "2025-07-28");
    let air =
        "season: { layer: 4, decide_days: 14, monthly: { air: 20, humidity: 60, wind: 2.5, cloud: 40 } }\n";
    let casts = [("2025-07-14.csv", CAST.as_bytes()), ("2025-07-28.csv", later.as_bytes())];
    let folder = Folder::new(&format!("{SITE}{air}"), &casts);
    let releases = [&BEFORE[..], &AFTER, &["N1=35"]].map(|set| release(&folder, set));
    let mut text = String::from("time,temperature_C\n");
    for (day, error) in ERRORS {
        let of = match day {
            23..=25 => 2,
            19.. => 1,
            _ => 0,
        };
        for hour in 0..24 {
            let of_day = 0.15 * (f64::from(hour) / 12.0 * PI).sin();
            let reading = releases[of] + error + of_day;
            writeln!(text, "2025-07-{day}T{hour:02}:00,{reading:.4}").unwrap();
        }
    }
    fs::write(folder.path().join("tailwater.csv"), text).unwrap();
    (folder, releases)
}

fn put(folder: &Folder, below: &str, text: &str) {
    fs::create_dir(folder.path().join(below)).unwrap();
    fs::write(folder.path().join(below).join("past.csv"), text).unwrap();
}

fn log(folder: &Folder, more: &[&str]) -> crate::Run {
    run(&[&["log", folder.named()], more].concat())
}

fn left_out(past: &Value) -> Vec<(&str, &str)> {
    list(&past["left_out"])
        .iter()
        .map(|left| (left["date"].as_str().unwrap(), left["why"].as_str().unwrap()))
        .collect()
}

#[test]
fn published_a_past_by_hand() {
    let (folder, [before, after, shut]) = folder();
    put(
        &folder,
        "plans",
        "date,pool_m,inflow_m3s,inflow_temperature_C\n2025-07-14,60,35,15\n2025-07-27,60,35,15\n",
    );
    put(&folder, "schedules", "date,N1,Sluice\n2025-07-14,30,5\n2025-07-17,31,5\n2025-07-19,20,15\n");
    let event = ["--event", "meter fault", "--by", "C. Crew", "--from", "2025-07-18"];
    assert_eq!(log(&folder, &event).code, Some(0));
    let first = log(&folder, &["--json"]);
    assert_eq!(first.out, log(&folder, &["--json"]).out, "the same twice");
    let told = first.json();
    let past = &told["past"];
    assert_eq!(list(&past["days"]).len(), 14);
    assert_eq!(
        left_out(past),
        [
            ("2025-07-14", "the gauge has no valid mean of the day"),
            ("2025-07-18", "unplanned event: meter fault"),
            ("2025-07-19", "the setting was changed that day"),
            ("2025-07-27", "the gauge has no valid mean of the day"),
        ]
    );
    // flows that drift by a thirtieth are no change, yet they are what was set
    let day = |date: &str| named(&past["days"], "date", date).clone();
    let drifted = number(&day("2025-07-17")["expected_c"]) - before;
    assert!(drifted.abs() > 1e-3 && drifted.abs() < 0.2, "{drifted}");
    assert_abs_diff_eq!(number(&day("2025-07-15")["expected_c"]), before, epsilon = 1e-9);
    // a day left out is shown all the same
    assert_abs_diff_eq!(number(&day("2025-07-19")["expected_c"]), after, epsilon = 1e-9);
    assert_abs_diff_eq!(number(&day("2025-07-19")["measured_c"]), after + 0.4, epsilon = 1e-3);
    let beside = shut - after;
    let errors = [0.2, -0.2, 0.3 - drifted, 0.1, -0.1, 0.1, beside, beside, beside, 0.1];
    let all = &past["scores"]["temperature"]["all"];
    assert_eq!(all["n"], 10);
    assert_abs_diff_eq!(number(&all["bias"]), errors.iter().sum::<f64>() / 10.0, epsilon = 1e-4);
    let squares = errors.iter().map(|e| e * e).sum::<f64>();
    assert_abs_diff_eq!(number(&all["rmse"]), (squares / 10.0).sqrt(), epsilon = 1e-4);
    assert_eq!((&all["with_band"], &all["inside"]), (&10.into(), &7.into()));
    assert_eq!(past["scores"]["oxygen"]["all"]["n"], 0);
    // the three days on which the sluice stood shut
    let spells = list(&past["spells"]);
    assert_eq!(spells.len(), 1, "{spells:?}");
    assert_eq!((&spells[0]["from"], &spells[0]["to"]), (&"2025-07-23".into(), &"2025-07-25".into()));
    let causes = list(&spells[0]["causes"]);
    assert_eq!(causes.len(), 6);
    assert_eq!(causes[0]["name"], "gate not where the log says");
    assert!(
        causes[0]["speaks_for"][0].as_str().unwrap().starts_with("with Sluice shut the release comes to")
    );
    // the season gone through again: whoever sees all that comes does no worse
    let hindcast = &past["hindcast"];
    assert_eq!((&hindcast["from"], &hindcast["to"]), (&"2025-07-14".into(), &"2025-07-27".into()));
    let outside = |of: &str| hindcast[of]["days_outside"].as_u64().unwrap();
    assert!(outside("hindsight") <= outside("as_set").min(outside("nothing")), "{hindcast}");
    assert_eq!(hindcast["observed"]["days_judged"], 12);
    let told = log(&folder, &[]).out;
    for words in
        ["What happened, 2025-07-14 to 2025-07-27: 10 of 14 days", "Outside the band", "gone through again"]
    {
        assert!(told.contains(words), "{words}: {told}");
    }
    assert!(told.lines().all(|line| line.chars().count() <= 80), "{told}");
}

#[test]
fn published_decisions_are_held_against_the_gauge_while_they_stood() {
    let (folder, [before, after, _]) = folder();
    let decide = |on: &str, set: &[&str]| {
        let set: Vec<&str> = set.iter().flat_map(|gate| ["--set", gate]).collect();
        let usual =
            ["--decide", "--by", "A. Crew", "--why", "holding", "--profile", "2025-07-14.csv", "--on", on];
        assert_eq!(log(&folder, &[&usual[..], &set].concat()).code, Some(0));
    };
    decide("2025-07-15T00:00", &BEFORE);
    decide("2025-07-19T10:00", &AFTER);
    // the same gates again are no change
    decide("2025-07-22T10:00", &AFTER);
    let told = log(&folder, &["--json"]).json();
    let past = &told["past"];
    assert_eq!(
        left_out(past),
        [
            ("2025-07-19", "the setting was changed that day"),
            ("2025-07-27", "the gauge has no valid mean of the day")
        ]
    );
    let decisions = list(&past["decisions"]);
    let of = |i: usize| {
        let dam = named(&decisions[i]["places"], "point", "dam");
        let days = [&decisions[i]["from"], &decisions[i]["to"]].map(|date| date.as_str().unwrap());
        (days, dam["temperature"]["n"].as_u64().unwrap(), number(&dam["temperature"]["bias"]))
    };
    let (days, n, bias) = of(0);
    assert_eq!((days, n), (["2025-07-15", "2025-07-18"], 4));
    assert_abs_diff_eq!(bias, 0.1, epsilon = 1e-4);
    let (days, n, bias) = of(1);
    assert_eq!((days, n), (["2025-07-19", "2025-07-21"], 2));
    assert_abs_diff_eq!(bias, 0.0, epsilon = 1e-4);
    let (days, n, _) = of(2);
    assert_eq!((days, n), (["2025-07-22", "2025-07-27"], 5));
    // what stood by the log is what is computed
    let day = |date: &str| named(&past["days"], "date", date).clone();
    assert_eq!((&day("2025-07-18")["decision"], &day("2025-07-20")["decision"]), (&1.into(), &2.into()));
    assert_abs_diff_eq!(number(&day("2025-07-18")["expected_c"]), before, epsilon = 1e-9);
    assert_abs_diff_eq!(number(&day("2025-07-20")["expected_c"]), after, epsilon = 1e-9);
    let none = past["no_hindcast"].as_str().unwrap();
    assert!(none.starts_with("no plan tells the inflow of") && none.contains("plans/past.csv"), "{none}");
    assert!(past["hindcast"].is_null());
    // what the site file applies of the learned is put to the days, and the scores stay as computed without it
    let text = fs::read_to_string(folder.site_file()).unwrap();
    let learned = "learned: { bias: 0.5, window: [2024-05-01, 2024-09-30], n: 40 }\n";
    fs::write(folder.site_file(), format!("{text}{learned}")).unwrap();
    let told = log(&folder, &["--json"]).json();
    assert_eq!(told["past"]["scores"]["temperature"], past["scores"]["temperature"]);
    assert_eq!(told["past"]["learning"], past["learning"]);
    let with = &told["past"]["scores"]["with_applied"]["temperature"];
    let without = &past["scores"]["temperature"]["all"];
    assert_abs_diff_eq!(number(&with["bias"]), number(&without["bias"]) - 0.5, epsilon = 1e-9);
    let day = named(&told["past"]["days"], "date", "2025-07-18").clone();
    assert_abs_diff_eq!(number(&day["plain_c"]), before, epsilon = 1e-9);
    assert_abs_diff_eq!(number(&day["expected_c"]), before + 0.5, epsilon = 1e-9);
    let middle = |band: &Value| 0.5 * (number(&band[0]) + number(&band[1]));
    let plain = named(&past["days"], "date", "2025-07-18").clone();
    assert_abs_diff_eq!(middle(&day["band_c"]), middle(&plain["band_c"]) + 0.5, epsilon = 1e-9);
}
