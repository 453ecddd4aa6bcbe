//! README and program say the same.

use std::fs;

use assert_cmd::Command;

use crate::{read, root};

/// Commands whose output the README shows, in its order.
const COMMANDS: [&str; 2] = ["gatemix mix ashlar --set N2=500 --set S4=700", "gatemix rank ashlar"];

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
    assert_eq!(pieces.len(), COMMANDS.len() + 1, "a block for each command");
    let mut written = pieces[0].to_owned();
    for ((command, piece), before) in COMMANDS.iter().zip(&pieces[1..]).zip(&pieces) {
        assert!(before.contains(&format!("`{command}`")), "the README names {command} before its block");
        let (shown, tail) = piece.split_once("```").unwrap();
        let printed = printed(command);
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
