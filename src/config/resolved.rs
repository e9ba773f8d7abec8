//! The resolved configuration as YAML, each value with its origin behind it.

use std::fmt::Write as _;

use serde_yaml::Value;

use super::Document;
use super::node::{Body, Node};

impl Document {
    /// The merged configuration with all short forms written out, as a YAML file of its own; behind every value stands in a
    /// comment where it came from. Read again it gives the same configuration.
    #[must_use]
    pub fn resolved(&self) -> String {
        let mut text = String::new();
        if let Body::Map(map) = &self.root().body {
            for entry in map.entries() {
                write(&entry.node, &format!("{}:", key(&entry.key)), 0, &mut text);
            }
        }
        text
    }
}

fn key(key: &str) -> String {
    scalar(&Value::String(key.to_owned()))
}

/// A scalar on one line.
fn scalar(value: &Value) -> String {
    let text = serde_yaml::to_string(value).unwrap_or_default();
    let text = text.trim_end();
    match value {
        // JSON's quoting is YAML's, and keeps a text of several lines on one.
        Value::String(raw) if text.contains('\n') => serde_json::Value::from(raw.as_str()).to_string(),
        _ => text.to_owned(),
    }
}

fn origin(node: &Node) -> String {
    let (line, _) = node.place.source.line_column(node.place.range.start);
    match node.place.source.name() {
        "command line" => format!("--set {}", node.place.source.text().trim_start_matches("--set ").split('=').next().unwrap_or_default()),
        name => format!("{name}:{line}"),
    }
}

/// Writes a value behind its key or its dash.
fn write(node: &Node, head: &str, depth: usize, text: &mut String) {
    let indent = "  ".repeat(depth);
    // Writing to a `String` cannot fail.
    let _ = match &node.body {
        Body::Scalar(value) => writeln!(text, "{indent}{head} {}   # {}", scalar(value), origin(node)),
        Body::List(items) if items.iter().all(|item| matches!(item.body, Body::Scalar(_))) => {
            let list = items.iter().map(inside).collect::<Vec<_>>().join(", ");
            writeln!(text, "{indent}{head} [{list}]   # {}", origin(node))
        }
        Body::List(items) => {
            let _ = writeln!(text, "{indent}{head}");
            for item in items {
                write(item, "-", depth + usize::from(head == "-"), text);
            }
            Ok(())
        }
        Body::Map(map) if map.entries().is_empty() => writeln!(text, "{indent}{head} {{}}   # {}", origin(node)),
        Body::Map(map) => {
            let mut entries = map.entries().iter();
            if head == "-" {
                // The first key stands behind the dash.
                if let Some(first) = entries.next() {
                    write(&first.node, &format!("- {}:", key(&first.key)), depth, text);
                }
            } else {
                let _ = writeln!(text, "{indent}{head}");
            }
            entries.for_each(|entry| write(&entry.node, &format!("{}:", key(&entry.key)), depth + 1, text));
            Ok(())
        }
    };
}

/// A scalar within brackets, where commas and brackets have a meaning.
fn inside(node: &Node) -> String {
    match &node.body {
        Body::Scalar(value @ Value::String(raw)) => {
            if raw.contains([',', '[', ']', '{', '}']) {
                serde_json::Value::from(raw.as_str()).to_string()
            } else {
                scalar(value)
            }
        }
        Body::Scalar(value) => scalar(value),
        Body::List(_) | Body::Map(_) => String::new(),
    }
}
