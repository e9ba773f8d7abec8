//! Changes to a configuration, key by key, for asking what each of them does.

use std::path::Path as FilePath;

use super::diagnostic::Diagnostic;
use super::document::{Document, read_layer};
use super::node::{Body, Entry, Map, Node};
use super::overlay::{all_named, lay};
use super::path::Path;
use super::source::Source;

/// One key changed.
#[derive(Debug, Clone)]
pub struct Patch {
    key: String,
    change: Change,
}

#[derive(Debug, Clone)]
enum Change {
    /// An overlay of this one key.
    Lay(Node),
    /// A setting, as after `--set`.
    Set(String),
}

impl Patch {
    /// The key that it changes.
    #[must_use]
    pub fn key(&self) -> &str {
        &self.key
    }
}

impl Document {
    /// The keys that an overlay file changes.
    ///
    /// # Errors
    /// The file cannot be read.
    pub fn patches_of_file(&self, file: &FilePath) -> Result<Vec<Patch>, Vec<Diagnostic>> {
        let source = Source::read(file, 1).map_err(|error| vec![error.into()])?;
        Ok(self.patches(&read_layer(&source)?))
    }

    /// The keys that a set of assumptions changes; `None` if no set has this name.
    #[must_use]
    pub fn patches_of_assumptions(&self, name: &str) -> Option<Vec<Patch>> {
        self.set(name).map(|set| self.patches(set))
    }

    /// Settings as changes, one each.
    #[must_use]
    pub fn patches_of_settings(settings: &[String]) -> Vec<Patch> {
        let key = |setting: &String| setting.split_once('=').map_or_else(|| setting.clone(), |(key, _)| key.to_owned());
        settings.iter().map(|setting| Patch { key: key(setting), change: Change::Set(setting.clone()) }).collect()
    }

    /// This configuration with changes made, in order.
    ///
    /// # Errors
    /// What does not fit together.
    pub fn patched(&self, patches: &[&Patch]) -> Result<Self, Vec<Diagnostic>> {
        let mut written = self.written().clone();
        let mut faults = Vec::new();
        for (rank, patch) in patches.iter().enumerate() {
            match &patch.change {
                Change::Lay(node) => lay(&mut written, node.clone(), &mut faults),
                Change::Set(setting) => {
                    if let Err(found) = super::setting::apply(&mut written, setting, 2 + rank) {
                        faults.extend(found);
                    }
                }
            }
        }
        self.rewritten(written, faults)
    }

    fn patches(&self, over: &Node) -> Vec<Patch> {
        let mut found = Vec::new();
        split(over, Some(self.written()), &Path::root(), &|node| node, &mut found);
        found
    }
}

/// Takes an overlay apart into one overlay a key; keys that change nothing are left out.
fn split(over: &Node, base: Option<&Node>, path: &Path, wrap: &dyn Fn(Node) -> Node, found: &mut Vec<Patch>) {
    let around = |body: Body| Node { place: over.place.clone(), body };
    match (&over.body, base.map(|base| &base.body)) {
        (Body::Map(above), Some(Body::Map(below))) => {
            for entry in above.entries() {
                let inside = |node: Node| {
                    let mut map = Map::default();
                    map.set(Entry { key: entry.key.clone(), key_place: entry.key_place.clone(), node });
                    wrap(around(Body::Map(map)))
                };
                split(&entry.node, below.get(&entry.key).map(|entry| &entry.node), &path.key(&entry.key), &inside, found);
            }
        }
        (Body::List(above), Some(Body::List(below))) if all_named(over) && base.is_some_and(all_named) => {
            for item in above {
                let name = item.name();
                let known = below.iter().find(|other| other.name() == name);
                let inside = |node: Node| {
                    let mut node = node;
                    if let (Body::Map(map), Body::Map(whole)) = (&mut node.body, &item.body)
                        && let Some(entry) = whole.get("name")
                    {
                        map.set(entry.clone());
                    }
                    wrap(around(Body::List(vec![node])))
                };
                split(item, known, &path.key(format!("[{}]", name.unwrap_or_default())), &inside, found);
            }
        }
        _ if base.is_some_and(|base| base.to_value() == over.to_value()) => {}
        _ => found.push(Patch { key: path.to_string().replace("[[", "[").replace("]]", "]"), change: Change::Lay(wrap(over.clone())) }),
    }
}
