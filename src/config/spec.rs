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
    schemars::schema_for!(Spec).to_value()
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
