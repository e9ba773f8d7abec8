//! Reading the JSON Schema that `schemars` makes from the typed values.

use serde_json::{Map, Value as Json};
use serde_yaml::Value;

use super::node::kind;

/// A schema with its `$ref` followed: keys beside the `$ref` stand over those of its target.
#[derive(Debug, Clone)]
pub(crate) struct Schema<'a> {
    root: &'a Json,
    layers: Vec<&'a Map<String, Json>>,
}

impl<'a> Schema<'a> {
    /// The whole schema.
    pub(crate) fn new(root: &'a Json) -> Self {
        Self { root, layers: Vec::new() }.at(root)
    }

    /// A schema that stands inside this one.
    pub(crate) fn at(&self, schema: &'a Json) -> Self {
        /// Longer chains of references are loops.
        const LONGEST: usize = 16;
        let mut layers: Vec<&'a Map<String, Json>> = Vec::new();
        let mut next = Some(schema);
        while let Some(Json::Object(layer)) = next.filter(|_| layers.len() < LONGEST) {
            layers.push(layer);
            let single = layer.get("allOf").and_then(Json::as_array).map(Vec::as_slice);
            next = match (layer.get("$ref").and_then(Json::as_str), single) {
                (Some(reference), _) => self.root.pointer(reference.trim_start_matches('#')),
                (None, Some([only])) => Some(only),
                _ => None,
            };
        }
        Self { root: self.root, layers }
    }

