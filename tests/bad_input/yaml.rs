use std::fmt::Write;
use std::time::{Duration, Instant};

use gatemix::files::yaml::{Document, Node};

fn refused(text: &str) -> String {
    Document::parse(text).unwrap_err().to_string()
}

const CHECK: &str =
    "check indentation, quotes, brackets and the space after each colon, on this line and the one above";

#[test]
fn scenario_the_tree_keeps_order_types_and_repeated_keys() {
    let document = Document::parse("\u{feff}b: 1\r\na: [true, ~, 'x', 2e3]\r\nb: {c: .inf}\r\n").unwrap();
    let text = |t: &str| t.to_owned();
    let list = Node::List(vec![Node::Bool(true), Node::Null, Node::Text(text("x")), Node::Number(2000.0)]);
    let inner = Node::Map(vec![(text("c"), Node::Number(f64::INFINITY))]);
    let expected = Node::Map(vec![(text("b"), Node::Number(1.0)), (text("a"), list), (text("b"), inner)]);
    assert_eq!(*document.root(), expected);
}

#[test]
fn scenario_words_of_the_old_yaml_and_stamps_stay_text() {
    let document = Document::parse("[yes, on, 05-01, 2025-07-14T10:30, -07:00, 1_000, '5']").unwrap();
    let Node::List(items) = document.root() else { panic!("not a list") };
    assert!(items.iter().all(|item| matches!(item, Node::Text(_))), "{items:?}");
}

#[test]
fn scenario_a_document_without_values_is_nothing() {
    for text in ["# words\n", "---", "~\n", ""] {
        let document = Document::parse(text).unwrap();
        assert_eq!((document.root(), document.line_of("")), (&Node::Null, Some(1)), "{text:?}");
    }
}

#[test]
fn scenario_anchors_repeat_their_value() {
    let document = Document::parse("a: &gate { width: 4 }\nb: *gate\n").unwrap();
    let Node::Map(entries) = document.root() else { panic!("not a map") };
    assert_eq!(entries[0].1, entries[1].1);
    assert_eq!(document.line_of("b"), Some(2));
}

#[test]
fn scenario_an_anchor_set_twice_is_not_guessed() {
    let said = refused("a: &x 1\nb: [&x 2, &y 3]\nc: *x\n");
    let words =
        "the anchor &x is set a second time, so that *x could mean either; give each anchor its own name";
    assert_eq!(said, format!("line 2: refused: {words}"));
    assert!(Document::parse("a: weir &x\nb: gate &x\n").is_ok());
}

#[test]
fn scenario_a_syntax_error_names_its_line() {
    let said = refused("name: A\npool: [0, 1\nunits: m\n");
    assert!(said.starts_with("line 3: refused: this cannot be read as YAML: "), "{said}");
    assert!(said.ends_with(CHECK), "{said}");
    let said = refused("name: *nobody\n");
    assert!(said.starts_with("line 1: refused: this cannot be read as YAML: unknown anchor"), "{said}");
    let said = refused("a: 1\n[x]: 2\n");
    assert!(
        said.starts_with("line 2: refused: this cannot be read as YAML: invalid type: sequence"),
        "{said}"
    );
}

#[test]
fn scenario_a_tab_is_told_as_a_tab() {
    let expected =
        "line 2: refused: this line is indented with a tab, which YAML does not allow; indent with spaces";
    assert_eq!(refused("pool:\n\tbed: 0\n"), expected);
    assert_eq!(refused("pool:\n  \tbed: 0\n  \tfull: 2\n"), expected);
}

#[test]
fn scenario_a_second_document_is_refused() {
    let expected =
        "a second document starts here; only the first would count; keep one document and take out the ---";
    assert_eq!(refused("a: 1\n---\nb: 2\n"), format!("line 3: refused: {expected}"));
    assert!(refused("a: 1\n...\n---\n'").ends_with(expected));
    assert!(Document::parse("---\na: 1\n...\n").is_ok());
}

#[test]
fn scenario_a_tag_is_refused_with_its_line() {
    let said = refused("a: 1\nb: !secret 2\n");
    let words = "this cannot be read as YAML: b: a !tag has no meaning here; \
                 take out the word with the exclamation mark, or put the value in quotes";
    assert_eq!(said, format!("line 2: refused: {words}"));
}

