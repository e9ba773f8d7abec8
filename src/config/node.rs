//! A value of the configuration together with the place it was written at.

use std::collections::HashMap;
use std::ops::Range;
use std::sync::Arc;

use serde_yaml::{Mapping, Value};

use super::diagnostic::Diagnostic;
use super::path::{Path, Segment};
use super::source::{Place, Source};
use super::spans::{Marked, Shape, scan};

/// A value and where it was written.
#[derive(Debug, Clone)]
pub(crate) struct Node {
    /// Where the value stands. For a merged map or list: where the lowest layer wrote it.
    pub(crate) place: Place,
    /// The value.
    pub(crate) body: Body,
}

/// The value of a [`Node`].
#[derive(Debug, Clone)]
pub(crate) enum Body {
    /// Text, number, true, false or nothing.
    Scalar(Value),
    /// A list.
    List(Vec<Node>),
    /// A map.
    Map(Map),
}

/// A map in the order written.
#[derive(Debug, Clone, Default)]
pub(crate) struct Map {
    entries: Vec<Entry>,
    index: HashMap<String, usize>,
}

/// One key of a [`Map`] and its value.
#[derive(Debug, Clone)]
pub(crate) struct Entry {
    pub(crate) key: String,
    pub(crate) key_place: Place,
    pub(crate) node: Node,
}

/// How far a path exists.
#[derive(Debug)]
pub(crate) struct Found<'a> {
    /// The deepest value on the path that exists.
    pub(crate) node: &'a Node,
    /// Its key, if it stands in a map.
    pub(crate) key_place: Option<&'a Place>,
    /// Whether this is the value asked for.
    pub(crate) whole: bool,
}

impl Map {
    pub(crate) fn entries(&self) -> &[Entry] {
        &self.entries
    }

    pub(crate) fn into_entries(self) -> Vec<Entry> {
        self.entries
    }

    pub(crate) fn keys(&self) -> impl Iterator<Item = &str> + Clone {
        self.entries.iter().map(|entry| entry.key.as_str())
    }

    pub(crate) fn get(&self, key: &str) -> Option<&Entry> {
        self.entries.get(*self.index.get(key)?)
    }

    pub(crate) fn get_mut(&mut self, key: &str) -> Option<&mut Entry> {
        self.entries.get_mut(*self.index.get(key)?)
    }

    /// Takes an entry out.
    pub(crate) fn remove(&mut self, key: &str) -> Option<Entry> {
        let place = self.index.remove(key)?;
        let entry = self.entries.remove(place);
        self.index.values_mut().filter(|other| **other > place).for_each(|other| *other -= 1);
        Some(entry)
    }

    /// Puts an entry at the place of the one with the same key, or at the end.
    pub(crate) fn set(&mut self, entry: Entry) {
        if let Some(old) = self.get_mut(&entry.key) {
            *old = entry;
        } else {
            self.index.insert(entry.key.clone(), self.entries.len());
            self.entries.push(entry);
        }
    }
}

impl Node {
    /// Reads the part `within` of a source.
    ///
    /// # Errors
    /// What [`scan`] refuses, a number that is not finite or not decimal, and text that the two
    /// YAML parsers do not read alike.
    pub(crate) fn read(source: &Arc<Source>, within: &Range<usize>) -> Result<Self, Vec<Diagnostic>> {
        let marked = scan(source, within)?;
        let value: Value = serde_yaml::from_str(source.slice(within)).map_err(|error| {
            let place = Place { source: Arc::clone(source), range: within.clone() };
            let message = format!("this is not valid YAML: {error}");
            let help = "check the indentation, and put text with special characters in quotes";
            vec![Diagnostic::error_at(place.first_line(), message).help(help)]
        })?;
        let mut build = Build { source, faults: Vec::new() };
        let node = build.node(value, marked);
        if build.faults.is_empty() { Ok(node) } else { Err(build.faults) }
    }

    /// The value without its places.
    pub(crate) fn to_value(&self) -> Value {
        match &self.body {
            Body::Scalar(value) => value.clone(),
            Body::List(items) => Value::Sequence(items.iter().map(Self::to_value).collect()),
            Body::Map(map) => {
                let pair = |entry: &Entry| (entry.key.as_str().into(), entry.node.to_value());
                Value::Mapping(map.entries.iter().map(pair).collect::<Mapping>())
            }
        }
    }

