//! What the user writes about the mission, its surroundings, and what must hold.

use schemars::JsonSchema;
use serde::Deserialize;

use super::leaf::{Quantity, SpreadQuantity, SpreadTriple, Triple};
use crate::units::kind;

/// When and where the spacecraft flies, and what it does.
#[derive(Debug, Clone, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Mission {
    /// Start of the first phase, ISO 8601, such as `2029-04-01`, in the years 1900 to 2200.
    pub start: String,
    /// The orbit, unless a phase has its own.
    pub orbit: Orbit,
    /// The phases, one after the other.
    pub phases: Vec<Phase>,
}

/// An orbit about the Earth. Give its size by `altitude`, by `perigee_altitude` and `apogee_altitude`, or by `semi_major_axis` and `eccentricity`.
#[derive(Debug, Clone, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Orbit {
    /// Altitude of a circular orbit above the equatorial radius, such as `600 km`.
    pub altitude: Option<Quantity<kind::Length>>,
    /// Altitude of the perigee above the equatorial radius.
    pub perigee_altitude: Option<Quantity<kind::Length>>,
    /// Altitude of the apogee above the equatorial radius.
    pub apogee_altitude: Option<Quantity<kind::Length>>,
    /// Semi-major axis, such as `26560 km`.
    pub semi_major_axis: Option<Quantity<kind::Length>>,
    /// Eccentricity, 0 to below 1. Only with `semi_major_axis`; default 0.
    pub eccentricity: Option<Quantity<kind::Number>>,
    /// Inclination to the equator, such as `63.4 deg`; left out where `local_time` makes the orbit Sun-synchronous.
    pub inclination: Option<Quantity<kind::Angle>>,
    /// Mean local time of the ascending node, such as `10.5 h`: the orbit is Sun-synchronous and its inclination follows.
    pub local_time: Option<Quantity<kind::Time>>,
    /// Right ascension of the ascending node at the start of the mission. Default: 0.
    pub ascending_node: Option<Quantity<kind::Angle>>,
    /// Argument of perigee at the start of the mission. Default: 0.
    pub argument_of_perigee: Option<Quantity<kind::Angle>>,
    /// Mean anomaly at the start of the mission. Default: 0.
    pub mean_anomaly: Option<Quantity<kind::Angle>>,
}

/// A stretch of the mission with one orbit, attitude and unload policy.
#[derive(Debug, Clone, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Phase {
    /// Name, such as `science`.
    pub name: String,
    /// How long it lasts, such as `7 yr`.
    pub duration: Quantity<kind::Time>,
    /// Orbit of this phase. Default: `mission.orbit`.
    pub orbit: Option<Orbit>,
    /// Attitude. Default: nadir-pointing without bias.
    #[serde(default)]
    pub attitude: Attitude,
    /// When the wheels are unloaded. Default: never.
    pub unload: Option<Unload>,
    /// What else takes propellant in this phase.
    #[serde(default)]
    pub events: Vec<Event>,
}

/// Nadir-pointing attitude: z to the centre of the Earth, y against the orbit normal, x completing (along the velocity on a circular orbit).
#[derive(Debug, Clone, Default, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Attitude {
    /// Constant rotation of the body from nadir-pointing, small angles about x, y, z, such as `0 1.5 0 ± 0.2 deg`. Default: zero.
    pub bias: Option<SpreadTriple<kind::Angle>>,
}

/// When the wheels are unloaded: give `every` or `at_fill`.
#[derive(Debug, Clone, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Unload {
    /// Fixed interval, such as `1 d`.
    pub every: Option<Quantity<kind::Time>>,
    /// Share of the wheel envelope at which to unload, such as `70 %`.
    pub at_fill: Option<Quantity<kind::Number>>,
}

/// One thing that takes propellant: give `rate_damping` or `slews`.
#[derive(Debug, Clone, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Event {
    /// Name, such as `tip-off`.
    pub name: String,
    /// Damping of the rates after separation.
    pub rate_damping: Option<RateDamping>,
    /// Slews made on thrusters.
    pub slews: Option<Slews>,
}

/// Damping of body rates with thrusters.
#[derive(Debug, Clone, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct RateDamping {
    /// Rates about x, y, z before damping, such as `0 0 0 ± 0.8 deg/s`.
    pub rates: SpreadTriple<kind::AngularRate>,
}

/// Rest-to-rest slews on thrusters.
#[derive(Debug, Clone, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Slews {
    /// Axis of the rotation in the body frame, any length but zero.
    pub axis: Triple<kind::Number>,
    /// Angle of one slew, such as `90 deg`.
    pub angle: Quantity<kind::Angle>,
    /// Highest rate; a slew too short to reach it is limited by the torque of the thrusters. Such as `0.3 deg/s`.
    pub rate: Quantity<kind::AngularRate>,
    /// How many in the phase, such as `24 ± 6`.
    pub count: SpreadQuantity<kind::Number>,
}

