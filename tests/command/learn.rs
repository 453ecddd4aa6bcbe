//! `season --learn`: what nobody measures, learned from casts and the days between.

use std::fs;
use std::path::{Path, PathBuf};

use approx::assert_relative_eq;
use gatemix::files::folder::Folder as Opened;
use serde_json::Value;

use crate::river::{list, named, number};
use crate::{CAST, Folder, SITE, run, with};

/// The usual site with the same water on other days.
fn cast_on(days: &[&str]) -> Folder {
    let casts: Vec<(String, String)> =
        days.iter().map(|day| (format!("{day}.csv"), with(CAST, "2025-07-14", day))).collect();
    let bytes: Vec<(&str, &[u8])> =
        casts.iter().map(|(name, text)| (name.as_str(), text.as_bytes())).collect();
    let air = "season: { monthly: { air: 20, humidity: 60, wind: 2.5, cloud: 40 } }\n";
    Folder::new(&format!("{SITE}{air}"), &bytes)
}

fn put(folder: &Path, below: &str, name: &str, text: &str) {
    fs::create_dir_all(folder.join(below)).unwrap();
    fs::write(folder.join(below).join(name), text).unwrap();
}

fn learn(folder: &Folder, more: &[&str]) -> crate::Run {
    run(&[&["season", folder.named(), "--learn"], more].concat())
}

#[test]
fn scenario_the_third_site_is_learned_and_its_lines_are_read_back() {
    let dir = tempfile::tempdir().unwrap();
    let folder = tessel(dir.path());
    let site = folder.join("site.yaml");
    let before = fs::read_to_string(&site).unwrap();
    let casts = "2026-05-19,2026-06-09,2026-06-30";
    let answer = run(&["season", folder.to_str().unwrap(), "--learn", casts, "--json"]).json();
    assert_eq!(fs::read_to_string(&site).unwrap(), before, "nothing is written");
    let learned = &answer["learned"];
    let dates: Vec<&str> = list(&learned["casts"]).iter().map(|c| c["date"].as_str().unwrap()).collect();
    assert_eq!(dates, ["2026-05-19", "2026-06-09", "2026-06-30"]);
    assert_eq!(learned["plan"], "past spring");
    assert!(learned["schedule_file"].as_str().unwrap().ends_with("past-2026.csv"));
    assert_eq!(list(&learned["knobs"]).len(), 4);
    for knob in list(&learned["knobs"]) {
        let [least, most] = [0, 1].map(|end| number(&knob["range"][end]));
        assert!((least..=most).contains(&number(&knob["after"])), "{knob}");
        assert!(number(&knob["before"]) > 0.0 && knob["told"] == true && knob["at_end"] == false, "{knob}");
        let [low, high] = [0, 1].map(|end| number(&knob["as_near"][end]));
        assert!(
            least <= low && low <= number(&knob["after"]) && number(&knob["after"]) <= high && high <= most,
            "{knob}"
        );
    }
    assert_eq!(learned["weather"], "the weather file");
    let off = |of: &str, when: &str, what: &str| number(&learned[of][when][what]);
    assert!(off("fitted", "after", "temperature_c") < 0.5 * off("fitted", "before", "temperature_c"));
    assert!(off("tested", "after", "temperature_c") < 0.5 * off("tested", "before", "temperature_c"));
    for what in ["temperature_c", "oxygen_mg_l"] {
        assert!(off("tested", "after", what) <= off("tested", "before", what), "{what}");
    }
    // the flows of the schedule are those that were, also of two gates of one well, which shares out otherwise by itself
    let aside = dir.path().join("aside");
    fs::rename(folder.join("schedules"), &aside).unwrap();
    let as_now = run(&["season", folder.to_str().unwrap(), "--learn", casts, "--json"]).json();
    let as_now = number(&as_now["learned"]["tested"]["after"]["temperature_c"]);
    assert!(off("tested", "after", "temperature_c") < 0.5 * as_now, "{as_now} without the schedule");
    // the lines in the place of what the file says of the same
    let lines: Vec<&str> = list(&learned["site_lines"]).iter().map(|l| l.as_str().unwrap()).collect();
    fs::write(&site, with(&before, "season:\n  secchi: 3.4", &lines.join("\n"))).unwrap();
    let knobs = Opened::open(folder.to_str().unwrap()).unwrap().site.season.knobs;
    let told = |name: &str| number(&named(&learned["knobs"], "name", name)["after"]);
    let read = [knobs.wind, knobs.light_per_m, knobs.diffusion, knobs.water_demand_mg_l_day];
    for (name, is) in ["wind", "light", "diffusion", "oxygen demand"].into_iter().zip(read) {
        assert_relative_eq!(is, told(name), max_relative = 0.01);
    }
}

/// A site folder of the demonstration on disk, to be changed.
fn tessel(dir: &Path) -> PathBuf {
    assert_eq!(run(&["demo", dir.to_str().unwrap()]).code, Some(0));
    dir.join("tessel")
}

