//! The line of a path in a document.
//!
//! The parser tells places only in its errors. So the text is read once more and the reading fails on
//! purpose at the node that the path leads to; the error then carries the line.

use std::fmt;

use serde::de::{DeserializeSeed, IgnoredAny, MapAccess, SeqAccess, Visitor};

use super::{Document, Node};
use crate::files::lines::file_lines;
use crate::problem::Problem;

/// Bytes read again for the lines of one document (choice, about a second): thousands of lines for an
/// ordinary site file, a few for the largest.
const REREAD_CAP: usize = 32 << 20;

impl Document {
    /// Line, from 1, of a path such as `outlets[3].width` or `pool.table[2][1]`; places in lists count
    /// from 0. A key's line is where the key stands. `None` where nothing stands at that path, or where
    /// a large file was already read again too often.
    pub fn line_of(&self, path: &str) -> Option<usize> {
        self.line_of_repeat(path, 0)
    }

    /// As [`Document::line_of`], for the given repetition (0 is the first) of a key that stands more
    /// than once in its map.
    pub fn line_of_repeat(&self, path: &str, repeat: usize) -> Option<usize> {
        let mut steps = Vec::new();
        let exact = walk(&self.root, path, &mut steps)?;
        if repeat > 0 {
            let (last, (map, key)) = (steps.last_mut()?, exact?);
            *last = map.iter().enumerate().filter(|(_, (k, _))| k == key).nth(repeat)?.0;
        }
        let reread = self.reread.get() + self.text.len();
        if reread > REREAD_CAP {
            return None;
        }
        self.reread.set(reread);
        let document = serde_yaml::Deserializer::from_str(&self.text).next()?;
        let line = Fail { steps: &steps }.deserialize(document).err()?.location()?.line();
        // an empty document ends, for the parser, on the line after its last one
        Some(line.min(file_lines(&self.text).count().max(1)))
    }

    /// Gives every problem that has a path but no line the line of that path, or of the nearest parent
    /// that exists, and every problem the file.
    pub fn locate(&self, problems: &mut [Problem], file: &str) {
        for problem in problems {
            let place = &mut problem.place;
            place.file.get_or_insert_with(|| file.to_owned());
            if let (None, Some(path)) = (place.line, place.path.as_deref()) {
                place.line = parents(path).find_map(|path| self.line_of(path));
            }
        }
    }
}

/// Line on which a document starts, reading no more than its first value.
pub(super) fn start(document: serde_yaml::Deserializer<'_>) -> Option<usize> {
    Fail { steps: &[] }.deserialize(document).err()?.location().map(|place| place.line())
}

/// The path, then each shorter one, up to the whole document.
fn parents(path: &str) -> impl Iterator<Item = &str> {
    std::iter::successors(Some(path), |path| {
        (!path.is_empty()).then(|| path.rfind(['.', '[']).map_or("", |cut| &path[..cut]))
    })
}

/// The map and the key that a path ends in; `None` where it ends in a list or is empty.
type LastKey<'n> = Option<(&'n [(String, Node)], &'n str)>;

/// Follows `path` from `node`, leaving the position taken at each level in `steps`. Keys may hold dots
/// and brackets themselves, so each key that the path starts with is tried.
fn walk<'n>(node: &'n Node, path: &str, steps: &mut Vec<usize>) -> Option<LastKey<'n>> {
    if path.is_empty() {
        return Some(None);
    }
    match node {
        Node::List(items) => {
            let (index, rest) = path.strip_prefix('[')?.split_once(']')?;
            let index: usize = index.parse().ok()?;
            steps.push(index);
            walk(items.get(index)?, rest, steps)
        }
        Node::Map(entries) => {
            let path = path.strip_prefix('.').unwrap_or(path);
            let depth = steps.len();
            entries.iter().enumerate().find_map(|(position, (key, value))| {
                let rest = path.strip_prefix(key.as_str())?;
                steps.truncate(depth);
                steps.push(position);
                match rest.chars().next() {
                    None => Some(Some((entries.as_slice(), key.as_str()))),
                    Some('.' | '[') => walk(value, rest, steps),
                    Some(_) => None,
                }
            })
        }
        _ => None,
    }
}

/// Reads along `steps` and fails at their end: at the key of a map, at the element of a list.
#[derive(Clone, Copy)]
struct Fail<'s> {
    steps: &'s [usize],
}

impl<'de> DeserializeSeed<'de> for Fail<'_> {
    type Value = ();

    fn deserialize<D: serde::Deserializer<'de>>(self, deserializer: D) -> Result<(), D::Error> {
        deserializer.deserialize_any(self)
    }
}

impl<'de> Visitor<'de> for Fail<'_> {
    type Value = ();

    fn expecting(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str("nothing: the place is all that is asked")
    }

    fn visit_seq<A: SeqAccess<'de>>(self, mut items: A) -> Result<(), A::Error> {
        if let Some((&step, rest)) = self.steps.split_first() {
            for _ in 0..step {
                items.next_element::<IgnoredAny>()?;
            }
            items.next_element_seed(Fail { steps: rest })?;
        }
        Err(serde::de::Error::custom("here"))
    }

    fn visit_map<A: MapAccess<'de>>(self, mut entries: A) -> Result<(), A::Error> {
        if let Some((&step, rest)) = self.steps.split_first() {
            for _ in 0..step {
                entries.next_entry::<IgnoredAny, IgnoredAny>()?;
            }
            if rest.is_empty() {
                entries.next_key_seed(Fail { steps: rest })?;
            } else {
                entries.next_key::<IgnoredAny>()?;
                entries.next_value_seed(Fail { steps: rest })?;
            }
        }
        Err(serde::de::Error::custom("here"))
    }
}
