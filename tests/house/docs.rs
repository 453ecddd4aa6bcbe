//! Docs and code name each other; the top level and the words of the house.

use std::collections::BTreeSet;
use std::fs;

use crate::{read, root, sources};

/// Files named in `docs/methods.md` with the sections that name them.
fn named_in_methods() -> BTreeSet<(String, String)> {
    let mut section = String::new();
    let mut out = BTreeSet::new();
    for line in read("docs/methods.md").lines() {
        if let Some(heading) = line.strip_prefix("## ") {
            heading.split('.').next().unwrap_or("").clone_into(&mut section);
        }
        for piece in line.split('`').skip(1).step_by(2) {
            if piece.starts_with("src/") {
                out.insert((piece.to_owned(), section.clone()));
            }
        }
    }
    out
}

#[test]
fn law_methods_and_files_name_each_other() {
    let named = named_in_methods();
    assert!(named.len() >= 20, "too few formulas name a file: {}", named.len());
    for (file, section) in &named {
        let text = read(file);
        let back = text.lines().take_while(|l| l.starts_with("//!")).any(|l| {
            l.contains("docs/methods.md") && l.split(|c: char| !c.is_ascii_digit()).any(|n| n == section)
        });
        assert!(back, "{file} does not name section {section} of docs/methods.md in its head");
    }
    for (file, text) in sources("src") {
        let speaks = text.lines().take_while(|l| l.starts_with("//!")).any(|l| l.contains("docs/methods.md"));
        if speaks {
            assert!(named.iter().any(|(f, _)| *f == file), "docs/methods.md does not name {file}");
        }
    }
}

#[test]
fn law_the_top_level_is_the_owners_list() {
    let allowed = [
        "Cargo.toml",
        "Cargo.lock",
        "README.md",
        "DEVELOPERS.md",
        "LICENSE",
        "src",
        "sites",
        "tests",
        "docs",
    ];
    for entry in fs::read_dir(root()).unwrap() {
        let name = entry.unwrap().file_name().to_string_lossy().into_owned();
        assert!(name.starts_with('.') || name == "target" || allowed.contains(&name.as_str()), "{name}");
    }
}

#[test]
fn law_every_coefficient_says_how_sure() {
    let mut silent = Vec::new();
    let sure = ["standard", "derived", "recalled", "choice", "from memory", "no source", "exact"];
    let parts =
        ["water", "weather", "series", "target", "site", "profile", "river", "withdrawal", "intake", "mix"];
    let folders = parts.map(|part| format!("src/{part}"));
    let upper = ["src/order", "src/rank", "src/season", "src/tasks", "src/files"].map(str::to_owned);
    for folder in folders.iter().chain(&upper) {
        for (file, text) in sources(folder).into_iter().filter(|(file, _)| !file.ends_with("/tests.rs")) {
            let lines: Vec<&str> = text.lines().collect();
            for (i, line) in lines.iter().enumerate() {
                let constant = line.trim_start_matches("pub ").trim_start_matches("pub(super) ");
                // seconds and hours of a day are definitions, and an infinity is no figure
                let defined = ["const HOUR_", "const DAY_"].iter().any(|name| constant.starts_with(name));
                if !constant.starts_with("const ")
                    || !constant.contains("f64")
                    || defined
                    || line.contains("INFINITY")
                {
                    continue;
                }
                let above: String = lines[..i]
                    .iter()
                    .rev()
                    .take_while(|l| l.starts_with("///") || l.contains("const "))
                    .copied()
                    .collect::<Vec<_>>()
                    .join(" ");
                let head: String =
                    lines.iter().take_while(|l| l.starts_with("//!")).copied().collect::<Vec<_>>().join(" ");
                let numeric = ["found to", "Halvings", "closer than this are one", "Share of the way"];
                let told = sure.iter().any(|s| above.contains(s) || head.contains(s))
                    || numeric.iter().any(|s| above.contains(s));
                if !told {
                    silent.push(format!("{file}:{}: `{line}` does not say how sure it is", i + 1));
                }
            }
        }
    }
    assert!(silent.is_empty(), "{}", silent.join("\n"));
}

#[test]
fn law_no_answer_calls_a_release_safe_or_approved() {
    // the caution is the one place for these words, in each of its lengths, the longest first
    let cautions: Vec<&str> = (0..400).rev().map(gatemix::report::caution_within).collect();
    for (file, text) in
        ["src/report", "src/mix", "src/order", "src/tasks", "src/tui"].into_iter().flat_map(sources)
    {
        let text = cautions.iter().fold(text, |text, caution| text.replace(caution, ""));
        for word in ["compliant", "legal", "acceptable", "approved", " safe ", "probability", "chance"] {
            assert!(!text.contains(word), "{file} says `{word}`");
        }
    }
}
