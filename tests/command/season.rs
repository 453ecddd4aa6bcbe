//! `season`: what a plan costs later, as a user asks for it.

use std::fs;

use approx::assert_abs_diff_eq;
use serde_json::Value;

use crate::river::{RIVER, list, named, number, told};
use crate::{Folder, line_of, run, with};

/// Six weeks of drawdown, a row of pools a week or so.
pub(super) const PLAN: &str = "\
# name: steady
date,pool_m,inflow_m3s,inflow_temperature_C
2025-07-14,60,30,16
2025-08-01,58,25,17
2025-08-26,55.5,20,15
";

/// The same by required releases, with more of it early.
const EARLY: &str = "\
# name: early
date,release_m3s,inflow_m3s,inflow_temperature_C
2025-07-14,50,30,16
2025-08-01,35,25,17
2025-08-26,35,20,15
";

/// The usual site with a river, coarse layers and plans.
pub(super) fn site(plans: &[(&str, &str)]) -> Folder {
    let rules = "  - { name: ford, point: Ford, from: 06-01, to: 09-30, high: 15 }\n";
    let folder = crate::river::site(RIVER, rules);
    let text = fs::read_to_string(folder.site_file()).unwrap();
    fs::write(folder.site_file(), format!("{text}season: {{ layer: 2, decide_days: 14 }}\n")).unwrap();
    fs::create_dir(folder.path().join("plans")).unwrap();
    for (name, text) in plans {
        fs::write(folder.path().join("plans").join(name), text).unwrap();
    }
    folder
}

pub(super) fn usual() -> Folder {
    site(&[("a-steady.csv", PLAN), ("b-early.csv", EARLY)])
}

pub(super) fn season(folder: &Folder, more: &[&str]) -> Value {
    run(&[&["season", folder.named(), "--on", "2025-07-14T10:30", "--json"], more].concat()).json()
}

fn name_of(run: &Value) -> [&str; 3] {
    ["plan", "case", "strategy"].map(|key| run[key].as_str().unwrap())
}

#[test]
fn scenario_the_season_has_every_key_and_its_days_follow_the_plan() {
    let folder = usual();
    let answer = season(&folder, &[]);
    assert_eq!(name_of(&answer), ["steady", "middling", "best"]);
    let days = list(&answer["days"]);
    assert_eq!(days.len(), 44, "14 July to 26 August");
    assert_eq!((&days[0]["date"], &days[43]["date"]), (&"2025-07-14".into(), &"2025-08-26".into()));
    assert_abs_diff_eq!(number(&days[18]["pool_m"]), 58.0, epsilon = 1e-6);
    assert_abs_diff_eq!(number(&days[43]["pool_m"]), 55.5, epsilon = 1e-6);
    for day in days {
        let set: f64 = day["set"].as_object().unwrap().values().map(number).sum();
        let release = &day["release"];
        assert_abs_diff_eq!(set, number(&release["flow_m3s"]), epsilon = 1e-6);
        assert!((6.0..23.0).contains(&number(&release["temperature_c"])), "{day}");
        assert!(number(&day["cold_water_m3"]) > 0.0, "{day}");
        // round-off of two hundred million cubic metres, and of their heat
        assert!(number(&day["balance_water_m3"]).abs() < 1e-9 * 2.5e8, "{day}");
        assert!(number(&day["balance_heat_j"]).abs() < 1e-9 * 2e16, "{day}");
        assert_eq!(list(&day["points"]).len(), 2);
        let attainable = &day["attainable_c"];
        assert!(attainable.is_null() || number(&attainable[0]) <= number(&attainable[1]), "{day}");
    }
    assert!(
        days[0]["attainable_c"].is_array()
            && days[14]["attainable_c"].is_array()
            && days[3]["attainable_c"].is_null()
    );
    let gates = list(&answer["gates"]);
    assert_eq!(gates.len(), 2);
    for gate in gates {
        assert_eq!(
            (&gate["first_day"], &gate["last_day"], &gate["reason"]),
            (&"2025-07-14".into(), &Value::Null, &Value::Null)
        );
    }
    let holding = named(&answer["targets"], "name", "holding");
    assert_eq!((&holding["point"], &holding["case"]), (&"dam".into(), &"middling".into()));
    for key in ["days_outside", "longest_run", "degree_days_outside"] {
        assert!(holding[key].is_number(), "{holding}");
    }
    assert!(
        answer["exhausted_on"].is_null() && answer["exhausted_unknown"].is_null(),
        "the sluice is cold to the end"
    );
    assert!(answer["caution"].as_str().unwrap().starts_with("Advisory"));
    for key in [
        "site",
        "on",
        "datum",
        "version",
        "method",
        "fingerprint",
        "profile",
        "cold_water",
        "left",
        "decisions",
        "score",
    ] {
        assert!(!answer[key].is_null(), "{key}");
    }
    // cold water: all of it is what can be drawn and what cannot
    for day in list(&answer["cold_water"][0]["days"]) {
        let [usable, beyond, all] = ["usable_m3", "unreachable_m3", "total_m3"].map(|key| number(&day[key]));
        assert_abs_diff_eq!(usable + beyond, all, epsilon = 1.0);
    }
}

