//! The whole configuration, and reading it: structure first, then values.

use schemars::JsonSchema;
use serde::Deserialize;
use serde_yaml::Value;

use super::leaf::{self, Form};
use super::{
    Budget, Diagnostic, Document, Engine, Environment, Material, Mission, Path, Propulsion, Requirement, Spacecraft, Surface, Tank,
    Thruster, Uncertainty, Wheels, check_structure, decode,
};

/// A spacecraft, its mission and what is asked of it.
#[derive(Debug, Clone, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Spec {
    /// Mass properties and the disturbances that the spacecraft itself makes.
    pub spacecraft: Spacecraft,
    /// Kinds of surface, which `surfaces` names.
    #[serde(default)]
    pub materials: Vec<Material>,
    /// Flat facets of the outside; light and air meet them.
    #[serde(default)]
    pub surfaces: Vec<Surface>,
    /// What all thrusters share.
    pub propulsion: Propulsion,
    /// The thrusters.
    pub thrusters: Vec<Thruster>,
    /// Engines for orbit burns, beside the thrusters.
    #[serde(default)]
    pub engines: Vec<Engine>,
    /// The propellant.
    pub tank: Tank,
    /// The wheel array. Default: no wheels.
    pub wheels: Option<Wheels>,
    /// When and where the spacecraft flies, and what it does.
    pub mission: Mission,
    /// Surroundings, and how well they are known.
    #[serde(default)]
    pub environment: Environment,
    /// How uncertain quantities hang together, and how often they are drawn.
    #[serde(default)]
    pub uncertainty: Uncertainty,
    /// How the budget is made.
    #[serde(default)]
    pub budget: Budget,
    /// Named sets of assumptions, each laid over the configuration by `--assume NAME`. Default: none.
    #[serde(default)]
    pub assumptions: std::collections::BTreeMap<String, Assumptions>,
    /// Names of warnings that are known and not to be told again. Default: none.
    #[serde(default)]
    pub silence: Vec<String>,
    /// What must hold; the exit status is 1 if something does not.
    #[serde(default)]
    pub requirements: Vec<Requirement>,
}

/// A set of assumptions: any keys of the configuration, as in an overlay.
#[derive(Debug, Clone, Deserialize, JsonSchema)]
#[serde(transparent)]
pub struct Assumptions(pub std::collections::BTreeMap<String, serde_json::Value>);

/// JSON Schema (draft 2020-12) of the configuration, made from the types above.
#[must_use]
pub fn schema() -> serde_json::Value {
    let mut schema = schemars::schema_for!(Spec).to_value();
    enrich("Spec", &mut schema);
    if let Some(definitions) = schema.get_mut("$defs").and_then(serde_json::Value::as_object_mut) {
        for (name, definition) in definitions {
            enrich(name, definition);
        }
    }
    schema
}

/// Adds to each key of a type what its documentation and the table of ranges say: `examples`, `x-default`, `x-range`.
fn enrich(name: &str, definition: &mut serde_json::Value) {
    let Some(properties) = definition.get_mut("properties").and_then(serde_json::Value::as_object_mut) else { return };
    for (key, property) in properties {
        let described = property.get("description").and_then(serde_json::Value::as_str).unwrap_or_default().replace('\n', " ");
        let said = |before: &str| described.split_once(before).map(|(_, rest)| rest.to_owned());
        let example = said("such as `").and_then(|rest| rest.split_once('`').map(|(example, _)| example.to_owned()));
        let example = example.or_else(|| {
            property.get("x-quantity").and_then(serde_json::Value::as_str).and_then(leaf::kind_named).map(|words| {
                let three = property.get("x-form").and_then(serde_json::Value::as_str).is_some_and(|form| form.starts_with("three"));
                if three { triple_of(words.example) } else { words.example.to_owned() }
            })
        });
        let Some(map) = property.as_object_mut() else { continue };
        if let Some(example) = example {
            map.insert("examples".to_owned(), serde_json::json!([example]));
        }
        if let Some(default) = said("Default: ") {
            map.insert("x-default".to_owned(), serde_json::json!(default.trim().trim_end_matches('.')));
        }
        let unit = map
            .get("x-unit")
            .and_then(serde_json::Value::as_str)
            .filter(|unit| !unit.is_empty())
            .map(|unit| format!("In {unit} or any unit of that kind."));
        let range = super::ranges::range(&format!("{name}.{key}"));
        if let Some(range) = range {
            map.insert("x-range".to_owned(), serde_json::json!(range));
        }
        // What editors show beside a key.
        let more: Vec<String> = unit.into_iter().chain(range.map(|range| format!("Range: {range}."))).collect();
        if !more.is_empty() {
            map.insert("markdownDescription".to_owned(), serde_json::json!(format!("{described}\n\n{}", more.join(" "))));
        }
    }
}

/// An example of a vector out of one of a number.
fn triple_of(example: &str) -> String {
    let (number, unit) = example.split_once(' ').unwrap_or((example, ""));
    format!("{number} 0 0 {unit}").trim_end().to_owned()
}

/// Reads the values of a document.
///
/// # Errors
/// Every unknown or missing key, wrong kind of value, and quantity that cannot be read.
pub fn read(document: &Document) -> Result<Spec, Vec<Diagnostic>> {
    let faults = check_structure(document, &schema(), &check_leaf);
    if faults.is_empty() { decode(document) } else { Err(faults) }
}

fn check_leaf(schema: &serde_json::Value, value: &Value, path: &Path) -> Vec<Diagnostic> {
    if value.is_null() {
        return Vec::new();
    }
    let word = |key: &str| schema.get(key).and_then(serde_json::Value::as_str).unwrap_or_default();
    let (Some(words), Some(form)) = (leaf::kind_named(word("x-quantity")), Form::named(word("x-form"))) else {
        return Vec::new();
    };
    match leaf::read(value, words, form) {
        Ok(_) => Vec::new(),
        Err(error) => {
            let fault = Diagnostic::error(path.clone(), format!("`{path}`: {}", error.message)).help(error.help);
            vec![if value.is_string() && !error.range.is_empty() { fault.within(error.range) } else { fault }]
        }
    }
}

#[cfg(test)]
#[allow(clippy::indexing_slicing, reason = "a test fails by panicking")]
mod tests {
    use super::*;

    /// Every example of a quantity that the schema shows can be read as one.
    #[test]
    fn examples_can_be_read() {
        let schema = schema();
        let mut count = 0;
        let definitions = schema["$defs"].as_object().unwrap().iter().map(|(name, definition)| (name.as_str(), definition));
        for (name, definition) in definitions.chain([("Spec", &schema)]) {
            for (key, property) in definition["properties"].as_object().into_iter().flatten() {
                let (Some(kind), Some(example)) = (property["x-quantity"].as_str(), property["examples"][0].as_str()) else { continue };
                let words = leaf::kind_named(kind).unwrap();
                let form = Form::named(property["x-form"].as_str().unwrap()).unwrap();
                let value = Value::String(example.to_owned());
                assert!(leaf::read(&value, words, form).is_ok(), "{name}.{key}: {example}");
                count += 1;
            }
        }
        assert!(count > 100, "{count}");
    }
}
