//! The note by the built program: of what it is, what it says and does not say, in three formats and as JSON.

use std::fs;

use serde_json::Value;

use crate::{CAST, Folder, Run, run, with};

/// The small site with few members: bands are not what is looked at here.
fn small() -> String {
    with(crate::SITE, "cold_water:", "band: { members: 40 }\ncold_water:")
}

fn usual() -> Folder {
    Folder::new(&small(), &[("2025-07-14.csv", CAST.as_bytes())])
}

/// A note of a folder, more typed behind.
fn note(folder: &Folder, more: &[&str]) -> Run {
    run(&[&["note", folder.named()], more].concat())
}

/// Its text as one line, so that where it is wrapped does not matter.
fn said(folder: &Folder, more: &[&str]) -> String {
    let out = note(folder, more);
    assert_eq!(out.code, Some(0), "{}", out.err);
    out.out.split_whitespace().collect::<Vec<_>>().join(" ")
}

fn decide(folder: &Folder, more: &[&str]) {
    let usual = ["log", folder.named(), "--decide", "--by", "A. Crew", "--why", "holding water is needed"];
    assert_eq!(run(&[&usual, more].concat()).code, Some(0));
}

/// Two gates on a well that takes one water or the other, at least some always.
const WELL: &str = r"wells: [ { name: North, conduit: 2 } ]
outlets:
  - { name: N1, well: North, centre: 45, height: 3, width: 4, loss: 1.5, positions: [0, 50, 100] }
  - { name: N2, well: North, centre: 30, height: 3, width: 4, loss: 1.5, positions: [0, 50, 100] }
now: { N1: 100%, North: 20 }
release: { min: 5 }
";

fn well(more: &str) -> Folder {
    let whole = small();
    let (head, rest) = whole.split_once("outlets:").unwrap();
    let (_, targets) = rest.split_once("targets:").unwrap();
    let site = format!("{head}{WELL}{more}targets:{targets}");
    Folder::new(&site, &[("2025-07-14.csv", CAST.as_bytes())])
}

#[test]
fn scenario_without_a_decision_it_is_of_the_first_ranked_mix_and_says_so() {
    let folder = usual();
    let ranked = run(&["rank", folder.named(), "--json"]).json();
    let made = note(&folder, &["--json"]).json();
    assert_eq!((&made["of"], &made["decision"]), (&"first_ranked".into(), &Value::Null));
    assert_eq!(made["set"], ranked["mixes"][0]["set"]);
    for figure in ["temperature_c", "oxygen_below_mg_l", "band_c", "band_oxygen_mg_l"] {
        assert_eq!(made["release"][figure], ranked["mixes"][0]["release"][figure], "{figure}");
    }
    assert_eq!(made["now"]["set"], serde_json::json!({ "N1": 30.0, "Sluice": 5.0 }));
    // the next full hour
    assert_eq!(made["begins"], "2025-07-14T11:00:00-07:00");
    let text = said(&folder, &[]);
    assert!(text.contains("the first ranked mix: no decision of the log holds on this date"), "{text}");
    assert!(text.contains("Begins 2025-07-14 11:00 -07:00, not before"), "{text}");
    // nobody gave a plan, a river, words of an order: said, and left blank
    assert!(text.contains("No season is told: the site has no plan of a season"), "{text}");
    assert!(text.contains("Arrival and stage down the river are not computed"), "{text}");
    let blank = "To Hold Stop_when May_cancel Downstream_warned Prepared_by,_with_date_and_time Why_it_is_done Earlier_when";
    for label in blank.split(' ') {
        let label = label.replace('_', " ");
        assert!(text.contains(&format!("{label} ______")), "{label}: {text}");
    }
}

