//! The number on the screen is the number of the command: both are driven, and the digits shown are compared.

use std::process::Command;

use gatemix::tasks::Asked;
use gatemix::tui::model::Likes;
use gatemix::units::System;
use serde_json::Value;

use crate::driver::Driver;
use crate::sites::{ground, usual};

pub(crate) const ON: &str = "2026-07-14 11:30";
/// The screen the numbers are read from.
const SIZE: (u16, u16) = (120, 50);

/// The answer of a command to what stands on the screens.
fn answer(driver: &Driver, task: &str, words: &[String]) -> Value {
    answer_of(driver, task, "numbers", words)
}

/// The same of a site by its name.
pub(crate) fn answer_of(driver: &Driver, task: &str, site: &str, words: &[String]) -> Value {
    let session = driver.session();
    let changed = &session.draft().changed;
    let on = changed.on.unwrap_or(session.base.on).format("%Y-%m-%d %H:%M").to_string();
    let mut command = Command::new(env!("CARGO_BIN_EXE_gatemix"));
    command.current_dir(ground()).args([task, site, "--json", "--on", &on]).args(words);
    if let Some(pool_m) = changed.pool_m {
        command.args(["--pool", &format!("{pool_m}m")]);
    }
    let output = command.output().unwrap();
    assert!(output.status.success(), "{command:?}: {}", String::from_utf8_lossy(&output.stderr));
    serde_json::from_slice(&output.stdout).unwrap()
}

/// The setting on the board, as it is typed to the command.
pub(crate) fn typed(driver: &Driver) -> Vec<String> {
    let (site, draft) = (driver.session().base.site(), driver.session().draft());
    let given = draft.tried().unwrap();
    let mut words = Vec::new();
    for gate in &given.flows {
        let opening = gate.opening.map_or_else(String::new, |o| format!("@{}%", 100.0 * o));
        words.push(format!("--set={}={}m3/s{opening}", site.outlets[gate.outlet].name, gate.flow_m3s));
    }
    for (outlet, opening) in &given.open {
        words.push(format!("--open={}={}%", site.outlets[*outlet].name, 100.0 * opening));
    }
    for (well, flow_m3s) in given.totals.iter().filter(|t| t.1 > 0.0) {
        words.push(format!("--set={}={flow_m3s}m3/s", site.wells[*well].name));
    }
    words
}

/// How numbers are shown, worked out here on their own.
pub(crate) struct Shown(pub(crate) System);

impl Shown {
    pub(crate) fn is_us(&self) -> bool {
        self.0 == System::Us
    }

    pub(crate) fn temperature(&self, value: &Value) -> String {
        let c = value.as_f64().unwrap();
        format!("{:.1}", if self.is_us() { 1.8 * c + 32.0 } else { c })
    }

    pub(crate) fn degrees(&self) -> &'static str {
        if self.is_us() { "F" } else { "C" }
    }

    pub(crate) fn oxygen(value: &Value) -> String {
        format!("{:.1}", value.as_f64().unwrap())
    }

    pub(crate) fn length(&self, value: &Value) -> String {
        let m = value.as_f64().unwrap();
        if self.is_us() { format!("{:.1} ft", m / 0.3048) } else { format!("{m:.1} m") }
    }

    /// Flows here stay below a thousand, so nothing is grouped.
    pub(crate) fn flow(&self, value: &Value) -> String {
        let m3s = value.as_f64().unwrap();
        if self.is_us() { format!("{:.0}", m3s / 0.3048_f64.powi(3)) } else { format!("{m3s:.1}") }
    }
}

/// A line that begins with a word, after marks.
pub(crate) fn line<'a>(text: &'a str, word: &str) -> &'a str {
    let begins = |l: &&str| l.trim_start_matches(['>', ' ']).starts_with(word);
    text.lines().find(begins).unwrap_or_else(|| panic!("no line begins with {word}:\n{text}"))
}

pub(crate) fn holds(line: &str, pieces: &[String]) {
    for piece in pieces {
        assert!(line.contains(piece.as_str()), "`{piece}` is not in `{line}`");
    }
}

fn gauges(shown: &Shown, release: &Value) -> [String; 2] {
    let of = |v: &Value| shown.temperature(v);
    let band = &release["band_c"];
    let temperature = format!(
        "{} {} ({} to {})",
        of(&release["temperature_c"]),
        shown.degrees(),
        of(&band[0]),
        of(&band[1])
    );
    let band = &release["band_oxygen_mg_l"];
    let oxygen = format!(
        "{} mg/L ({} to {})",
        Shown::oxygen(&release["oxygen_mg_l"]),
        Shown::oxygen(&band[0]),
        Shown::oxygen(&band[1])
    );
    [temperature, oxygen]
}

/// Holds every screen against its command.
fn compare(driver: &mut Driver, shown: &Shown) {
    mix(driver, shown);
    rank(driver, shown);
    pool(driver, shown);
}

