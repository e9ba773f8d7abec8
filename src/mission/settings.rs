//! How the budget is made, and what must hold.

use crate::config::{self, Figure, MarginRule, ResolutionChoice, Spec};
use crate::layout::Scope;
use crate::units::{self, Dimension, Kind, kind};
use crate::vehicle::Faults;

/// How the budget is made.
#[derive(Debug, Clone, PartialEq)]
pub struct Settings {
    /// Lifetimes drawn.
    pub lifetimes: u64,
    /// Draw on until a quantile is known this well.
    pub precision: Option<Precision>,
    /// How the draws are spread.
    pub sampling: Sampling,
    /// Seed of the draws.
    pub seed: u64,
    /// Margins.
    pub margin: Margin,
    /// Confidence of the limits on quantiles.
    pub confidence: f64,
    /// How finely the mission is simulated.
    pub resolution: ResolutionChoice,
    /// How far the default resolution may put secular and cyclic momentum off, as a share.
    pub tolerance: f64,
}

/// How well a quantile of the attitude total must be known.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Precision {
    /// The quantile, between 0 and 1.
    pub quantile: f64,
    /// Widest interval between its two limits, as a share of it.
    pub width: f64,
    /// Most lifetimes drawn.
    pub at_most: u64,
}

/// How draws are spread.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Sampling {
    /// Independent draws.
    Plain,
    /// This many independent Latin hypercubes.
    LatinHypercube(u64),
}

/// Margins, as shares of nominal rows.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Margin {
    /// The rule they come from.
    pub rule: MarginRule,
    /// On the attitude-control rows.
    pub attitude: f64,
    /// On orbit burns.
    pub burns: f64,
}

impl Margin {
    /// None.
    pub const NONE: Self = Self { rule: MarginRule::Own, attitude: 0.0, burns: 0.0 };
}

/// A bound on a figure.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Bound {
    /// The figure must not exceed it; SI.
    AtMost(f64),
    /// The figure must reach it; SI.
    AtLeast(f64),
}

/// A requirement on a result.
#[derive(Debug, Clone, PartialEq)]
pub struct Requirement {
    /// Name.
    pub name: String,
    /// The figure it bounds.
    pub figure: Figure,
    /// Cases and directions of the layout, for figures of the layout.
    pub scope: Scope,
    /// The bound.
    pub bound: Bound,
}

impl Figure {
    /// SI unit of the figure; empty for a share.
    #[must_use]
    pub const fn unit(self) -> &'static str {
        self.words().1
    }

    /// Dimension, SI unit, name and example of the figure's kind.
    const fn words(self) -> (Dimension, &'static str, &'static str, &'static str) {
        match self {
            Self::PropellantNominal | Self::PropellantP95 | Self::PropellantP99 => {
                (kind::Mass::DIMENSION, kind::Mass::UNIT, kind::Mass::NAME, kind::Mass::EXAMPLE)
            }
            Self::ValveCycles => (kind::Number::DIMENSION, "", "a number of pulses", "100000"),
            Self::Throughput => (kind::Mass::DIMENSION, kind::Mass::UNIT, kind::Mass::NAME, kind::Mass::EXAMPLE),
            Self::UnloadDeltaVPerDay => (kind::Acceleration::DIMENSION, kind::Acceleration::UNIT, kind::Acceleration::NAME, "0.2 mm/(s d)"),
            Self::ProbabilityEnough | Self::WheelFill => (kind::Number::DIMENSION, "", "a share", "95 %"),
            Self::UnloadInterval => (kind::Time::DIMENSION, kind::Time::UNIT, kind::Time::NAME, "1 d"),
            Self::Price => (kind::Price::DIMENSION, kind::Price::UNIT, kind::Price::NAME, kind::Price::EXAMPLE),
            Self::GuaranteedPureTorque | Self::Torque => {
                (kind::Torque::DIMENSION, kind::Torque::UNIT, kind::Torque::NAME, kind::Torque::EXAMPLE)
            }
        }
    }

    /// Figures of a budget, by their words in a configuration.
    pub const NAMES: [(&'static str, Self); 10] = [
        ("propellant_nominal", Self::PropellantNominal),
        ("propellant_p95", Self::PropellantP95),
        ("propellant_p99", Self::PropellantP99),
        ("probability_enough", Self::ProbabilityEnough),
        ("unload_interval", Self::UnloadInterval),
        ("wheel_fill", Self::WheelFill),
        ("valve_cycles", Self::ValveCycles),
        ("throughput", Self::Throughput),
        ("unload_delta_v_per_day", Self::UnloadDeltaVPerDay),
        ("guaranteed_pure_torque", Self::GuaranteedPureTorque),
    ];

    /// Reads a bound in the unit of the figure, into SI.
    ///
    /// # Errors
    /// As [`units::parse`].
    pub fn parse_bound(self, text: &str) -> Result<f64, units::QuantityError> {
        let (dimension, _, name, example) = self.words();
        units::parse(text, dimension, name, example)
    }

    /// What the figure is, in words.
    #[must_use]
    pub const fn name(self) -> &'static str {
        match self {
            Self::PropellantNominal => "attitude propellant, nominal",
            Self::PropellantP95 => "attitude propellant, P95 limit",
            Self::PropellantP99 => "attitude propellant, P99 limit",
            Self::ProbabilityEnough => "probability of enough",
            Self::UnloadInterval => "shortest time between unloads",
            Self::WheelFill => "largest fill of the wheels",
            Self::ValveCycles => "valve cycles, busiest, P95",
            Self::Throughput => "throughput, busiest, P95",
            Self::UnloadDeltaVPerDay => "push of unloads",
            Self::GuaranteedPureTorque => "pure torque in every direction",
            Self::Torque => "least torque",
            Self::Price => "highest price",
        }
    }
}

