//! A walk over a YAML tree that collects every problem instead of stopping at the first.
//!
//! ```
//! use gatemix::files::{cursor::Walk, yaml::Document};
//! let document = Document::parse("outlets:\n  - { name: N1, widht: 4 }\n")?;
//! let walk = Walk::new(&document);
//! if let Some(site) = walk.root().map() {
//!     for outlet in site.required("outlets").and_then(|v| v.list()).unwrap_or_default() {
//!         let Some(outlet) = outlet.map() else { continue };
//!         let name = outlet.required("name").and_then(|v| v.text());
//!         let width_m = outlet.optional("width").and_then(|v| v.number());
//!         outlet.finish();
//!         assert_eq!((name, width_m), (Some("N1"), None));
//!     }
//!     site.finish();
//! }
//! let problems = walk.problems("site.yaml");
//! assert_eq!(problems[0].place.line, Some(2));
//! assert_eq!(problems[0].kind, "unknown-key");
//! # Ok::<(), gatemix::problem::Problem>(())
//! ```

use std::cell::{Cell, RefCell};
use std::collections::HashMap;

use super::yaml::{Document, Node};
use crate::problem::Problem;

/// Problems kept of one document (choice); the rest is counted in a last one.
pub const MOST_PROBLEMS: usize = 200;

/// Longest piece of a file repeated in a problem or a path, in characters (choice).
const SHOWN: usize = 60;

/// The walk over one document: hands out values, gathers problems.
#[derive(Debug)]
pub struct Walk<'d> {
    document: &'d Document,
    problems: RefCell<Vec<Problem>>,
    beyond: Cell<usize>,
}

impl<'d> Walk<'d> {
    /// Starts at the outermost value.
    pub fn new(document: &'d Document) -> Self {
        Self { document, problems: RefCell::default(), beyond: Cell::new(0) }
    }

    /// The outermost value.
    pub fn root(&'d self) -> Value<'d> {
        Value { walk: self, node: self.document.root(), path: String::new() }
    }

    /// Adds a problem to the walk.
    pub fn report(&self, problem: Problem) {
        let mut problems = self.problems.borrow_mut();
        if problems.len() < MOST_PROBLEMS {
            problems.push(problem);
        } else {
            self.beyond.set(self.beyond.get() + 1);
        }
    }

    /// Everything reported so far, in order, with file and lines.
    pub fn problems(&self, file: &str) -> Vec<Problem> {
        let mut problems = self.problems.borrow().clone();
        self.document.locate(&mut problems, file);
        if self.beyond.get() > 0 {
            let words = format!("further problems, not shown: {}", self.beyond.get());
            problems.push(Problem::refused("more", words, "cure the ones above first").in_file(file));
        }
        problems
    }
}

/// A number or a text: what a quantity such as `12`, `1250cfs` or `"58 F"` is written as.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Scalar<'d> {
    /// A finite bare number, in the unit of the folder.
    Number(f64),
    /// A text, perhaps a number with its unit.
    Text(&'d str),
}

/// One value and where it stands. Each getter gives `None` after reporting what is wrong.
#[derive(Debug, Clone)]
pub struct Value<'d> {
    walk: &'d Walk<'d>,
    node: &'d Node,
    path: String,
}

impl<'d> Value<'d> {
    /// Path of this value, such as `outlets[3].width`, with list places from 0.
    pub fn path(&self) -> &str {
        &self.path
    }

    /// The value as it stands in the tree.
    pub fn node(&self) -> &'d Node {
        self.node
    }

    /// Reports a problem at this value.
    pub fn report(&self, problem: Problem) {
        self.walk.report(problem.at(self.path.clone()));
    }

    /// A text.
    pub fn text(&self) -> Option<&'d str> {
        if let Node::Text(text) = self.node {
            return Some(text);
        }
        let bare = matches!(self.node, Node::Number(_) | Node::Bool(_));
        self.wrong("a text", if bare { "put it in quotes" } else { "write a word or a text in quotes" })
    }

    /// A finite number.
    pub fn number(&self) -> Option<f64> {
        match self.node {
            Node::Number(value) => self.finite(*value),
            _ => self.wrong("a number", "write a bare number such as 12.5, with a point"),
        }
    }

    /// `true` or `false`.
    pub fn boolean(&self) -> Option<bool> {
        match self.node {
            Node::Bool(value) => Some(*value),
            _ => self.wrong("true or false", "write true or false, without quotes"),
        }
    }

    /// A finite number or a text, for a quantity that may carry its unit.
    pub fn scalar(&self) -> Option<Scalar<'d>> {
        match self.node {
            Node::Number(value) => self.finite(*value).map(Scalar::Number),
            Node::Text(text) => Some(Scalar::Text(text)),
            _ => self.wrong("a number, with or without a unit", "write it as 12.5 or 12.5 m"),
        }
    }

    /// The elements of a list.
    pub fn list(&self) -> Option<Vec<Value<'d>>> {
        let Node::List(items) = self.node else {
            return self.wrong("a list", "write [a, b] or one line with a dash for each");
        };
        let element = |(i, node)| Value { walk: self.walk, node, path: format!("{}[{i}]", self.path) };
        Some(items.iter().enumerate().map(element).collect())
    }

    /// A list of texts; `None` if any element is something else.
    pub fn text_list(&self) -> Option<Vec<&'d str>> {
        let texts: Vec<_> = self.list()?.iter().map(Value::text).collect();
        texts.into_iter().collect()
    }

    /// A map; repeated keys are reported at once. Call [`Map::finish`] after the last question.
    pub fn map(&self) -> Option<Map<'d>> {
        let Node::Map(entries) = self.node else {
            return self.wrong("a map of keys and values", "write each key as key: value");
        };
        let map = Map { value: self.clone(), entries, asked: RefCell::default() };
        map.report_repeats();
        Some(map)
    }

    fn finite(&self, value: f64) -> Option<f64> {
        if value.is_finite() {
            return Some(value);
        }
        let words = format!("{} must be a finite number, found {value}", self.label());
        self.report(Problem::refused("not-finite", words, "write the number, or leave the key out"));
        None
    }

    fn wrong<T>(&self, wanted: &str, cure: &str) -> Option<T> {
        let found = match self.node {
            Node::Null => "nothing".to_owned(),
            Node::Bool(value) => value.to_string(),
            Node::Number(value) => format!("the number {value}"),
            Node::Text(text) => format!("the text \"{}\"", shown(text)),
            Node::List(_) => "a list".to_owned(),
            Node::Map(_) => "a map".to_owned(),
        };
        let words = format!("{} must be {wanted}, found {found}", self.label());
        self.report(Problem::refused("wrong-type", words, cure));
        None
    }

    /// The last piece of the path, for a sentence.
    fn label(&self) -> &str {
        match self.path.rsplit('.').next() {
            None | Some("") => "the document",
            Some(label) => label,
        }
    }
}

