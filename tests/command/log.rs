//! The log by the built program: decided, amended, withdrawn, taken as what is set now.

use std::fs;

use serde_json::Value;

use crate::{Folder, run};

/// A decision of the usual folder.
fn decide(folder: &Folder, more: &[&str]) -> crate::Run {
    let usual = ["log", folder.named(), "--decide", "--by", "A. Crew", "--why", "holding"];
    run(&[&usual, more].concat())
}

fn log(folder: &Folder) -> Value {
    run(&["log", folder.named(), "--on", "2025-07-30", "--json"]).json()
}

#[test]
fn scenario_a_decision_is_logged_with_what_was_known_and_then_is_what_is_set_now() {
    let folder = Folder::usual();
    let mix = run(&["mix", folder.named(), "--set", "N1=20", "--set", "Sluice=10", "--json"]).json();
    let ranked = run(&["rank", folder.named(), "--json"]).json();
    let out = decide(
        &folder,
        &["--set", "N1=20", "--set", "Sluice=10", "--until", "2025-07-21", "--trigger", "it warms", "--json"],
    );
    let logged = &out.json()["logged"];
    assert_eq!(logged["line"], "decision");
    assert_eq!(
        (&logged["id"], &logged["by"], &logged["why"]),
        (&1.into(), &"A. Crew".into(), &"holding".into())
    );
    assert_eq!((&logged["until"], &logged["trigger"]), (&"2025-07-21".into(), &"it warms".into()));
    assert_eq!(logged["from"], "2025-07-14T10:30:00-07:00");
    assert_eq!(logged["chosen"]["set"], mix["set"]);
    assert_eq!(logged["expected"][0]["temperature_c"], mix["release"]["temperature_c"]);
    assert_eq!(logged["expected"][0]["band_c"], mix["release"]["band_c"]);
    assert_eq!(logged["expected"][0]["oxygen_mg_l"], mix["release"]["oxygen_mg_l"]);
    assert_eq!(logged["known"]["inputs"], mix["fingerprint"]);
    assert_eq!(logged["known"]["before"]["set"], serde_json::json!({ "N1": 30.0, "Sluice": 5.0 }));
    assert_eq!(logged["known"]["targets"][0]["standing"], mix["targets"][0]["standing"]);
    assert_eq!(logged["considered"][0]["set"], ranked["mixes"][0]["set"]);
    assert_eq!(logged["considered"].as_array().unwrap().len(), ranked["mixes"].as_array().unwrap().len());
    // from the moment of the decision on it is what is set
    let now = |on: &str| run(&["rank", folder.named(), "--on", on, "--json"]).json()["now"]["set"].clone();
    assert_eq!(now("2025-07-14T10:30"), mix["set"]);
    assert_eq!(now("2025-07-14T10:29"), serde_json::json!({ "N1": 30.0, "Sluice": 5.0 }));
    // and an answer that rests on it is another answer
    assert_ne!(run(&["mix", folder.named(), "--json"]).json()["fingerprint"], mix["fingerprint"]);
}

#[test]
fn scenario_without_gates_the_first_ranked_mix_is_logged() {
    let folder = Folder::usual();
    let ranked = run(&["rank", folder.named(), "--json"]).json();
    let logged = decide(&folder, &["--json"]).json();
    assert_eq!(logged["logged"]["chosen"]["set"], ranked["mixes"][0]["set"]);
    assert_eq!(
        logged["logged"]["expected"][0]["temperature_c"],
        ranked["mixes"][0]["release"]["temperature_c"]
    );
}

#[test]
fn scenario_a_decision_is_amended_and_withdrawn_by_later_lines_and_none_is_rewritten() {
    let folder = Folder::usual();
    assert_eq!(decide(&folder, &["--set", "N1=20", "--until", "2025-07-21"]).code, Some(0));
    let first = fs::read(folder.path().join("log.jsonl")).unwrap();
    let amend = |id: &str, more: &[&str]| {
        let usual = ["log", folder.named(), "--amend", id, "--by", "B. Crew"];
        run(&[&usual, more].concat())
    };
    assert_eq!(amend("1", &["--why", "as the biologist asked"]).code, Some(0));
    let of = &log(&folder)["decisions"];
    assert_eq!(of.as_array().unwrap().len(), 1);
    assert_eq!((&of[0]["decision"], &of[0]["id"], &of[0]["amended"]), (&1.into(), &2.into(), &1.into()));
    assert_eq!((&of[0]["by"], &of[0]["why"]), (&"B. Crew".into(), &"as the biologist asked".into()));
    // what was not said anew stays
    assert_eq!((&of[0]["until"], &of[0]["chosen"]["set"]["N1"]), (&"2025-07-21".into(), &20.0.into()));
    // an amendment may be amended by its own number
    assert_eq!(amend("2", &["--set", "N1=25"]).code, Some(0));
    let of = &log(&folder)["decisions"];
    assert_eq!((&of[0]["decision"], &of[0]["amends"], &of[0]["amended"]), (&1.into(), &1.into(), &2.into()));
    assert_eq!(
        (&of[0]["chosen"]["set"]["N1"], &of[0]["why"]),
        (&25.0.into(), &"as the biologist asked".into())
    );
    assert_eq!(amend("1", &["--withdraw"]).code, Some(0));
    assert!(log(&folder)["decisions"].as_array().unwrap().is_empty());
    let all = fs::read(folder.path().join("log.jsonl")).unwrap();
    assert!(all.starts_with(&first) && all.split(|&b| b == b'\n').count() == 5);
    let none = amend("9", &[]);
    assert!(none.failed_with(2).contains("--amend 9: no decision has that number"), "{}", none.err);
}

