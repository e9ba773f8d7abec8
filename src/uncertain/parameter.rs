//! Named uncertain parameters and one draw of all of them.

use super::Spread;

/// Place of a parameter in [`Parameters`] and in a [`Draw`].
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct ParameterId(usize);

impl ParameterId {
    /// Position in the registry.
    #[must_use]
    pub const fn index(self) -> usize {
        self.0
    }
}

/// One uncertain quantity of the configuration.
#[derive(Debug, Clone, PartialEq)]
pub struct Parameter {
    /// Key of the configuration, with the component where it has several: `spacecraft.residual_dipole.x`.
    pub name: String,
    /// SI unit; empty for a pure number.
    pub unit: &'static str,
    /// Its distribution; never [`Spread::Fixed`].
    pub spread: Spread,
}

/// All uncertain quantities, in the order of the configuration.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct Parameters {
    list: Vec<Parameter>,
}

impl Parameters {
    /// Takes one quantity: a fixed one becomes a plain number, an uncertain one a new parameter.
    pub fn register(&mut self, name: impl Into<String>, unit: &'static str, spread: Spread) -> Uncertain {
        if spread.is_fixed() {
            return Uncertain::fixed(spread.nominal());
        }
        let id = ParameterId(self.list.len());
        self.list.push(Parameter { name: name.into(), unit, spread });
        Uncertain { nominal: spread.nominal(), parameter: Some(id) }
    }

    /// The parameters in order.
    #[must_use]
    pub fn as_slice(&self) -> &[Parameter] {
        &self.list
    }

    /// How many there are.
    #[must_use]
    pub fn len(&self) -> usize {
        self.list.len()
    }

    /// Whether nothing is uncertain.
    #[must_use]
    pub fn is_empty(&self) -> bool {
        self.list.is_empty()
    }

    /// Every parameter at its nominal value.
    #[must_use]
    pub fn nominal(&self) -> Draw {
        Draw { values: self.list.iter().map(|p| p.spread.nominal()).collect() }
    }

    /// The draw in which parameter k stands at its quantile `uniforms[k]`, each in (0, 1).
    ///
    /// Parameters without a uniform stay nominal.
    #[must_use]
    pub fn at_quantiles(&self, uniforms: &[f64]) -> Draw {
        let values = self
            .list
            .iter()
            .enumerate()
            .map(|(k, p)| uniforms.get(k).map_or_else(|| p.spread.nominal(), |u| p.spread.quantile(*u)))
            .collect();
        Draw { values }
    }
}

/// A quantity that may be uncertain: its nominal value in SI, and its parameter if it has a spread.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Uncertain {
    nominal: f64,
    parameter: Option<ParameterId>,
}

impl Uncertain {
    /// A quantity known exactly.
    #[must_use]
    pub const fn fixed(value: f64) -> Self {
        Self { nominal: value, parameter: None }
    }

    /// Nominal value, SI.
    #[must_use]
    pub const fn nominal(&self) -> f64 {
        self.nominal
    }

    /// The parameter behind it, if it is uncertain.
    #[must_use]
    pub const fn parameter(&self) -> Option<ParameterId> {
        self.parameter
    }

    /// Value in a draw, SI.
    #[must_use]
    pub fn in_draw(&self, draw: &Draw) -> f64 {
        self.parameter.map_or(self.nominal, |id| draw.value(id))
    }
}

/// One value for every uncertain parameter, SI.
#[derive(Debug, Clone, PartialEq)]
pub struct Draw {
    values: Vec<f64>,
}

impl Draw {
    /// Value of one parameter of the registry this draw was made from.
    #[must_use]
    pub fn value(&self, id: ParameterId) -> f64 {
        self.values[id.0]
    }

    /// The same draw with one parameter changed.
    #[must_use]
    pub fn with(mut self, id: ParameterId, value: f64) -> Self {
        self.values[id.0] = value;
        self
    }
}
