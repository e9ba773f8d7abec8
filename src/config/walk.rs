//! Checking the shape of a configuration against the JSON Schema of the typed values.
//!
//! Reports every unknown key, missing key, wrong kind of value and unknown word. What the values
//! mean is checked elsewhere; quantities go to a hook.

use serde_json::Value as Json;
use serde_yaml::{Mapping, Value};

use super::diagnostic::Diagnostic;
use super::document::Document;
use super::nearest::{did_you_mean, known, nearest};
use super::path::{Path, short};
use super::schema::{Schema, got, is};

/// Reads the text of a quantity: its schema, the value (text, number, or a map where the schema
/// says `x-spread`) and its address; returns what is wrong with it.
pub type Leaf<'a> = dyn Fn(&Json, &Value, &Path) -> Vec<Diagnostic> + 'a;

/// Faults after which the check stops.
const MOST_FAULTS: usize = 500;

/// Compares a configuration with a schema (draft 2020-12 as `schemars` writes it).
///
/// Knows `$ref`, `properties`, `required`, `additionalProperties`, `items`, `minItems`, `maxItems`,
/// `minimum`, `maximum` and the exclusive ones, `anyOf`, `oneOf`, `enum`, `const` and the forms in
/// which enums and options are written with them. A schema with `x-quantity` goes to `leaf`.
///
/// Returns all faults, at most 500.
#[must_use]
pub fn check_structure(document: &Document, schema: &Json, leaf: &Leaf<'_>) -> Vec<Diagnostic> {
    let mut walk = Walk { leaf, faults: Vec::new() };
    walk.value(&Schema::new(schema), document.value(), &Path::root());
    walk.faults
}

/// A walk under way.
pub(crate) struct Walk<'a> {
    pub(crate) leaf: &'a Leaf<'a>,
    pub(crate) faults: Vec<Diagnostic>,
}

