//! What must not be left unsaid of a season: that it stops, that a limit is broken, that a day is not judged, that
//! nobody knows what is set.

use std::fs;

use serde_json::Value;

use crate::river::{list, named, number, told};
use crate::season::{PLAN, season, site, usual};
use crate::{CAST, Folder, run, with};

/// The plan with outages.
fn without(outages: &str) -> String {
    with(PLAN, "# name: steady\n", &format!("# name: steady\n{outages}"))
}

/// A word of the site file changed.
fn changed(folder: &Folder, from: &str, to: &str) {
    let text = fs::read_to_string(folder.site_file()).unwrap();
    fs::write(folder.site_file(), with(&text, from, to)).unwrap();
}

fn in_words(folder: &Folder, more: &[&str]) -> String {
    told(&[&["season", folder.named(), "--on", "2025-07-14T10:30"], more].concat())
}

fn kinds(answer: &Value) -> Vec<&str> {
    list(&answer["warnings"]).iter().map(|w| w["kind"].as_str().unwrap()).collect()
}

#[test]
fn scenario_a_season_that_stops_says_so_wherever_its_days_are_counted() {
    let gone = without("# outage: N1, 2025-08-10, , gone\n# outage: Sluice, 2025-08-10, , gone\n");
    let folder = site(&[("a.csv", &gone), ("b.csv", PLAN)]);
    let answer = season(&folder, &[]);
    assert_eq!(
        (&answer["stops_on"], &answer["score"]["days_not_reached"]),
        (&"2025-08-10".into(), &17.into())
    );
    let other = list(&answer["runs"]).iter().find(|run| run["plan_file"] != answer["plan_file"]).unwrap();
    assert_eq!((&other["stops_on"], &other["score"]["days_not_reached"]), (&Value::Null, &0.into()));
    let text = in_words(&folder, &[]);
    for piece in [
        "STOPS on 2025-08-10",
        &format!(
            "steady, middling, best ? - {:.1} {} d!",
            number(&answer["score"]["worst_c"]),
            answer["score"]["days_outside"]
        ),
        "!: days after its end are not counted: steady, middling, best stops 08-10",
        "left on 2025-08-01: from then to 2025-08-10, when it stops,",
    ] {
        assert!(text.contains(piece), "{piece}: {text}");
    }
    // nor has a mix a price in days that are not reached
    let arguments = ["rank", folder.named(), "--on", "2025-07-14T10:30", "--release", "30", "--top", "1"];
    let priced = [&arguments[..], &["--season"]].concat();
    let answer = run(&[&priced[..], &["--json"]].concat()).json();
    assert!(answer["season"]["mixes"][0]["days_outside_more"].is_null(), "{}", answer["season"]);
    let text = told(&priced);
    assert!(text.contains("days outside: not known, a season stops before its plan"), "{text}");
}

#[test]
fn scenario_limits_of_the_change_that_no_mix_keeps_are_told_with_the_decision() {
    let folder = site(&[("a.csv", &without("# outage: N1, 2025-07-20, 2025-07-30, hoist\n"))]);
    changed(&folder, "now: { N1: 30, Sluice: 5 }", "now: { N1: 30 }");
    changed(&folder, "targets:", "limits: { max_moves: 1 }\ntargets:");
    let answer = season(&folder, &["--strategy", "hold"]);
    let lost = named(&answer["decisions"], "date", "2025-07-19");
    assert_eq!(lost["why"], "forced");
    let past: Vec<&str> = list(&lost["past"]).iter().map(|p| p.as_str().unwrap()).collect();
    assert!(past.iter().any(|p| p.contains("max_moves")), "{lost}");
    assert_eq!(list(&answer["decisions"][0]["past"]).len(), 0);
    let text = in_words(&folder, &["--strategy", "hold"]);
    assert!(text.contains("NO MIX KEEPS max_moves"), "{text}");
}

#[test]
fn scenario_a_setting_that_nobody_knows_is_not_said_to_be_held() {
    let folder = usual();
    changed(&folder, "now: { N1: 30, Sluice: 5 }\n", "");
    let later = ["season", folder.named(), "--on", "2025-07-20"];
    let answer = run(&[&later[..], &["--json"]].concat()).json();
    assert_eq!(
        (&answer["decides"], &answer["begins"]),
        (&answer["decisions"][0]["date"], &"2025-07-14".into())
    );
    let text = told(&later);
    assert!(
        text.contains("nobody knows what is set now: decided from 2025-07-14, the day of the cast"),
        "{text}"
    );
    assert!(!text.contains("what is set now is held"), "{text}");
}