#[test]
fn scenario_other_cases_plans_and_strategies_stand_beside_it() {
    let folder = usual();
    let answer = season(&folder, &[]);
    let beside: Vec<[&str; 3]> = list(&answer["runs"]).iter().map(name_of).collect();
    assert_eq!(
        beside,
        [
            ["steady", "warm", "best"],
            ["steady", "cool", "best"],
            ["early", "middling", "best"],
            ["steady", "middling", "hold"]
        ]
    );
    // every plan in every case where that is asked, each as it is by itself
    let crossed = season(&folder, &["--every-case"]);
    let beside: Vec<[&str; 3]> = list(&crossed["runs"]).iter().map(name_of).collect();
    assert_eq!(beside[3..5], [["early", "warm", "best"], ["early", "cool", "best"]]);
    assert_eq!((beside.len(), &crossed["days"]), (6, &answer["days"]));
    // the warm case takes in more heat than the cool one
    let last_c = |case: &str| {
        let run = named(&answer["runs"], "case", case);
        number(&list(&run["days"]).last().unwrap()["points"][1]["temperature_c"])
    };
    assert!(last_c("warm") > last_c("cool"), "{} {}", last_c("warm"), last_c("cool"));
    // each can be asked for by itself, and is then the same season
    let warm = season(&folder, &["--case", "warm"]);
    assert_eq!(warm["days"], named(&answer["runs"], "case", "warm")["days"]);
    let early = season(&folder, &["--plan", "early"]);
    assert_eq!(early["days"], named(&answer["runs"], "plan", "early")["days"]);
    assert_abs_diff_eq!(number(&early["days"][3]["release"]["flow_m3s"]), 50.0, epsilon = 1e-6);
    assert_eq!(season(&folder, &["--plan", "b-early"])["days"], early["days"]);
    let hold = season(&folder, &["--strategy", "hold"]);
    assert_eq!(hold["days"], named(&answer["runs"], "strategy", "hold")["days"]);
}

#[test]
fn scenario_the_text_says_what_the_data_say_and_never_more() {
    let folder = usual();
    let arguments = ["season", folder.named(), "--on", "2025-07-14T10:30"];
    let (text, answer) = (told(&arguments), season(&folder, &[]));
    let score = &answer["score"];
    let moves = answer["moves"].as_u64().unwrap();
    assert!(text.contains("2025-07-14 to 2025-08-26; plan steady"), "{text}");
    assert!(text.contains("steady, middling, best"), "{text}");
    assert!(
        text.contains(&format!(
            "{:.1} {} d {:.0} {moves}",
            number(&score["worst_c"]),
            score["days_outside"],
            number(&score["degree_days_outside"])
        )),
        "{text}"
    );
    let first = &answer["cold_water"][0]["days"][18];
    let [usable, all] = ["usable_m3", "total_m3"].map(|key| format!("{:.2} hm3", number(&first[key]) / 1e6));
    assert!(text.contains("2025-08-01") && text.contains(&usable) && text.contains(&all), "{text}");
    match answer["exhausted_on"].as_str() {
        Some(on) => assert!(text.contains(&format!("from {on} on even the coldest mix allowed")), "{text}"),
        None => assert!(text.contains("Runs out not"), "{text}"),
    }
    for word in ["compliant", "legal", "acceptable", "probability", "chance"] {
        assert!(!text.contains(word), "{word}");
    }
    let twice = [run(&arguments), run(&arguments)];
    assert_eq!(twice[0], twice[1]);
    let customary = told(&[&arguments[..], &["--units", "us"]].concat());
    assert!(customary.contains("acre-ft") && !customary.contains("hm3"), "{customary}");
}

