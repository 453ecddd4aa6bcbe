//! `docs/files.md` against the readers: its examples load, and its tables hold every key, no other.

use std::collections::{BTreeMap, BTreeSet};
use std::fs;

use gatemix::files::cast::Column;
use gatemix::files::folder::{Folder, check};
use gatemix::files::plan;
use gatemix::files::site::site;
use gatemix::files::station;
use gatemix::files::text::{Format, read_from};
use gatemix::files::weather;
use gatemix::files::yaml::{Document, Node};
use gatemix::problem::{Weight, any_refused};
use serde_yaml::Value;

use super::said;

const DOCS: &str = include_str!("../../docs/files.md");

/// Fenced blocks: the words after the fence, and the text.
fn fences() -> Vec<(&'static str, String)> {
    let mut out: Vec<(&str, String)> = Vec::new();
    let mut open = false;
    for line in DOCS.lines() {
        match line.strip_prefix("```") {
            Some(_) if open => open = false,
            Some(words) => {
                open = true;
                out.push((words, String::new()));
            }
            None if open => {
                let (_, text) = out.last_mut().unwrap();
                text.push_str(line);
                text.push('\n');
            }
            None => {}
        }
    }
    out
}

fn site_examples() -> Vec<String> {
    fences().into_iter().filter(|(words, _)| *words == "yaml site").map(|(_, text)| text).collect()
}

/// Rows of the tables whose header begins with a word: the cells, code marks taken off the first.
fn rows(head: &str) -> Vec<Vec<&'static str>> {
    let cells = |line: &'static str| -> Option<Vec<&'static str>> {
        Some(line.strip_prefix("| ")?.strip_suffix(" |")?.split(" | ").collect())
    };
    let mut out = Vec::new();
    let mut inside = false;
    for line in DOCS.lines() {
        match cells(line) {
            None if line.starts_with("|---") => {}
            None => inside = false,
            Some(cells) if cells[0] == head => inside = true,
            Some(mut cells) if inside => {
                cells[0] = code(cells[0]).unwrap();
                out.push(cells);
            }
            Some(_) => {}
        }
    }
    out
}

