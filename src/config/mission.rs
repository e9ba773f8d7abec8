//! What the user writes about the mission, its surroundings, and what must hold.

use schemars::JsonSchema;
use serde::Deserialize;

use super::attitude::Attitude;
use super::event::Event;
use super::leaf::Quantity;
use super::orbit::Orbit;
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

/// A stretch of the mission with one orbit, attitude and unload policy.
#[derive(Debug, Clone, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Phase {
    /// Name, such as `science`.
    pub name: String,
    /// Date on which it begins, ISO 8601, as a check: it must be where the phases before it end, to a day. Default: not checked.
    pub start: Option<String>,
    /// How long it lasts, such as `7 yr`.
    pub duration: Quantity<kind::Time>,
    /// Orbit of this phase. Default: `mission.orbit`.
    pub orbit: Option<Orbit>,
    /// Attitude. Default: z to the centre of the body, y against the orbit normal, without bias.
    #[serde(default)]
    pub attitude: Attitude,
    /// When the wheels are unloaded. Default: never.
    pub unload: Option<Unload>,
    /// What else takes propellant in this phase.
    #[serde(default)]
    pub events: Vec<Event>,
}

/// When the wheels are unloaded: give `every` or `at_fill`.
#[derive(Debug, Clone, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Unload {
    /// Fixed interval, such as `1 d`.
    pub every: Option<Quantity<kind::Time>>,
    /// Share of the wheel envelope at which to unload, such as `70 %`.
    pub at_fill: Option<Quantity<kind::Number>>,
    /// Where on the orbit. Default: `due`.
    #[serde(default)]
    pub timing: Timing,
}

/// Where on the orbit an unload that is due takes place.
#[derive(Debug, Clone, Copy, Default, PartialEq, Eq, Deserialize, JsonSchema)]
#[serde(rename_all = "snake_case")]
pub enum Timing {
    /// At once.
    #[default]
    Due,
    /// At the point of the next orbit where it takes least propellant: in a turning attitude the same momentum meets different thrusters.
    Cheapest,
}

/// How the budget is made.
#[derive(Debug, Clone, Default, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Budget {
    /// Lifetimes drawn. Default: 10000.
    pub lifetimes: Option<Quantity<kind::Number>>,
    /// Draw on until a quantile is known this well, in place of a fixed number. Default: `lifetimes` are drawn.
    pub precision: Option<Precision>,
    /// How the draws are spread. Default: `plain`.
    #[serde(default)]
    pub sampling: Sampling,
    /// Independent Latin hypercubes that limits are estimated from, 5 to 100. Default: 20.
    pub replicates: Option<Quantity<kind::Number>>,
    /// Seed of the draws, a whole number. Default: 1.
    pub seed: Option<u64>,
    /// Margin on attitude-control propellant, such as `100 %`. Default: that of `margin_rule`, else none.
    pub margin: Option<Quantity<kind::Number>>,
    /// Margin on orbit burns, such as `5 %`. Default: that of `margin_rule`, else none.
    pub burn_margin: Option<Quantity<kind::Number>>,
    /// A rule that gives the margins. Default: `own`.
    #[serde(default)]
    pub margin_rule: MarginRule,
    /// Confidence of the limits on quantiles. Default: `95 %`.
    pub confidence: Option<Quantity<kind::Number>>,
    /// How finely the mission is simulated. Default: `default`.
    #[serde(default)]
    pub resolution: ResolutionChoice,
    /// How far steps and strata of the default resolution may put secular and cyclic momentum off, `0.1 %` to `20 %`. Default: `1 %`.
    pub tolerance: Option<Quantity<kind::Number>>,
}

/// How well a quantile of attitude-control propellant must be known.
#[derive(Debug, Clone, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Precision {
    /// The quantile, such as `95 %`. Default: `95 %`.
    pub quantile: Option<Quantity<kind::Number>>,
    /// Widest interval between its two limits, as a share of it, such as `1 %`.
    pub width: Quantity<kind::Number>,
    /// Most lifetimes drawn. Default: 1000000.
    pub at_most: Option<Quantity<kind::Number>>,
}

/// How the draws are spread.
#[derive(Debug, Clone, Copy, Default, PartialEq, Eq, Deserialize, JsonSchema)]
#[serde(rename_all = "snake_case")]
pub enum Sampling {
    /// Independent draws: limits assume nothing.
    #[default]
    Plain,
    /// Latin hypercubes: each quantity covers its distribution evenly. Quantiles scatter less where single quantities drive them; limits are estimated from replicates.
    LatinHypercube,
}

/// A rule that gives margins.
#[derive(Debug, Clone, Copy, Default, PartialEq, Eq, Deserialize, JsonSchema)]
#[serde(rename_all = "snake_case")]
pub enum MarginRule {
    /// What `margin` and `burn_margin` say.
    #[default]
    Own,
    /// ESA SRE-PA/2011.097, section 2.3: 100 % on attitude control and momentum management, 5 % on calculated manoeuvres, and 2 % residual where `tank.residual` is not given.
    EsaAssessment,
    /// None: the P95 upper limit is the requirement.
    P95,
}

/// How finely the mission is simulated.
#[derive(Debug, Clone, Copy, Default, PartialEq, Eq, Deserialize, JsonSchema)]
#[serde(rename_all = "snake_case")]
pub enum ResolutionChoice {
    /// As finely as `tolerance` asks: one unload stands for those of some weeks.
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
    pub at_most: Option<BoundText>,
    /// Lower bound, in the unit of the figure.
    pub at_least: Option<BoundText>,
}

/// A bound as it is written; its unit depends on the figure.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct BoundText(pub String);

impl<'de> Deserialize<'de> for BoundText {
    fn deserialize<D: serde::Deserializer<'de>>(deserializer: D) -> Result<Self, D::Error> {
        match serde_yaml::Value::deserialize(deserializer)? {
            serde_yaml::Value::String(text) => Ok(Self(text)),
            serde_yaml::Value::Number(number) => Ok(Self(number.to_string())),
            _ => Err(serde::de::Error::custom("expected a number with its unit, such as `18 kg`")),
        }
    }
}

impl JsonSchema for BoundText {
    fn schema_name() -> std::borrow::Cow<'static, str> {
        "Bound".into()
    }

    fn json_schema(_: &mut schemars::SchemaGenerator) -> schemars::Schema {
        schemars::json_schema!({ "type": ["string", "number"] })
    }

    fn inline_schema() -> bool {
        true
    }
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
    /// Valve cycles of the busiest thruster, 95 % quantile.
    ValveCycles,
    /// Propellant through the busiest thruster, 95 % quantile, kg.
    Throughput,
    /// Push of all unloads, mean over the nominal mission, (m/s)/d without regard to direction.
    UnloadDeltaVPerDay,
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
