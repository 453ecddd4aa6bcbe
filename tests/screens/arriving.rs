//! The number on the river screen is the number of the command: places, windows, standings, days.

use gatemix::tasks::Asked;
use gatemix::tui::model::Likes;
use gatemix::units::System;
use serde_json::Value;

use crate::downstream::river;
use crate::driver::Driver;
use crate::numbers::{ON, Shown, answer_of, holds, line, typed};

/// High and wide enough for every row.
const SIZE: (u16, u16) = (150, 160);
/// Column from which the places stand.
const PLACES: usize = 90;

/// Whole screen in one line, blanks single.
fn joined(text: &str) -> String {
    text.split_whitespace().collect::<Vec<_>>().join(" ")
}

/// Holds the river screen against the command on a site.
fn compare(driver: &mut Driver, shown: &Shown, site: &str) -> Value {
    let text = driver.keys("4").text();
    let answer = answer_of(driver, "river", site, &typed(driver));
    let right: Vec<String> = text.lines().map(|l| l.chars().skip(PLACES).collect()).collect();
    let right = right.join("\n");
    places(&right, shown, &answer);
    windows(&joined(&right), shown, &answer);
    let page: String =
        text.lines().skip_while(|l| !l.starts_with("Rules today")).collect::<Vec<_>>().join(" ");
    assert!(!page.contains("PgDn"), "{text}");
    standings(&joined(&page), shown, &answer);
    days(&driver.keys("d").text(), shown, &answer);
    driver.keys("d");
    answer
}

fn letter(of: &Value) -> char {
    of.as_str().unwrap().to_uppercase().chars().next().unwrap()
}

fn places(right: &str, shown: &Shown, answer: &Value) {
    let degrees = |v: &Value| {
        if v.is_null() { "-".into() } else { format!("{} {}", shown.temperature(v), shown.degrees()) }
    };
    let air = |v: &Value| if v.is_null() { "-".into() } else { format!("{} mg/L", Shown::oxygen(v)) };
    let hours = |v: &Value| format!("{:.1} h", v.as_f64().unwrap());
    let points = |of: &Value| of["points"].as_array().unwrap().clone();
    for (word, key) in [("water", "travel_h"), ("rise from", "rise_first_h"), ("rise bulk", "rise_h")] {
        let cells: Vec<String> = points(answer).iter().map(|p| hours(&p[key])).collect();
        in_order(line(right, word), &cells);
    }
    for way in answer["releases"].as_array().unwrap() {
        let letter = letter(&way["of"]);
        let row = |word: &str, dam: &str, point: &str, say: &dyn Fn(&Value) -> String| {
            let mut cells = vec![say(&way[dam])];
            cells.extend(points(way).iter().map(|p| say(&p[point])));
            in_order(line(right, &format!("{letter} {word}")), &cells);
        };
        row("mean", "temperature_c", "temperature_c", &degrees);
        row("oxygen", "oxygen_mg_l", "oxygen_mg_l", &air);
        let band = |v: &Value| format!("{} to {}", shown.temperature(&v[0]), shown.temperature(&v[1]));
        row("10-90 %", "band_c", "band_c", &band);
        let greatest = points(way).iter().map(|p| degrees(&p["temperature_max_c"])).collect::<Vec<_>>();
        in_order(line(right, &format!("{letter} greatest")), &greatest);
    }
    // the difference is that of the figures in full, not of those shown
    let of = |which: &str| answer["releases"].as_array().unwrap().iter().find(|w| w["of"] == which);
    if let Some((tried, now)) = of("tried").zip(of("now")) {
        let all = |w: &Value| [vec![w.clone()], points(w)].concat();
        let by = |(t, n): (&Value, &Value)| {
            let c = t["temperature_c"].as_f64().unwrap() - n["temperature_c"].as_f64().unwrap();
            let by = if shown.is_us() { 1.8 * c } else { c };
            if by.abs() < 0.05 { "0.0".to_owned() } else { format!("{by:+.1}") }
        };
        let cells: Vec<String> = all(tried).iter().zip(&all(now)).map(by).collect();
        in_order(line(right, "T less N"), &cells);
    }
}

