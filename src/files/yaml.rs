//! A YAML document as a plain tree that keeps repeated keys, and the line of any path in it.

use std::cell::Cell;
use std::collections::HashSet;
use std::fmt;

use serde::de::{DeserializeSeed, EnumAccess, Error as _, MapAccess, SeqAccess, Visitor};

use super::lines::file_lines;
use crate::problem::Problem;

mod locate;

/// Memory that the tree of one document may take, in bytes (choice): twice what the largest file read
/// can spell out, so that only repeated anchors can pass it.
const TREE_CAP: usize = 128 << 20;

/// Brackets open at once in one document (choice; the parser itself stops at 128).
const MOST_OPEN: usize = 1000;

/// One value of the tree.
#[derive(Debug, Clone, PartialEq)]
pub enum Node {
    /// Nothing, `~` or `null`.
    Null,
    /// `true` or `false`.
    Bool(bool),
    /// A number, not yet known to be finite.
    Number(f64),
    /// A text.
    Text(String),
    /// A list.
    List(Vec<Node>),
    /// Keys and values in file order, repeated keys kept.
    Map(Vec<(String, Node)>),
}

/// A parsed document.
#[derive(Debug)]
pub struct Document {
    text: String,
    root: Node,
    /// Bytes read again so far to find lines, see [`Document::line_of`].
    reread: Cell<usize>,
}

impl Document {
    /// Parses one document. Anchors and aliases are read; `!tags` are not.
    ///
    /// # Errors
    /// A single [`Problem`] with its line: text that is not YAML, more than one document, nesting or
    /// repetition without bounds.
    pub fn parse(text: &str) -> Result<Self, Problem> {
        let text = text.strip_prefix('\u{feff}').unwrap_or(text);
        if let Some(line) = too_deep(text) {
            let words = format!("more than {MOST_OPEN} brackets are open here");
            return Err(Problem::refused("yaml", words, FLATTER).on_line(line));
        }
        if let Some((line, name)) = anchor_set_twice(text) {
            let words = format!("the anchor &{name} is set a second time, so that *{name} could mean either");
            return Err(Problem::refused("yaml", words, "give each anchor its own name").on_line(line));
        }
        let mut documents = serde_yaml::Deserializer::from_str(text);
        let left = Cell::new(TREE_CAP);
        let root = match documents.next() {
            Some(first) => Tree(&left).deserialize(first).map_err(|e| syntax(&e, text))?,
            None => Node::Null,
        };
        if let Some(second) = documents.next() {
            let words = "a second document starts here; only the first would count";
            let problem = Problem::refused("yaml-documents", words, "keep one document and take out the ---");
            return Err(match locate::start(second) {
                Some(line) => problem.on_line(line),
                None => problem,
            });
        }
        Ok(Self { text: text.to_owned(), root, reread: Cell::new(0) })
    }

    /// The outermost value.
    pub fn root(&self) -> &Node {
        &self.root
    }
}

/// The library's error in our shape: the line apart from the words, a cure of its own for what people
/// most often get wrong.
fn syntax(error: &serde_yaml::Error, text: &str) -> Problem {
    let full = error.to_string();
    let Some(place) = error.location() else {
        return Problem::refused("yaml", format!("this cannot be read as YAML: {full}"), cure_of(&full));
    };
    if let Some(line) = tab_indent(text, place.line()) {
        let words = "this line is indented with a tab, which YAML does not allow";
        return Problem::refused("yaml-tab", words, "indent with spaces").on_line(line);
    }
    let said = full.replacen(&format!(" at line {} column {}", place.line(), place.column()), "", 1);
    // a file that breaks off ends, for the parser, on the line after its last one
    let line = place.line().min(file_lines(text).count().max(1));
    Problem::refused("yaml", format!("this cannot be read as YAML: {said}"), cure_of(&full)).on_line(line)
}

fn cure_of(message: &str) -> &'static str {
    if message.contains("recursion limit") {
        FLATTER
    } else if message.contains("repetition limit") || message.contains(TOO_MUCH) {
        "write the values out instead of repeating anchors"
    } else if message.contains(NO_TAGS) {
        "take out the word with the exclamation mark, or put the value in quotes"
    } else {
        "check indentation, quotes, brackets and the space after each colon, on this line and the one above"
    }
}

/// Line on which too many brackets are open, counted wherever they stand: the parser's time grows with
/// the square of that number.
fn too_deep(text: &str) -> Option<usize> {
    let mut open = 0_usize;
    file_lines(text).find_map(|(number, line)| {
        for byte in line.bytes() {
            match byte {
                b'[' | b'{' => open += 1,
                b']' | b'}' => open = open.saturating_sub(1),
                _ => {}
            }
            if open > MOST_OPEN {
                return Some(number);
            }
        }
        None
    })
}

