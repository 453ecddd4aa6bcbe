use gatemix::files::cursor::{MOST_PROBLEMS, Scalar, Walk};
use gatemix::files::yaml::{Document, Node};
use gatemix::problem::Problem;

use crate::said;

/// Walks a document with `read` and gives what was said.
fn walk(text: &str, read: impl FnOnce(&Walk<'_>)) -> Vec<String> {
    let document = Document::parse(text).unwrap();
    let walk = Walk::new(&document);
    read(&walk);
    said(&walk.problems("site.yaml"))
}

#[test]
fn scenario_good_values_come_through_without_a_word() {
    let text = "name: N1\nwidth: 4\ncrest: true\nflow: 1250cfs\npositions: [0, 50]\ntags: [a, b]\nblank:\n";
    let document = Document::parse(text).unwrap();
    let walk = Walk::new(&document);
    let map = walk.root().map().unwrap();
    assert_eq!(map.required("name").unwrap().text(), Some("N1"));
    let width = map.required("width").unwrap();
    assert_eq!((width.number(), width.scalar()), (Some(4.0), Some(Scalar::Number(4.0))));
    assert_eq!(width.node(), &Node::Number(4.0));
    assert_eq!(map.optional("crest").unwrap().boolean(), Some(true));
    assert_eq!(map.optional("flow").unwrap().scalar(), Some(Scalar::Text("1250cfs")));
    let positions = map.optional("positions").unwrap().list().unwrap();
    assert_eq!((positions[1].number(), positions[1].path()), (Some(50.0), "positions[1]"));
    assert_eq!(map.optional("tags").unwrap().text_list(), Some(vec!["a", "b"]));
    assert!(map.optional("blank").is_none());
    assert_eq!(map.path(), "");
    map.finish();
    assert_eq!(walk.problems("site.yaml"), []);
}

#[test]
fn scenario_every_problem_is_told_at_once_with_its_line() {
    let text = "\
nmae: Example
pool:
  bed: zero
  full: .nan
  table: 5
outlets:
  - name: 7
    width: [4]
    kind: ~
  - crest
colour: blue
";
    let said = walk(text, |walk| {
        let site = walk.root().map().unwrap();
        assert!(site.required("name").is_none());
        let pool = site.required("pool").unwrap().map().unwrap();
        assert!(pool.required("bed").unwrap().number().is_none());
        assert!(pool.required("full").unwrap().scalar().is_none());
        assert!(pool.required("table").unwrap().list().is_none());
        pool.finish();
        for outlet in site.required("outlets").unwrap().list().unwrap() {
            let Some(outlet) = outlet.map() else { continue };
            assert!(outlet.required("name").unwrap().text().is_none());
            assert!(outlet.required("centre").is_none());
            assert!(outlet.required("kind").is_none());
            assert!(outlet.optional("width").unwrap().boolean().is_none());
            outlet.finish();
        }
        site.finish();
    });
    assert_eq!(
        said,
        [
            "site.yaml:1: refused: name: name is missing; add name: and its value",
            "site.yaml:3: refused: pool.bed: bed must be a number, found the text \"zero\"; \
             write a bare number such as 12.5, with a point",
            "site.yaml:4: refused: pool.full: full must be a finite number, found NaN; \
             write the number, or leave the key out",
            "site.yaml:5: refused: pool.table: table must be a list, found the number 5; \
             write [a, b] or one line with a dash for each",
            "site.yaml:7: refused: outlets[0].name: name must be a text, found the number 7; put it in quotes",
            "site.yaml:7: refused: outlets[0].centre: centre is missing; add centre: and its value",
            "site.yaml:9: refused: outlets[0].kind: kind is left blank; add kind: and its value",
            "site.yaml:8: refused: outlets[0].width: width must be true or false, found a list; \
             write true or false, without quotes",
            "site.yaml:10: refused: outlets[1]: outlets[1] must be a map of keys and values, \
             found the text \"crest\"; write each key as key: value",
            "site.yaml:1: refused: nmae: unknown key nmae; did you mean name?",
            "site.yaml:11: refused: colour: unknown key colour; leave it out; allowed here: name, pool, outlets",
        ]
    );
}

#[test]
fn scenario_the_other_wrong_types_are_named_too() {
    let said = walk("a: true\nb: { c: 1 }\nd: [x, ~]\n", |walk| {
        let map = walk.root().map().unwrap();
        assert!(map.optional("a").unwrap().scalar().is_none());
        assert!(map.optional("b").unwrap().text().is_none());
        assert!(map.optional("d").unwrap().text_list().is_none());
        let empty = map.optional("b").unwrap().map().unwrap();
        empty.report(Problem::refused("own", "our own words", "our own cure"));
        empty.finish();
    });
    assert_eq!(
        said,
        [
            "site.yaml:1: refused: a: a must be a number, with or without a unit, found true; \
             write it as 12.5 or 12.5 m",
            "site.yaml:2: refused: b: b must be a text, found a map; write a word or a text in quotes",
            "site.yaml:3: refused: d[1]: d[1] must be a text, found nothing; write a word or a text in quotes",
            "site.yaml:2: refused: b: our own words; our own cure",
            "site.yaml:2: refused: b.c: unknown key c; leave it out; no key is allowed here",
        ]
    );
}

#[test]
fn scenario_a_document_that_is_no_map_says_so() {
    let said = walk("# nothing but words\n", |walk| assert!(walk.root().map().is_none()));
    let words = "the document must be a map of keys and values, found nothing; write each key as key: value";
    assert!(said[0].ends_with(words), "{said:?}");
}

#[test]
fn scenario_a_repeated_key_points_at_the_repetition() {
    let said = walk("bed: 0\nfull: 62\nbed: 3\nfree: { x: 1, x: 2 }\n", |walk| {
        let map = walk.root().map().unwrap();
        assert_eq!(map.required("bed").unwrap().number(), Some(0.0));
        assert_eq!(map.required("full").unwrap().number(), Some(62.0));
        let free = map.required("free").unwrap().map().unwrap();
        let values: Vec<_> = free.entries().iter().map(|(k, v)| (*k, v.number())).collect();
        assert_eq!(values, [("x", Some(1.0)), ("x", Some(2.0))]);
        free.finish();
        map.finish();
    });
    assert_eq!(
        said,
        [
            "site.yaml:3: refused: bed: the key bed stands more than once, first on line 1; keep one of them",
            "site.yaml:4: refused: free.x: the key x stands more than once, first on line 4; keep one of them",
        ]
    );
}

#[test]
fn scenario_a_near_miss_of_a_key_names_the_key() {
    let near = [
        ("min-submergence", true),
        ("Min_Submergence", true),
        ("min_submergance", true),
        ("submerged", false),
    ];
    for (key, found) in near {
        let said = walk(&format!("{key}: 4\n"), |walk| {
            let map = walk.root().map().unwrap();
            assert!(map.optional("min_submergence").is_none());
            assert!(map.optional("centre").is_none());
            map.finish();
        });
        assert_eq!(said[0].ends_with("did you mean min_submergence?"), found, "{said:?}");
    }
}

#[test]
fn scenario_hostile_keys_and_values_stay_harmless_and_short() {
    let long = "k".repeat(1000);
    let text = format!("\"a\\e[2Jb\": \"x\\e]0;y\\a\"\n{long}: 1\nvalue: {long}\n");
    let said = walk(&text, |walk| {
        let map = walk.root().map().unwrap();
        assert!(map.optional("value").unwrap().number().is_none());
        map.finish();
    });
    assert_eq!(said.len(), 3);
    for line in &said {
        assert!(line.chars().all(|c| !c.is_control()) && line.len() < 300, "{line:?}");
    }
    assert!(said[0].starts_with("site.yaml:3: "), "{said:?}");
    assert!(said[1].starts_with("site.yaml:1: "), "{said:?}");
}

#[test]
fn scenario_a_flood_of_problems_is_counted() {
    let text = "- x\n".repeat(MOST_PROBLEMS + 25);
    let said = walk(&text, |walk| {
        for value in walk.root().list().unwrap() {
            assert!(value.number().is_none());
        }
    });
    assert_eq!(said.len(), MOST_PROBLEMS + 1);
    assert!(said[MOST_PROBLEMS - 1].starts_with("site.yaml:200: "), "{}", said[MOST_PROBLEMS - 1]);
    assert_eq!(
        said[MOST_PROBLEMS],
        "site.yaml: refused: further problems, not shown: 25; cure the ones above first"
    );
}

#[test]
fn scenario_problems_found_later_by_path_get_file_and_line() {
    let document = Document::parse("outlets:\n  - name: N1\n  - name: N2\n    width: 0\n").unwrap();
    let problem = |path: &str| Problem::refused("limit", "not right", "").at(path);
    let mut problems = [
        problem("outlets[1].width"),
        problem("outlets[1].height"),
        problem("outlets[7].flow.max"),
        problem("wells"),
        Problem::refused("limit", "whole file", ""),
        problem("outlets").on_line(40).in_file("other.yaml"),
    ];
    document.locate(&mut problems, "site.yaml");
    let places: Vec<_> = problems.iter().map(|p| (p.place.file.as_deref().unwrap(), p.place.line)).collect();
    let here = |line| ("site.yaml", Some(line));
    assert_eq!(places, [here(4), here(3), here(1), here(1), ("site.yaml", None), ("other.yaml", Some(40))]);
}
