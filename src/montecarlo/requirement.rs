//! Requirements and how they came out.

use super::{Budget, Distribution};
use crate::config::Figure;
use crate::layout::{LayoutCase, figure};
use crate::mission::{Bound, Requirement};

/// A figure that reaches its bound but for this part of it keeps it: unloading at 60 % must not fail a
/// bound of 60 % by the rounding of some thousand operations.
const BOUND_IS_ROUNDING: f64 = 1e-9;

/// A requirement and how it came out.
#[derive(Debug, Clone)]
pub struct Checked {
    /// The requirement.
    pub requirement: Requirement,
    /// The figure, SI; `None` if it does not exist.
    pub value: Option<f64>,
    /// Whether the figure exists and keeps the bound.
    pub met: bool,
}

impl Checked {
    /// Compares a figure with its bound.
    #[must_use]
    pub fn new(requirement: &Requirement, value: Option<f64>) -> Self {
        let met = value.is_some_and(|value| match requirement.bound {
            Bound::AtMost(limit) => value <= limit + BOUND_IS_ROUNDING * limit.abs(),
            Bound::AtLeast(limit) => value >= limit - BOUND_IS_ROUNDING * limit.abs(),
        });
        Self { requirement: requirement.clone(), value, met }
    }
}

/// Whether a requirement is about the layout alone.
pub(super) fn of_layout(requirement: &Requirement) -> bool {
    matches!(requirement.figure, Figure::Torque | Figure::Price)
}

/// The requirements that are about the layout alone, checked.
#[must_use]
pub fn check_layout(requirements: &[Requirement], cases: &[LayoutCase]) -> Vec<Checked> {
    let value = |requirement: &Requirement| match requirement.figure {
        Figure::Torque => figure(cases, &requirement.scope).0,
        _ => figure(cases, &requirement.scope).1,
    };
    requirements
        .iter()
        .filter(|requirement| of_layout(requirement))
        .map(|requirement| Checked::new(requirement, value(requirement)))
        .collect()
}

impl Budget {
    /// Checks one requirement; `cases` are those of the layout, for requirements about it.
    pub(super) fn check(&self, requirement: &Requirement, cases: &[LayoutCase]) -> Checked {
        let value = match requirement.figure {
            Figure::Torque => figure(cases, &requirement.scope).0,
            Figure::Price => figure(cases, &requirement.scope).1,
            other => self.value(other),
        };
        Checked::new(requirement, value)
    }

    /// A figure of the budget, SI; `None` if it does not exist, or is one of single cases of the layout.
    #[must_use]
    pub fn value(&self, figure: Figure) -> Option<f64> {
        let upper = |p: f64| self.attitude.at(p).and_then(|estimate| estimate.upper);
        match figure {
            Figure::PropellantNominal => Some(self.attitude.nominal),
            Figure::PropellantP95 => upper(0.95),
            Figure::PropellantP99 => upper(0.99),
            Figure::ProbabilityEnough => Some(self.enough.lower),
            Figure::UnloadInterval => self.nominal.shortest_interval_s,
            Figure::WheelFill => self.wheel_fill,
            Figure::ValveCycles => largest_p95(&self.cycles),
            Figure::Throughput => largest_p95(&self.throughput),
            Figure::UnloadDeltaVPerDay => Some(self.unload_delta_v.map_or(0.0, |push| push.per_day_m_per_s)),
            Figure::Torque | Figure::Price => None,
            Figure::GuaranteedPureTorque => self.layout.iter().map(|case| case.pure_torque.guaranteed_n_m).reduce(f64::min),
        }
    }
}

/// The largest P95 of several figures.
fn largest_p95(list: &[Distribution]) -> Option<f64> {
    list.iter().filter_map(|distribution| Some(distribution.at(0.95)?.value)).reduce(f64::max)
}