#[test]
fn scenario_right_after_a_decision_the_change_to_it_is_ordered_and_a_day_later_the_gates_stand() {
    let folder = usual();
    decide(
        &folder,
        &["--set", "N1=20", "--set", "Sluice=10", "--until", "2025-07-21", "--trigger", "it warms"],
    );
    let made = note(&folder, &["--json"]).json();
    assert_eq!((&made["of"], &made["decision"]), (&"decision".into(), &1.into()));
    assert_eq!(made["now"]["set"], serde_json::json!({ "N1": 30.0, "Sluice": 5.0 }));
    assert_eq!(made["set"], serde_json::json!({ "N1": 20.0, "Sluice": 10.0 }));
    assert_eq!((&made["stands"], &made["begins"]), (&false.into(), &"2025-07-14T10:30:00-07:00".into()));
    // open before shut
    let steps = made["order"]["steps"].as_array().unwrap();
    let moves: Vec<&str> = steps.iter().map(|step| step["moves"].as_str().unwrap()).collect();
    assert_eq!(moves, ["Sluice", "N1"]);
    assert_eq!(made["why"], "holding water is needed");
    let text = said(&folder, &[]);
    for told in [
        "decision 1 of the log",
        "Why holding water is needed",
        "Decided again by 2025-07-21",
        "Earlier when it warms",
    ] {
        assert!(text.contains(told), "{told}: {text}");
    }
    assert!(!text.contains("Why it is done ___"), "{text}");
    // some minutes later, the decision begun: the next full hour
    let later = note(&folder, &["--on", "2025-07-14T10:40", "--json"]).json();
    assert_eq!(later["begins"], "2025-07-14T11:00:00-07:00");
    assert_eq!(later["order"]["steps"].as_array().unwrap().len(), 2);
    // a day later
    let text = said(&folder, &["--on", "2025-07-15"]);
    assert!(text.contains("The gates stand already as they are to stand."), "{text}");
    assert!(text.contains("Agency note"), "{text}");
    assert!(
        !text.contains("NOT READY") && !text.contains("Dam safety, with") && !text.contains("Not before"),
        "{text}"
    );
    // once it is to be decided again no decision holds
    let over = note(&folder, &["--on", "2025-07-22", "--json"]).json();
    assert_eq!((&over["of"], &over["now"]["set"]["N1"]), (&"first_ranked".into(), &20.0.into()));
}

#[test]
fn scenario_gates_that_are_named_come_before_the_log_and_what_is_set_already_stands() {
    let folder = usual();
    decide(&folder, &["--set", "N1=20@100%", "--set", "Sluice=10@100%"]);
    let made =
        note(&folder, &["--set", "N1=25", "--set", "Sluice=5", "--at", "2025-07-16T06:30", "--json"]).json();
    assert_eq!((&made["of"], &made["now"]["set"]["N1"]), (&"named".into(), &20.0.into()));
    assert_eq!(made["begins"], "2025-07-16T06:30:00-07:00");
    let same = note(&folder, &["--set", "N1=20", "--set", "Sluice=10", "--json"]).json();
    assert_eq!(
        (&same["stands"], &same["order"], &same["not_ready"]),
        (&true.into(), &Value::Null, &Value::Array(vec![]))
    );
}

