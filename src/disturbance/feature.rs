//! Features: the products of uncertain quantities in which torque is linear.

use crate::uncertain::{ParameterId, Uncertain};

/// One factor of a feature.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum Factor {
    /// A parameter as it is.
    Parameter(ParameterId),
    /// A parameter less its nominal value.
    Deviation(ParameterId),
    /// A component of the centre of mass in the body frame, m.
    CentreOfMass(usize),
    /// An element of the inertia matrix, in the order xx, yy, zz, xy, xz, yz, kg·m².
    Inertia(usize),
    /// Deviation of a component of the pointing bias from its nominal value, rad.
    Bias(usize),
    /// Weight of a level of solar activity.
    Activity(usize),
}

/// A product of factors; without any it is 1.
#[derive(Debug, Clone, Default, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct Feature(Vec<Factor>);

impl Feature {
    /// The product of these factors, in any order.
    #[must_use]
    pub fn new(mut factors: Vec<Factor>) -> Self {
        factors.sort_unstable();
        Self(factors)
    }

    /// The factors, sorted.
    #[must_use]
    pub fn factors(&self) -> &[Factor] {
        &self.0
    }

    /// This product with one factor more.
    #[must_use]
    pub fn times(&self, factor: Factor) -> Self {
        Self::new([self.0.as_slice(), &[factor]].concat())
    }
}

/// A quantity seen as a factor: the parameter if it is uncertain, and the number that remains.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Coefficient {
    /// The parameter, if uncertain.
    pub factor: Option<Factor>,
    /// What multiplies it: 1 for a parameter, the value of a fixed quantity.
    pub scale: f64,
}

impl Coefficient {
    /// The same quantity in a unit `1 / scale` times as large.
    #[must_use]
    pub fn times(self, scale: f64) -> Self {
        Self { factor: self.factor, scale: self.scale * scale }
    }
}

impl From<&Uncertain> for Coefficient {
    fn from(quantity: &Uncertain) -> Self {
        match quantity.parameter() {
            Some(id) => Self { factor: Some(Factor::Parameter(id)), scale: 1.0 },
            None => Self { factor: None, scale: quantity.nominal() },
        }
    }
}
