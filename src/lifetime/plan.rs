//! All that chance does not touch, computed once.

use crate::authority::{Authority, Price};
use crate::mission::{Margin, Scenario, UnloadPolicy};
use crate::momentum::{
    Convergence, FoldedBasis, MassHistory, Panels, PhaseMomentum, RawBasis, Resolution, Stratum, phase_momentum, simulate, wheel_envelope,
    wheel_torque,
};
use crate::pulses::Pricer;
use crate::uncertain::Draw;
use crate::vehicle::Vehicle;

use super::layouts::Layouts;
use super::policy::Filling;

/// Why a mission cannot be flown.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
pub enum PlanError {
    /// The layout cannot make the torques that the mission asks of it.
    #[error(
        "the thrusters cannot unload the wheels or stop the spacecraft in every direction: under `propulsion.net_force: {net_force}` \
         no firing turns the spacecraft along ({:.3}, {:.3}, {:.3}) in the body frame", along[0], along[1], along[2]
    )]
    NotServed {
        /// Direction, unit, body frame.
        along: [f64; 3],
        /// The choice in force: `zero` or `any`.
        net_force: &'static str,
    },
    /// A burn asks for more propellant than is there.
    #[error("the burn `{event}` of phase {phase} asks for {asks_kg:.2} kg, but {left_kg:.2} kg are left by then")]
    BurnTooLarge {
        /// Name of the phase.
        phase: String,
        /// Name of the event.
        event: String,
        /// What it asks for, kg.
        asks_kg: f64,
        /// What is left, kg.
        left_kg: f64,
    },
}

/// A mission ready to be flown with any draw.
#[derive(Debug, Clone)]
pub struct Plan {
    pub(super) scenario: Scenario,
    pub(super) strata: Vec<Stratum>,
    raw: RawBasis,
    convergence: Vec<Convergence>,
    pub(super) basis: FoldedBasis,
    pub(super) nominal: Draw,
    /// Momentum of all rows of the basis in the nominal case, N·m·s.
    pub(super) nominal_rows: Vec<f64>,
    pub(super) filling: Option<Filling>,
    wheel_torque: Option<Authority>,
    /// The basis by windows, for many lifetimes at once.
    pub(super) panels: Panels,
    /// The layout with all thrusters working, then with every set of failures.
    pub(super) layouts: Vec<Layouts>,
    /// The middle stratum of each phase.
    middles: Vec<usize>,
    /// Shares of the time that burning thrusters are on where that holds the attitude.
    pub(super) duties: super::modulation::Duties,
    /// Margins.
    pub(super) margin: Margin,
}

impl Plan {
    /// Simulates the mission and prices the layout.
    ///
    /// The first flight, with a full tank throughout,
    /// gives the propellant on board over time; mass properties then follow it.
    ///
    /// # Errors
    /// The layout cannot make the torques that the mission asks of it.
    pub fn new(scenario: Scenario, resolution: Resolution, margin: Margin) -> Result<Self, PlanError> {
        let (strata, raw, convergence) = simulate(&scenario, resolution);
        let full = MassHistory::constant(scenario.vehicle.tank.loaded_kg);
        let filling = scenario.vehicle.wheels.as_ref().map(|wheels| {
            let envelope = wheel_envelope(wheels);
            let reserve = wheels.reserve_n_m_s / envelope.guaranteed();
            Filling { envelope, reserve }
        });
        let mut plan = Self {
            basis: FoldedBasis::new(&scenario, &strata, &raw, &full),
            nominal: scenario.parameters.nominal(),
            nominal_rows: Vec::new(),
            filling,
            wheel_torque: scenario.vehicle.wheels.as_ref().map(wheel_torque),
            panels: Panels::default(),
            layouts: Vec::new(),
            duties: Vec::new(),
            middles: middles(&strata, scenario.mission.phases.len()),
            margin,
            strata,
            raw,
            convergence,
            scenario,
        };
        plan.price_layout()?;
        plan.duties = plan.find_duties();
        let history = plan.mass_history()?;
        plan.basis = FoldedBasis::new(&plan.scenario, &plan.strata, &plan.raw, &history);
        plan.duties = plan.find_duties();
        plan.nominal_rows = plan.rows_in(&plan.nominal);
        plan.panels = Panels::new(&plan.basis, &plan.strata, plan.scenario.mission.phases.len());
        plan.price_layout()?;
        Ok(plan)
    }