impl Walk<'_> {
    pub(crate) fn value(&mut self, schema: &Schema<'_>, value: &Value, path: &Path) {
        if self.faults.len() >= MOST_FAULTS {
            return;
        }
        if schema.is_quantity() {
            if schema.takes(value) {
                self.faults.extend((self.leaf)(&schema.merged(), value, path));
            } else {
                self.wrong_kind(schema, value, path);
            }
            return;
        }
        let alternatives = schema.alternatives();
        if !alternatives.is_empty() {
            return self.choose(schema, alternatives, value, path);
        }
        let types = schema.types();
        if !types.is_empty() && !types.iter().any(|name| is(value, name)) {
            return self.wrong_kind(schema, value, path);
        }
        match value {
            Value::String(text) if !schema.words().is_empty() => {
                self.word(&schema.words(), text, path);
            }
            Value::Number(number) => self.range(schema, number, path),
            Value::Sequence(items) => self.list(schema, items, path),
            Value::Mapping(map) => self.map(schema, map, path),
            _ => {}
        }
    }

    pub(crate) fn map(&mut self, schema: &Schema<'_>, map: &Mapping, path: &Path) {
        let keys = schema.keys();
        let closed = schema.get("additionalProperties") == Some(&Json::Bool(false));
        let others = schema.get("additionalProperties").filter(|others| others.is_object());
        let mut meant = Vec::new();
        for (key, value) in map {
            let Some(key) = key.as_str() else { continue };
            match (schema.property(key), others) {
                (Some(inner), _) => self.value(&inner, value, &path.key(key)),
                (None, Some(others)) => self.value(&schema.at(others), value, &path.key(key)),
                (None, None) if closed => {
                    if self.faults.len() >= MOST_FAULTS {
                        return;
                    }
                    let unused = keys.iter().copied().filter(|known| !map.contains_key(*known));
                    meant.extend(nearest(key, unused));
                    self.unknown_key(key, &keys, path);
                }
                _ => {}
            }
        }
        for key in schema.required() {
            // A misspelt key is one fault, not two.
            if !map.contains_key(key) && !meant.contains(&key) {
                self.missing(schema, key, path);
            }
        }
    }

    pub(crate) fn unknown_key(&mut self, key: &str, keys: &[&str], path: &Path) {
        let message = if path.segments().is_empty() {
            format!("unknown key `{}`", short(key))
        } else {
            format!("unknown key `{}` in `{path}`", short(key))
        };
        let help = did_you_mean(key, keys.iter().copied());
        let fault = Diagnostic::error(path.key(key), message).at_key().label("not known here");
        self.faults.push(fault.help(help.unwrap_or_else(|| "delete it".to_owned())));
    }

    fn missing(&mut self, schema: &Schema<'_>, key: &str, path: &Path) {
        let at = path.key(key);
        let inner = schema.property(key);
        let says = inner.as_ref().map(|inner| {
            let what = inner.summary().unwrap_or_else(|| inner.expected());
            let example = inner.example().map(|text| format!("; for example `{key}: {text}`"));
            format!(": {what}{}", example.unwrap_or_default())
        });
        let help = format!("add `{key}`{}", says.unwrap_or_default());
        let fault = Diagnostic::error(at.clone(), format!("`{at}` is missing"));
        self.faults.push(fault.label(format!("`{key}` belongs here")).help(help));
    }

    fn list(&mut self, schema: &Schema<'_>, items: &[Value], path: &Path) {
        let bound = |keyword| schema.get(keyword).and_then(Json::as_u64);
        let (least, most) = (bound("minItems").unwrap_or(0), bound("maxItems").unwrap_or(u64::MAX));
        let count = items.len() as u64;
        if count < least || count > most {
            let expected = match (least, most) {
                (least, most) if least == most => format!("{least}"),
                (least, u64::MAX) => format!("at least {least}"),
                (0, most) => format!("at most {most}"),
                (least, most) => format!("{least} to {most}"),
            };
            let message = format!("`{path}` must have {expected} items, got {count}");
            let fault = Diagnostic::error(path.clone(), message);
            let help = schema.example().map(|example| format!("for example `{example}`"));
            let otherwise = format!("write {expected} items: `[…]`");
            self.faults.push(fault.help(help.unwrap_or(otherwise)));
        }
        let prefix = schema.get("prefixItems").and_then(Json::as_array);
        let rest = schema.get("items").filter(|items| items.is_object());
        for (index, item) in items.iter().enumerate() {
            let inner = prefix.and_then(|prefix| prefix.get(index)).or(rest);
            if let Some(inner) = inner {
                self.value(&schema.at(inner), item, &path.index(index));
            }
        }
    }

    fn range(&mut self, schema: &Schema<'_>, number: &serde_yaml::Number, path: &Path) {
        let Some(value) = number.as_f64() else { return };
        let bound = |keyword| schema.get(keyword).and_then(Json::as_f64);
        let limits = [
            ("at least", bound("minimum"), value >= bound("minimum").unwrap_or(value)),
            ("at most", bound("maximum"), value <= bound("maximum").unwrap_or(value)),
            ("above", bound("exclusiveMinimum"), bound("exclusiveMinimum").is_none_or(|b| value > b)),
            ("below", bound("exclusiveMaximum"), bound("exclusiveMaximum").is_none_or(|b| value < b)),
        ];
        for (words, limit, kept) in limits {
            if let Some(limit) = limit.filter(|_| !kept) {
                let message = format!("`{path}` must be {words} {limit}, got {number}");
                let fault = Diagnostic::error(path.clone(), message).label("out of range");
                self.faults.push(fault.help(format!("write a number that is {words} {limit}")));
            }
        }
    }

    pub(crate) fn wrong_kind(&mut self, schema: &Schema<'_>, value: &Value, path: &Path) {
        let expected = schema.expected();
        let message = format!("`{path}` must be {expected}, got {}", got(value));
        let fault = Diagnostic::error(path.clone(), message).label(format!("expected {expected}"));
        self.faults.push(fault.help(remedy(schema, value)));
    }
}

/// How to write the kind of value that is expected.
fn remedy(schema: &Schema<'_>, value: &Value) -> String {
    if let Some(example) = schema.example() {
        return format!("write it as `{example}`");
    }
    let types = schema.types();
    let wants = |name| types.contains(&name);
    match value {
        Value::Number(_) | Value::Bool(_) if wants("string") => {
            let text = serde_yaml::to_string(value).unwrap_or_default();
            format!("put it in quotes: `\"{}\"`", text.trim())
        }
        Value::Mapping(_) if schema.is_quantity() => {
            format!("this value takes no spread: write one value, such as `{}`", schema.quantity_example())
        }
        _ if schema.is_quantity() => format!("write a value with its unit, such as `{}`", schema.quantity_example()),
        Value::Number(_) if wants("integer") => "write a number without a fraction".to_owned(),
        Value::String(_) if wants("integer") => "write a whole number in digits, such as `1`".to_owned(),
        Value::String(_) if wants("number") => "write digits, with a decimal point if need be, without quotes and unit".to_owned(),
        Value::String(text) if wants("boolean") => match text.to_lowercase().as_str() {
            "yes" | "on" | "y" => "write `true`".to_owned(),
            "no" | "off" | "n" => "write `false`".to_owned(),
            _ => "write `true` or `false`, without quotes".to_owned(),
        },
        _ if wants("object") => match known(schema.keys()) {
            Some(keys) => format!("write it as `key: value`; known here: {keys}"),
            None => "write it as `key: value`".to_owned(),
        },
        _ if wants("array") => "write a list: `[…]`, or lines that begin with `- `".to_owned(),
        Value::Null => "write a value after the colon, or delete the key".to_owned(),
        _ => format!("write {}", schema.expected()),
    }
}
