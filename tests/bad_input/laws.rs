use std::fmt::Write;

use gatemix::files::atomic;
use gatemix::files::cursor::{Value, Walk};
use gatemix::files::table::Table;
use gatemix::files::text::{Format, decode};
use gatemix::files::yaml::{Document, Node};
use proptest::collection::vec;
use proptest::prelude::*;
use proptest::test_runner::FileFailurePersistence;

pub(super) fn config() -> ProptestConfig {
    let kept = FileFailurePersistence::Direct("tests/bad_input/found.txt");
    ProptestConfig { cases: 400, failure_persistence: Some(Box::new(kept)), ..ProptestConfig::default() }
}

/// Asks a value for everything, right or wrong.
fn ask(value: &Value<'_>, depth: usize) {
    let _ = (value.text(), value.number(), value.boolean(), value.scalar(), value.text_list());
    for item in value.list().unwrap_or_default() {
        if depth > 0 {
            ask(&item, depth - 1);
        }
    }
    if let Some(map) = value.map() {
        map.required("name");
        if depth > 0 {
            map.optional("a").iter().for_each(|value| ask(value, depth - 1));
        }
        map.finish();
    }
}

/// Reads a text as everything; whatever is said must stand on a line of the text.
fn read_all(text: &str) -> Result<(), TestCaseError> {
    let lines = text.split(['\n', '\r', '\u{85}', '\u{2028}', '\u{2029}']).count();
    match Document::parse(text) {
        Ok(document) => {
            let walk = Walk::new(&document);
            ask(&walk.root(), 4);
            for problem in walk.problems("x.yaml") {
                prop_assert!(problem.place.line.is_none_or(|line| (1..=lines).contains(&line)), "{problem}");
                prop_assert!(problem.to_string().chars().all(|c| !c.is_control()));
            }
        }
        Err(problem) => prop_assert!(problem.place.line.is_none_or(|line| line <= lines + 1), "{problem}"),
    }
    let any_header = |cells: &[String]| cells.len() > 1;
    for table in [Table::parse(text), Table::parse_with(text, &any_header)] {
        match table {
            Ok(table) => {
                for row in 0..table.len() {
                    for column in 0..table.columns.len() {
                        prop_assert!(table.cell(row, column).is_some());
                        prop_assert!(table.number(row, column).ok().flatten().is_none_or(f64::is_finite));
                    }
                }
            }
            Err(problems) => {
                prop_assert!(!problems.is_empty());
                prop_assert!(
                    problems.iter().all(|p| p.place.line.is_none_or(|line| (1..=lines).contains(&line)))
                );
            }
        }
    }
    Ok(())
}

/// A map as block YAML, with the line of each path.
fn spell(keys: &[(u8, Vec<i32>)]) -> (String, Vec<(String, usize)>) {
    let (mut text, mut lines, mut line) = (String::new(), Vec::new(), 1);
    for (index, (blanks, values)) in keys.iter().enumerate() {
        for _ in 0..*blanks {
            text += "# between\n\n";
            line += 2;
        }
        writeln!(text, "k{index}:").unwrap();
        lines.push((format!("k{index}"), line));
        line += 1;
        for (place, value) in values.iter().enumerate() {
            writeln!(text, "  - {{ v: {value},\n      w: [1,\n      {value}] }}").unwrap();
            lines.push((format!("k{index}[{place}].v"), line));
            lines.push((format!("k{index}[{place}].w[0]"), line + 1));
            lines.push((format!("k{index}[{place}].w[1]"), line + 2));
            line += 3;
        }
    }
    (text, lines)
}

proptest! {
    #![proptest_config(config())]

    #[test]
    fn law_random_bytes_never_panic(bytes in vec(any::<u8>(), 0..300)) {
        for format in [Format::Yaml, Format::Csv] {
            if let Ok((text, _)) = decode(&bytes, format) {
                prop_assert!(!text.contains('\0'));
                read_all(&text)?;
            }
        }
        read_all(&String::from_utf8_lossy(&bytes))?;
    }

    #[test]
    fn law_random_text_of_the_trade_never_panics(text in "([-:#,;|\t\n\r \"'\\[\\]{}&*!a0.1\u{1b}°~?>%@]|name|: |- |\n  |---|<<|0,5){0,80}") {
        read_all(&text)?;
    }

    #[test]
    fn law_every_path_leads_to_its_own_line(keys in vec((0u8..3, vec(any::<i32>(), 0..4)), 1..6)) {
        let (text, lines) = spell(&keys);
        let document = Document::parse(&text).unwrap();
        for (path, line) in lines {
            prop_assert_eq!(document.line_of(&path), Some(line), "{} in\n{}", path, text);
        }
    }

    #[test]
    fn law_numbers_come_back_from_yaml_and_tables(values in vec(vec(-1e9..1e9f64, 3), 1..8), semicolon in any::<bool>()) {
        let between = if semicolon { ";" } else { "," };
        let row = |row: &Vec<f64>| row.iter().map(ToString::to_string).collect::<Vec<_>>().join(between);
        let csv = format!("a{between}b{between}c\n{}\n", values.iter().map(row).collect::<Vec<_>>().join("\n"));
        let table = Table::parse(&csv).unwrap();
        let Node::List(rows) = Document::parse(&format!("{values:?}")).unwrap().root().clone() else { panic!() };
        prop_assert_eq!((rows.len(), table.len()), (values.len(), values.len()));
        for (r, row) in values.iter().enumerate() {
            let Node::List(cells) = &rows[r] else { panic!() };
            for (c, value) in row.iter().enumerate() {
                prop_assert_eq!(table.number(r, c), Ok(Some(*value)));
                prop_assert_eq!(&cells[c], &Node::Number(*value));
            }
        }
    }
}

proptest! {
    #![proptest_config(ProptestConfig { cases: 20, ..config() })]

    #[test]
    fn law_what_is_written_is_what_is_read(first in vec(any::<u8>(), 0..5000), second in vec(any::<u8>(), 0..5000)) {
        let folder = tempfile::tempdir().unwrap();
        let path = folder.path().join("file");
        for bytes in [&first, &second] {
            atomic::write(&path, bytes).unwrap();
            prop_assert_eq!(&std::fs::read(&path).unwrap(), bytes);
        }
    }
}
