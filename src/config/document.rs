//! The resolved configuration: a file, overlays and flags made into one, each value with its origin.

use std::fmt::Write as _;
use std::ops::Range;
use std::sync::Arc;

use serde_yaml::Value;
use sha2::{Digest as _, Sha256};

use super::diagnostic::{Diagnostic, Mark, Site};
use super::node::{Body, Entry, Found, Map, Node};
use super::overlay::lay;
use super::path::{Path, Segment, short};
use super::setting;
use super::source::{Place, Source};

/// A configuration with the origin of every value.
///
/// ```
/// use couplet::config::{Document, Path};
/// let document = Document::from_text(
///     "base.yaml",
///     "wheels: {count: 4}\n",
///     &[("worst.yaml", "wheels: {capacity: 8 N m s}\n")],
///     &["wheels.count=3"],
/// )
/// .unwrap();
/// let count = document.place(&Path::parse("wheels.count")).unwrap();
/// assert_eq!((count.source.name(), count.text()), ("command line", "3"));
/// ```
#[derive(Debug, Clone)]
pub struct Document {
    root: Node,
    value: Value,
    /// Names of the assumption sets that the files describe.
    assumptions: Vec<String>,
    /// The sets themselves.
    sets: Map,
    /// The merged configuration before short forms were written out and samples read.
    written: Node,
}

impl Document {
    /// Reads `file`, lays the overlays over it in order, then puts the settings in, in order.
    ///
    /// Maps merge key by key; lists whose items are all maps with a `name` merge by name, new ones
    /// at the end; other values replace. A setting is `KEY=VALUE` as after `--set`.
    ///
    /// # Errors
    /// Every fault found in any of them, each with its place: [`super::render_all`] shows them.
    pub fn load(
        file: &std::path::Path,
        overlays: &[impl AsRef<std::path::Path>],
        settings: &[impl AsRef<str>],
    ) -> Result<Self, Vec<Diagnostic>> {
        Self::load_assuming(file, overlays, &[] as &[&str], settings)
    }

    /// As [`Document::load`], with some of the assumption sets that the files describe laid over them, in order, before the
    /// settings are put in.
    ///
    /// # Errors
    /// As [`Document::load`], and a set that no file describes.
    pub fn load_assuming(
        file: &std::path::Path,
        overlays: &[impl AsRef<std::path::Path>],
        assumptions: &[impl AsRef<str>],
        settings: &[impl AsRef<str>],
    ) -> Result<Self, Vec<Diagnostic>> {
        let files = [file].into_iter().chain(overlays.iter().map(AsRef::as_ref));
        let layers = files
            .enumerate()
            .map(|(rank, path)| {
                let source = Source::read(path, rank).map_err(|error| vec![error.into()])?;
                read_layer(&source)
            })
            .collect();
        Self::resolve(layers, assumptions, settings)
    }

    /// As [`Document::load`] from texts, each with the name that messages give it.
    ///
    /// # Errors
    /// As [`Document::load`].
    pub fn from_text(name: &str, text: &str, overlays: &[(&str, &str)], settings: &[impl AsRef<str>]) -> Result<Self, Vec<Diagnostic>> {
        let texts = [(name, text)].into_iter().chain(overlays.iter().copied());
        let layers = texts
            .enumerate()
            .map(|(rank, (name, text))| {
                let source = Source::checked(name, text, rank).map_err(|error| vec![error.into()])?;
                read_layer(&source)
            })
            .collect();
        Self::resolve(layers, &[] as &[&str], settings)
    }

    fn resolve(
        layers: Vec<Result<Node, Vec<Diagnostic>>>,
        assumptions: &[impl AsRef<str>],
        settings: &[impl AsRef<str>],
    ) -> Result<Self, Vec<Diagnostic>> {
        let mut faults = Vec::new();
        let rank = layers.len();
        let mut merged: Option<Node> = None;
        for layer in layers {
            match (layer, &mut merged) {
                (Err(found), _) => faults.extend(found),
                (Ok(node), None) => merged = Some(node),
                (Ok(node), Some(base)) => lay(base, node, &mut faults),
            }
        }
        // A setting for a file that could not be read would only report what is missing because
        // of that.
        let Some(mut root) = merged.filter(|_| faults.is_empty()) else {
            return Err(faults);
        };
        let sets = assume(&mut root, assumptions, &mut faults);
        for (turn, setting) in settings.iter().enumerate() {
            if let Err(found) = setting::apply(&mut root, setting.as_ref(), rank + turn) {
                faults.extend(found);
            }
        }
        Self::finished(root, sets, faults)
    }

