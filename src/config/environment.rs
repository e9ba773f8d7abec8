//! What the user writes about the surroundings.

use schemars::JsonSchema;
use serde::Deserialize;

use super::leaf::{Quantity, SpreadQuantity};
use crate::units::kind;

/// Surroundings, and how well they are known.
#[derive(Debug, Clone, Default, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Environment {
    /// Solar activity, which sets the density of the Earth's air. Must be given for orbits under 1,500 km; higher up and elsewhere it does not matter.
    pub solar_activity: Option<SolarActivity>,
    /// Factor on the density of the atmosphere, such as `1 ± 0.15`. Default: 1.
    pub density_factor: Option<SpreadQuantity<kind::Number>>,
    /// Drag coefficient of the facets, such as `2.2 ± 0.2`. Default: 2.2.
    pub drag_coefficient: Option<SpreadQuantity<kind::Number>>,
    /// How molecules leave the facets: normal and tangential forces in place of one drag coefficient. Default: `drag_coefficient`.
    pub accommodation: Option<Accommodation>,
    /// Wind over the turning air, constant over a lifetime. Default: none.
    pub wind: Option<Wind>,
    /// Atmosphere of a body other than the Earth. Default: none.
    pub atmosphere: Option<Atmosphere>,
    /// Reflected sunlight and infrared of the body that is orbited. Default: `auto`.
    #[serde(default)]
    pub body_light: BodyLight,
    /// Share of sunlight that the body reflects, such as `0.30 ± 0.03`. Default: its Bond albedo.
    pub albedo: Option<SpreadQuantity<kind::Number>>,
    /// Infrared that leaves the body's surface, such as `238 ± 10 W/m2`; of a body without air, below the Sun. Default: what it absorbs at the start of the mission.
    pub infrared: Option<SpreadQuantity<kind::Irradiance>>,
}

/// Whether light and heat of the body count.
#[derive(Debug, Clone, Copy, Default, PartialEq, Eq, Deserialize, JsonSchema)]
#[serde(rename_all = "snake_case")]
pub enum BodyLight {
    /// Where the lowest point of the orbit is under 2,000 km.
    #[default]
    Auto,
    /// Always.
    On,
    /// Never.
    Off,
}

/// How molecules leave the facets (Schaaf and Chambre).
#[derive(Debug, Clone, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Accommodation {
    /// Accommodation of normal momentum, 0 (mirror) to 1 (diffuse), such as `0.9 ± 0.05`.
    pub normal: SpreadQuantity<kind::Number>,
    /// Accommodation of tangential momentum, 0 to 1, such as `0.9 ± 0.05`.
    pub tangential: SpreadQuantity<kind::Number>,
    /// Temperature of the facets, such as `300 K`. Default: `300 K`.
    pub wall_temperature: Option<Quantity<kind::Temperature>>,
}

/// Wind over the turning air.
#[derive(Debug, Clone, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Wind {
    /// To the east, such as `0 ± 80 m/s`. Default: 0.
    pub east: Option<SpreadQuantity<kind::Speed>>,
    /// To the north, such as `0 ± 60 m/s`. Default: 0.
    pub north: Option<SpreadQuantity<kind::Speed>>,
}

/// An exponential atmosphere that turns with its body.
#[derive(Debug, Clone, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Atmosphere {
    /// Density at `altitude`, such as `2e-12 kg/m3`.
    pub density: Quantity<kind::Density>,
    /// Altitude at which it holds, above the equatorial radius, such as `250 km`.
    pub altitude: Quantity<kind::Length>,
    /// Height over which it falls by a factor e, such as `25 km`.
    pub scale_height: Quantity<kind::Length>,
    /// Temperature of the gas, for `accommodation`. Default: `200 K`.
    pub temperature: Option<Quantity<kind::Temperature>>,
    /// Mean mass of a molecule in atomic mass units, for `accommodation`. Default: 44 (carbon dioxide).
    pub molecular_mass: Option<Quantity<kind::Number>>,
}

/// Solar activity: give `level`, `f107` or `cycle`.
#[derive(Debug, Clone, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct SolarActivity {
    /// Reference level of ISO 14222 and ECSS-E-ST-10-04: low, moderate or high.
    pub level: Option<ActivityLevel>,
    /// Solar radio flux F10.7 in solar flux units, constant over the mission, such as `90 .. 190`.
    pub f107: Option<SpreadQuantity<kind::Number>>,
    /// A solar cycle.
    pub cycle: Option<Cycle>,
}

/// A solar cycle: F10.7 = low + amplitude × (high − low) × sin²(π t / period).
#[derive(Debug, Clone, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Cycle {
    /// A date of least activity, ISO 8601, such as `2030-06-01`.
    pub start: String,
    /// Time from one minimum to the next, such as `11 yr`.
    pub period: Quantity<kind::Time>,
    /// F10.7 at the minimum, solar flux units, such as `70`.
    pub low: Quantity<kind::Number>,
    /// F10.7 at the maximum for an amplitude of 1, such as `180`.
    pub high: Quantity<kind::Number>,
    /// Factor on the rise of a cycle, such as `1 ± 0.15`. Default: 1.
    pub amplitude: Option<SpreadQuantity<kind::Number>>,
}

/// Reference level of solar activity.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Deserialize, JsonSchema)]
#[serde(rename_all = "snake_case")]
pub enum ActivityLevel {
    /// F10.7 65, Ap 0.
    Low,
    /// F10.7 140, Ap 15.
    Moderate,
    /// F10.7 250, Ap 45.
    High,
}
