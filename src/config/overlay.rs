//! Laying one configuration over another.
//!
//! Maps merge key by key. Lists whose items are all maps with a `name` merge by name, new names at
//! the end. Everything else replaces what was there.

use std::collections::HashMap;
use std::sync::Arc;

use super::diagnostic::Diagnostic;
use super::node::{Body, Map, Node};
use super::path::short;

/// Lays `over` over `base`.
///
/// A name that stands twice in a list of `over` is added to `faults`.
pub(crate) fn lay(base: &mut Node, over: Node, faults: &mut Vec<Diagnostic>) {
    let by_name = all_named(base) && all_named(&over);
    match (&mut base.body, over.body) {
        (Body::Map(below), Body::Map(above)) => lay_map(below, above, faults),
        (Body::List(below), Body::List(above)) if by_name => lay_list(below, above, faults),
        (_, body) => *base = Node { place: over.place, body },
    }
}

fn lay_map(below: &mut Map, above: Map, faults: &mut Vec<Diagnostic>) {
    for entry in above.into_entries() {
        match below.get_mut(&entry.key) {
            Some(old) => {
                lay(&mut old.node, entry.node, faults);
                // A replaced value belongs to the overlay with its key; a merged one stays below.
                if Arc::ptr_eq(&old.node.place.source, &entry.key_place.source) {
                    old.key_place = entry.key_place;
                }
            }
            None => below.set(entry),
        }
    }
}

fn lay_list(below: &mut Vec<Node>, above: Vec<Node>, faults: &mut Vec<Diagnostic>) {
    let mut places = HashMap::new();
    for (position, item) in below.iter().enumerate() {
        places.entry(item.name()).or_insert(position);
    }
    let mut seen = HashMap::new();
    for item in above {
        let name = item.name();
        let place = item.place.first_line();
        if let Some(first) = seen.insert(name.clone(), place.clone()) {
            let message = format!("the overlay names `{}` twice in this list", short(&name.unwrap_or_default()));
            let fault = Diagnostic::error_at(place, message).label("again here");
            faults.push(fault.also_at(first, "first here").help("join the two items into one"));
            continue;
        }
        match places.get(&name).and_then(|&position| below.get_mut(position)) {
            Some(old) => lay(old, item, faults),
            None => below.push(item),
        }
    }
}

pub(crate) fn all_named(node: &Node) -> bool {
    match &node.body {
        Body::List(items) => !items.is_empty() && items.iter().all(|item| item.name().is_some()),
        _ => false,
    }
}