    /// Writes short forms out and reads samples.
    fn finished(written: Node, sets: Map, mut faults: Vec<Diagnostic>) -> Result<Self, Vec<Diagnostic>> {
        let mut root = written.clone();
        super::short_form::write_out(&mut root, &mut faults);
        super::sample::read_samples(&mut root, &mut faults);
        let value = root.to_value();
        let assumptions = sets.keys().map(str::to_owned).collect();
        if faults.is_empty() { Ok(Self { root, value, assumptions, sets, written }) } else { Err(faults) }
    }

    /// The same sets of assumptions beside another configuration.
    pub(crate) fn rewritten(&self, written: Node, faults: Vec<Diagnostic>) -> Result<Self, Vec<Diagnostic>> {
        Self::finished(written, self.sets.clone(), faults)
    }

    /// The merged configuration as it is written, with short forms.
    pub(crate) fn written(&self) -> &Node {
        &self.written
    }

    /// A set of assumptions.
    pub(crate) fn set(&self, name: &str) -> Option<&Node> {
        self.sets.get(name).map(|entry| &entry.node)
    }

    /// The root of the merged configuration.
    pub(crate) fn root(&self) -> &Node {
        &self.root
    }

    /// Names of the assumption sets that the files describe.
    #[must_use]
    pub fn assumptions(&self) -> &[String] {
        &self.assumptions
    }

    /// The merged configuration. Every key is text, every number finite, and nothing is tagged.
    #[must_use]
    pub fn value(&self) -> &Value {
        &self.value
    }

    /// The value at `path`, if there is one.
    #[must_use]
    pub fn get(&self, path: &Path) -> Option<&Value> {
        let step = |value: &'_ Value, segment: &Segment| match segment {
            Segment::Key(_) if !value.is_mapping() => None,
            Segment::Index(_) if !value.is_sequence() => None,
            _ => Some(()),
        };
        path.segments().iter().try_fold(&self.value, |value, segment| {
            step(value, segment)?;
            match segment {
                Segment::Key(key) => value.get(key.as_str()),
                Segment::Index(index) => value.get(*index),
            }
        })
    }

    /// The merged configuration as JSON.
    #[must_use]
    pub fn json(&self) -> serde_json::Value {
        // Cannot fail: keys are text and numbers finite. Null would then fail at the first key.
        serde_json::to_value(&self.value).unwrap_or_default()
    }

    /// SHA-256 of the merged configuration, 64 hexadecimal digits.
    ///
    /// It depends on the values alone: not on the order of keys, on comments, on how a text is
    /// quoted, or on which of file, overlay and setting gave a value.
    #[must_use]
    pub fn sha256(&self) -> String {
        let mut text = String::new();
        canonical(&self.json(), &mut text);
        Sha256::digest(text.as_bytes()).iter().fold(String::new(), |mut hex, byte| {
            // Writing to a `String` cannot fail.
            let _ = write!(hex, "{byte:02x}");
            hex
        })
    }

    /// Where the value at `path` was written, if it was.
    #[must_use]
    pub fn place(&self, path: &Path) -> Option<&Place> {
        let found = self.root.find(path);
        found.whole.then_some(&found.node.place)
    }

    /// Every scalar, empty list and empty map with its address and place, in the order of the
    /// merged configuration.
    #[must_use]
    pub fn leaves(&self) -> Vec<(Path, &Place)> {
        let mut found = Vec::new();
        leaves(&self.root, &Path::root(), &mut found);
        found
    }

    /// The stretch of text to mark for a fault at `site`, or `None` if it stands nowhere.
    ///
    /// A value that does not exist is marked at the nearest map or list above it. A map or list
    /// over several lines is marked at its key, an item of a list at its first line.
    #[must_use]
    pub fn locate(&self, site: &Site) -> Option<Place> {
        match site {
            Site::Nowhere => None,
            Site::Place(place) => Some(place.clone()),
            Site::At { path, mark, within } => {
                let found = self.root.find(path);
                let Found { node, key_place, whole } = &found;
                match (mark, key_place) {
                    (Mark::Key, Some(key)) if *whole => Some((*key).clone()),
                    _ => Some(part(node, within.as_ref().filter(|_| *whole)).unwrap_or_else(|| head(&found))),
                }
            }
        }
    }
}