#[test]
fn scenario_what_cannot_be_understood_names_what_there_is() {
    let folder = usual();
    let fails = |more: &[&str]| {
        let run = run(&[&["season", folder.named(), "--on", "2025-07-14T10:30"], more].concat());
        run.failed_with(2).to_owned()
    };
    assert!(fails(&["--case", "wet"]).contains("warm, middling, cool"));
    assert!(fails(&["--strategy", "spend"]).contains("hold, best, thrift"));
    let plans = fails(&["--plan", "late"]);
    assert!(
        plans.contains("`late`") && plans.contains("steady (a-steady.csv), early (b-early.csv)"),
        "{plans}"
    );
    assert!(fails(&["--every", "0"]).contains("1 to 366"));
    assert!(fails(&["--every", "soon"]).contains("whole days"));
    assert!(fails(&["--schedule", "none.csv"]).contains("none.csv"));
    assert!(fails(&["--schedule", "x.csv", "--strategy", "best"]).contains("give one"));
    assert!(fails(&["--now", "N9=3"]).contains("N9"));
}

#[test]
fn scenario_a_plan_with_an_error_is_refused_with_line_and_cure() {
    let cases = [
        // dates out of order; pool above the table; less inflow than the pool is to gain; inflow missing
        (with(PLAN, "2025-08-26", "2025-07-26"), "2025-07-26"),
        (with(PLAN, "2025-08-01,58", "2025-08-01,70"), "2025-08-01"),
        (with(&with(PLAN, "60,30,16", "60,1,16"), "58,25,17", "61.9,1,17"), "2025-08-01"),
        (with(PLAN, "55.5,20,15", "55.5,,15"), "2025-08-26"),
    ];
    for (plan, row) in cases {
        let folder = site(&[("a.csv", &plan)]);
        let refused = run(&["season", folder.named(), "--on", "2025-07-14T10:30"]);
        let told = refused.failed_with(3).to_owned();
        let line = line_of(&plan, row);
        assert!(told.contains(&format!("a.csv:{line}: refused: ")), "{told}");
        assert!(told.lines().all(|l| !l.contains("refused") || l.contains("; ")), "a cure follows: {told}");
    }
    // by its own name too
    let bad = with(&with(PLAN, "55.5,20,15", "55.5,,15"), "steady", "mine");
    let folder = site(&[("a.csv", PLAN), ("4-mine.csv", &bad)]);
    let at = ["season", folder.named(), "--on", "2025-07-14T10:30", "--plan"];
    let told = run(&[&at[..], &["mine"]].concat()).failed_with(3).to_owned();
    assert!(told.contains("4-mine.csv:5: refused: ") && told.contains("tells no inflow; "), "{told}");
    let told = run(&[&at[..], &["yours"]].concat()).failed_with(2).to_owned();
    assert!(told.contains("there are mine (4-mine.csv, refused), steady (a.csv); or"), "{told}");
    // all problems at once
    let two = with(&with(PLAN, "2025-08-01,58", "2025-08-01,70"), "55.5,20,15", "55.5,,15");
    let folder = site(&[("a.csv", &two)]);
    let told = run(&["season", folder.named(), "--on", "2025-07-14T10:30"]).failed_with(3).to_owned();
    assert!(told.lines().count() >= 2, "{told}");
    // beside a sound one it is passed over, and said
    let folder = site(&[("a.csv", PLAN), ("b.csv", &two)]);
    let answer = season(&folder, &[]);
    let warnings = list(&answer["warnings"]);
    assert!(warnings.iter().any(|w| w["text"].as_str().unwrap().contains("b.csv")), "{}", answer["warnings"]);
}

#[test]
fn scenario_without_a_plan_or_past_its_end_there_is_no_season() {
    let folder = site(&[]);
    let told = run(&["season", folder.named()]).failed_with(3).to_owned();
    assert!(told.contains("no plan of a season") && told.contains("`plans`"), "{told}");
    let folder = usual();
    let told = run(&["season", folder.named(), "--on", "2025-08-26"]).failed_with(3).to_owned();
    assert!(told.contains("ends on 2025-08-26") && told.contains("--on"), "{told}");
}

#[test]
fn scenario_until_the_date_of_decision_what_is_set_now_stays() {
    let folder = usual();
    let later = run(&["season", folder.named(), "--on", "2025-07-20", "--json"]).json();
    let days = list(&later["days"]);
    assert_eq!((&later["begins"], &later["decides"]), (&"2025-07-14".into(), &"2025-07-20".into()));
    let share = |day: &Value| number(&day["set"]["N1"]) / number(&day["release"]["flow_m3s"]);
    for day in &days[..6] {
        assert_abs_diff_eq!(share(day), 30.0 / 35.0, epsilon = 1e-6);
    }
    assert_eq!(later["decisions"][0]["date"], "2025-07-20");
}

