//! Named uncertain parameters and one draw of all of them.

use std::borrow::Cow;

use super::joint::another;
use super::{Anew, Correlated, Spread};

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
    /// How often it is drawn.
    pub anew: Anew,
}

/// All uncertain quantities, in the order of the configuration.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct Parameters {
    list: Vec<Parameter>,
    correlated: Vec<Correlated>,
}

impl Parameters {
    /// Takes one quantity: a fixed one becomes a plain number, an uncertain one a new parameter.
    pub fn register(&mut self, name: impl Into<String>, unit: &'static str, spread: Spread) -> Uncertain {
        if spread.is_fixed() {
            return Uncertain::fixed(spread.nominal());
        }
        let id = ParameterId(self.list.len());
        let nominal = spread.nominal();
        self.list.push(Parameter { name: name.into(), unit, spread, anew: Anew::Lifetime });
        Uncertain { nominal, parameter: Some(id) }
    }

    /// Says how often the parameter at a place is drawn.
    pub fn draw_anew(&mut self, place: usize, anew: Anew) {
        if let Some(parameter) = self.list.get_mut(place) {
            parameter.anew = anew;
        }
    }

    /// Correlates parameters, none of which is correlated yet; those of one group are drawn equally often.
    pub fn correlate(&mut self, group: Correlated) {
        self.correlated.push(group);
    }

    /// The groups of correlated parameters.
    #[must_use]
    pub fn correlated(&self) -> &[Correlated] {
        &self.correlated
    }

    /// The parameters in order.
    #[must_use]
    pub fn as_slice(&self) -> &[Parameter] {
        &self.list
    }

    /// Their places in order.
    pub fn ids(&self) -> impl Iterator<Item = ParameterId> + use<> {
        (0..self.list.len()).map(ParameterId)
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
        Draw { values: self.list.iter().map(|p| p.spread.nominal()).collect(), uniforms: Vec::new() }
    }

    /// The draw that independent uniforms in (0, 1) give, one a parameter: its quantile there, after the correlation.
    ///
    /// Parameters without a uniform stay nominal.
    #[must_use]
    pub fn at_quantiles(&self, uniforms: &[f64]) -> Draw {
        let mut joint = Cow::Borrowed(uniforms);
        for group in &self.correlated {
            group.apply(joint.to_mut());
        }
        let value = |(k, p): (usize, &Parameter)| joint.get(k).map_or_else(|| p.spread.nominal(), |u| p.spread.quantile(*u));
        let values = self.list.iter().enumerate().map(value).collect();
        // Kept only for those that are drawn again.
        let again = self.list.iter().any(|p| p.anew != Anew::Lifetime);
        Draw { values, uniforms: if again { uniforms.to_vec() } else { Vec::new() } }
    }

    /// Whether something is drawn anew as often as this.
    #[must_use]
    pub fn any(&self, anew: Anew) -> bool {
        self.list.iter().any(|p| p.anew == anew)
    }

    /// The draw of a lifetime with what is drawn for each phase as it is in one of them; the nominal draw stays nominal.
    #[must_use]
    pub fn in_phase<'a>(&self, draw: &'a Draw, phase: usize) -> Cow<'a, Draw> {
        self.again(draw, Anew::Phase, phase as u64)
    }

    /// The draw of a phase with what is drawn for each event as it is in one occurrence of one of them.
    #[must_use]
    pub fn in_event<'a>(&self, draw: &'a Draw, place: (usize, usize), occurrence: u64) -> Cow<'a, Draw> {
        // Phases and events by the thousand stay apart, and occurrences by the billion.
        let key = (place.0 as u64) << 48 | (place.1 as u64) << 36 | occurrence;
        self.again(draw, Anew::Event, key)
    }

    fn again<'a>(&self, draw: &'a Draw, anew: Anew, key: u64) -> Cow<'a, Draw> {
        if draw.uniforms.is_empty() || !self.any(anew) {
            return Cow::Borrowed(draw);
        }
        let drawn = self.list.iter().zip(&draw.uniforms);
        let mut uniforms: Vec<f64> = drawn.map(|(p, u)| if p.anew == anew { another(*u, key) } else { *u }).collect();
        for group in &self.correlated {
            group.apply(&mut uniforms);
        }
        let mut next = draw.clone();
        for ((value, p), u) in next.values.iter_mut().zip(&self.list).zip(&uniforms) {
            if p.anew == anew {
                *value = p.spread.quantile(*u);
            }
        }
        Cow::Owned(next)
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
    /// Independent uniforms behind them; empty where nothing is drawn again.
    uniforms: Vec<f64>,
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
