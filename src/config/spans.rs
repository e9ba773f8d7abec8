//! One pass over the YAML events of a text: its shape, where every key and value stands, and what
//! is not allowed in a configuration.
//!
//! The values themselves are read by `serde_yaml` afterwards; this pass comes first because it has
//! true positions for syntax errors, sees equal keys, and stops before deep nesting costs time.

use std::borrow::Cow;
use std::collections::HashMap;
use std::ops::Range;
use std::sync::Arc;

use saphyr_parser::{Event, Parser, ScalarStyle};

use super::diagnostic::Diagnostic;
use super::offsets::Offsets;
use super::path::short;
use super::refuse::empty;
use super::source::Source;

/// Deepest nesting of maps and lists. A spacecraft needs about six.
pub(crate) const DEEPEST: usize = 64;
/// Most keys and values in one text: bounds memory at some tens of MB.
const MOST_NODES: usize = 200_000;
/// Faults after which the pass stops.
const MOST_FAULTS: usize = 100;

/// A value of the text, without its meaning.
#[derive(Debug)]
pub(crate) struct Marked {
    /// Where it stands, bytes of the source. A map or list in block style ends with its last item.
    pub(crate) range: Range<usize>,
    /// What it is.
    pub(crate) shape: Shape,
}

/// What a [`Marked`] value is.
#[derive(Debug)]
pub(crate) enum Shape {
    /// Text, number, true, false or nothing, after unquoting.
    Scalar(String),
    /// A list.
    List(Vec<Marked>),
    /// A map in the order written; no key twice.
    Map(Vec<(Key, Marked)>),
}

/// A key of a map.
#[derive(Debug, Clone)]
pub(crate) struct Key {
    /// Its text after unquoting.
    pub(crate) text: String,
    /// Where it stands, bytes of the source.
    pub(crate) range: Range<usize>,
}

/// Reads the shape of the part `within` of a source.
///
/// # Errors
/// Every fault up to the first syntax error: bad syntax, nothing at all, a second document, equal
/// keys, nesting beyond 64, anchors, aliases, merge keys, tags, keys that are no text.
pub(crate) fn scan(source: &Arc<Source>, within: &Range<usize>) -> Result<Marked, Vec<Diagnostic>> {
    let text = source.slice(within);
    let mut scan = Scan::new(source, within.start, text);
    let mut parser = Parser::new_from_str(text);
    while let Some(next) = parser.next_event() {
        let going = match next {
            Err(error) => scan.syntax(&error),
            Ok((event, span)) => {
                let range = scan.offsets.range(span);
                scan.event(event, &range)
            }
        };
        if going.is_none() || scan.faults.len() >= MOST_FAULTS {
            break;
        }
    }
    match scan.root {
        Some(root) if scan.faults.is_empty() => Ok(root),
        None if scan.faults.is_empty() => Err(vec![empty(source, within)]),
        _ => Err(scan.faults),
    }
}

/// A map or list that is still open.
pub(crate) struct Frame {
    pub(crate) start: usize,
    /// End of the last thing in it.
    end: usize,
    open: Open,
}

/// What is open.
pub(crate) enum Open {
    List(Vec<Marked>),
    Map { entries: Vec<(Key, Marked)>, pending: Option<Key>, seen: HashMap<String, Range<usize>> },
}

/// A pass under way.
pub(crate) struct Scan<'a> {
    pub(crate) source: &'a Arc<Source>,
    pub(crate) text: &'a str,
    pub(crate) offsets: Offsets,
    pub(crate) frames: Vec<Frame>,
    root: Option<Marked>,
    documents: usize,
    nodes: usize,
    pub(crate) faults: Vec<Diagnostic>,
}

impl<'a> Scan<'a> {
    fn new(source: &'a Arc<Source>, start: usize, text: &'a str) -> Self {
        Self {
            source,
            text,
            offsets: Offsets::new(start, text),
            frames: Vec::new(),
            root: None,
            documents: 0,
            nodes: 0,
            faults: Vec::new(),
        }
    }