/// Takes the assumption sets out, lays the chosen ones over the configuration and gives all of them.
fn assume(root: &mut Node, chosen: &[impl AsRef<str>], faults: &mut Vec<Diagnostic>) -> Map {
    let taken = match &mut root.body {
        Body::Map(map) => map.remove("assumptions"),
        _ => None,
    };
    let sets = match &taken {
        None => None,
        Some(Entry { node: Node { body: Body::Map(sets), .. }, .. }) => Some(sets),
        Some(entry) => {
            let help = "write `assumptions: {solar maximum: {environment: {solar_activity: {level: high}}}}`";
            faults.push(Diagnostic::error_at(entry.node.place.first_line(), "`assumptions` must be a map of named sets").help(help));
            None
        }
    };
    let known: Vec<String> = sets.map(|sets| sets.keys().map(str::to_owned).collect()).unwrap_or_default();
    for name in chosen.iter().map(AsRef::as_ref) {
        match sets.and_then(|sets| sets.get(name)) {
            Some(set) if matches!(set.node.body, Body::Map(_)) => lay(root, set.node.clone(), faults),
            Some(set) => {
                let message = format!("the assumptions `{}` must be a map of keys", short(name));
                faults.push(Diagnostic::error_at(set.node.place.first_line(), message).help("write what they change, key by key"));
            }
            None => {
                let source = Source::new("command line", format!("--assume {name}"), usize::MAX);
                let place = Place { range: 9..source.text().len(), source };
                let help = super::did_you_mean(name, known.iter().map(String::as_str))
                    .unwrap_or_else(|| "describe them under `assumptions` in the configuration".to_owned());
                faults.push(Diagnostic::error_at(place, format!("no assumptions are named `{}`", short(name))).help(help));
            }
        }
    }
    sets.cloned().unwrap_or_default()
}

pub(crate) fn read_layer(source: &Arc<Source>) -> Result<Node, Vec<Diagnostic>> {
    let node = Node::read(source, &(0..source.text().len()))?;
    if let Body::Map(_) = node.body {
        return Ok(node);
    }
    let message = format!("`{}` must be a map of keys, got {}", source.name(), node.kind());
    let fault = Diagnostic::error_at(node.place.first_line(), message);
    Err(vec![fault.label("not a map").help("write `key: value`, one key a line")])
}

/// The place of a found value: itself if it fits a line, else its key or its first line.
fn head(found: &Found<'_>) -> Place {
    let place = &found.node.place;
    let one_line = place.first_line() == *place && !place.range.is_empty();
    match (&found.node.body, found.key_place) {
        (Body::Scalar(_), _) if !place.range.is_empty() => place.clone(),
        (Body::List(_) | Body::Map(_), _) if one_line && found.whole => place.clone(),
        (_, Some(key)) => key.clone(),
        (Body::Map(map), None) if !one_line => {
            // The root, or an item of a list: its first key says which one it is.
            let first = map.entries().first();
            let only_key = |entry: &super::node::Entry| entry.key_place.clone();
            let up_to_line_end = || place.first_line();
            if place.range.start == 0 { first.map_or_else(up_to_line_end, only_key) } else { up_to_line_end() }
        }
        _ => place.first_line(),
    }
}

/// The stretch `within` the text of a scalar, if the text stands in the source as it reads.
fn part(node: &Node, within: Option<&Range<usize>>) -> Option<Place> {
    let within = within?;
    let raw = node.place.text();
    let offset = match &node.body {
        Body::Scalar(Value::String(text)) if raw != text => {
            let inner = raw.get(1..raw.len().checked_sub(1)?)?;
            (inner == text).then_some(1)?
        }
        Body::Scalar(_) => 0,
        _ => return None,
    };
    raw.get(within.start + offset..within.end + offset)?;
    let start = node.place.range.start + offset;
    let range = start + within.start..start + within.end;
    Some(Place { source: Arc::clone(&node.place.source), range })
}

fn leaves<'a>(node: &'a Node, path: &Path, found: &mut Vec<(Path, &'a Place)>) {
    match &node.body {
        Body::List(items) if !items.is_empty() => {
            for (index, item) in items.iter().enumerate() {
                leaves(item, &path.index(index), found);
            }
        }
        Body::Map(map) if !map.entries().is_empty() => {
            for entry in map.entries() {
                leaves(&entry.node, &path.key(&entry.key), found);
            }
        }
        _ => found.push((path.clone(), &node.place)),
    }
}

/// JSON with the keys of each map in order and no space.
fn canonical(value: &serde_json::Value, text: &mut String) {
    match value {
        serde_json::Value::Array(items) => {
            text.push('[');
            for (position, item) in items.iter().enumerate() {
                text.push_str(if position > 0 { "," } else { "" });
                canonical(item, text);
            }
            text.push(']');
        }
        serde_json::Value::Object(map) => {
            let mut entries: Vec<_> = map.iter().collect();
            entries.sort_by_key(|(key, _)| *key);
            text.push('{');
            for (position, (key, value)) in entries.into_iter().enumerate() {
                text.push_str(if position > 0 { "," } else { "" });
                text.push_str(&serde_json::Value::from(key.as_str()).to_string());
                text.push(':');
                canonical(value, text);
            }
            text.push('}');
        }
        scalar => text.push_str(&scalar.to_string()),
    }
}