#[test]
fn scenario_where_there_is_no_order_the_step_in_the_way_is_told_and_nothing_that_looks_like_one() {
    let two = "--open N2=100% --set North=20".split(' ').collect::<Vec<_>>();
    let held = WELL.replace("positions", "moves_under_flow: false, positions");
    let whole = small();
    let (head, rest) = whole.split_once("outlets:").unwrap();
    let site = format!("{head}{held}targets:{}", rest.split_once("targets:").unwrap().1);
    let held = Folder::new(&site, &[("2025-07-14.csv", CAST.as_bytes())]);
    let rated = well("limits: { max_temperature_change_per_hour: 0.5 }\n");
    for (folder, begins) in [(&held, "no order found: step 1"), (&rated, "impossible: step")] {
        let text = said(folder, &two);
        assert!(text.contains(begins) && text.contains("No order of moves is written."), "{text}");
        assert!(text.contains("NOT READY FOR SIGNATURE"), "{text}");
        for looks in ["Not before", "Nearest limit", "Dam safety, with", "Stop when"] {
            assert!(!text.contains(looks), "{looks}: {text}");
        }
        let made = note(folder, &[&two[..], &["--json"]].concat()).json();
        assert!(
            made["order"].is_null() && made["no_order"].as_str().unwrap().starts_with(begins),
            "{made:#}"
        );
    }
    // the setting wanted itself
    let short = Folder::new(
        &with(&small(), "now:", "release: { min: 15 }\nnow:"),
        &[("2025-07-14.csv", CAST.as_bytes())],
    );
    let text = said(&short, &["--set", "N1=10"]);
    assert!(text.contains("the setting wanted itself misses release.min"), "{text}");
    // and where nobody knows what is set
    let unknown = Folder::new(
        &with(&small(), "now: { N1: 30, Sluice: 5 }\n", "release: { wanted: 35 }\n"),
        &[("2025-07-14.csv", CAST.as_bytes())],
    );
    let text = said(&unknown, &[]);
    assert!(
        text.contains("Set now NOT KNOWN")
            && text.contains("No order of moves: nobody knows what is set now"),
        "{text}"
    );
    assert!(!text.contains("Not before"), "{text}");
}

/// A site that leaves no limit of structure or water control out, with its own words for an order.
fn ready() -> Folder {
    let site = with(&small(), "demonstration: true\n", "");
    let site = with(&site, "example only", "the licence (invented)");
    let whole =
        "min_submergence: 4, pool_window: [50, 62], moves_under_flow: true, flow: { min: 2, max: 80 } }";
    let site = with(&site, "min_submergence: 4, flow: { min: 2, max: 80 } }", whole);
    let whole = "min_submergence: 4, pool_window: [20, 62], moves_under_flow: true, flow: { max: 40 } }";
    let site = with(&site, "flow: { max: 40 } }", whole);
    let limits = "release: { min: 5, max: 90 }\ninflow: 30\nlimits: { max_flow_change_per_hour: 5, max_flow_change_per_day: 30, max_drawdown_per_day: 0.5 }\n\
        order: { to: shift crew, hold_points: [ { after: Sluice, text: watch the basin } ], stop_when: [ it shakes ], may_cancel: control room, warning: sirens, sign: [ Ordered by ] }\n";
    let site = with(&site, "now: { N1: 30, Sluice: 5 }\n", limits);
    let folder = Folder::new(&site, &[("2025-07-14.csv", CAST.as_bytes())]);
    decide(&folder, &["--on", "2025-07-14T08:00", "--set", "N1=30@100%", "--set", "Sluice=5@100%"]);
    folder
}

#[test]
fn scenario_a_note_is_ready_when_nothing_stands_in_the_way_and_says_the_words_of_the_site() {
    let folder = ready();
    let asked = ["--on", "2025-07-14T11:00", "--set", "N1=20@100%", "--set", "Sluice=15@100%"];
    let made = note(&folder, &[&asked[..], &["--json"]].concat()).json();
    assert_eq!(made["not_ready"], Value::Array(vec![]), "{made:#}");
    let text = said(&folder, &asked);
    assert!(!text.contains("NOT READY"), "{text}");
    for told in [
        "To shift crew",
        "watch the basin",
        "Stop when it shakes",
        "May cancel control room",
        "Downstream warned sirens",
    ] {
        assert!(text.contains(told), "{told}: {text}");
    }
    assert!(
        text.contains("Ordered by, with date and time ___") && !text.contains("Dam safety, with"),
        "{text}"
    );
    // 10 m3/s in an hourly 5: two halves an hour apart, each way
    let steps = made["order"]["steps"].as_array().unwrap();
    let times: Vec<f64> = steps.iter().map(|step| step["at_min"].as_f64().unwrap()).collect();
    assert!(times.first() == Some(&0.0) && times.iter().any(|at| *at >= 60.0), "{times:?}");
    assert!(text.contains("2025-07-14 12:00"), "{text}");
    // each of these alone takes it back
    let reasons = |more: &[&str]| -> String {
        note(&folder, &[more, &["--json"]].concat()).json()["not_ready"].to_string()
    };
    let stale = ["--on", "2025-08-14T11:00", "--set", "N1=20@100%", "--set", "Sluice=15@100%"];
    assert!(reasons(&stale).contains("31 days old, stale after 14"), "{}", reasons(&stale));
}

