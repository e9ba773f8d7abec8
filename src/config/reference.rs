//! The reference of all keys, made from the schema: docs/config.md carries it.

use std::fmt::Write;

use serde_json::Value;

use super::spec::schema;

/// Every key as Markdown: one table for each part of the configuration.
///
/// Name, kind and SI unit of the value, range, example, default and meaning. Made from the schema.
#[must_use]
pub fn reference() -> String {
    let schema = schema();
    let mut text = String::new();
    section(&schema, &schema, "", &mut text);
    text
}

/// The definition that a schema node stands for: follows `$ref`, and the one that is not null.
fn target<'a>(root: &'a Value, node: &'a Value) -> &'a Value {
    if let Some(name) = node.get("$ref").and_then(Value::as_str) {
        return root.pointer(name.trim_start_matches('#')).unwrap_or(node);
    }
    let some = node.get("anyOf").and_then(Value::as_array).and_then(|options| options.first());
    some.map_or(node, |option| target(root, option))
}

fn description(node: &Value) -> String {
    node.get("description").and_then(Value::as_str).unwrap_or_default().replace('\n', " ").replace('|', "\\|")
}

/// What may stand there, in words.
fn kind(root: &Value, node: &Value) -> String {
    let own = target(root, node);
    let word = |key: &str| own.get(key).and_then(Value::as_str).unwrap_or_default();
    if own.get("x-quantity").is_some() {
        let unit = if word("x-unit").is_empty() { "number".to_owned() } else { word("x-unit").to_owned() };
        let form = match word("x-form") {
            "three" => "3 × ",
            "three-spread" => "3 × ± ",
            "one-spread" => "± ",
            _ => "",
        };
        return format!("{form}{unit}");
    }
    if let Some(options) = own.get("oneOf").and_then(Value::as_array) {
        let words: Vec<&str> = options.iter().filter_map(|option| option.get("const").and_then(Value::as_str)).collect();
        let words = words.iter().map(|word| format!("`{word}`"));
        let maps = variants(root, own).into_iter().map(|(name, _)| format!("`{name}: {{…}}`"));
        return words.chain(maps).collect::<Vec<_>>().join(", ");
    }
    match own.get("type") {
        Some(Value::String(name)) if name == "object" => "map".to_owned(),
        Some(Value::String(name)) if name == "array" => "list".to_owned(),
        Some(Value::String(name)) => name.replace("string", "text").replace("boolean", "true or false"),
        Some(Value::Array(several)) => {
            several.first().and_then(Value::as_str).unwrap_or_default().replace("integer", "whole number").replace("string", "text")
        }
        _ => String::new(),
    }
}

/// Choices of a key that are maps: their names and what stands in them.
fn variants<'a>(root: &'a Value, node: &'a Value) -> Vec<(&'a str, &'a Value)> {
    let options = target(root, node).get("oneOf").and_then(Value::as_array).into_iter().flatten();
    let maps = options.filter_map(|option| option.get("properties").and_then(Value::as_object));
    maps.flatten().map(|(name, inner)| (name.as_str(), target(root, inner))).collect()
}

/// Parts whose keys have a table elsewhere already.
const TOLD_ELSEWHERE: [&str; 6] = [
    "assumptions",
    "mission.phases[].orbit",
    "mission.phases[].attitude.towards",
    "mission.phases[].attitude.mix.of[].to",
    "mission.phases[].attitude.mix.of[].towards",
    "mission.phases[].attitude.mix.of[].survey",
];

/// The map that a key opens, if it opens one: itself, or the items of its list.
fn opens<'a>(root: &'a Value, node: &'a Value) -> Option<(&'a Value, &'static str)> {
    let own = target(root, node);
    if own.get("properties").is_some() {
        return Some((own, ""));
    }
    let items = own.get("items").map(|items| target(root, items))?;
    items.get("properties").map(|_| (items, "[]"))
}

fn section(root: &Value, node: &Value, path: &str, text: &mut String) {
    let Some(properties) = node.get("properties").and_then(Value::as_object) else { return };
    let required: Vec<&str> = node.get("required").and_then(Value::as_array).into_iter().flatten().filter_map(Value::as_str).collect();
    let title = if path.is_empty() { "The whole file".to_owned() } else { format!("`{path}`") };
    // Writing to a `String` cannot fail.
    let _ = writeln!(text, "\n### {title}\n\n{}\n", description(node));
    text.push_str("| key | value | range | example | default | meaning |\n| --- | --- | --- | --- | --- | --- |\n");
    for (key, value) in properties {
        let word = |name: &str| value.get(name).and_then(Value::as_str).unwrap_or_default().replace('|', "\\|");
        let default = if required.contains(&key.as_str()) { "must be given".to_owned() } else { word("x-default") };
        let example =
            value.get("examples").and_then(|list| list.get(0)).and_then(Value::as_str).map_or_else(String::new, |text| format!("`{text}`"));
        let meaning = description(value).split(" Default: ").next().unwrap_or_default().to_owned();
        let _ = writeln!(text, "| `{key}` | {} | {} | {example} | {default} | {meaning} |", kind(root, value), word("x-range"));
    }
    for (key, value) in properties {
        let inner = if path.is_empty() { key.clone() } else { format!("{path}.{key}") };
        if TOLD_ELSEWHERE.contains(&inner.as_str()) {
            continue;
        }
        if let Some((map, items)) = opens(root, value) {
            section(root, map, &format!("{inner}{items}"), text);
        }
        for (name, map) in variants(root, value) {
            section(root, map, &format!("{inner}.{name}"), text);
        }
    }
}