fn mix(driver: &mut Driver, shown: &Shown) {
    driver.keys("2");
    let text = driver.text();
    let answer = answer(driver, "mix", &typed(driver));
    // temperature and picture on the left, oxygen and board on the right
    let half = usize::from(SIZE.0 / 2);
    let part = |from: usize| {
        let cells = |l: &str| l.chars().skip(from).take(half).collect::<String>();
        text.lines().map(cells).collect::<Vec<_>>().join("\n")
    };
    let (left, board) = (part(0), part(half));
    let mut releases = vec![("tried", &answer["release"])];
    releases.extend(Some(("now", &answer["now"]["release"])).filter(|r| !r.1.is_null()));
    for (word, release) in releases {
        let [temperature, oxygen] = gauges(shown, release);
        holds(line(&left, word), &[temperature]);
        holds(line(&board, word), &[oxygen]);
    }
    for (name, flow) in answer["set"].as_object().unwrap() {
        holds(line(&board, name), &[format!(" {}", shown.flow(flow))]);
    }
}

fn rank(driver: &mut Driver, shown: &Shown) {
    let release = driver.session().draft().release_m3s;
    let words: Vec<String> = release.map(|flow| format!("--release={flow}m3/s")).into_iter().collect();
    let answer = answer(driver, "rank", &words);
    let range = &answer["attainable_c"];
    let attainable =
        format!("{} to {} {}", shown.temperature(&range[0]), shown.temperature(&range[1]), shown.degrees());
    let text = driver.keys("2").text();
    holds(line(&text, "attainable"), &[attainable]);
    let text = driver.keys("3").text();
    // below the tabs, which are numbered too
    let list = text.lines().skip(3).collect::<Vec<_>>().join("\n");
    let mixes = answer["mixes"].as_array().unwrap();
    assert_eq!(driver.session().ranked.as_ref().unwrap().answer.mixes.len(), mixes.len());
    for (mix, number) in mixes.iter().zip(1..).take(3) {
        let release = &mix["release"];
        let band = &release["band_c"];
        let figures = format!(
            "{} {}-{} {}",
            shown.temperature(&release["temperature_c"]),
            shown.temperature(&band[0]),
            shown.temperature(&band[1]),
            Shown::oxygen(&release["oxygen_mg_l"])
        );
        let share = format!(" {:.0}%", 100.0 * mix["share_inside_both"].as_f64().unwrap());
        let row = line(&list, &format!("{number} "));
        holds(&row.split_whitespace().collect::<Vec<_>>().join(" "), &[figures, share]);
    }
}

fn pool(driver: &mut Driver, shown: &Shown) {
    let text = driver.keys("1").text();
    let answer = answer(driver, "pool", &[]);
    let layering = &answer["layering"];
    let joined: String = text.split_whitespace().collect::<Vec<_>>().join(" ");
    let temperature = |v: &Value| format!("{} {}", shown.temperature(v), shown.degrees());
    holds(
        &joined,
        &[
            format!("Surface {}", temperature(&layering["surface_c"])),
            format!("Thermocline at {}", shown.length(&layering["thermocline_m"])),
            format!("pool {}", shown.length(&answer["profile"]["pool_m"])),
        ],
    );
    for outlet in answer["outlets"].as_array().unwrap() {
        let above = shown.length(&outlet["submergence_m"]);
        let above = above.split(' ').next().unwrap();
        let name = outlet["name"].as_str().unwrap();
        let told = text.lines().any(|l| l.contains(name) && l.contains(above));
        assert!(told, "{name} {above}:\n{text}");
    }
}

fn evening(system: System) {
    let named = usual("numbers");
    let asked = Asked { site: Some(named), on: Some(ON.to_owned()), ..Asked::default() };
    let likes = Likes { units: Some(system), ..Likes::default() };
    let mut driver = Driver::asked(asked, likes, SIZE);
    let shown = Shown(system);
    compare(&mut driver, &shown);
    let first = answer(&driver, "mix", &typed(&driver));
    // a flow: the lower gate of the tower
    driver.keys("2 Down Right Enter").typed("15m3/s").keys("Enter");
    assert_eq!(driver.session().draft().tried().unwrap().flows.len(), 3, "{}", driver.text());
    compare(&mut driver, &shown);
    // another pool
    driver.keys("2 Down Down Down Down Enter").typed("58.5m").keys("Enter");
    assert!(driver.session().draft().changed.pool_m.is_some(), "{}", driver.text());
    compare(&mut driver, &shown);
    // another date
    driver.keys("2 Down Enter").typed("2026-08-20 09:00").keys("Enter");
    assert!(driver.session().draft().changed.on.is_some(), "{}", driver.text());
    compare(&mut driver, &shown);
    // the second mix of the ranking
    driver.keys("3 Down Enter");
    compare(&mut driver, &shown);
    let last = answer(&driver, "mix", &typed(&driver));
    assert_ne!(first["release"], last["release"], "the evening changed nothing");
    // another total, nudged
    driver.keys("2 Up Up + +");
    assert!(driver.session().draft().release_m3s.is_some(), "{}", driver.text());
    compare(&mut driver, &shown);
}

#[test]
fn law_the_number_on_the_screen_is_the_number_of_the_command_in_si() {
    evening(System::Si);
}

#[test]
fn law_the_number_on_the_screen_is_the_number_of_the_command_in_us_units() {
    evening(System::Us);
}