    /// What the schema says under `keyword`.
    pub(crate) fn get(&self, keyword: &str) -> Option<&'a Json> {
        self.layers.iter().find_map(|layer| layer.get(keyword))
    }

    /// All keywords in one object, for the hook.
    pub(crate) fn merged(&self) -> Json {
        let mut all = Map::new();
        for layer in self.layers.iter().rev() {
            all.extend(layer.iter().map(|(key, value)| (key.clone(), value.clone())));
        }
        all.remove("$ref");
        Json::Object(all)
    }

    /// The schema of a known key.
    pub(crate) fn property(&self, key: &str) -> Option<Self> {
        Some(self.at(self.get("properties")?.get(key)?))
    }

    /// The known keys.
    pub(crate) fn keys(&self) -> Vec<&'a str> {
        let properties = self.get("properties").and_then(Json::as_object);
        properties.into_iter().flat_map(Map::keys).map(String::as_str).collect()
    }

    /// The keys that must be there.
    pub(crate) fn required(&self) -> Vec<&'a str> {
        let names = self.get("required").and_then(Json::as_array);
        names.into_iter().flatten().filter_map(Json::as_str).collect()
    }

    /// The alternatives of `anyOf` or `oneOf`.
    pub(crate) fn alternatives(&self) -> Vec<Self> {
        let options = self.get("anyOf").or_else(|| self.get("oneOf")).and_then(Json::as_array);
        options.into_iter().flatten().map(|option| self.at(option)).collect()
    }

    /// The words of a `const` or `enum`.
    pub(crate) fn words(&self) -> Vec<&'a str> {
        let several = self.get("enum").and_then(Json::as_array).into_iter().flatten();
        several.chain(self.get("const")).filter_map(Json::as_str).collect()
    }

    /// Whether it is a quantity, which is read elsewhere.
    pub(crate) fn is_quantity(&self) -> bool {
        self.get("x-quantity").is_some()
    }

    /// The name of the variant, if this is an enum's variant with data: a map with one known key.
    pub(crate) fn variant(&self) -> Option<&'a str> {
        match (self.required().as_slice(), self.keys().as_slice()) {
            ([required], [known]) if required == known && self.get("const").is_none() => Some(*known),
            _ => None,
        }
    }

    /// The key and word that tell this variant from others, if it is one with the tag inside.
    pub(crate) fn tag(&self) -> Option<(&'a str, &'a str)> {
        self.required().into_iter().find_map(|key| {
            let word = self.property(key)?.get("const")?.as_str()?;
            Some((key, word))
        })
    }

    /// The JSON types it takes; empty if it takes any.
    pub(crate) fn types(&self) -> Vec<&'a str> {
        match self.get("type") {
            Some(Json::String(one)) => vec![one.as_str()],
            Some(Json::Array(several)) => several.iter().filter_map(Json::as_str).collect(),
            _ if !self.words().is_empty() => vec!["string"],
            _ if self.get("properties").is_some() => vec!["object"],
            _ => Vec::new(),
        }
    }

    /// Whether a value of this kind can stand here at all.
    pub(crate) fn takes(&self, value: &Value) -> bool {
        if self.is_quantity() {
            let spread = self.get("x-spread") == Some(&Json::Bool(true));
            let types = self.types();
            return value.is_string()
                || value.is_number()
                || spread && value.is_mapping()
                || types.contains(&"array") && value.is_sequence()
                || types.contains(&"null") && value.is_null();
        }
        let alternatives = self.alternatives();
        if !alternatives.is_empty() {
            return alternatives.iter().any(|option| option.takes(value));
        }
        let types = self.types();
        types.is_empty() || types.iter().any(|name| is(value, name))
    }

    /// What it takes, in words: "a list or text".
    pub(crate) fn expected(&self) -> String {
        let mut words: Vec<String> = Vec::new();
        let mut add = |word: String| {
            if !words.contains(&word) {
                words.push(word);
            }
        };
        let alternatives = self.alternatives();
        if self.is_quantity() || alternatives.is_empty() {
            self.expected_here().into_iter().for_each(&mut add);
        } else {
            let options = alternatives.iter().filter(|option| option.types() != ["null"]);
            options.flat_map(Self::expected_here).for_each(&mut add);
        }
        match words.split_last() {
            None => "a value".to_owned(),
            Some((only, [])) => only.clone(),
            Some((last, others)) => format!("{} or {last}", others.join(", ")),
        }
    }

    /// An example of a quantity of this kind.
    pub(crate) fn quantity_example(&self) -> &'static str {
        let name = self.get("x-quantity").and_then(Json::as_str).unwrap_or_default();
        super::leaf::kind_named(name).map_or("1 N", |words| words.example)
    }

    fn expected_here(&self) -> Vec<String> {
        if let Some(name) = self.get("x-quantity").and_then(Json::as_str) {
            return vec![spoken(name)];
        }
        if !self.alternatives().is_empty() {
            return vec![self.expected()];
        }
        if !self.words().is_empty() {
            return self.words().into_iter().map(|word| format!("`{word}`")).collect();
        }
        let name = |name: &str| match name {
            "object" => "a map",
            "array" => "a list",
            "string" => "text",
            "integer" => "a whole number",
            "number" => "a number",
            "boolean" => "`true` or `false`",
            _ => "nothing",
        };
        let types = self.types().into_iter().filter(|name| *name != "null");
        types.map(|kind| name(kind).to_owned()).collect()
    }

    /// First sentence of the description, without its full stop.
    pub(crate) fn summary(&self) -> Option<String> {
        let text = self.get("description")?.as_str()?.split_whitespace().collect::<Vec<_>>().join(" ");
        let sentence = text.split_once(". ").map_or(text.as_str(), |(first, _)| first);
        let sentence = sentence.trim_end_matches('.');
        (!sentence.is_empty()).then(|| sentence.to_owned())
    }

    /// The first example as one writes it in YAML.
    pub(crate) fn example(&self) -> Option<String> {
        match self.get("examples")?.as_array()?.first()? {
            Json::String(text) => Some(text.clone()),
            other => Some(other.to_string()),
        }
    }
}

/// Whether a value is of a JSON type.
pub(crate) fn is(value: &Value, name: &str) -> bool {
    match (name, value) {
        ("null", Value::Null)
        | ("boolean", Value::Bool(_))
        | ("string", Value::String(_))
        | ("number", Value::Number(_))
        | ("array", Value::Sequence(_))
        | ("object", Value::Mapping(_)) => true,
        ("integer", Value::Number(number)) => !number.is_f64(),
        _ => false,
    }
}

/// What a value is, in words, with its text if that is short.
pub(crate) fn got(value: &Value) -> String {
    match value {
        Value::Number(number) => format!("the number `{number}`"),
        Value::String(text) => format!("the text `{}`", super::path::short(text)),
        other => kind(other).to_owned(),
    }
}

/// `AngularMomentum` as "an angular momentum"; a name that begins with an article stays.
fn spoken(name: &str) -> String {
    if name.starts_with("a ") || name.starts_with("an ") {
        return name.to_owned();
    }
    let mut words = String::new();
    for c in name.chars() {
        if c.is_uppercase() && !words.is_empty() {
            words.push(' ');
        }
        words.extend(c.to_lowercase());
    }
    let article = if words.starts_with(['a', 'e', 'i', 'o']) { "an" } else { "a" };
    format!("{article} {words}")
}