#[test]
fn scenario_a_knob_at_an_end_is_marked_and_casts_are_named() {
    let dir = tempfile::tempdir().unwrap();
    let folder = tessel(dir.path());
    // wind of so far above the water is weak at it, and too weak for what it did
    let weather = fs::read_to_string(folder.join("weather.csv")).unwrap();
    fs::write(folder.join("weather.csv"), with(&weather, "wind height: 10 m", "wind height: 60 m")).unwrap();
    let text = run(&["season", folder.to_str().unwrap(), "--learn", "2026-04-07,2026-05-19.csv,2026-06-09"]);
    assert_eq!(text.code, Some(0), "{}", text.err);
    let row = text.out.lines().find(|line| line.contains("wind share, %")).unwrap();
    assert!(!text.out.contains("mean figures stand for it"), "{}", text.out);
    assert!(row.ends_with("5.00 to 130.0") && row.starts_with("! "), "{row}");
    assert!(text.out.contains("tested on that of\n         2026-06-09"), "{}", text.out);
    assert!(text.out.lines().all(|line| line.chars().count() <= 80), "{}", text.out);
}

#[test]
fn scenario_what_is_not_told_is_refused_with_what_to_write() {
    let told = learn(&Folder::usual(), &[]);
    let told = told.failed_with(3);
    assert!(
        told.contains("three casts with their dates are needed, and the folder has 1; cast again"),
        "{told}"
    );

    let near = learn(&cast_on(&["2025-07-14", "2025-07-20", "2025-07-30"]), &[]);
    assert!(near.failed_with(3).contains("no three casts of the folder lie 14 days apart"), "{near:?}");

    let folder = cast_on(&["2025-07-14", "2025-08-01", "2025-08-08", "2025-08-26"]);
    let none = learn(&folder, &[]);
    let none = none.failed_with(3);
    // of the last three that are far enough apart
    assert!(none.contains("no plan tells the days from 2025-07-14 to 2025-08-25, between the casts; write plans/past.csv, a row a day or a week from 2025-07-14"), "{none}");

    let plan = "date,release_m3s,inflow_m3s,inflow_temperature_C\n2025-07-14,30,30,16\n2025-08-20,30,25,17\n";
    put(folder.path(), "plans", "past.csv", plan);
    let short = learn(&folder, &["--plan", "past"]);
    let short = short.failed_with(3);
    assert!(
        short.contains(
            "the plan tells 2025-07-14 to 2025-08-20, and the days from 2025-07-14 to 2025-08-25 are needed"
        ),
        "{short}"
    );

    put(folder.path(), "plans", "past.csv", &plan.replace("08-20", "08-26"));
    let close = learn(&folder, &["2025-07-14,2025-08-01,2025-08-08"]);
    assert!(
        close.failed_with(3).contains("lies 7 days after the cast before it, and 14 are needed"),
        "{close:?}"
    );
    put(folder.path(), "schedules", "past.csv", "date,N1,Sluice\n2025-07-20,25,5\n");
    let late = learn(&folder, &[]);
    let late = late.failed_with(3);
    assert!(late.contains("the schedule begins on 2025-07-20, and what was set from 2025-07-14 on is needed; add a row of 2025-07-14"), "{late}");
}

#[test]
fn scenario_words_that_name_no_three_casts_are_told() {
    for (words, told) in [
        ("2026-05-19,2026-06-09", "give three casts, comma between"),
        ("2026-06-09,2026-05-19,2026-06-30", "give the three casts in the order of time"),
        (
            "2026-05-19,2026-06-09,2026-06-29",
            "there is no sound cast `2026-06-29`; there are those of 2025-05-13, ",
        ),
    ] {
        let said = run(&["season", "tessel", "--learn", words]);
        assert!(said.failed_with(2).contains(told), "{words}: {said:?}");
    }
    let beside = run(&["season", "tessel", "--learn", "--strategy", "hold"]);
    assert!(beside.failed_with(2).contains("cannot be used with"), "{beside:?}");
}

/// A plan of days that are over is neither the first by name nor beside the others, and says so.
#[test]
fn scenario_a_past_plan_stays_out_of_the_season() {
    let past = "# name: last spring\ndate,release_m3s,inflow_m3s,inflow_temperature_C\n2025-06-01,30,30,12\n2025-07-10,30,30,15\n";
    let ahead = "# name: steady\ndate,release_m3s,inflow_m3s,inflow_temperature_C\n2025-07-14,30,30,16\n2025-07-24,30,25,17\n";
    let site = format!(
        "{SITE}season: {{ layer: 2, strategy: hold, monthly: {{ air: 20, humidity: 60, wind: 2.5, cloud: 40 }} }}\n"
    );
    let folder = Folder::new(&site, &[("2025-07-14.csv", CAST.as_bytes())]);
    put(folder.path(), "plans", "0-past.csv", past);
    put(folder.path(), "plans", "1-steady.csv", ahead);
    let answer = run(&["season", folder.named(), "--json"]).json();
    assert_eq!(answer["plan"], "steady");
    assert!(list(&answer["runs"]).iter().all(|run| run["plan"] == "steady"), "{}", answer["runs"]);
    let note: &Value = named(&answer["warnings"], "kind", "plan-past");
    assert!(note["text"].as_str().unwrap().contains("0-past.csv tells days that are over"), "{note}");
}
