//! A part names only parts of a strictly lower level, by the table in `DEVELOPERS.md`.

use std::collections::{BTreeMap, BTreeSet};

use crate::{read, sources};

/// Part and level, from the table of the map.
fn table() -> BTreeMap<String, u32> {
    read("DEVELOPERS.md")
        .lines()
        .filter_map(|line| {
            let mut cells = line.strip_prefix("| ")?.split('|').map(str::trim);
            let level = cells.next()?.parse().ok()?;
            let part = cells.next()?.strip_prefix('`')?.strip_suffix('`')?;
            Some((part.to_owned(), level))
        })
        .collect()
}

/// The text without comments; strings stay, a path in one is a name all the same.
fn code(text: &str) -> String {
    text.lines().map(|l| l.split("//").next().unwrap_or("")).collect::<Vec<_>>().join("\n")
}

/// The part a source file belongs to.
fn part_of(file: &str) -> Option<&str> {
    let first = file.strip_prefix("src/")?.split('/').next()?;
    let part = first.strip_suffix(".rs").unwrap_or(first);
    (part != "lib" && part != "main").then_some(part)
}

/// Parts that code names through the crate's root, braces opened.
fn named(code: &str) -> BTreeSet<String> {
    let mut out = BTreeSet::new();
    for root in ["crate::", "gatemix::"] {
        for (at, _) in code.match_indices(root) {
            let rest = &code[at + root.len()..];
            let word =
                |t: &str| t.chars().take_while(|c| c.is_alphanumeric() || *c == '_').collect::<String>();
            if let Some(list) = rest.strip_prefix('{') {
                let mut depth = 0;
                let mut item = String::new();
                for c in list.chars() {
                    match c {
                        '{' => depth += 1,
                        '}' if depth == 0 => break,
                        '}' => depth -= 1,
                        ',' if depth == 0 => {
                            out.insert(word(item.trim()));
                            item.clear();
                        }
                        _ if depth == 0 => item.push(c),
                        _ => {}
                    }
                }
                out.insert(word(item.trim()));
            } else {
                out.insert(word(rest));
            }
        }
    }
    out.remove("");
    out
}

#[test]
fn law_parts_name_only_lower_levels() {
    let table = table();
    assert!(table.len() >= 10, "the table of levels was not found in DEVELOPERS.md");
    let mut seen = BTreeSet::new();
    let mut names = 0;
    for (file, text) in sources("src") {
        let Some(part) = part_of(&file) else { continue };
        let level = table.get(part).unwrap_or_else(|| panic!("{part} is missing in the table of levels"));
        seen.insert(part.to_owned());
        for other in named(&code(&text)) {
            if other == part {
                continue;
            }
            let below = table.get(&other).unwrap_or_else(|| panic!("{file} names {other}, which is no part"));
            assert!(below < level, "{file} (level {level}) names {other} (level {below})");
            names += 1;
        }
    }
    let told: BTreeSet<String> = table.into_keys().collect();
    assert_eq!(told, seen, "the table and the sources must list the same parts");
    assert!(names > 30, "the search finds too few names to mean anything: {names}");
}

#[test]
fn law_the_search_for_names_sees_every_shape() {
    let found = named("use crate::{a, b::{c, d}, e}; crate::f::g(); gatemix::h; let x = crate::i::J;");
    let told: BTreeSet<String> = ["a", "b", "e", "f", "h", "i"].map(str::to_owned).into();
    assert_eq!(found, told);
}

#[test]
fn law_files_part_before_they_pass_400_lines() {
    for (file, text) in sources("src").into_iter().chain(sources("tests")) {
        let lines = text.lines().count();
        assert!(lines <= 400, "{file} has {lines} lines");
    }
}
