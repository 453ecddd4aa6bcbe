//! The report of a season, by the built program.

use std::fs;

use crate::past::folder;
use crate::{Folder, Run, run};

fn report(folder: &Folder, more: &[&str]) -> Run {
    run(&[&["report", folder.named()], more].concat())
}

/// A past with a decision, an event and a gauge.
fn told() -> Folder {
    let folder = folder().0;
    let why = "<script>alert(1)</script>\u{1b}[31m | *a* `b`";
    let decide = ["--decide", "--by", "A. Crew", "--why", why, "--set", "N1=30", "--on", "2025-07-14T12:00"];
    assert_eq!(run(&[&["log", folder.named()], &decide[..]].concat()).code, Some(0));
    let event = ["--event", "meter fault", "--by", "C. Crew", "--from", "2025-07-18"];
    assert_eq!(run(&[&["log", folder.named()], &event[..]].concat()).code, Some(0));
    folder
}

#[test]
fn scenario_a_report_tells_the_numbers_of_the_log() {
    let folder = told();
    let (told, log) = (report(&folder, &["--json"]).json(), run(&["log", folder.named(), "--json"]).json());
    assert!(
        log["past"]["scores"]["temperature"]["all"]["n"].as_u64() >= Some(8),
        "{}",
        log["past"]["scores"]
    );
    for key in ["days", "scores", "decisions", "left_out", "spells", "learning"] {
        assert_eq!(told["past"][key], log["past"][key], "{key}");
    }
    assert_eq!(told["decisions"], log["decisions"]);
    assert_eq!(told["events"][0]["text"], "meter fault");
    // days of a span are told alone
    let some = report(&folder, &["--json", "--from", "2025-07-16", "--to", "2025-07-20"]).json();
    assert_eq!((&some["from"], &some["to"]), (&"2025-07-16".into(), &"2025-07-20".into()));
    assert_eq!(some["past"]["days"].as_array().map(Vec::len), Some(5));
}

#[test]
fn scenario_a_report_is_the_same_twice_and_harmless_in_every_format() {
    let folder = told();
    for format in ["txt", "md", "html"] {
        let out = report(&folder, &["--format", format]);
        assert_eq!(out.code, Some(0), "{}", out.err);
        assert_eq!(out, report(&folder, &["--format", format]), "{format}");
        assert!(!out.out.chars().any(|c| c.is_control() && c != '\n'), "{format}");
        assert!(out.out.contains("alert"), "{format}: the words of the user are told");
        let bare = out.out.replace("\\<", "");
        assert!(format == "txt" || !bare.contains("<script"), "{format}");
        assert!(out.out.contains("meter fault"), "{format}");
    }
    let path = folder.path().join("season.html");
    assert_eq!(report(&folder, &["--out", path.to_str().unwrap()]).code, Some(0));
    assert_eq!(fs::read_to_string(path).unwrap(), report(&folder, &["--format", "html"]).out);
}

#[test]
fn scenario_days_of_which_nothing_is_told_and_dates_that_are_none() {
    let folder = told();
    let nothing = report(&folder, &["--from", "2010-01-01", "--to", "2010-02-01"]);
    assert!(nothing.failed_with(3).contains("nothing is told"), "{}", nothing.err);
    assert!(report(&folder, &["--from", "2025-13-01"]).failed_with(2).contains("--from"));
    let turned = report(&folder, &["--from", "2025-07-20", "--to", "2025-07-16"]);
    assert!(turned.failed_with(2).contains("lies before"), "{}", turned.err);
}