#[test]
fn scenario_cold_water_runs_out_while_the_deep_gate_is_out() {
    let out = |until: &str| without(&format!("# outage: Sluice, 2025-08-10, {until}, hoist\n"));
    let folder = site(&[("a.csv", &out("2025-08-20")), ("b.csv", &with(&out(""), "steady", "gone"))]);
    let back = season(&folder, &[]);
    let on = back["exhausted_on"].as_str().unwrap();
    assert!(["2025-08-09", "2025-08-10", "2025-08-11"].contains(&on), "{on}");
    assert_eq!(back["exhausted_until"], "2025-08-21");
    let text = in_words(&folder, &[]);
    assert!(text.contains(&format!("from {on} on even the coldest mix allowed is too warm")), "{text}");
    assert!(text.contains("from 08-21 on one is cold enough again"), "{text}");
    assert!(text.contains("; then outage until 2025-08-20, hoist"), "{text}");
    let gone = season(&folder, &["--plan", "gone"]);
    assert_eq!((&gone["exhausted_on"], &gone["exhausted_until"]), (&back["exhausted_on"], &Value::Null));
    let text = in_words(&folder, &["--plan", "gone"]);
    assert!(text.contains(", the last day of decision on which a rule asks"), "{text}");
    assert!(text.contains("it runs out in 3 of 3 cases: on 2025-08-"), "{text}");
}

#[test]
fn scenario_what_is_not_judged_says_why_and_a_place_is_named_once() {
    let folder = usual();
    changed(&folder, "name: ford,", "name: eggs at Ford, statistic: mean_of_days, days: 7,");
    let text = in_words(&folder, &[]);
    assert!(text.contains("eggs at Ford (mean of 7 days"), "{text}");
    assert!(text.contains("5 days not judged (the first of a mean of 7 days)"), "{text}");
    assert!(!text.contains("d?"), "{text}");
    let dry: String = CAST
        .lines()
        .map(|line| match line.rsplit_once(',') {
            Some((rest, _)) if !line.starts_with('#') => format!("{rest}\n"),
            _ => format!("{line}\n"),
        })
        .collect();
    fs::write(folder.profile("2025-07-14.csv"), dry).unwrap();
    let text = in_words(&folder, &[]);
    assert!(text.contains("oxygen not judged on any of 44 days: the oxygen is not known"), "{text}");
    assert!(text.contains("d?") && text.contains("?: a hard rule is not judged on any day"), "{text}");
}

#[test]
fn scenario_plans_of_one_name_are_two_and_one_of_last_year_is_none() {
    let past = PLAN.replace("2025-", "2024-");
    let folder = site(&[("a.csv", PLAN), ("b.csv", PLAN), ("c-past.csv", &past)]);
    let answer = season(&folder, &[]);
    let kinds = kinds(&answer);
    assert!(kinds.contains(&"plan-past"), "{kinds:?}");
    assert_eq!(season(&folder, &["--plan", "b"])["plan"], "b", "its file stands for a name that is taken");
    let files: Vec<&str> =
        list(&answer["runs"]).iter().map(|run| run["plan_file"].as_str().unwrap()).collect();
    assert!(files.iter().any(|f| f.ends_with("b.csv")) && !files.iter().any(|f| f.ends_with("c-past.csv")));
    // the other plan of that name is no case of this one
    let holding = list(&answer["targets"]).iter().filter(|t| t["name"] == "holding").count();
    assert_eq!(holding, 3, "warm, middling, cool");
}

#[test]
fn scenario_a_record_of_years_that_gives_no_case_says_why() {
    let folder = usual();
    changed(&folder, "season: { ", "season: { years: years.csv, ");
    let missing = season(&folder, &[]);
    let words = list(&missing["warnings"]).iter().map(|w| w["text"].as_str().unwrap());
    assert!(words.into_iter().any(|w| w.contains("`years.csv`")), "{}", missing["warnings"]);
    let days = "# wind height: 10 m\ndate,air_C,humidity_percent,wind_m_s,cloud_percent\n\
                2018-07-14,19,60,2.5,40\n2018-07-15,20,60,2.5,40\n";
    fs::write(folder.path().join("years.csv"), days).unwrap();
    let short = season(&folder, &[]);
    let left_out = named(&short["warnings"], "kind", "years-left-out");
    assert!(left_out["text"].as_str().unwrap().ends_with("no cases: 2018"), "{left_out}");
}

