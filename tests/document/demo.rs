//! A small spacecraft as `schemars` describes it, to walk against.

use std::collections::BTreeMap;

use couplet::config::{Diagnostic, Document, Path, check_structure, render_all};
use schemars::{JsonSchema, Schema, SchemaGenerator, json_schema};
use serde::Deserialize;

/// A force as text with its unit; the hook reads it.
#[derive(Debug, PartialEq, Deserialize)]
pub(crate) struct Force(pub(crate) serde_json::Value);

impl JsonSchema for Force {
    fn schema_name() -> std::borrow::Cow<'static, str> {
        "Force".into()
    }

    fn json_schema(_: &mut SchemaGenerator) -> Schema {
        json_schema!({
            "anyOf": [{"type": "number"}, {"type": "string"}, {"type": "object"}],
            "examples": ["1 N"],
            "x-quantity": "Force",
            "x-spread": true,
        })
    }
}

/// A demo.
#[derive(Debug, PartialEq, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub(crate) struct Demo {
    /// Name of the spacecraft. Shown in reports.
    pub(crate) name: String,
    /// When it flies and how it points.
    pub(crate) mission: Mission,
    /// The thrusters.
    pub(crate) thrusters: Vec<Thruster>,
    /// How the tank is fed.
    pub(crate) feed: Option<Feed>,
    /// Named conjectures.
    #[serde(default)]
    pub(crate) conjectures: BTreeMap<String, Conjecture>,
    /// A point or the name of one.
    pub(crate) target: Option<Target>,
}

#[derive(Debug, PartialEq, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub(crate) struct Mission {
    /// Instant at which the
    /// mission starts. In UTC.
    #[schemars(example = "2027-03-01T00:00:00Z")]
    pub(crate) start: String,
    #[schemars(range(min = 1))]
    pub(crate) orbits: u32,
    pub(crate) margin: Option<f64>,
    #[serde(default)]
    pub(crate) eclipse: bool,
    pub(crate) mode: Mode,
    pub(crate) attitude: Option<Attitude>,
}

#[derive(Debug, PartialEq, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub(crate) struct Thruster {
    pub(crate) name: String,
    pub(crate) thrust: Force,
    pub(crate) push: Option<[f64; 3]>,
    pub(crate) group: Option<Group>,
}

/// Documented words: `oneOf` with `const`.
#[derive(Debug, PartialEq, Deserialize, JsonSchema)]
#[serde(rename_all = "snake_case")]
pub(crate) enum Mode {
    /// Towards the Sun.
    SunPointing,
    /// Towards the Earth.
    Nadir,
}

#[derive(Debug, PartialEq, Deserialize, JsonSchema)]
#[serde(rename_all = "snake_case")]
pub(crate) enum Group {
    Main,
    Backup,
}

/// With data: a map with one key; and one word.
#[derive(Debug, PartialEq, Deserialize, JsonSchema)]
#[serde(rename_all = "snake_case", deny_unknown_fields)]
pub(crate) enum Feed {
    /// Constant pressure.
    Regulated { pressure: f64 },
    /// Falling pressure.
    Blowdown { start: f64, end: f64 },
    /// Ideal.
    Ideal,
}

/// The tag inside.
#[derive(Debug, PartialEq, Deserialize, JsonSchema)]
#[serde(tag = "kind", rename_all = "snake_case", deny_unknown_fields)]
pub(crate) enum Attitude {
    Inertial { axis: [f64; 3] },
    Spinning { rate: f64 },
}

#[derive(Debug, PartialEq, Deserialize, JsonSchema)]
#[serde(untagged)]
pub(crate) enum Target {
    Point([f64; 3]),
    Name(String),
}

#[derive(Debug, PartialEq, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub(crate) struct Conjecture {
    pub(crate) factor: f64,
}

/// A configuration without fault.
pub(crate) const GOOD: &str = "\
name: Larch
mission:
  start: 2027-03-01T00:00:00Z
  orbits: 15
  margin: 0.2
  mode: sun_pointing
  attitude: {kind: inertial, axis: [0, 0, 1]}
thrusters:
  - name: A1
    thrust: 1 N
    push: [1, 0, 0]
    group: main
  - name: A2
    thrust: {nominal: 1 N, sd: 3 %}
feed: {blowdown: {start: 22.0, end: 5.5}}
conjectures:
  solar maximum: {factor: 1.5}
target: [0, 0, 1]
";

pub(crate) fn schema() -> serde_json::Value {
    serde_json::to_value(schemars::schema_for!(Demo)).expect("a schema is JSON")
}

/// Stands for the reader of quantities: refuses text that does not end in `N`.
fn leaf(_: &serde_json::Value, value: &serde_yaml::Value, path: &Path) -> Vec<Diagnostic> {
    match value.as_str() {
        Some(text) if !text.ends_with('N') => {
            let unit = text.rfind(' ').map_or(0, |space| space + 1);
            let message = format!("`{path}` must be a force, got `{text}`");
            let fault = Diagnostic::error(path.clone(), message).label("not a unit of force");
            vec![fault.within(unit..text.len()).help("write it in newtons: `1 N`")]
        }
        _ => Vec::new(),
    }
}

pub(crate) fn check(document: &Document) -> Vec<Diagnostic> {
    check_structure(document, &schema(), &leaf)
}

/// The faults of the good configuration with one text replaced by another, as shown.
pub(crate) fn mutated(from: &str, to: &str) -> String {
    assert!(GOOD.contains(from), "`{from}` is not in the configuration");
    let text = GOOD.replacen(from, to, 1);
    let document = crate::read(&text).expect("valid YAML");
    render_all(&check(&document), Some(&document), false)
}