/// Words of the first system without the second behind them, or of the second outside brackets.
fn alone(text: &str) -> Vec<String> {
    let words: Vec<&str> = text.split_whitespace().collect();
    let bare = |word: &str| word.trim_end_matches([',', ';', ':', '.', ')', ']']).to_owned();
    let mut out = Vec::new();
    for (at, word) in words.iter().enumerate() {
        let next = words.get(at + 1).copied().unwrap_or_default();
        let is_figure = at > 0 && words[at - 1].ends_with(|c: char| c.is_ascii_digit());
        let first = ["cfs", "F", "ft", "acre-ft"].contains(&bare(word).as_str()) && !next.starts_with('(');
        let second = ["m3/s", "C", "m", "m3"].contains(&bare(word).as_str()) && !word.contains(')');
        if is_figure && (first || second) {
            out.push(words[at.saturating_sub(3)..(at + 3).min(words.len())].join(" "));
        }
    }
    out
}

#[test]
fn scenario_every_quantity_stands_in_both_systems_and_no_word_judges() {
    let folder = ready();
    for more in [&["--set", "N1=20@100%", "--set", "Sluice=15@100%"][..], &[]] {
        // a cell of a table stands on one line there
        let usual = ["--on", "2025-07-14T11:00", "--units", "us", "--format", "md"];
        let text = said(&folder, &[&usual, more].concat()).replace('\\', "");
        let missing = alone(&text);
        assert!(missing.is_empty() && text.contains(" cfs ("), "{missing:#?}");
        let words = text.replace("the approved water control plan", "").to_lowercase();
        for word in ["compliant", "acceptable", "legal", "approved", " safe ", "probability", "chance"] {
            assert!(!words.contains(word), "{word}: {text}");
        }
    }
}

#[test]
fn scenario_hostile_names_and_words_stay_text_in_every_format() {
    let script = "<script>alert(1)</script>";
    let site = with(&small(), "name: Test Dam (invented)", &format!("name: \"{script}\\e[31m\""));
    let site = site.replace("Sluice", "\"<img>\"");
    let folder = Folder::new(&site, &[("2025-07-14.csv", CAST.as_bytes())]);
    let words = format!("{script}\u{1b}[31m | `a` _b_ \n# c");
    let asked = ["--why", words.as_str(), "--remarks", words.as_str()];
    for format in ["txt", "md", "html"] {
        let more = [&asked[..], &["--format", format]].concat();
        let out = note(&folder, &more);
        assert_eq!(out.code, Some(0), "{}", out.err);
        assert!(!out.out.chars().any(|c| c.is_control() && c != '\n'), "{format}");
        assert!(out.out.contains("alert(1)") || out.out.contains("alert\\(1\\)"), "{format}");
        if format == "html" {
            assert!(!out.out.contains("<script") && !out.out.contains("<img"), "{}", out.out);
        }
        if format == "md" {
            assert!(!out.out.replace("\\<", "").contains("<script"), "{}", out.out);
        }
        assert_eq!(note(&folder, &more), out, "{format}");
    }
}