/// Every piece, one after the other.
fn in_order(line: &str, pieces: &[String]) {
    let mut rest = line;
    for piece in pieces {
        let at =
            rest.find(piece.as_str()).unwrap_or_else(|| panic!("`{piece}` is not in `{rest}` of `{line}`"));
        rest = &rest[at + piece.len()..];
    }
}

fn windows(right: &str, shown: &Shown, answer: &Value) {
    for window in answer["release_window"].as_array().unwrap() {
        let name = window["point"].as_str().unwrap();
        let degrees = shown.degrees();
        let warm = match (&window["low_c"], &window["high_c"]) {
            _ if window["reachable"] == false => "OUT OF REACH".to_owned(),
            (Value::Null, Value::Null) => String::new(),
            (low, Value::Null) => format!("from {} {degrees}", shown.temperature(low)),
            (Value::Null, high) => format!("to {} {degrees}", shown.temperature(high)),
            (low, high) => format!("{} to {} {degrees}", shown.temperature(low), shown.temperature(high)),
        };
        holds(right, &[format!("{name} needs {warm}").trim_end().to_owned()]);
        let told = right.split(&format!("{name} needs ")).nth(1).unwrap();
        let told = told.split(" needs ").next().unwrap();
        match window["oxygen_min_mg_l"].as_f64() {
            Some(least) if least >= 0.05 => holds(told, &[format!("oxygen from {least:.1} mg/L")]),
            Some(_) => holds(told, &["any oxygen".to_owned()]),
            None => assert!(!told.contains("oxygen from"), "{told}"),
        }
    }
}

/// What is outside and by how much, else inside or unknown.
fn short(shown: &Shown, target: &Value) -> String {
    let outside = |v: &Value| v == "above" || v == "below";
    let mut out = Vec::new();
    let by = |word: &Value, by: f64, unit: &str| {
        let word = word.as_str().unwrap().to_uppercase();
        if by < 0.05 {
            format!("{word} by less than 0.1 {unit}")
        } else {
            format!("{word} by {by:.1} {unit}")
        }
    };
    if outside(&target["standing"]) {
        let c = target["by_c"].as_f64().unwrap();
        out.push(by(&target["standing"], if shown.is_us() { 1.8 * c } else { c }, shown.degrees()));
    }
    if outside(&target["oxygen_standing"]) {
        let mg_l = target["oxygen_by_mg_l"].as_f64().unwrap();
        out.push(format!("oxygen {}", by(&target["oxygen_standing"], mg_l, "mg/L")));
    }
    let bounds = |keys: [&str; 2]| keys.iter().any(|key| !target[*key].is_null());
    let unknown = (bounds(["low_c", "high_c"]) && target["standing"] == "unknown")
        || (bounds(["oxygen_min_mg_l", "oxygen_min_percent"]) && target["oxygen_standing"] == "unknown");
    match (out.is_empty(), unknown) {
        (true, true) => "UNKNOWN".to_owned(),
        (true, false) => "inside".to_owned(),
        (false, _) => out.join(", "),
    }
}

fn standings(page: &str, shown: &Shown, answer: &Value) {
    let mut held = 0;
    for way in answer["releases"].as_array().unwrap() {
        let places = [vec![way.clone()], way["points"].as_array().unwrap().clone()].concat();
        for target in places.iter().flat_map(|p| p["targets"].as_array().unwrap()) {
            let (name, point) = (target["name"].as_str().unwrap(), target["point"].as_str().unwrap());
            let head = format!("{name} at {point}");
            let told = page.split(&head).nth(1).unwrap_or_else(|| panic!("{head} is not in {page}"));
            let stands = format!("{} {}", letter(&way["of"]), short(shown, target));
            let line: String = told.chars().take(stands.len() + 120).collect();
            holds(&line, &[stands]);
            held += 1;
        }
    }
    assert!(held >= 4, "{answer}");
}