    /// Propellant on board over the nominal mission.
    fn mass_history(&self) -> Result<MassHistory, PlanError> {
        let loaded = self.scenario.vehicle.tank.loaded_kg;
        let outcome = self.fly(&self.nominal);
        if let Some(found) = outcome.too_large {
            let phase = &self.scenario.mission.phases[self.strata[found.place.0].phase];
            let (phase, event) = (phase.name.clone(), phase.events[found.place.1].name.clone());
            return Err(PlanError::BurnTooLarge { phase, event, asks_kg: found.asks_kg, left_kg: found.left_kg });
        }
        let ends = self.strata.iter().zip(&outcome.used_kg);
        let points = ends.map(|(stratum, used)| (stratum.start_s + stratum.duration_s, (loaded - used).max(0.0)));
        Ok(MassHistory::new(std::iter::once((0.0, loaded)).chain(points).collect()))
    }

    pub(super) fn needs_thrusters(&self) -> bool {
        self.scenario.mission.phases.iter().any(|phase| phase.unload != UnloadPolicy::Never || !phase.events.is_empty())
    }

    /// The scenario it was made from.
    #[must_use]
    pub fn scenario(&self) -> &Scenario {
        &self.scenario
    }

    /// The vehicle.
    #[must_use]
    pub fn vehicle(&self) -> &Vehicle {
        &self.scenario.vehicle
    }

    /// The strata in order of time.
    #[must_use]
    pub fn strata(&self) -> &[Stratum] {
        &self.strata
    }

    /// The folded basis.
    #[must_use]
    pub fn basis(&self) -> &FoldedBasis {
        &self.basis
    }

    /// Every parameter at its nominal value.
    #[must_use]
    pub fn nominal(&self) -> &Draw {
        &self.nominal
    }

    /// Momentum that the wheels can hold, if there are wheels.
    #[must_use]
    pub fn wheel_envelope(&self) -> Option<&Authority> {
        self.filling.as_ref().map(|filling| &filling.envelope)
    }

    /// Torque that the wheels can make, if there are wheels.
    #[must_use]
    pub fn wheel_torque(&self) -> Option<&Authority> {
        self.wheel_torque.as_ref()
    }

    /// Names of the sources of torque, in the order of [`PhaseMomentum`].
    #[must_use]
    pub fn sources(&self) -> &[&'static str] {
        &self.raw.sources
    }

    /// The middle stratum of a phase.
    #[must_use]
    pub fn middle_of(&self, phase: usize) -> usize {
        self.middles[phase]
    }

    /// What each phase was simulated with.
    #[must_use]
    pub fn convergence(&self) -> &[Convergence] {
        &self.convergence
    }

    /// Nominal torque and momentum by source, phase by phase.
    #[must_use]
    pub fn phase_momentum(&self) -> Vec<PhaseMomentum> {
        phase_momentum(&self.scenario, &self.strata, &self.raw, &self.basis.masses)
    }

    /// The layout about the centre of mass of a stratum.
    #[must_use]
    pub fn pricer(&self, stratum: usize) -> &Pricer {
        self.layouts[0].pricer(stratum)
    }

    /// Least propellant for an angular impulse in a stratum, kg, or `None` if no firing gives it.
    #[must_use]
    pub fn price(&self, stratum: usize, impulse_n_m_s: &nalgebra::Vector3<f64>) -> Option<f64> {
        match self.pricer(stratum).price_map().price(impulse_n_m_s) {
            Price::Served { kg } => Some(kg),
            Price::NotServed { .. } => None,
        }
    }
}

/// Index of the middle stratum of each phase.
fn middles(strata: &[Stratum], phases: usize) -> Vec<usize> {
    let of = |phase: usize| {
        let own: Vec<usize> = (0..strata.len()).filter(|k| strata[*k].phase == phase).collect();
        own.get(own.len() / 2).copied().unwrap_or(0)
    };
    (0..phases).map(of).collect()
}