/// A map being asked for its keys.
#[derive(Debug)]
pub struct Map<'d> {
    value: Value<'d>,
    entries: &'d [(String, Node)],
    asked: RefCell<Vec<&'d str>>,
}

impl<'d> Map<'d> {
    /// Path of the map.
    pub fn path(&self) -> &str {
        self.value.path()
    }

    /// Reports a problem at this map.
    pub fn report(&self, problem: Problem) {
        self.value.report(problem);
    }

    /// A key that must be there; its absence is reported. A key left blank counts as absent.
    pub fn required(&self, key: &'static str) -> Option<Value<'d>> {
        let found = self.optional(key);
        if found.is_none() {
            let blank = self.entries.iter().any(|(name, _)| name == key);
            let words = if blank { format!("{key} is left blank") } else { format!("{key} is missing") };
            let problem = Problem::refused("missing-key", words, format!("add {key}: and its value"));
            self.value.walk.report(problem.at(self.child(key)));
        }
        found
    }

    /// A key that may be absent. A key left blank counts as absent.
    pub fn optional(&self, key: &'static str) -> Option<Value<'d>> {
        let mut asked = self.asked.borrow_mut();
        if !asked.contains(&key) {
            asked.push(key);
        }
        let (_, node) = self.entries.iter().find(|(name, _)| name == key)?;
        (*node != Node::Null).then(|| self.at(key, node))
    }

    /// All keys and values, for a map whose keys are free, such as gate names. Blank values are
    /// [`Node::Null`] here; of a repeated key each value is given.
    pub fn entries(&self) -> Vec<(&'d str, Value<'d>)> {
        self.asked.borrow_mut().extend(self.entries.iter().map(|(key, _)| key.as_str()));
        self.entries.iter().map(|(key, node)| (key.as_str(), self.at(key, node))).collect()
    }

    /// Ends the questions: every key that nobody asked for is reported, with the nearest known one.
    pub fn finish(self) {
        let asked = self.asked.borrow();
        for (key, _) in self.entries.iter().filter(|(key, _)| !asked.contains(&key.as_str())) {
            let cure = match nearest(key, &asked) {
                // `{ altitude: 4,1 }` is for YAML an altitude of 4 and a key `1`
                _ if key.parse::<f64>().is_ok() => "write decimals with a point, as 12.5".to_owned(),
                Some(known) => format!("did you mean {known}?"),
                None if asked.is_empty() => "leave it out; no key is allowed here".to_owned(),
                None => format!("leave it out; allowed here: {}", asked.join(", ")),
            };
            let problem = Problem::refused("unknown-key", format!("unknown key {}", shown(key)), cure);
            self.value.walk.report(problem.at(self.child(key)));
        }
    }

    fn report_repeats(&self) {
        let mut seen: HashMap<&str, usize> = HashMap::new();
        for (key, _) in self.entries {
            let times = seen.entry(key).and_modify(|times| *times += 1).or_insert(0);
            if *times > 0 {
                let (path, document) = (self.child(key), self.value.walk.document);
                let first = document.line_of(&path).map_or(String::new(), |n| format!(", first on line {n}"));
                let words = format!("the key {} stands more than once{first}", shown(key));
                let mut problem = Problem::refused("duplicate-key", words, "keep one of them");
                problem.place.line = document.line_of_repeat(&path, *times);
                self.value.walk.report(problem.at(path));
            }
        }
    }

    fn at(&self, key: &str, node: &'d Node) -> Value<'d> {
        Value { walk: self.value.walk, node, path: self.child(key) }
    }

    fn child(&self, key: &str) -> String {
        let path = self.value.path();
        let dot = if path.is_empty() { "" } else { "." };
        format!("{path}{dot}{}", shown(key))
    }
}

/// The known key whose spelling is close: the same but for case, `-` and `_`, or within a third of its
/// letters (choice).
fn nearest<'k>(key: &str, known: &[&'k str]) -> Option<&'k str> {
    let plain = |text: &str| text.to_lowercase().replace(['-', ' '], "_");
    if key.chars().count() > SHOWN {
        return None;
    }
    let key = plain(key);
    let distance = |known: &str| strsim::damerau_levenshtein(&key, &plain(known));
    let (far, known) = known.iter().map(|known| (distance(known), *known)).min_by_key(|(far, _)| *far)?;
    (far <= (known.len() / 3).max(1)).then_some(known)
}

/// A piece of a file short enough for one line.
fn shown(text: &str) -> String {
    match text.char_indices().nth(SHOWN) {
        Some((cut, _)) => format!("{}...", &text[..cut]),
        None => text.to_owned(),
    }
}
