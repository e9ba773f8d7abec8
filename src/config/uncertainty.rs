//! What the user writes about how uncertain quantities hang together.

use schemars::JsonSchema;
use serde::Deserialize;

/// How uncertain quantities hang together, and how often they are drawn.
#[derive(Debug, Clone, Default, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Uncertainty {
    /// Quantities that are not one number for a whole lifetime. Default: each is drawn once a lifetime.
    #[serde(default)]
    pub drawn: Vec<DrawnAnew>,
    /// Quantities that go together. Default: each is independent of the others.
    #[serde(default)]
    pub correlations: Vec<Correlation>,
    /// Quantities that count as one driver. Default: the components of a vector, and those that are correlated.
    #[serde(default)]
    pub drivers: Vec<DriverGroup>,
}

/// Quantities that are drawn anew.
#[derive(Debug, Clone, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct DrawnAnew {
    /// Their names, as the drivers list them, such as `environment.density_factor`.
    pub quantities: Vec<String>,
    /// For what they are drawn anew.
    pub for_each: Each,
}

/// For what a quantity is drawn anew.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Deserialize, JsonSchema)]
#[serde(rename_all = "snake_case")]
pub enum Each {
    /// Once a lifetime.
    Lifetime,
    /// For each phase of the mission.
    Phase,
    /// Each time that the event happens; for quantities of events.
    Event,
}

/// Quantities that are correlated; each keeps its own distribution. Give `coefficient` or `matrix`.
#[derive(Debug, Clone, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Correlation {
    /// Their names, with the component of a vector: `[spacecraft.residual_dipole.x, spacecraft.residual_dipole.y]`.
    pub quantities: Vec<String>,
    /// Correlation coefficient of every pair, between −1 and 1, such as `0.6`.
    pub coefficient: Option<f64>,
    /// Correlation matrix, one row a quantity: `[[1, 0.6], [0.6, 1]]`.
    pub matrix: Option<Vec<Vec<f64>>>,
}

/// Quantities that count as one driver.
#[derive(Debug, Clone, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct DriverGroup {
    /// Name in the table of drivers.
    pub name: String,
    /// Names of its quantities.
    pub quantities: Vec<String>,
}