#[test]
fn scenario_a_schedule_of_another_year_is_not_passed_over() {
    let folder = usual();
    let file = folder.path().join("gates.csv");
    let follow = |rows: &str| {
        fs::write(&file, format!("date,N1,Sluice\n{rows}")).unwrap();
        season(&folder, &["--schedule", file.to_str().unwrap()])
    };
    let of_kind = |answer: &Value| {
        let found = list(&answer["warnings"]).iter().find(|w| w["kind"] == "schedule-days");
        found.map(|w| w["text"].as_str().unwrap().to_owned())
    };
    assert!(
        of_kind(&follow("2024-07-14,30,10\n"))
            .unwrap()
            .contains("no change of the schedule lies in the season")
    );
    assert!(of_kind(&follow("2025-07-20,30,10\n")).unwrap().contains("begins on 2025-07-20"));
    assert_eq!(of_kind(&follow("2025-07-14,30,10\n")), None);
    assert!(
        of_kind(&follow("2025-07-01,30,10\n2025-07-14,30,5\n"))
            .unwrap()
            .contains("the last row of the schedule is of 2025-07-14: what it sets is held to the end")
    );
}

/// Ten days in which far more flows in than is released.
const FLOOD: &str = "\
# name: flood
date,release_m3s,inflow_m3s,inflow_temperature_C
2025-07-14,30,60,16
2025-07-20,30,60,16
2025-07-24,30,60,16
";

#[test]
fn scenario_a_pool_above_full_is_told_by_check_and_at_the_head_of_the_season() {
    let folder = site(&[("a.csv", FLOOD)]);
    changed(&folder, "full: 62", "full: 60.2");
    let answer = season(&folder, &[]);
    let above: Vec<&Value> =
        list(&answer["days"]).iter().filter(|day| number(&day["pool_m"]) > 60.2 + 0.01).collect();
    assert!(kinds(&answer).contains(&"plan-above-full"));
    let text = in_words(&folder, &[]);
    let first = above[0]["date"].as_str().unwrap();
    let highest = above.iter().map(|day| number(&day["pool_m"])).fold(0.0, f64::max);
    let said = format!("ABOVE FULL on {} days, from {first} on: {highest:.2} m at most", above.len());
    assert!(text.contains(&said), "{said}: {text}");
    let checked = told(&["check", folder.named()]);
    assert!(
        checked.contains(
            "from the pool of 2025-07-14, 60.00 m, its flows bring the pool above full 60.20 m on 2025-07-15"
        ),
        "{checked}"
    );
    let kept = site(&[("a.csv", &FLOOD.replace(",30,60,", ",30,30,"))]);
    changed(&kept, "full: 62", "full: 60.2");
    assert!(!told(&["check", kept.named()]).contains("above full"));
    assert!(!in_words(&kept, &[]).contains("ABOVE FULL"));
}

#[test]
fn scenario_moves_say_why_and_what_they_make_of_the_release() {
    let folder = site(&[("a.csv", &without("# outage: N1, 2025-07-20, 2025-07-30, hoist\n"))]);
    let (answer, text) =
        (season(&folder, &["--strategy", "best"]), in_words(&folder, &["--strategy", "best"]));
    let days = list(&answer["days"]);
    let c = |day: &Value| number(&day["release"]["temperature_c"]);
    let mut told = 0;
    for decision in list(&answer["decisions"]).iter().filter(|d| !list(&d["moved"]).is_empty()) {
        let why = match decision["why"].as_str().unwrap() {
            "begin" => "the first decision",
            "due" => "due",
            "forced" => "forced: ",
            _ => decision["because"].as_str().unwrap(),
        };
        let at = days.iter().position(|day| day["date"] == decision["date"]).unwrap();
        let makes = if at == 0 {
            String::new()
        } else {
            format!("; the release goes from {:.1} to {:.1} C", c(&days[at - 1]), c(&days[at]))
        };
        assert!(text.contains(&format!("; {why}")) && text.contains(&makes), "{why}{makes}: {text}");
        told += usize::from(at > 0);
    }
    assert!(told > 0, "a move after the first day");
    // what is released stands beside what is within reach
    for decision in list(&answer["decisions"]) {
        let day = days.iter().find(|day| day["date"] == decision["date"]).unwrap();
        let [low, high] = [0, 1].map(|i| number(&decision["attainable_c"][i]));
        let date = &day["date"].as_str().unwrap()[5..];
        let said = format!("{date} {low:.1} to {high:.1} {:.1} 9.0 to 14.0", c(day));
        assert!(text.contains(&said), "{said}: {text}");
    }
}
