//! README and program say the same.

use std::fs;

use assert_cmd::Command;

use crate::{read, root};

const COMMAND: &str = "gatemix mix ashlar --set N2=500 --set S4=700";

/// What the command in the README prints.
fn printed() -> String {
    let mut words = COMMAND.split(' ').skip(1);
    let output = Command::cargo_bin("gatemix")
        .unwrap()
        .args(&mut words)
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
    assert!(readme.contains(COMMAND), "the README names the command it shows");
    let (head, rest) = readme.split_once("```text\n").unwrap();
    let (shown, tail) = rest.split_once("```").unwrap();
    let printed = printed();
    if std::env::var_os("GATEMIX_WRITE_README").is_some() {
        fs::write(root().join("README.md"), format!("{head}```text\n{printed}```{tail}")).unwrap();
        return;
    }
    assert_eq!(shown, printed, "rewrite with GATEMIX_WRITE_README=1 cargo test --test house");
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
