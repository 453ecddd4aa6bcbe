//! README and program say the same.

use std::fs;

use assert_cmd::Command;

use crate::{read, root};

/// What the README shows, in its order: a file of screens with the heading of one of them, or a command with the line
/// before which its answer is cut.
const SHOWN: [(&str, &str); 4] = [
    ("docs/screens/mix.txt", "mix at 80x24"),
    ("gatemix rank ashlar", ""),
    ("gatemix river ashlar", "Day by day"),
    ("gatemix season tessel", "Cold water"),
];

/// A screen, or what a command prints.
fn wanted((source, heading): (&str, &str)) -> String {
    if source.starts_with("gatemix ") {
        let whole = printed(source);
        let cut = whole.lines().take_while(|line| heading.is_empty() || !line.starts_with(heading));
        return cut.flat_map(|line| [line, "\n"]).collect();
    }
    let screens = read(source);
    let (_, screen) = screens.split_once(&format!("== {heading}\n")).unwrap();
    screen.split("== ").next().unwrap().to_owned()
}

/// What a command prints.
fn printed(command: &str) -> String {
    let output = Command::cargo_bin("gatemix")
        .unwrap()
        .args(command.split(' ').skip(1))
        // a file name in the working folder must not decide the answer
        .current_dir(root().join("docs"))
        .output()
        .unwrap();
    assert!(output.status.success());
    String::from_utf8(output.stdout).unwrap()
}

#[test]
fn unchanged_readme_shows_what_the_program_prints() {
    let readme = read("README.md");
    let pieces: Vec<&str> = readme.split("```text\n").collect();
    assert_eq!(pieces.len(), SHOWN.len() + 1, "a block for each");
    let mut written = pieces[0].to_owned();
    for ((source, piece), before) in SHOWN.iter().zip(&pieces[1..]).zip(&pieces) {
        assert!(before.contains(source.0), "the README names {} before its block", source.0);
        let (shown, tail) = piece.split_once("```").unwrap();
        let printed = wanted(*source);
        if std::env::var_os("GATEMIX_WRITE_README").is_none() {
            assert_eq!(shown, printed, "rewrite with GATEMIX_WRITE_README=1 cargo test --test house");
        }
        written.extend(["```text\n", &printed, "```", tail]);
    }
    if std::env::var_os("GATEMIX_WRITE_README").is_some() {
        fs::write(root().join("README.md"), written).unwrap();
    }
}

#[test]
fn law_readme_opens_with_the_job_and_two_commands() {
    let readme = read("README.md");
    let mut blocks = readme.split("\n\n");
    assert_eq!(blocks.next(), Some("# gatemix"));
    assert!(blocks.next().unwrap().contains("which of that water the river gets"));
    assert_eq!(blocks.next(), Some("```sh\ncargo run --release\ncargo test\n```"));
}

#[test]
fn law_the_readme_links_stand() {
    for part in read("README.md").split("](").skip(1) {
        let link = part.split(')').next().unwrap();
        if !link.starts_with("http") {
            assert!(root().join(link).exists(), "README links to {link}");
        }
    }
}
