//! The number on the season screen is the number of the command: a date read, cases and plans side by side, the scenes.

use gatemix::tasks::Asked;
use gatemix::tui::model::Likes;
use gatemix::units::System;
use serde_json::Value;

use crate::downstream::river;
use crate::driver::Driver;
use crate::numbers::{ON, Shown, answer_of, holds};
use crate::screens::{EVERY, NORMAL, Scene};
use crate::sites::beside;

/// Two plans of six weeks, an earlier fall of the pool and a later one.
const PLANS: [(&str, &str); 2] = [
    (
        "plans/1-early.csv",
        "# name: early\ndate,release_m3s,inflow_m3s,inflow_temperature_C\n2026-07-14,28,10,14\n2026-08-20,15,10,15\n",
    ),
    (
        "plans/2-late.csv",
        "# name: late\ndate,release_m3s,inflow_m3s,inflow_temperature_C\n2026-07-14,15,10,14\n2026-08-20,28,10,15\n",
    ),
];

/// A site with a river and plans.
fn planned(name: &str) -> String {
    let named = river(name, &[]);
    beside(&named, &PLANS);
    named
}

/// The scenes.
pub(crate) fn scenes() -> Vec<Scene> {
    vec![Scene {
        name: "season",
        driver: Box::new(|| Driver::open(Some(&planned("season")), NORMAL)),
        steps: &[
            ("5", "the season"),
            ("] ] c", "a date read, in the next case"),
            ("x", "its oxygen"),
            ("x t", "seasons side by side"),
            ("g", "gates and moves by date"),
        ],
        sizes: &EVERY,
    }]
}

fn compare(system: System) {
    let asked = Asked { site: Some(planned("season-numbers")), on: Some(ON.to_owned()), ..Asked::default() };
    let likes = Likes { units: Some(system), ..Likes::default() };
    let mut driver = Driver::asked(asked, likes, (150, 60));
    let shown = Shown(system);
    driver.keys("5");
    driver.keys("] Right");
    let text = driver.text();
    let answer = answer_of(&driver, "season", "season-numbers", &[]);
    let date = driver.session().season.day.unwrap().to_string();
    let days = answer["days"].as_array().unwrap();
    let day = days.iter().find(|day| day["date"] == date.as_str()).unwrap();
    let joined = right(&text);
    let degrees = |v: &Value| format!("{} {}", shown.temperature(v), shown.degrees());
    let reached = answer["decisions"].as_array().unwrap().iter().rev();
    let reached = reached.filter(|on| on["date"].as_str() <= Some(date.as_str()));
    let within = reached.map(|on| &on["attainable_c"]).next().unwrap();
    holds(
        &joined,
        &[
            format!("{date} day 9 of {}", days.len()),
            format!("pool {}", shown.length(&day["pool_m"])),
            format!(
                "{}: {}, {} mg/L",
                shown.flow(&day["release"]["flow_m3s"]),
                degrees(&day["release"]["temperature_c"]),
                Shown::oxygen(&day["release"]["oxygen_below_mg_l"])
            )
            .replacen(':', if shown.is_us() { " cfs:" } else { " m3/s:" }, 1),
            format!("attainable {} to {}", shown.temperature(&within[0]), degrees(&within[1])),
            format!("{} gates moved", answer["moves"]),
        ],
    );
    left(&mut driver, &date, &shown);
    let table = driver.keys("t").text();
    let runs = answer["runs"].as_array().unwrap().iter().chain([&answer]);
    for run in runs {
        let name = ["plan", "case", "strategy"].map(|key| run[key].as_str().unwrap()).join(", ");
        let row = table.lines().find(|l| l.contains(&name)).unwrap_or_else(|| panic!("{name}:\n{table}"));
        // a mark may stand behind the days
        let outside = format!(" {} d", run["score"]["days_outside"]);
        assert!(row.contains(&outside) && row.ends_with(&format!(" {}", run["moves"])), "{row} {outside}");
    }
}

/// The cold water needed on the date read, against the command.
fn left(driver: &mut Driver, date: &str, shown: &Shown) {
    driver.keys("l");
    let words = ["--left".to_owned(), date.to_owned()];
    let answer = answer_of(driver, "season", "season-numbers", &words);
    let cases = answer["needed"]["cases"].as_array().unwrap();
    assert_eq!(cases.len(), 3, "{answer}");
    let joined = right(&driver.text());
    for case in cases {
        let m3 = case["needed"]["usable_m3"].as_f64().unwrap();
        let amount = if shown.is_us() { m3 / 1233.481_837_547_52 } else { m3 / 1e6 };
        let amount = if shown.is_us() { grouped(amount) } else { format!("{amount:.2} hm3") };
        holds(&joined, &[format!("- {}: {amount}", case["case"].as_str().unwrap())]);
    }
}

/// Acre-feet as they are shown.
fn grouped(acre_ft: f64) -> String {
    let digits = format!("{acre_ft:.0}");
    let (thousands, rest) = digits.split_at(digits.len() - 3);
    format!("{thousands},{rest} acre-ft")
}

/// The readout, which stands right of the pictures.
fn right(text: &str) -> String {
    let right: Vec<String> = text.lines().skip(3).map(|l| l.chars().skip(109).collect()).collect();
    right.join(" ").split_whitespace().collect::<Vec<_>>().join(" ")
}

#[test]
fn law_a_date_of_the_season_is_that_of_the_command() {
    compare(System::Si);
}

#[test]
fn law_a_date_of_the_season_is_that_of_the_command_in_us_units() {
    compare(System::Us);
}
