//! The thruster layout as it may be during the mission: about which centre of mass, and with what lost.

use nalgebra::Vector3;

use super::{Plan, PlanError};
use crate::config::NetForceChoice;
use crate::momentum::FoldedBasis;
use crate::pulses::{LaneTariff, Pricer};
use crate::uncertain::Draw;
use crate::vehicle::Vehicle;

/// Which failures have happened: one bit each.
pub(super) type Lost = usize;

/// The layout with some thrusters lost, about every centre of mass that matters.
#[derive(Debug, Clone)]
pub(super) struct Layouts {
    pricers: Vec<Pricer>,
    tariffs: Vec<Option<LaneTariff>>,
    /// Which of them each stratum takes.
    of: Vec<usize>,
    /// Whether unloads may leave a net force, so that arms count.
    any_force: bool,
}

impl Layouts {
    /// The layouts for every set of failures, all working first.
    pub(super) fn all(vehicle: &Vehicle, basis: &FoldedBasis) -> Vec<Self> {
        let failures = &vehicle.propulsion.failures;
        (0..1_usize << failures.len())
            .map(|set| {
                let happened: Vec<_> =
                    failures.iter().enumerate().filter(|(bit, _)| set >> bit & 1 == 1).map(|(_, failure)| failure).collect();
                let lost: Vec<usize> = happened.iter().flat_map(|failure| failure.thrusters.iter().copied()).collect();
                let any = |choice: NetForceChoice| choice == NetForceChoice::Any;
                let any_force = any(vehicle.propulsion.net_force) || happened.iter().any(|failure| any(failure.net_force));
                Self::new(vehicle, basis, &lost, any_force)
            })
            .collect()
    }

    fn new(vehicle: &Vehicle, basis: &FoldedBasis, lost: &[usize], any_force: bool) -> Self {
        let choice = if any_force { NetForceChoice::Any } else { NetForceChoice::Zero };
        // A couple has no reference point: without net force one centre of mass serves all strata.
        let centres = basis.masses.iter().map(|mass| mass.centre_of_mass_m).take(if any_force { usize::MAX } else { 1 });
        let pricers: Vec<Pricer> = centres.map(|centre| Pricer::with_loss(&vehicle.propulsion, &centre, choice, lost)).collect();
        let of = (0..basis.masses.len()).map(|k| k.min(pricers.len().saturating_sub(1))).collect();
        Self { tariffs: pricers.iter().map(LaneTariff::new).collect(), pricers, of, any_force }
    }

    /// The layout of a stratum.
    pub(super) fn pricer(&self, stratum: usize) -> &Pricer {
        &self.pricers[self.of[stratum]]
    }

    /// The same in lanes, where that is possible.
    pub(super) fn tariff(&self, stratum: usize) -> Option<&LaneTariff> {
        self.tariffs[self.of[stratum]].as_ref()
    }
}

impl Plan {
    /// Prices the layout, and refuses one that cannot do its work with all thrusters working.
    pub(super) fn price_layout(&mut self) -> Result<(), PlanError> {
        self.layouts = Layouts::all(&self.scenario.vehicle, &self.basis);
        if !self.needs_thrusters() {
            return Ok(());
        }
        let intact = self.layouts.first();
        let refused = intact.and_then(|layouts| layouts.pricers.iter().find_map(|pricer| pricer.price_map().rays.first()));
        let net_force = if intact.is_some_and(|layouts| layouts.any_force) { "any" } else { "zero" };
        match refused {
            Some(ray) => Err(PlanError::NotServed { along: (*ray).into(), net_force }),
            None => Ok(()),
        }
    }

    /// Failures that have happened by the middle of a stratum in a draw.
    pub(super) fn lost(&self, stratum: usize, draw: &Draw) -> Lost {
        let at = &self.strata[stratum];
        let middle_s = at.start_s + at.duration_s / 2.0;
        let failures = self.vehicle().propulsion.failures.iter().enumerate();
        failures.filter(|(_, failure)| failure.lost_in_draw(draw, middle_s)).map(|(bit, _)| 1 << bit).sum()
    }

    /// How far the centre of mass of a draw lies off the one that a stratum's layout was made for, m; `None` where arms do not
    /// count, or nothing is uncertain.
    ///
    /// The same deviation moves the arms of the disturbances: that of the dry centre, held back by the propellant.
    pub(super) fn shift(&self, stratum: usize, lost: Lost, draw: &Draw) -> Option<Vector3<f64>> {
        let dry = &self.vehicle().dry;
        if !self.layouts[lost].any_force || dry.centre_of_mass_m.iter().all(|x| x.parameter().is_none()) {
            return None;
        }
        let share = dry.mass_kg.nominal() / self.basis.masses[stratum].mass_kg;
        let shift = Vector3::from(dry.centre_of_mass_m.each_ref().map(|x| (x.in_draw(draw) - x.nominal()) * share));
        (shift.norm() > 0.0).then_some(shift)
    }
}
