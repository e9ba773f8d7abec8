//! The nominal mission in a few figures: momentum by phase, and one unload.

use nalgebra::Vector3;

use super::Plan;
use crate::momentum::Convergence;
use crate::pulses::{ForceChoice, Pricer, UnloadCommand, UnloadError, unload};

/// Nominal torque and momentum of one phase. Torques in the body, secular momentum in the inertial frame.
#[derive(Debug, Clone, PartialEq)]
pub struct PhaseSummary {
    /// Name of the phase.
    pub name: String,
    /// Name, largest torque, N·m, and secular momentum per day, N·m·s, of each source.
    pub sources: Vec<(&'static str, f64, Vector3<f64>)>,
    /// Secular momentum of all sources per day, N·m·s.
    pub secular_n_m_s_per_day: Vector3<f64>,
    /// Largest body-frame excursion within an orbit, N·m·s.
    pub cyclic_n_m_s: f64,
    /// Momentum that the wheels can hold in every direction, N·m·s; `None` without wheels.
    pub wheel_envelope_n_m_s: Option<f64>,
    /// Unloads in the phase; a last interval cut short counts by its share.
    pub unloads: f64,
    /// Shortest time between unloads, s.
    pub unload_interval_s: Option<f64>,
    /// What the phase was simulated with.
    pub convergence: Convergence,
}

/// An unload of the nominal mission.
#[derive(Debug, Clone, PartialEq)]
pub struct TypicalUnload {
    /// Name of its phase.
    pub phase: String,
    /// The commands.
    pub command: UnloadCommand,
    /// Mass of the spacecraft then, kg.
    pub mass_kg: f64,
    /// What a pulse does to the pointing.
    pub transient: Transient,
}

/// What one pulse of each thruster does to the pointing before the wheels have taken it back.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Transient {
    /// Body rate after it, rad/s.
    pub rate_rad_per_s: f64,
    /// Angle by which the body has turned when the wheels have stopped it at full torque, rad; `None` without wheels.
    pub angle_rad: Option<f64>,
}

impl Plan {
    /// Nominal torque and momentum, phase by phase.
    #[must_use]
    pub fn summary(&self) -> Vec<PhaseSummary> {
        let envelope = self.wheel_envelope().map(crate::authority::Authority::guaranteed);
        let phases = self.scenario.mission.phases.iter().zip(self.phase_momentum()).enumerate();
        let one = |(index, (phase, momentum)): (usize, (&crate::mission::Phase, crate::momentum::PhaseMomentum))| {
            let strata = (0..self.strata.len()).filter(|k| self.strata[*k].phase == index);
            let rates: Vec<_> = strata.filter_map(|k| self.nominal_unloads(k).1).collect();
            let each = momentum.peak_torque_n_m.iter().zip(&momentum.secular_n_m_s_per_day);
            PhaseSummary {
                name: phase.name.clone(),
                sources: self.sources().iter().zip(each).map(|(name, (peak, secular))| (*name, *peak, *secular)).collect(),
                secular_n_m_s_per_day: momentum.secular_n_m_s_per_day.iter().sum(),
                cyclic_n_m_s: momentum.cyclic_n_m_s,
                wheel_envelope_n_m_s: envelope,
                unloads: rates.iter().map(|rate| rate.count).sum(),
                convergence: self.convergence()[index],
                unload_interval_s: rates.iter().map(|rate| rate.interval_s).reduce(f64::min),
            }
        };
        phases.map(one).collect()
    }

    /// Stratum and momentum (N·m·s, body frame) of the nominal unload with the largest; `None` without unloads.
    #[must_use]
    pub fn largest_momentum(&self) -> Option<(usize, Vector3<f64>)> {
        let all = (0..self.strata.len()).flat_map(|k| {
            let (windows, rate) = self.nominal_unloads(k);
            windows.into_iter().filter(move |_| rate.is_some()).map(move |momentum| (k, momentum))
        });
        all.reduce(|a, b| if b.1.norm() > a.1.norm() { b } else { a })
    }

    /// The unload of the nominal mission with the largest momentum; `None` without unloads.
    ///
    /// # Errors
    /// The thrusters cannot make its torque.
    #[must_use]
    pub fn largest_unload(&self) -> Option<Result<TypicalUnload, UnloadError>> {
        let (stratum, momentum) = self.largest_momentum()?;
        Some(self.unload_in(stratum, momentum, None))
    }

    /// Unloads a momentum (N·m·s, body frame) with the layout and mass of a stratum; `force` in place of the
    /// configuration's choice of net force.
    ///
    /// # Errors
    /// The thrusters cannot make its torque.
    pub fn unload_in(
        &self,
        stratum: usize,
        momentum_n_m_s: Vector3<f64>,
        force: Option<ForceChoice>,
    ) -> Result<TypicalUnload, UnloadError> {
        let mass = &self.basis.masses[stratum];
        let other = force.map(|force| Pricer::with_force(&self.vehicle().propulsion, &mass.centre_of_mass_m, force));
        let command = unload(momentum_n_m_s, other.as_ref().unwrap_or_else(|| self.pricer(stratum)), self.wheel_torque())?;
        let phase = self.scenario.mission.phases[self.strata[stratum].phase].name.clone();
        let inverse = mass.inertia_kg_m2.try_inverse().unwrap_or_else(nalgebra::Matrix3::zeros);
        let rate_rad_per_s = (inverse * command.per_pulse_n_m_s).norm();
        // The rate falls to nothing while the wheels take it back: half of it over that time.
        let angle_rad = command.follow_s.map(|follow_s| rate_rad_per_s * follow_s / 2.0);
        Ok(TypicalUnload { phase, command, mass_kg: mass.mass_kg, transient: Transient { rate_rad_per_s, angle_rad } })
    }
}