fn days(text: &str, shown: &Shown, answer: &Value) {
    for day in answer["days"].as_array().unwrap() {
        let date = day["date"].as_str().unwrap();
        let row =
            text.lines().find(|l| l.starts_with(&date[5..])).unwrap_or_else(|| panic!("{date}:\n{text}"));
        let arrives = day["arrives"].as_array().unwrap();
        let points: Vec<&Value> = answer["points"].as_array().unwrap().iter().map(|p| &p["name"]).collect();
        // by point on the screen, by release in the answer
        let cells = points.iter().flat_map(|p| arrives.iter().filter(move |a| a["point"] == **p));
        let cell = |a: &Value| match &a["temperature_max_c"] {
            Value::Null => shown.temperature(&a["temperature_c"]),
            greatest => {
                format!("{} ({})", shown.temperature(&a["temperature_c"]), shown.temperature(greatest))
            }
        };
        in_order(row, &cells.map(cell).collect::<Vec<_>>());
    }
}

fn opened(named: &str, on: Option<&str>, system: System) -> Driver {
    let asked = Asked { site: Some(named.to_owned()), on: on.map(str::to_owned), ..Asked::default() };
    Driver::asked(asked, Likes { units: Some(system), ..Likes::default() }, SIZE)
}

fn evening(system: System) {
    let shown = Shown(system);
    let named = river("numbers-river", &[]);
    let mut driver = opened(&named, Some(ON), system);
    let first = compare(&mut driver, &shown, &named);
    assert_eq!(first["of"], "now");
    // a flow: the lower gate of the tower
    driver.keys("2 Down Right Enter").typed("15m3/s").keys("Enter");
    let tried = compare(&mut driver, &shown, &named);
    assert_eq!(tried["of"], "tried");
    assert_ne!(first["points"], tried["points"]);
    // another pool
    driver.keys("2 Down Down Down Down Enter").typed("58.5m").keys("Enter");
    assert!(driver.session().draft().changed.pool_m.is_some(), "{}", driver.text());
    let lower = compare(&mut driver, &shown, &named);
    assert_ne!(lower["points"], tried["points"]);
    // another date
    driver.keys("2 Down Enter").typed("2026-08-20 09:00").keys("Enter");
    assert!(driver.session().draft().changed.on.is_some(), "{}", driver.text());
    compare(&mut driver, &shown, &named);
    // a rule of a point, tried here and written into another file there
    driver.keys("4 Home Up Up Up Right Right Enter").typed("12.5C").keys("Enter");
    assert_eq!(driver.session().context().site().targets[0].high_c, Some(12.5), "{}", driver.text());
    let ruled = river("numbers-river-ruled", &[("low: 8, high: 15", "low: 8, high: 12.5")]);
    let answer = compare(&mut driver, &shown, &ruled);
    assert_ne!(answer["release_window"], lower["release_window"]);
}

#[test]
fn law_the_number_on_the_river_screen_is_the_number_of_the_command_in_si() {
    evening(System::Si);
}

#[test]
fn law_the_number_on_the_river_screen_is_the_number_of_the_command_in_us_units() {
    evening(System::Us);
}

#[test]
fn law_the_same_of_a_river_told_by_the_hour() {
    for system in [System::Si, System::Us] {
        let mut driver = opened("sorrel", None, system);
        compare(&mut driver, &Shown(system), "sorrel");
        driver.keys("2 Down Down Enter").typed("2.5m3/s").keys("Enter");
        let answer = compare(&mut driver, &Shown(system), "sorrel");
        assert!(answer["points"][0]["temperature_max_c"].is_f64());
    }
}