    /// Follows `path` as far as it exists.
    pub(crate) fn find(&self, path: &Path) -> Found<'_> {
        let mut found = Found { node: self, key_place: None, whole: true };
        for segment in path.segments() {
            let next = match (&found.node.body, segment) {
                (Body::Map(map), Segment::Key(key)) => map.get(key).map(|entry| (&entry.node, Some(&entry.key_place))),
                (Body::List(items), Segment::Index(index)) => items.get(*index).map(|item| (item, None)),
                _ => None,
            };
            let Some((node, key_place)) = next else {
                return Found { whole: false, ..found };
            };
            found = Found { node, key_place, whole: true };
        }
        found
    }

    /// The text of the key `name`, by which items of a list are told apart.
    pub(crate) fn name(&self) -> Option<String> {
        let Body::Map(map) = &self.body else {
            return None;
        };
        let Body::Scalar(name) = &map.get("name")?.node.body else {
            return None;
        };
        match name {
            Value::String(text) => Some(text.clone()),
            Value::Number(number) => Some(number.to_string()),
            Value::Bool(truth) => Some(truth.to_string()),
            _ => None,
        }
    }

    /// What it is, with its article.
    pub(crate) fn kind(&self) -> &'static str {
        match &self.body {
            Body::Scalar(value) => kind(value),
            Body::List(_) => "a list",
            Body::Map(_) => "a map",
        }
    }
}

/// What a value is, with its article.
pub(crate) fn kind(value: &Value) -> &'static str {
    match value {
        Value::Null => "nothing",
        Value::Bool(true) => "`true`",
        Value::Bool(false) => "`false`",
        Value::Number(_) => "a number",
        Value::String(_) => "text",
        Value::Sequence(_) => "a list",
        Value::Mapping(_) | Value::Tagged(_) => "a map",
    }
}

/// Joins the values that one parser read with the places that the other found.
struct Build<'a> {
    source: &'a Arc<Source>,
    faults: Vec<Diagnostic>,
}

impl Build<'_> {
    fn place(&self, range: Range<usize>) -> Place {
        Place { source: Arc::clone(self.source), range }
    }

    fn node(&mut self, value: Value, marked: Marked) -> Node {
        let place = self.place(marked.range);
        let body = match (value, marked.shape) {
            (Value::Sequence(items), Shape::List(marks)) if items.len() == marks.len() => {
                let pairs = items.into_iter().zip(marks);
                Body::List(pairs.map(|(item, mark)| self.node(item, mark)).collect())
            }
            (Value::Mapping(values), Shape::Map(marks)) if values.len() == marks.len() => {
                let mut map = Map::default();
                for ((_, value), (key, mark)) in values.into_iter().zip(marks) {
                    let key_place = self.place(key.range);
                    map.set(Entry { key: key.text, key_place, node: self.node(value, mark) });
                }
                Body::Map(map)
            }
            (Value::String(text), Shape::Scalar(seen)) if text == seen => Body::Scalar(Value::String(text)),
            (value @ (Value::Null | Value::Bool(_)), Shape::Scalar(_)) => Body::Scalar(value),
            (Value::Number(number), Shape::Scalar(written)) => {
                self.number(&number, &written, &place);
                Body::Scalar(Value::Number(number))
            }
            _ => {
                let message = "this YAML can be read in two ways";
                let help = "put the text in quotes, on one line";
                self.faults.push(Diagnostic::error_at(place.first_line(), message).help(help));
                Body::Scalar(Value::Null)
            }
        };
        Node { place, body }
    }

    fn number(&mut self, number: &serde_yaml::Number, written: &str, place: &Place) {
        let fault = |message: String| Diagnostic::error_at(place.clone(), message);
        if number.as_f64().is_none_or(|number| !number.is_finite()) {
            let message = format!("`{written}` is not a finite number");
            self.faults.push(fault(message).help("write a number; leave the key out if there is none"));
        } else if is_coded(written) {
            let message = format!("`{written}` is not a decimal number");
            self.faults.push(fault(message).help("write it with decimal digits, or in quotes if it is text"));
        }
    }
}

/// Whether a number is written in base 16, 8 or 2, which YAML allows and nobody here means.
fn is_coded(written: &str) -> bool {
    let digits = written.trim_start_matches(['+', '-']);
    ["0x", "0o", "0b"].iter().any(|prefix| digits.starts_with(prefix))
}