/// Most lifetimes of one run.
const MOST_LIFETIMES: f64 = 1e8;

pub(super) fn settings(written: &config::Budget, faults: &mut Faults) -> Option<Settings> {
    let lifetimes =
        faults.within("budget.lifetimes", written.lifetimes.map_or(10_000.0, |n| n.0), 1.0, MOST_LIFETIMES, "a number of lifetimes");
    let (attitude, burns) = match written.margin_rule {
        MarginRule::Own | MarginRule::P95 => (0.0, 0.0),
        MarginRule::EsaAssessment => (1.0, 0.05),
    };
    let attitude = faults.within("budget.margin", written.margin.map_or(attitude, |margin| margin.0), 0.0, 100.0, "a margin");
    let burns = faults.within("budget.burn_margin", written.burn_margin.map_or(burns, |margin| margin.0), 0.0, 100.0, "a margin");
    let confidence = faults.within("budget.confidence", written.confidence.map_or(0.95, |c| c.0), 0.5, 0.999_999, "a confidence");
    let tolerance = faults.within("budget.tolerance", written.tolerance.map_or(0.01, |share| share.0), 1e-3, 0.2, "a tolerance");
    if let Some(number) = lifetimes.filter(|number| number.fract() > 0.0) {
        let help = format!("write {:.0}", number.ceil());
        faults.push("budget.lifetimes", format!("expected a whole number of lifetimes, got {number}"), help);
    }
    let precision = precision(written.precision.as_ref(), faults);
    let sampling = sampling(written, faults);
    let lifetimes = whole(lifetimes?);
    let (seed, resolution) = (written.seed.unwrap_or(1), written.resolution);
    let margin = Margin { rule: written.margin_rule, attitude: attitude?, burns: burns? };
    Some(Settings { lifetimes, precision, sampling: sampling?, seed, margin, confidence: confidence?, resolution, tolerance: tolerance? })
}

/// A number checked to lie from 1 to [`MOST_LIFETIMES`].
#[expect(clippy::cast_possible_truncation, clippy::cast_sign_loss, reason = "checked to lie from 1 to 1e8")]
fn whole(number: f64) -> u64 {
    number.round() as u64
}

fn precision(written: Option<&config::Precision>, faults: &mut Faults) -> Option<Precision> {
    const AT: &str = "budget.precision";
    let written = written?;
    let quantile = faults.within(&format!("{AT}.quantile"), written.quantile.map_or(0.95, |p| p.0), 1e-3, 0.99999, "a probability");
    let width = faults.within(&format!("{AT}.width"), written.width.0, 1e-4, 1.0, "a share");
    let at_most = written.at_most.map_or(1e6, |n| n.0);
    let at_most = faults.within(&format!("{AT}.at_most"), at_most, 1.0, MOST_LIFETIMES, "a number of lifetimes");
    Some(Precision { quantile: quantile?, width: width?, at_most: whole(at_most?) })
}

