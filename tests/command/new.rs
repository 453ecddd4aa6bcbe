//! A site to start from: written, sound, answered, and never over what is there.

use std::fs;
use std::path::Path;

use crate::{program, run};

const UNITS: [&str; 2] = ["us", "si"];

fn names(folder: &Path) -> Vec<String> {
    let mut names: Vec<String> =
        fs::read_dir(folder).unwrap().map(|e| e.unwrap().file_name().into_string().unwrap()).collect();
    names.sort();
    names
}

#[test]
fn scenario_a_new_site_is_sound_and_every_task_answers_on_it() {
    for units in UNITS {
        let dir = tempfile::tempdir().unwrap();
        let folder = dir.path().join("far/my dam");
        let named = folder.to_str().unwrap();
        let written = run(&["new", named, "--units", units]);
        assert_eq!((written.code, written.err.as_str()), (Some(0), ""));
        assert!(written.out.contains(&format!("{named}/site.yaml")), "{}", written.out);
        assert!(written.out.ends_with(&format!("gatemix check {named}\n")), "{}", written.out);
        assert_eq!(names(&folder), ["profiles", "site.yaml"]);

        let checked = run(&["check", named]);
        assert_eq!(checked.code, Some(0), "{}", checked.out);
        assert!(checked.out.ends_with(": 0 refused, 0 flagged, 0 noted\n"), "{}", checked.out);

        for task in ["pool", "mix", "rank"] {
            let shown = run(&[task, named]);
            assert_eq!((shown.code, shown.err.as_str()), (Some(0), ""), "{task}");
            assert!(shown.out.contains("[demonstration]"), "{}", shown.out);
            let elevation = if units == "us" { "Pool  996.0 ft" } else { "Pool  298.5 m" };
            assert!(shown.out.contains(elevation), "{}", shown.out);
            assert_eq!(run(&[task, named, "--json"]).json()["demonstration"], true);
        }
        let rank = run(&["rank", named, "--json"]).json();
        assert_eq!(rank["mixes"][0]["targets"][0]["standing"], "inside");
        assert!(
            rank["now"]["moves"].as_u64().is_some(),
            "the template says how the gates stand: {}",
            rank["now"]
        );
    }
}

#[test]
fn scenario_without_the_marked_line_nothing_is_a_demonstration_any_more() {
    for units in UNITS {
        let dir = tempfile::tempdir().unwrap();
        let named = dir.path().to_str().unwrap();
        assert_eq!(run(&["new", named, "--units", units]).code, Some(0), "an empty folder is fine");
        let file = dir.path().join("site.yaml");
        let text = fs::read_to_string(&file).unwrap();
        let before = text.split("demonstration: true\n").next().unwrap();
        assert!(before.lines().last().unwrap().contains("TAKE THIS LINE OUT"), "{before}");
        fs::write(&file, text.replace("demonstration: true\n", "")).unwrap();
        let pool = run(&["pool", named, "--json"]).json();
        assert_eq!((&pool["demonstration"], &pool["on_from"]), (&false.into(), &"the clock".into()));
    }
}

#[test]
fn scenario_a_second_new_refuses_and_leaves_every_byte() {
    let dir = tempfile::tempdir().unwrap();
    let named = dir.path().to_str().unwrap();
    assert_eq!(run(&["new", named]).code, Some(0));
    let (site, cast) = (dir.path().join("site.yaml"), dir.path().join("profiles/example.csv"));
    fs::write(&site, "mine\n").unwrap();
    fs::write(&cast, "mine too\n").unwrap();
    let stays = || (fs::read_to_string(&site).ok(), fs::read_to_string(&cast).ok());
    for units in UNITS {
        let again = run(&["new", named, "--units", units]);
        let said = again.failed_with(1);
        assert!(said.contains("refused: this file is there already; nothing was written"), "{said}");
        assert_eq!(stays(), (Some("mine\n".into()), Some("mine too\n".into())));
    }
    fs::remove_file(&cast).unwrap();
    assert!(run(&["new", named]).failed_with(1).contains("site.yaml: refused"));
    assert_eq!(stays(), (Some("mine\n".into()), None), "a cast is not put beside a site of the user's");
    fs::remove_file(&site).unwrap();
    fs::write(&cast, "mine too\n").unwrap();
    assert!(run(&["new", named]).failed_with(1).contains("example.csv: refused"));
    assert_eq!(stays(), (None, Some("mine too\n".into())));
}

#[test]
fn scenario_new_stands_beside_casts_of_other_names() {
    let dir = tempfile::tempdir().unwrap();
    let profiles = dir.path().join("profiles");
    fs::create_dir(&profiles).unwrap();
    fs::write(profiles.join("2025-08-01.csv"), "mine\n").unwrap();
    assert_eq!(run(&["new", dir.path().to_str().unwrap()]).code, Some(0));
    assert_eq!(names(&profiles), ["2025-08-01.csv", "example.csv"]);
    assert_eq!(fs::read_to_string(profiles.join("2025-08-01.csv")).unwrap(), "mine\n");
}

#[cfg(unix)]
#[test]
fn scenario_a_link_that_leads_nowhere_is_not_written_through() {
    let dir = tempfile::tempdir().unwrap();
    let elsewhere = dir.path().join("elsewhere.yaml");
    std::os::unix::fs::symlink(&elsewhere, dir.path().join("site.yaml")).unwrap();
    assert!(run(&["new", dir.path().to_str().unwrap()]).failed_with(1).contains("site.yaml: refused"));
    assert!(!elsewhere.exists());
    assert_eq!(names(dir.path()), ["site.yaml"]);
}

#[test]
fn scenario_new_below_a_file_and_without_a_folder_fails_with_what_to_do() {
    let dir = tempfile::tempdir().unwrap();
    let file = dir.path().join("file");
    fs::write(&file, "x").unwrap();
    let below = run(&["new", file.join("dam").to_str().unwrap()]);
    assert!(below.failed_with(1).contains("name a folder you may write to"), "{}", below.err);
    assert_eq!(fs::read_to_string(&file).unwrap(), "x");
    assert!(run(&["new"]).failed_with(2).contains("<FOLDER>"));
    assert!(run(&["new", "dam", "--units", "feet"]).failed_with(2).contains("us, si"));
}

#[test]
fn scenario_new_works_from_where_one_stands_and_help_names_it() {
    let dir = tempfile::tempdir().unwrap();
    let output = program().args(["new", "."]).current_dir(dir.path()).output().unwrap();
    assert_eq!(output.status.code(), Some(0));
    assert_eq!(names(dir.path()), ["profiles", "site.yaml"]);
    assert!(run(&["--help"]).out.contains("Begin a site of your own"));
    assert!(run(&["man"]).out.contains("Begin a site of your own"));
}