#[test]
fn scenario_a_schedule_is_followed_and_a_miss_is_told_by_the_exit_code() {
    let folder = usual();
    let schedule = "date,N1,Sluice\n2025-07-14,30,10\n2025-08-04,0,30\n";
    fs::write(folder.path().join("gates.csv"), schedule).unwrap();
    let file = folder.path().join("gates.csv");
    let answer = season(&folder, &["--schedule", file.to_str().unwrap()]);
    let share = |day: &Value| day["set"]["N1"].as_f64().unwrap_or(0.0) / number(&day["release"]["flow_m3s"]);
    let days = list(&answer["days"]);
    assert_abs_diff_eq!(share(&days[10]), 0.75, epsilon = 1e-6);
    assert_abs_diff_eq!(share(&days[30]), 0.0, epsilon = 1e-9);
    let outside = answer["score"]["days_outside"].as_u64().unwrap();
    assert!(outside > 0, "the sluice is colder than the target allows");
    let arguments = ["season", folder.named(), "--on", "2025-07-14T10:30", "--strict", "--schedule"];
    assert_eq!(run(&[&arguments[..], &[file.to_str().unwrap()]].concat()).code, Some(4));
}

#[test]
fn scenario_the_mixes_of_a_ranking_are_priced_against_what_is_set_now() {
    let folder = usual();
    let arguments =
        ["rank", folder.named(), "--on", "2025-07-14T10:30", "--release", "30", "--season", "--case", "warm"];
    let answer = run(&[&arguments[..], &["--json"]].concat()).json();
    let season = &answer["season"];
    assert_eq!(
        (&season["plan"], &season["case"], &season["against"]),
        (&"steady".into(), &"warm".into(), &"now".into())
    );
    assert_eq!((&season["held_until"], &season["members"]), (&"2025-07-28".into(), &5.into()));
    let priced = list(&season["mixes"]);
    assert_eq!(priced.len(), list(&answer["mixes"]).len());
    for price in priced {
        let change = &price["days_outside_more"];
        let [low, high] = [0, 1].map(|i| change["range"][i].as_i64().unwrap());
        let days = change["days"].as_i64().unwrap();
        assert!(low <= days && days <= high, "{change}");
        assert_eq!(change["told"], low > 0 || high < 0);
    }
    // everything else stands as without prices, but for the inputs
    let mut plain =
        run(&["rank", folder.named(), "--on", "2025-07-14T10:30", "--release", "30", "--json"]).json();
    let mut priced = answer.clone();
    priced.as_object_mut().unwrap().remove("season");
    for answer in [&mut plain, &mut priced] {
        answer.as_object_mut().unwrap().remove("fingerprint");
    }
    assert_eq!(plain, priced);
    let text = told(&arguments);
    assert!(
        text.contains("each mix held from 2025-07-14 to 2025-07-28") && text.contains("days outside: "),
        "{text}"
    );
    // a plan is of no use without the season
    run(&["rank", folder.named(), "--plan", "steady"]).failed_with(2);
}

#[test]
fn scenario_a_schedule_solved_in_view_of_its_case_stands_below_the_cases_it_has_not_seen() {
    let folder = usual();
    let thrift = ["--strategy", "thrift", "--every", "21"];
    let answer = season(&folder, &thrift);
    assert_eq!((name_of(&answer), &answer["foresight"]), (["steady", "middling", "thrift"], &true.into()));
    let runs = list(&answer["runs"]);
    assert!(runs.iter().all(|run| run["foresight"] == false), "what is scored elsewhere has not been seen");
    assert_eq!(runs.iter().filter(|run| run["strategy"] == "thrift").count(), 3, "two cases and one plan");
    let order = |run: &Value| {
        let score = &run["score"];
        ["worst_c", "days_outside", "degree_days_outside", "moves"].map(|key| number(&score[key]))
    };
    let best = runs.iter().find(|run| run["strategy"] == "best").unwrap();
    assert!(order(&answer) <= order(best), "never worse than day by day where it was solved");
    let more_days = order(&answer)[0] < order(best)[0] && order(&answer)[1] > order(best)[1];
    let said = list(&answer["warnings"]).iter().any(|w| w["kind"] == "worst-before-days");
    assert_eq!(said, more_days, "{:?} {:?}", order(&answer), order(best));
    let text = told(&[&["season", folder.named(), "--on", "2025-07-14T10:30"], &thrift[..]].concat());
    let at = |what: &str| text.find(what).unwrap_or_else(|| panic!("{what}: {text}"));
    assert!(text.contains("foresight, no evidence"), "{text}");
    assert!(at("steady, warm, thrift") < at(">*steady, middling, thrift"), "{text}");
    // another plan under that weather stands between
    assert!(at("+early, middling, thrift") < at(">*steady, middling, thrift"), "{text}");
    for run in runs.iter().filter(|run| run["strategy"] == "thrift") {
        assert_eq!(run["weather_seen"], run["case"] == "middling");
    }
}
