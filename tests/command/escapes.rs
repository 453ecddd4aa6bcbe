//! Terminal escapes in files, names and arguments never reach a terminal raw.

use std::fs;

use crate::{CAST, Folder, SITE, program, with};

/// Forced colour, so that nothing takes the escapes out on the way to a pipe.
fn bytes(arguments: &[&str]) -> Vec<u8> {
    let output = program().args(arguments).env("CLICOLOR_FORCE", "1").output().unwrap();
    [output.stdout, output.stderr].concat()
}

/// Neither escapes nor other controls, in one or in two bytes.
fn harmless(arguments: &[&str], shows: &str) {
    let text = String::from_utf8(bytes(arguments)).unwrap();
    // the program's own weight of a word
    let text = text.replace("\u{1b}[1m", "").replace("\u{1b}[0m", "");
    let raw: Vec<char> = text.chars().filter(|c| c.is_control() && *c != '\n').collect();
    assert!(raw.is_empty(), "{raw:?} in {arguments:?}:\n{text}");
    assert!(text.contains(shows), "no `{shows}` in {arguments:?}:\n{text}");
}

/// A site and a cast full of escapes: in every name and text, in a header, in a comment, in a file name.
fn hostile() -> Folder {
    let evil = r#""\e[31m\u202e\u009b2JEvil\a""#;
    let site = with(SITE, "name: Test Dam (invented)", &format!("name: {evil}\nriver: {evil}"));
    let site = with(&site, "datum: local", &format!("datum: {evil}"));
    let site = site.replace("name: N1", r#"name: "N\e[7m1""#).replace("{ N1: 30", r#"{ "N\e[7m1": 30"#);
    let site = with(&site, "name: holding", &format!("name: {evil}"));
    let site = with(&site, "\"example only\"", evil);
    let cast = with(CAST, "oxygen_mg_l", "oxygen_mg_l,\u{1b}[2Jturbidity\u{9b}1m");
    let cast: String =
        cast.lines()
            .map(|l| {
                if l.starts_with(|c: char| c.is_ascii_digit()) {
                    format!("{l},1\n")
                } else {
                    format!("{l}\n")
                }
            })
            .collect();
    Folder::new(&site, &[("a\u{1b}[31m.csv", cast.as_bytes()), ("b\u{1b}[31m.csv", b"torn \x1b[2J\n")])
}

#[test]
fn scenario_escapes_in_a_site_and_its_casts_are_shown_not_sent() {
    let folder = hostile();
    let site = folder.named();
    harmless(&["pool", site], "\\u{1b}[31m");
    harmless(&["mix", site], "\\u{1b}[31m");
    harmless(&["mix", site, "--set", "Sluice=30", "--color", "never"], "\\u{1b}[31m");
    harmless(&["rank", site], "\\u{1b}[7m1");
    harmless(&["check", site], "\\u{1b}[31m.csv");
}

#[test]
fn scenario_escapes_in_what_is_refused_are_shown_not_sent() {
    let folder = Folder::usual();
    let site = folder.named();
    harmless(&["pool", "no\u{1b}[31msite\u{9b}2J"], "\\u{1b}[31m");
    harmless(&["pool", site, "--profile", "no\u{1b}]0;title\u{7}cast"], "\\u{1b}]0;");
    harmless(&["mix", site, "--set", "\u{1b}[31mN1=30"], "\\u{1b}[31m");
    harmless(&["mix", site, "--set", "N1=\u{1b}[31m30"], "u{1b}");
    harmless(&["pool", site, "--pool", "6\u{1b}[31m0"], "u{1b}");
    harmless(&["pool", site, "--on", "\u{1b}[31m2025"], "u{1b}");
    fs::write(folder.site_file(), with(SITE, "datum: local", "\"da\\e[31mtum\": local\n\"x\\e[2J\": .nan"))
        .unwrap();
    harmless(&["pool", site], "\\u{1b}[2J");
    fs::write(folder.site_file(), with(SITE, "centre: 45", "centre: \"4\\e[2J5\"")).unwrap();
    harmless(&["pool", site], "u{1b}");
    fs::write(folder.site_file(), with(SITE, "datum: local", "datum: [\u{1b}[2J")).unwrap();
    harmless(&["pool", site], "refused");
}

#[test]
fn scenario_escapes_in_a_folder_to_write_to_are_shown_not_sent() {
    let dir = tempfile::tempdir().unwrap();
    let folder = dir.path().join("new\u{1b}[31mplace");
    harmless(&["demo", folder.to_str().unwrap()], "\\u{1b}[31mplace");
    fs::write(folder.join("ashlar/site.yaml"), "mine").unwrap();
    harmless(&["demo", folder.to_str().unwrap()], "\\u{1b}[31mplace");
}

/// JSON keeps the names as they are, escaped by its own rule.
#[test]
fn scenario_json_of_hostile_names_has_no_escape_and_reads_back() {
    let folder = hostile();
    for task in ["pool", "mix", "rank"] {
        let out = bytes(&[task, folder.named(), "--json"]);
        assert!(!out.contains(&0x1b));
        let answer: serde_json::Value = serde_json::from_slice(&out).unwrap();
        assert_eq!(answer["site"], "\u{1b}[31m\u{202e}\u{9b}2JEvil\u{7}");
    }
}
