//! Figures of a layout that a requirement can bound.

use super::{LayoutCase, OutBecause, Verdict};
use crate::config::{Axis, NetForceChoice};

/// Which cases and directions a requirement looks at.
#[derive(Debug, Clone, Default, PartialEq, Eq)]
pub struct Scope {
    /// An axis, each axis, or every direction.
    pub axis: Option<Axis>,
    /// `any thruster`, `any string`, a name, or nothing out.
    pub out: Option<String>,
    /// Whether a net force is allowed.
    pub net_force: NetForceChoice,
}

impl Scope {
    /// Whether it looks at a case.
    fn takes(&self, case: &LayoutCase) -> bool {
        match (self.out.as_deref(), &case.out_because) {
            (None, OutBecause::None) | (Some("any thruster"), OutBecause::Thruster) | (Some("any string"), OutBecause::String(_)) => true,
            (Some(name), OutBecause::Thruster) => case.thrusters_out.iter().any(|out| out == name),
            (Some(name), OutBecause::String(string)) => string == name,
            _ => false,
        }
    }

    fn verdict<'a>(&self, case: &'a LayoutCase) -> &'a Verdict {
        match self.net_force {
            NetForceChoice::Zero => &case.pure_torque,
            NetForceChoice::Any => &case.any_force,
        }
    }

    /// Places in the list of signed axes; `None` for every direction.
    fn axes(&self) -> Option<std::ops::Range<usize>> {
        Some(match self.axis? {
            Axis::PlusX => 0..1,
            Axis::MinusX => 1..2,
            Axis::PlusY => 2..3,
            Axis::MinusY => 3..4,
            Axis::PlusZ => 4..5,
            Axis::MinusZ => 5..6,
            Axis::Each => 0..6,
        })
    }
}

/// Least torque, N·m, and highest price, kg/(N·m·s), of the cases and directions in scope. The price is `None` if
/// one of them cannot be served; both are if no case is in scope.
#[must_use]
pub fn figure(cases: &[LayoutCase], scope: &Scope) -> (Option<f64>, Option<f64>) {
    let verdicts: Vec<&Verdict> = cases.iter().filter(|case| scope.takes(case)).map(|case| scope.verdict(case)).collect();
    let values: Vec<(f64, Option<f64>)> = match scope.axes() {
        None => verdicts.iter().map(|v| (v.guaranteed_n_m, v.dearest.map(|(_, price)| price))).collect(),
        Some(range) => verdicts.iter().flat_map(|v| v.axes.get(range.clone()).unwrap_or_default()).map(|a| (a.most_n_m, a.price)).collect(),
    };
    let torque = values.iter().map(|(torque, _)| *torque).reduce(f64::min);
    let prices: Option<Vec<f64>> = values.iter().map(|(_, price)| *price).collect();
    (torque, prices.and_then(|prices| prices.into_iter().reduce(f64::max)))
}
