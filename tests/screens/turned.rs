//! The number on the log screen is the number of the command: a past with casts, decisions and a gauge of its own.

use std::fmt::Write as _;
use std::fs;

use gatemix::tasks::Asked;
use gatemix::tui::model::Likes;
use gatemix::units::System;
use serde_json::Value;

use crate::driver::Driver;
use crate::numbers::{ON, Shown, answer_of, holds, line};
use crate::record::log_lines;
use crate::sites::{CAST, SITE, ground, site, with};

/// Sixteen days of a gauge, by the hour, over a decision of two weeks.
fn recorded(name: &str) -> String {
    let early = with(CAST, "2026-07-13", "2026-05-02");
    let named = site(name, SITE, &[("2026-05-02.csv", &early), ("2026-07-13.csv", CAST)]);
    let mut record = "time,temperature_C,oxygen_mg_l\n".to_owned();
    for day in 5..=20 {
        for hour in 0..24 {
            let warm = 14.0 + 0.05 * f64::from(day);
            writeln!(record, "2026-05-{day:02}T{hour:02}:00,{warm:.2},7.20").unwrap();
        }
    }
    for (file, text) in [("tailwater.csv", record), ("log.jsonl", log_lines())] {
        let path = ground().join(&named).join(file);
        if fs::read_to_string(&path).ok().as_ref() != Some(&text) {
            fs::write(path, text).unwrap();
        }
    }
    named
}

fn compare(system: System, name: &str) {
    let asked = Asked { site: Some(recorded(name)), on: Some(ON.to_owned()), ..Asked::default() };
    let likes = Likes { units: Some(system), ..Likes::default() };
    let mut driver = Driver::asked(asked, likes, (150, 60));
    let shown = Shown(system);
    driver.keys("6").keys("Home ]");
    let answer = answer_of(&driver, "log", name, &[]);
    let past = &answer["past"];
    let text = driver.text();
    let difference = |v: &Value| {
        let c = v.as_f64().unwrap();
        let degrees = if shown.is_us() { 1.8 * c } else { c };
        format!("{degrees:+.1} {}", shown.degrees())
    };
    // the whole past
    let all = &past["scores"]["temperature"]["all"];
    let n = all["n"].as_u64().unwrap();
    assert!(n >= 10, "{past}");
    let scored = [
        format!("release: {n} days, bias {}", difference(&all["bias"])),
        format!("{}/{} in band", all["inside"], all["with_band"]),
    ];
    holds(text.lines().nth(3).unwrap(), &scored);
    // the day read
    let date = driver.session().log.day.unwrap().to_string();
    let day = past["days"].as_array().unwrap().iter().find(|day| day["date"] == date.as_str()).unwrap();
    let degrees = |v: &Value| format!("{} {}", shown.temperature(v), shown.degrees());
    let joined = text.split_whitespace().collect::<Vec<_>>().join(" ");
    let off = day["measured_c"].as_f64().unwrap() - day["expected_c"].as_f64().unwrap();
    let band = &day["band_c"];
    holds(
        &joined,
        &[
            format!(
                "expected {} [{} to {}]",
                degrees(&day["expected_c"]),
                shown.temperature(&band[0]),
                degrees(&band[1])
            ),
            format!("gauge {}", degrees(&day["measured_c"])),
            format!("difference {}", difference(&off.into())),
        ],
    );
    // each decision
    for turned in past["decisions"].as_array().unwrap() {
        let at = &turned["places"][0]["temperature"];
        let row = line(&text, &format!("{}  2026", turned["decision"]));
        match at["bias"].as_f64() {
            Some(_) => {
                holds(row, &[difference(&at["bias"]), format!("{}/{}", at["inside"], at["with_band"])]);
            }
            None => holds(row, &["no gauge".to_owned()]),
        }
    }
}

#[test]
fn law_the_past_on_the_screen_is_that_of_the_command() {
    compare(System::Si, "turned-si");
}

#[test]
fn law_the_past_on_the_screen_is_that_of_the_command_in_us_units() {
    compare(System::Us, "turned-us");
}