    /// Takes one event; `None` ends the pass.
    fn event(&mut self, event: Event<'_>, range: &Range<usize>) -> Option<()> {
        match event {
            Event::DocumentStart(_) => {
                self.documents += 1;
                if self.documents > 1 {
                    let message = "a second YAML document starts here";
                    let fault = self.fault(range, message, "only one is allowed");
                    self.faults.push(fault.help("put it into a file of its own, or delete the `---`"));
                    return None;
                }
            }
            Event::Alias(_) => {
                self.anchored(range);
                self.node(Marked { range: range.clone(), shape: Shape::Scalar(String::new()) });
            }
            Event::Scalar(text, style, anchor, tag) => {
                self.properties(range, anchor, tag.is_some());
                self.scalar(text, style, range)?;
            }
            Event::SequenceStart(anchor, tag) => {
                self.properties(range, anchor, tag.is_some());
                self.open(range, Open::List(Vec::new()))?;
            }
            Event::MappingStart(anchor, tag) => {
                self.properties(range, anchor, tag.is_some());
                let (entries, seen) = (Vec::new(), HashMap::new());
                self.open(range, Open::Map { entries, pending: None, seen })?;
            }
            Event::SequenceEnd | Event::MappingEnd => self.close(range),
            Event::Nothing | Event::StreamStart | Event::StreamEnd | Event::DocumentEnd => {}
        }
        Some(())
    }

    fn count(&mut self, range: &Range<usize>) -> Option<()> {
        self.nodes += 1;
        if self.nodes <= MOST_NODES {
            return Some(());
        }
        let message = format!("there are more than {MOST_NODES} keys and values");
        let fault = self.fault(range, message, "this is one too many");
        self.faults.push(fault.help("check that it is the right file"));
        None
    }

    fn open(&mut self, range: &Range<usize>, open: Open) -> Option<()> {
        self.count(range)?;
        if self.frames.len() >= DEEPEST {
            let message = format!("maps and lists are nested more than {DEEPEST} deep");
            let fault = self.fault(range, message, "the nesting goes on here");
            self.faults.push(fault.help("check the brackets and the indentation"));
            return None;
        }
        self.frames.push(Frame { start: range.start, end: range.end, open });
        Some(())
    }

    fn close(&mut self, range: &Range<usize>) {
        let Some(frame) = self.frames.pop() else {
            return;
        };
        // A flow collection ends with its bracket, a block one has an empty end somewhere below.
        let end = if range.is_empty() { frame.end } else { range.end };
        let shape = match frame.open {
            Open::List(items) => Shape::List(items),
            Open::Map { entries, .. } => Shape::Map(entries),
        };
        self.node(Marked { range: frame.start..end.max(frame.start), shape });
    }

    fn scalar(&mut self, text: Cow<'_, str>, style: ScalarStyle, range: &Range<usize>) -> Option<()> {
        self.count(range)?;
        let awaits_key = matches!(self.frames.last(), Some(Frame { open: Open::Map { pending: None, .. }, .. }));
        if awaits_key {
            self.key(Key { text: text.into_owned(), range: range.clone() }, style);
        } else {
            self.node(Marked { range: range.clone(), shape: Shape::Scalar(text.into_owned()) });
        }
        Some(())
    }

    /// Takes a key of the innermost map.
    fn key(&mut self, key: Key, style: ScalarStyle) {
        let range = key.range.clone();
        if style == ScalarStyle::Plain && key.text == "<<" {
            let fault = self.fault(&range, "merge keys (`<<`) are not allowed", "a merge key");
            self.faults.push(fault.help("write the keys out, or lay a second file over this one with `--with`"));
        } else if style == ScalarStyle::Plain && matches!(key.text.as_str(), "" | "~") {
            let fault = self.fault(&range, "a key is missing before `:`", "expected a key here");
            self.faults.push(fault.help("write `key: value`"));
        }
        let Some(Frame { end, open: Open::Map { pending, seen, .. }, .. }) = self.frames.last_mut() else {
            return;
        };
        *end = range.end;
        let first = seen.get(&key.text).cloned();
        seen.entry(key.text.clone()).or_insert_with(|| range.clone());
        let message = format!("the key `{}` stands twice in this map", short(&key.text));
        *pending = Some(key);
        if let Some(first) = first {
            let first = self.place(&first).first_line();
            let fault = self.fault(&range, message, "again here").also_at(first, "first here");
            self.faults.push(fault.help("delete or rename one of them"));
        }
    }

    /// Takes a finished value into the innermost map or list.
    fn node(&mut self, node: Marked) {
        let Some(frame) = self.frames.last_mut() else {
            self.root = Some(node);
            return;
        };
        let range = node.range.clone();
        if !range.is_empty() {
            frame.end = frame.end.max(range.end);
        }
        match &mut frame.open {
            Open::List(items) => items.push(node),
            Open::Map { entries, pending, .. } => {
                if let Some(key) = pending.take() {
                    entries.push((key, node));
                    return;
                }
                // Something must stand for the key, or its value would be taken for the next one.
                *pending = Some(Key { text: String::new(), range: range.clone() });
                let fault = self.fault(&range, "a key must be text", "this is no text");
                self.faults.push(fault.help("write `key: value`; put text that begins with `{` or `[` in quotes"));
            }
        }
    }
}