#[test]
fn scenario_bombs_are_refused_in_a_blink() {
    let start = Instant::now();
    let mut bomb = "a0: &a0 [x, x, x, x, x, x, x, x, x]\n".to_owned();
    for n in 1..12 {
        let alias = format!("*a{}", n - 1);
        writeln!(bomb, "a{n}: &a{n} [{}]", [alias.as_str(); 9].join(", ")).unwrap();
    }
    let said = refused(&bomb);
    assert!(said.ends_with("write the values out instead of repeating anchors"), "{said}");

    // few aliases, each to a long text: not many nodes, much memory
    let long = format!("- &t {}\n{}", "x".repeat(1 << 20), "- *t\n".repeat(200));
    let said = refused(&long);
    let words = "the anchors repeat too much; write the values out instead of repeating anchors";
    assert!(said.ends_with(words), "{}", &said[said.len() - 200..]);

    let said = refused("a: &a [*a]\n");
    assert!(said.contains("refused: this cannot be read as YAML: "), "{said}");

    let flatter = "lists and maps stand too deep inside one another; write them flatter";
    for deep in ["[", "{a: ", "[{a: [b,"] {
        let said = refused(&format!("a: 1\nb: {}", deep.repeat(400_000)));
        assert_eq!(said, format!("line 2: refused: more than 1000 brackets are open here; {flatter}"));
    }
    for deep in ["- ".repeat(100_000), "[".repeat(200) + &"]".repeat(200), "{a: ".repeat(900)] {
        let said = refused(&deep);
        let start = "line 1: refused: this cannot be read as YAML: recursion limit exceeded";
        assert!(said.starts_with(start) && said.ends_with(flatter), "{said}");
    }
    assert!(start.elapsed() < Duration::from_secs(20), "{:?}", start.elapsed());
}

const SITE: &str = "\
# a site
name: 'Example # Dam'
pool:
  bed: 0
  table: [[0, 0],
          [20, 2.0e6], # elevation, area
          [40,
           5.0e6]]
outlets:
  - name: N1
    width: 4
  -
    name: N2
    flow: { min: 2,
            max: 80 }
now:
  N.1: 30%
  N[2]: 5
pool.bed: 7
pool: { bed: 9 }
";

#[test]
fn scenario_paths_lead_to_their_lines() {
    let document = Document::parse(SITE).unwrap();
    let lines = [
        ("", 2),
        ("name", 2),
        ("pool", 3),
        ("pool.bed", 4),
        ("pool.table", 5),
        ("pool.table[0]", 5),
        ("pool.table[1][1]", 6),
        ("pool.table[2][0]", 7),
        ("pool.table[2][1]", 8),
        ("outlets", 9),
        ("outlets[0]", 10),
        ("outlets[0].width", 11),
        ("outlets[1].name", 13),
        ("outlets[1].flow.min", 14),
        ("outlets[1].flow.max", 15),
        ("now.N.1", 17),
        ("now.N[2]", 18),
    ];
    for (path, line) in lines {
        assert_eq!(document.line_of(path), Some(line), "{path}");
    }
    for path in
        ["nam", "names", "outlets[2]", "outlets[x]", "outlets.0", "pool.table[2][1].x", "name[0]", "[0]"]
    {
        assert_eq!(document.line_of(path), None, "{path}");
    }
    assert_eq!(document.line_of_repeat("pool", 1), Some(20));
    assert_eq!(document.line_of_repeat("pool", 2), None);
    assert_eq!(document.line_of_repeat("outlets[0]", 1), None);
}

#[test]
fn scenario_lines_of_a_huge_file_stop_before_they_take_long() {
    let document = Document::parse(&"- 1\n".repeat(1 << 20)).unwrap();
    let start = Instant::now();
    let found = (0..500).filter(|_| document.line_of("[1000]").is_some()).count();
    assert!((1..=8).contains(&found), "{found}");
    assert!(start.elapsed() < Duration::from_secs(20), "{:?}", start.elapsed());
}