fn sampling(written: &config::Budget, faults: &mut Faults) -> Option<Sampling> {
    if written.sampling == config::Sampling::Plain {
        if written.replicates.is_some() {
            faults.push("budget.replicates", "goes with Latin hypercubes only", "add `sampling: latin_hypercube`, or leave it out");
            return None;
        }
        return Some(Sampling::Plain);
    }
    if written.precision.is_some() {
        let help = "keep one: a hypercube has its size from the start";
        faults.push("budget.precision", "does not go with `sampling: latin_hypercube`", help);
        return None;
    }
    let replicates = faults.within("budget.replicates", written.replicates.map_or(20.0, |n| n.0), 5.0, 100.0, "a number of replicates")?;
    Some(Sampling::LatinHypercube(whole(replicates)))
}

pub(super) fn requirements(spec: &Spec, faults: &mut Faults) -> Vec<Requirement> {
    faults.unique("requirements", spec.requirements.iter().map(|requirement| requirement.name.as_str()));
    let listed = spec.requirements.iter().enumerate();
    listed.filter_map(|(index, written)| requirement(spec, written, &format!("requirements[{index}]"), faults)).collect()
}

/// Checks that `out` names something that can be out, and that the keys of a layout stand with a figure of a layout.
fn scope(spec: &Spec, written: &config::Requirement, at: &str, faults: &mut Faults) -> Option<Scope> {
    let of_layout = matches!(written.figure, Figure::Torque | Figure::Price);
    if !of_layout && (written.axis.is_some() || written.out.is_some()) {
        faults.push(at, "`axis` and `out` go with the figures `torque` and `price` only", "leave them out, or change the figure");
        return None;
    }
    if let Some(out) = &written.out {
        let names = ["any thruster", "any string"].into_iter();
        let thrusters = spec.thrusters.iter().map(|thruster| thruster.name.as_str());
        let strings = spec.thrusters.iter().filter_map(|thruster| thruster.string.as_deref());
        let mut known: Vec<&str> = Vec::new();
        for name in names.chain(thrusters).chain(strings) {
            if !known.contains(&name) {
                known.push(name);
            }
        }
        let known = known.iter().copied();
        if !known.clone().any(|name| name == out) {
            let help = config::did_you_mean(out, known).unwrap_or_default();
            faults.push(&format!("{at}.out"), format!("`{out}` is no thruster and no string"), help);
            return None;
        }
    }
    Some(Scope { axis: written.axis, out: written.out.clone(), net_force: written.net_force })
}

fn requirement(spec: &Spec, written: &config::Requirement, at: &str, faults: &mut Faults) -> Option<Requirement> {
    let (key, text, make): (&str, &str, fn(f64) -> Bound) = match (&written.at_most, &written.at_least) {
        (Some(text), None) => ("at_most", &text.0, Bound::AtMost),
        (None, Some(text)) => ("at_least", &text.0, Bound::AtLeast),
        _ => {
            let (got, help) = match &written.at_most {
                None => ("neither", "say what must hold, such as `at_most: 18 kg`"),
                Some(_) => ("both", "keep one of them, and write a second requirement for the other"),
            };
            faults.push(at, format!("expected one of `at_most` and `at_least`, got {got}"), help);
            return None;
        }
    };
    let (dimension, _, name, example) = written.figure.words();
    match units::parse(text, dimension, name, example) {
        Ok(limit) if limit > 1.0 && matches!(written.figure, Figure::ProbabilityEnough) => {
            faults.push(
                &format!("{at}.{key}"),
                format!("`{text}` is no probability"),
                format!("give a share up to 1; is `{text} %` meant?"),
            );
            None
        }
        Ok(limit) if limit < 0.0 => {
            faults.push(
                &format!("{at}.{key}"),
                format!("`{text}` bounds a figure that is never below zero"),
                "give a bound of at least zero",
            );
            None
        }
        Ok(limit) => {
            let scope = scope(spec, written, at, faults)?;
            Some(Requirement { name: written.name.clone(), figure: written.figure, scope, bound: make(limit) })
        }
        Err(error) => {
            faults.push(&format!("{at}.{key}"), error.message, error.help);
            None
        }
    }
}