/// What a cell holds that is one piece of code and nothing else.
fn code(cell: &'static str) -> Option<&'static str> {
    cell.strip_prefix('`')?.strip_suffix('`').filter(|inner| !inner.contains('`'))
}

fn folder_of(site: &str, casts: &[(String, String)]) -> tempfile::TempDir {
    let folder = tempfile::tempdir().unwrap();
    fs::write(folder.path().join("site.yaml"), site).unwrap();
    fs::create_dir(folder.path().join("profiles")).unwrap();
    for (name, text) in casts {
        fs::write(folder.path().join("profiles").join(name), text).unwrap();
    }
    folder
}

#[test]
fn scenario_every_example_of_the_files_reference_is_accepted() {
    let mut folders: Vec<(String, Vec<(String, String)>)> = Vec::new();
    let mut records = Vec::new();
    let mut sides: Vec<(usize, String, String)> = Vec::new();
    for (words, text) in fences() {
        match words.split(' ').collect::<Vec<_>>()[..] {
            ["yaml", "site"] => folders.push((text, Vec::new())),
            // a cast belongs to the site above it
            ["csv", "cast", name] => folders.last_mut().unwrap().1.push((name.into(), text)),
            ["csv", "record", _] => records.push(text),
            // a file beside the casts, of the site above it
            ["csv", "side", name] => sides.push((folders.len() - 1, name.to_owned(), text)),
            // plans, schedules and weather have tests of their own below
            ["csv", "plan" | "schedule", _] | ["csv", "weather"] | ["text"] => {}
            _ => panic!("unknown kind of example: {words}"),
        }
    }
    assert!(records.len() >= 2);
    for text in records {
        // a record is that of any site
        let site = folders.first().unwrap().0.clone();
        let folder = folder_of(&site, &[]);
        fs::write(folder.path().join("tailwater.csv"), text).unwrap();
        let folder = Folder::open(folder.path().to_str().unwrap()).unwrap();
        assert_eq!(said(&folder.around().problems).iter().filter(|p| !p.contains("note:")).count(), 0);
        assert!(folder.conditions().observed.contains_key("dam"));
    }
    let count = (folders.len(), folders.iter().map(|f| f.1.len()).sum::<usize>());
    assert!(count.0 >= 2 && count.1 >= 3, "{count:?}");
    for (i, (site, casts)) in folders.into_iter().enumerate() {
        let folder = folder_of(&site, &casts);
        for (_, name, text) in sides.iter().filter(|side| side.0 == i) {
            fs::write(folder.path().join(name), text).unwrap();
        }
        let named = folder.path().to_str().unwrap();
        let (found, _) = check(named);
        assert!(!any_refused(&found), "{:#?}", said(&found));
        let folder = Folder::open(named).unwrap();
        assert_eq!(folder.casts().len(), casts.len());
        assert!(folder.casts().iter().all(|cast| cast.raw.as_ref().unwrap().taken.is_some()));
    }
}

/// A key that no reader knows, far from all that one does.
const UNKNOWN: &str = "zzqqxxjj";

/// A document that is nothing but the unknown key, below a path such as `outlets[].flow`.
fn probe(path: &str) -> String {
    let mut text = format!("{{ {UNKNOWN}: 1 }}");
    for step in path.split('.').rev().filter(|step| !step.is_empty()) {
        let (key, listed) = step.strip_suffix("[]").map_or((step, false), |key| (key, true));
        text = if listed { format!("{{ {key}: [{text}] }}") } else { format!("{{ {key}: {text} }}") };
    }
    text
}

fn below(path: &str, key: &str) -> String {
    if path.is_empty() { key.to_owned() } else { format!("{path}.{key}") }
}

/// Every key the site reader knows and whether it must be there, found by asking it about an unknown one at
/// each level: the cure lists the keys of that level.
fn known_keys() -> BTreeMap<String, bool> {
    let mut known = BTreeMap::new();
    let mut levels = vec![String::new()];
    while let Some(level) = levels.pop() {
        let here = level.replace("[]", "[0]");
        let problems = site(&probe(&level), "site.yaml").problems;
        let at = |kind: &str, key: &str| {
            let path = below(&here, key);
            problems.iter().find(move |p| p.kind == kind && p.place.path.as_deref() == Some(path.as_str()))
        };
        let Some(unknown) = at("unknown-key", UNKNOWN) else { continue };
        let (_, keys) = unknown.cure.split_once("allowed here: ").unwrap();
        for key in keys.split(", ") {
            let path = below(&level, key);
            levels.extend([path.clone(), format!("{path}[]")]);
            let twice = known.insert(path, at("missing-key", key).is_some());
            assert_eq!(twice, None, "{key} is listed twice below `{level}`");
        }
    }
    known
}

#[test]
fn law_the_files_reference_names_every_key_of_the_reader_and_no_other() {
    let known = known_keys();
    assert!(known.len() > 80, "{known:?}");
    let told: BTreeMap<String, bool> =
        rows("key").iter().map(|cells| (cells[0].to_owned(), cells[2] == "required")).collect();
    let differ: Vec<_> = known
        .keys()
        .chain(told.keys())
        .filter(|key| known.get(*key) != told.get(*key))
        .map(|key| (key, known.get(key), told.get(key)))
        .collect();
    assert!(differ.is_empty(), "key, required by the reader, required by the reference: {differ:#?}");
}

fn gather(node: &Node, path: &str, out: &mut BTreeSet<String>) {
    match node {
        Node::Map(entries) => {
            for (key, value) in entries {
                let path = below(path, key);
                gather(value, &path, out);
                out.insert(path);
            }
        }
        Node::List(items) => items.iter().for_each(|item| gather(item, &format!("{path}[]"), out)),
        _ => {}
    }
}

#[test]
fn law_every_key_of_the_reader_stands_in_an_example() {
    let mut shown = BTreeSet::new();
    for text in site_examples() {
        gather(Document::parse(&text).unwrap().root(), "", &mut shown);
    }
    let absent: Vec<_> = known_keys().into_keys().filter(|key| !shown.contains(key)).collect();
    assert!(absent.is_empty(), "{absent:?}");
}

#[test]
fn law_the_files_reference_names_every_column_and_shows_it() {
    let told: Vec<&str> = rows("column").iter().map(|cells| cells[0]).collect();
    let columns: Vec<&str> = Column::ALL.iter().map(|column| column.name()).collect();
    assert_eq!(told, columns);
    let casts: String =
        fences().into_iter().filter(|(words, _)| words.starts_with("csv")).map(|(_, text)| text).collect();
    let headers = casts + &site_examples().concat();
    for column in columns {
        assert!(headers.contains(column), "{column} stands in no example");
    }
    for comment in ["# taken: ", "# pool: ", "# datum: "] {
        assert!(rows("line").iter().any(|cells| cells[0].starts_with(comment)));
        assert!(headers.contains(comment), "{comment}");
    }
}

#[test]
fn law_the_files_reference_names_every_column_of_weather_and_its_examples_are_read() {
    let told: Vec<&str> = rows("weather column").iter().map(|cells| cells[0]).collect();
    let columns: Vec<&str> = weather::Column::ALL.iter().map(|column| column.name()).collect();
    assert_eq!(told, columns);
    let site = site(&site_examples()[0], "site.yaml").site.unwrap();
    let examples: Vec<String> =
        fences().into_iter().filter(|(words, _)| *words == "csv weather").map(|(_, text)| text).collect();
    assert!(examples.len() >= 2);
    for text in &examples {
        let source = read_from("weather.csv", text.as_bytes(), Format::Csv).unwrap();
        let (read, problems) = weather::weather(&source, &site);
        assert!(read.is_some(), "{:#?}", said(&problems));
    }
    for cells in rows("weather line") {
        let (key, _) = cells[0].split_once(':').unwrap();
        assert!(examples.concat().contains(key), "{key} stands in no example");
    }
}

/// Puts a value at a path of keys, into every element where the path says `[]`.
fn put(into: &mut Value, path: &str, value: &Value) {
    let (step, rest) = path.split_once('.').map_or((path, None), |(step, rest)| (step, Some(rest)));
    let (key, listed) = step.strip_suffix("[]").map_or((step, false), |key| (key, true));
    let map = into.as_mapping_mut().unwrap();
    let inner = map.entry(key.into()).or_insert_with(|| Value::Mapping(serde_yaml::Mapping::new()));
    match (rest, listed) {
        (None, _) => *inner = value.clone(),
        (Some(rest), false) => put(inner, rest, value),
        (Some(rest), true) => inner.as_sequence_mut().unwrap().iter_mut().for_each(|e| put(e, rest, value)),
    }
}

/// A site that leaves out all it may, one of each list.
const BARE: &str = "
name: Bare
units: {}
wells: [ { name: W, conduit: 1 } ]
pool: { bed: 0, full: 10, table: [[0, 0], [10, 1000]] }
outlets: [ { name: A, centre: 3, height: 1, width: 1, positions: [ { name: open } ] } ]
targets: [ { name: t, high: 14 } ]
river:
  monthly: { air: 12, dew_point: 8, wind: 2, radiation_w_m2: 200 }
  afterbay: { volume: 1000, area: 100 }
  reaches: [ { name: R, length_km: 5, width: 20, depth: 1, slope: 0.001, inflows: [ { name: S, at_km: 2, flow: 1, temperature: 9 } ] } ]
season:
  monthly: { air: 12, dew_point: 8, wind: 2, radiation_w_m2: 200 }
  cases: [ { name: c } ]
  stages: [ { name: s, from: 10-01, at: { hatch: 400 } } ]
";

#[test]
fn law_the_defaults_of_the_files_reference_are_those_of_the_reader() {
    let read = |document: &Value| {
        let read = site(&serde_yaml::to_string(document).unwrap(), "site.yaml");
        read.site.unwrap_or_else(|| panic!("{:#?}", said(&read.problems)))
    };
    let bare: Value = serde_yaml::from_str(BARE).unwrap();
    let mut spelled = bare.clone();
    let mut count = 0;
    for cells in rows("key") {
        let Some(text) = code(cells[2]) else { continue };
        put(&mut spelled, cells[0], &serde_yaml::from_str(text).unwrap());
        count += 1;
    }
    assert!(count > 30, "{count}");
    assert_eq!(read(&bare), read(&spelled));
}

#[test]
fn law_the_files_reference_names_every_column_of_a_record_and_shows_it() {
    let told: Vec<&str> = rows("column of a record").iter().map(|cells| cells[0]).collect();
    let columns: Vec<&str> = station::Column::ALL.iter().map(|column| column.name()).collect();
    assert_eq!(told, columns);
    let records: String =
        fences().into_iter().filter(|(words, _)| words.starts_with("csv record")).map(|(_, t)| t).collect();
    for word in columns.into_iter().chain(["# data: ", "# daylight: "]) {
        assert!(records.contains(word), "{word} stands in no example");
    }
}

#[test]
fn law_the_files_reference_names_every_column_of_a_plan_and_its_examples_are_read() {
    let told: Vec<&str> = rows("plan column").iter().map(|cells| cells[0]).collect();
    let columns: Vec<&str> = plan::Column::ALL.iter().map(|column| column.name()).collect();
    assert_eq!(told, columns);
    let long = site_examples().into_iter().find(|text| text.contains("Long Dam")).unwrap();
    let folder = folder_of(&long, &[]);
    let (mut shown, mut is_long) = (String::new(), false);
    for (words, text) in fences() {
        let (below, name) = match words.split(' ').collect::<Vec<_>>()[..] {
            ["yaml", "site"] => {
                is_long = text == long;
                continue;
            }
            ["csv", "plan", name] => ("plans", name),
            ["csv", "schedule", name] => ("schedules", name),
            ["csv", "side", name] if is_long => ("", name),
            _ => continue,
        };
        let below = folder.path().join(below);
        fs::create_dir_all(&below).unwrap();
        fs::write(below.join(name), &text).unwrap();
        shown += &text;
    }
    let folder = Folder::open(folder.path().to_str().unwrap()).unwrap();
    assert!(folder.plans().len() >= 3);
    for listed in folder.plans() {
        assert!(listed.plan.is_some(), "{:#?}", said(&listed.problems));
        assert!(!listed.problems.iter().any(|p| p.weight != Weight::Note), "{:#?}", said(&listed.problems));
    }
    for word in
        columns.into_iter().chain(rows("plan line").iter().map(|cells| cells[0].split(':').next().unwrap()))
    {
        assert!(shown.contains(word), "{word} stands in no example");
    }
    let schedule = folder.schedule("two-steps").unwrap();
    assert_eq!(schedule.schedule.unwrap().changes.len(), 2, "{:#?}", said(&schedule.problems));
    assert!(folder.years().unwrap().weather.is_some());
    assert_eq!(folder.conditions().weather.days.len(), 2);
}