/// An anchor that is set twice and used. YAML takes the nearer one; the parser may give the value of yet
/// another anchor, so it is refused.
fn anchor_set_twice(text: &str) -> Option<(usize, &str)> {
    let words = |line| str::split(line, [' ', '\t', '[', ']', '{', '}', ',', ':']);
    let used: HashSet<_> = text.lines().flat_map(words).filter_map(|word| word.strip_prefix('*')).collect();
    let anchors = file_lines(text).flat_map(|(number, line)| words(line).map(move |word| (number, word)));
    let mut set = HashSet::new();
    anchors
        .filter_map(|(number, word)| Some((number, word.strip_prefix('&')?)))
        .find(|(_, name)| !name.is_empty() && !set.insert(*name) && used.contains(name))
}

/// First line, up to the one after `line`, whose indent holds a tab.
fn tab_indent(text: &str, line: usize) -> Option<usize> {
    let indent = |l: &str| l.len() - l.trim_start_matches([' ', '\t']).len();
    file_lines(text).take(line + 1).find(|(_, l)| l[..indent(l)].contains('\t')).map(|(number, _)| number)
}

const FLATTER: &str = "lists and maps stand too deep inside one another; write them flatter";
const TOO_MUCH: &str = "the anchors repeat too much";
const NO_TAGS: &str = "a !tag has no meaning here";

/// Builds the tree, counting down the memory left.
#[derive(Clone, Copy)]
struct Tree<'c>(&'c Cell<usize>);

impl Tree<'_> {
    fn spend<E: serde::de::Error>(self, text_len: usize) -> Result<(), E> {
        let cost = size_of::<Node>() + text_len;
        self.0.set(self.0.get().checked_sub(cost).ok_or_else(|| E::custom(TOO_MUCH))?);
        Ok(())
    }

    fn leaf<E: serde::de::Error>(self, node: Node) -> Result<Node, E> {
        self.spend(0)?;
        Ok(node)
    }
}

impl<'de> DeserializeSeed<'de> for Tree<'_> {
    type Value = Node;

    fn deserialize<D: serde::Deserializer<'de>>(self, deserializer: D) -> Result<Node, D::Error> {
        deserializer.deserialize_any(self)
    }
}

impl<'de> Visitor<'de> for Tree<'_> {
    type Value = Node;

    fn expecting(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str("a text, a number, true or false, a list or a map")
    }

    fn visit_unit<E: serde::de::Error>(self) -> Result<Node, E> {
        self.leaf(Node::Null)
    }

    fn visit_none<E: serde::de::Error>(self) -> Result<Node, E> {
        self.leaf(Node::Null)
    }

    fn visit_bool<E: serde::de::Error>(self, value: bool) -> Result<Node, E> {
        self.leaf(Node::Bool(value))
    }

    fn visit_i64<E: serde::de::Error>(self, value: i64) -> Result<Node, E> {
        self.leaf(Node::Number(value as f64))
    }

    fn visit_u64<E: serde::de::Error>(self, value: u64) -> Result<Node, E> {
        self.leaf(Node::Number(value as f64))
    }

    fn visit_i128<E: serde::de::Error>(self, value: i128) -> Result<Node, E> {
        self.leaf(Node::Number(value as f64))
    }

    fn visit_u128<E: serde::de::Error>(self, value: u128) -> Result<Node, E> {
        self.leaf(Node::Number(value as f64))
    }

    fn visit_f64<E: serde::de::Error>(self, value: f64) -> Result<Node, E> {
        self.leaf(Node::Number(value))
    }

    fn visit_str<E: serde::de::Error>(self, value: &str) -> Result<Node, E> {
        self.spend(value.len())?;
        Ok(Node::Text(value.to_owned()))
    }

    fn visit_seq<A: SeqAccess<'de>>(self, mut items: A) -> Result<Node, A::Error> {
        self.spend(0)?;
        let mut list = Vec::new();
        while let Some(node) = items.next_element_seed(self)? {
            list.push(node);
        }
        Ok(Node::List(list))
    }

    fn visit_map<A: MapAccess<'de>>(self, mut entries: A) -> Result<Node, A::Error> {
        self.spend(0)?;
        let mut map = Vec::new();
        while let Some(key) = entries.next_key::<String>()? {
            self.spend(key.len())?;
            map.push((key, entries.next_value_seed(self)?));
        }
        Ok(Node::Map(map))
    }

    fn visit_enum<A: EnumAccess<'de>>(self, _tagged: A) -> Result<Node, A::Error> {
        Err(A::Error::custom(NO_TAGS))
    }
}