#[test]
fn scenario_a_file_is_written_whole_and_none_of_other_contents_is_written_over_unasked() {
    let folder = usual();
    let path = folder.path().join("note.html");
    let out = path.to_str().unwrap();
    let first = note(&folder, &["--out", out]);
    assert_eq!((first.code, first.out.starts_with("wrote ")), (Some(0), true), "{}", first.err);
    let written = fs::read_to_string(&path).unwrap();
    assert!(written.to_lowercase().starts_with("<!doctype html>"), "the ending tells the format");
    assert_eq!(written, note(&folder, &["--format", "html"]).out);
    assert!(note(&folder, &["--out", out]).out.contains("holds it already"));
    let other = note(&folder, &["--out", out, "--why", "other words"]);
    assert!(other.failed_with(1).contains("--replace"), "{}", other.err);
    assert_eq!(fs::read_to_string(&path).unwrap(), written);
    assert_eq!(note(&folder, &["--out", out, "--why", "other words", "--replace"]).code, Some(0));
    assert!(fs::read_to_string(&path).unwrap().contains("other words"));
    let nowhere = folder.path().join("site.yaml").join("note.md");
    note(&folder, &["--out", nowhere.to_str().unwrap()]).failed_with(1);
}

#[test]
fn scenario_what_cannot_be_understood_and_what_gives_no_note() {
    let folder = usual();
    for (more, told) in [
        (&["--at", "noon"][..], "--at noon"),
        (&["--at", "2025-07-14T09:00"], "lies before the moment of the answer"),
        (&["--plan", "none"], "--plan"),
        (&["--set", "N9=3"], "no gate is named `N9`"),
        (&["--format", "pdf"], "pdf"),
        (&["--replace"], "--out"),
    ] {
        let out = note(&folder, more);
        assert!(out.failed_with(2).contains(told), "{more:?}: {}", out.err);
    }
    let none = Folder::new(
        &with(&small(), "now:", "release: { min: 500, wanted: 600 }\nnow:"),
        &[("2025-07-14.csv", CAST.as_bytes())],
    );
    let out = note(&none, &[]);
    assert!(out.failed_with(3).contains("nothing to write a note of"), "{}", out.err);
}

#[test]
fn scenario_what_lasts_by_the_log_stands_before_the_signatures() {
    let folder = usual();
    let why = "N1 hoist failed";
    let event = ["log", folder.named(), "--event", why, "--by", "A. Crew", "--until"];
    let told = "event 1 of the log lasts: N1 hoist failed";
    assert!(!said(&folder, &[]).contains(told));
    assert_eq!(run(&[&event[..], &["open"]].concat()).code, Some(0));
    let words = said(&folder, &[]);
    let (before, _) = words.split_once("Moves, one after the other").unwrap();
    assert!(before.contains("NOT READY FOR SIGNATURE") && before.contains(told), "{before}");
    // whoever chooses gates is told as well
    for task in ["rank", "mix"] {
        let out = run(&[task, folder.named(), "--on", "2025-07-14T11:00"]);
        assert!(out.out.contains(told), "{task}: {}", out.out);
    }
    // once it is over it keeps nobody
    assert_eq!(run(&[&event[..], &["2025-07-14", "--amend", "1"]].concat()).code, Some(0));
    assert!(!said(&folder, &["--at", "2025-07-15T08:00"]).contains(told));
}

#[test]
fn scenario_the_greatest_flow_on_the_way_is_told_and_no_other_format_is_written() {
    let folder = usual();
    // what opens goes before what shuts, so the flow is greater between than before and after
    let swapped = said(&folder, &["--set", "N1=20", "--set", "Sluice=15"]);
    assert!(swapped.contains("now 35.0 m3/s (1,236 cfs), on the way up to 45.0 m3/s"), "{swapped}");
    let more = said(&folder, &["--set", "N1=30", "--set", "Sluice=15"]);
    assert!(!more.contains("on the way up to"), "the end is the greatest: {more}");
    let out = folder.path().join("note.pdf");
    let refused = note(&folder, &["--out", out.to_str().unwrap()]);
    assert!(refused.failed_with(2).contains(".md, .txt or .html") && !out.exists(), "{}", refused.err);
}