#[test]
fn scenario_an_overdue_decision_is_still_what_is_set_and_says_so() {
    let folder = Folder::usual();
    decide(&folder, &["--set", "N1=20", "--until", "2025-07-21"]);
    let kinds = |on: &str| {
        let told = run(&["rank", folder.named(), "--on", on, "--json"]).json();
        let notes = told["warnings"].as_array().into_iter().chain(told["notes"].as_array()).flatten();
        notes.map(|n| n["kind"].as_str().unwrap().to_owned()).collect::<Vec<_>>()
    };
    assert!(!kinds("2025-07-21").contains(&"overdue".to_owned()));
    assert!(kinds("2025-07-22").contains(&"overdue".to_owned()), "{:?}", kinds("2025-07-22"));
}

#[test]
fn scenario_an_event_is_logged_with_its_days() {
    let folder = Folder::usual();
    let event = |more: &[&str]| {
        let usual = ["log", folder.named(), "--event", "gauge buried in sand", "--by", "C. Crew"];
        run(&[&usual, more].concat())
    };
    assert_eq!(event(&["--from", "2025-07-10", "--until", "open"]).code, Some(0));
    let events = &log(&folder)["events"];
    assert_eq!((&events[0]["text"], &events[0]["until"]), (&"gauge buried in sand".into(), &Value::Null));
    assert_eq!(event(&["--from", "2025-07-10", "--until", "2025-07-12", "--amend", "1"]).code, Some(0));
    let events = &log(&folder)["events"];
    assert_eq!(events.as_array().unwrap().len(), 1);
    assert_eq!(events[0]["until"], "2025-07-12");
    assert!(event(&["--until", "2025-07-01"]).failed_with(2).contains("--until lies before --from"));
    assert!(event(&["--amend", "7"]).failed_with(2).contains("no event has that number"));
}

#[test]
fn scenario_what_cannot_be_logged_is_refused_and_nothing_is_written() {
    let folder = Folder::usual();
    let site = folder.named();
    let refused: [(&[&str], i32, &str); 9] = [
        (&["log", site, "--decide", "--why", "w"], 2, "the log needs --by NAME"),
        (&["log", site, "--decide", "--by", "b"], 2, "a decision needs --why TEXT"),
        (&["log", site, "--decide", "--by", " ", "--why", "w"], 2, "--by is empty"),
        (
            &["log", site, "--decide", "--by", "b", "--why", "w", "--until", "2025-07-01"],
            2,
            "--until lies before",
        ),
        (&["log", site, "--decide", "--by", "b", "--why", "w", "--set", "N9=3"], 2, "N9"),
        (&["log", site, "--decide", "--by", "b", "--why", "w", "--set", "N1=9000"], 3, "capacity"),
        (&["log", site, "--by", "b"], 2, "--by goes with --decide"),
        (&["log", site, "--set", "N1=20"], 2, "--set goes with --decide"),
        (&["log", "ashlar", "--decide", "--by", "b", "--why", "w"], 3, "it has no log to write"),
    ];
    for (arguments, code, words) in refused {
        let out = run(arguments);
        assert!(out.failed_with(code).contains(words), "{arguments:?}: {}", out.err);
    }
    assert!(!folder.path().join("log.jsonl").exists());
}

#[test]
fn scenario_lines_that_cannot_be_used_are_told_with_their_line_and_left() {
    let folder = Folder::usual();
    decide(&folder, &["--set", "N1=20"]);
    let path = folder.path().join("log.jsonl");
    let mut text = fs::read_to_string(&path).unwrap();
    text.push_str(
        "{\"line\":\"hindsight\",\"id\":7,\"new\":[1,2]}\n{\"line\":\"decision\",\"id\":8}\nnot JSON\n{\"line\":\"event\",\"id\":9,\"te\n",
    );
    fs::write(&path, &text).unwrap();
    let told = run(&["log", folder.named(), "--json"]).json();
    let told: Vec<(&str, u64)> = told["problems"]
        .as_array()
        .unwrap()
        .iter()
        .map(|p| (p["kind"].as_str().unwrap(), p["line"].as_u64().unwrap()))
        .collect();
    assert_eq!(told, [("log-newer", 2), ("log-line", 3), ("log-line", 4), ("log-torn", 5)]);
    let words = run(&["log", folder.named()]).out;
    assert!(words.contains("log-line (line 3)") && words.contains("log-torn (line 5)"), "{words}");
    // the next line is written after them, and they are kept
    assert_eq!(decide(&folder, &["--set", "N1=21"]).code, Some(0));
    assert!(fs::read_to_string(&path).unwrap().starts_with(&text));
    assert_eq!(log(&folder)["decisions"].as_array().unwrap().len(), 2);
    // and `check` tells them too
    assert!(run(&["check", folder.named()]).out.contains("log.jsonl:3: flag"));
}

#[test]
fn scenario_escapes_in_the_users_words_and_in_the_log_reach_no_terminal() {
    let folder = Folder::usual();
    let evil = "\u{1b}[31mred\u{9b}2J\u{202e}";
    let arguments =
        ["log", folder.named(), "--decide", "--by", evil, "--why", evil, "--trigger", evil, "--set", "N1=20"];
    run(&["log", folder.named(), "--event", evil, "--by", evil]);
    for out in [run(&arguments), run(&["log", folder.named()]), run(&["log", folder.named(), "--json"])] {
        assert_eq!(out.code, Some(0), "{}", out.err);
        assert!(out.out.chars().all(|c| c == '\n' || !(c.is_control() || c == '\u{202e}')), "{}", out.out);
        assert!(out.out.contains("red"));
    }
}