/// Surroundings, and how well they are known.
#[derive(Debug, Clone, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Environment {
    /// Solar activity, which sets the density of the air.
    pub solar_activity: SolarActivity,
    /// Factor on the density of the atmosphere model, such as `1 ± 0.15`. Default: 1.
    pub density_factor: Option<SpreadQuantity<kind::Number>>,
    /// Drag coefficient of the facets, such as `2.2 ± 0.2`. Default: 2.2.
    pub drag_coefficient: Option<SpreadQuantity<kind::Number>>,
}

/// Solar activity: give `level` or `f107`.
#[derive(Debug, Clone, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct SolarActivity {
    /// Reference level of ECSS-E-ST-10-04: low, moderate or high.
    pub level: Option<ActivityLevel>,
    /// Solar radio flux F10.7 in solar flux units, constant over the mission, such as `90 .. 190`.
    pub f107: Option<SpreadQuantity<kind::Number>>,
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

/// How the budget is made.
#[derive(Debug, Clone, Default, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Budget {
    /// Lifetimes drawn. Default: 10000.
    pub lifetimes: Option<Quantity<kind::Number>>,
    /// Seed of the draws, a whole number. Default: 1.
    pub seed: Option<u64>,
    /// Margin on attitude-control propellant, such as `100 %`. Default: none.
    pub margin: Option<Quantity<kind::Number>>,
    /// Confidence of the limits on quantiles. Default: `95 %`.
    pub confidence: Option<Quantity<kind::Number>>,
    /// How finely the mission is simulated. Default: `default`.
    #[serde(default)]
    pub resolution: ResolutionChoice,
}

/// How finely the mission is simulated.
#[derive(Debug, Clone, Copy, Default, PartialEq, Eq, Deserialize, JsonSchema)]
#[serde(rename_all = "snake_case")]
pub enum ResolutionChoice {
    /// One unload stands for those of about a month.
    #[default]
    Default,
    /// Every unload is simulated.
    Full,
}

/// A requirement on a result: give `at_most` or `at_least`.
#[derive(Debug, Clone, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Requirement {
    /// Name, such as `AOC-12`.
    pub name: String,
    /// The result that is bounded.
    pub figure: Figure,
    /// For `torque` and `price`: a signed axis such as `+x`, or `each`. Default: every direction.
    pub axis: Option<Axis>,
    /// For `torque` and `price`: what is out: `any thruster`, `any string`, or the name of a thruster or string. Default: nothing.
    pub out: Option<String>,
    /// For `torque` and `price`: whether a net force is allowed. Default: `zero`.
    #[serde(default)]
    pub net_force: super::NetForceChoice,
    /// Upper bound, in the unit of the figure.
    pub at_most: Option<String>,
    /// Lower bound, in the unit of the figure.
    pub at_least: Option<String>,
}

/// A result that a requirement can bound.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Deserialize, JsonSchema)]
#[serde(rename_all = "snake_case")]
pub enum Figure {
    /// Attitude-control propellant, nominal, kg.
    PropellantNominal,
    /// Upper confidence limit of the 95 % quantile of attitude-control propellant, kg.
    PropellantP95,
    /// Upper confidence limit of the 99 % quantile of attitude-control propellant, kg.
    PropellantP99,
    /// Lower confidence limit of the probability that the propellant loaded is enough.
    ProbabilityEnough,
    /// Shortest time between unloads, nominal, s.
    UnloadInterval,
    /// Largest share of the wheel envelope filled, nominal.
    WheelFill,
    /// Guaranteed pure torque of the intact layout, both ends of the centre-of-mass travel, N·m.
    GuaranteedPureTorque,
    /// Least torque of the cases that `axis`, `out` and `net_force` name, N·m.
    Torque,
    /// Highest price of the cases that `axis`, `out` and `net_force` name, kg/(N·m·s).
    Price,
}

/// A signed body axis, or each of the six.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Deserialize, JsonSchema)]
pub enum Axis {
    /// About +x.
    #[serde(rename = "+x")]
    PlusX,
    /// About −x.
    #[serde(rename = "-x")]
    MinusX,
    /// About +y.
    #[serde(rename = "+y")]
    PlusY,
    /// About −y.
    #[serde(rename = "-y")]
    MinusY,
    /// About +z.
    #[serde(rename = "+z")]
    PlusZ,
    /// About −z.
    #[serde(rename = "-z")]
    MinusZ,
    /// Each of the six.
    #[serde(rename = "each")]
    Each,
}
