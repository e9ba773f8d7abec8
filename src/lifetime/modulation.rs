//! Thrusters that burn together and are switched off in turn to hold the attitude.

use nalgebra::Vector3;

use super::Plan;
use crate::authority::{Authority, Generator, NetForce};
use crate::config::Hold;
use crate::mission::{BurnSource, EventKind};

/// Shares of the time that thrusters are on, by stratum and event of its phase.
pub(super) type Duties = Vec<Vec<Option<Vec<f64>>>>;

impl Plan {
    /// Shares of the time that the thrusters of a burn are on, if it is held by switching them off.
    pub(super) fn duty(&self, stratum: usize, event: usize) -> Option<&[f64]> {
        self.duties.get(stratum)?.get(event)?.as_deref()
    }

    /// Shares for all strata, with nominal thrust and the nominal centre of mass.
    pub(super) fn find_duties(&self) -> Duties {
        let of = |stratum: usize| {
            let phase = &self.scenario.mission.phases[self.strata[stratum].phase];
            let centre = self.basis.masses[stratum].centre_of_mass_m;
            let one = |event: &crate::mission::Event| match &event.kind {
                EventKind::Burn { source: BurnSource::Thrusters(list), hold: Hold::OffModulation, .. } => {
                    Some(self.modulated(list, &centre))
                }
                _ => None,
            };
            phase.events.iter().map(one).collect()
        };
        (0..self.strata.len()).map(of).collect()
    }

    /// Most force along the sum of the pushes without torque about `centre`: shares of the time on, all zero if there is none.
    ///
    /// The question of most torque without force with force and torque exchanged, so the same method answers it.
    fn modulated(&self, list: &[usize], centre: &Vector3<f64>) -> Vec<f64> {
        let propulsion = &self.scenario.vehicle.propulsion;
        let thrusters = list.iter().filter_map(|index| propulsion.thrusters.get(*index));
        let generators: Vec<Generator> = thrusters
            .map(|t| {
                let push = t.push.into_inner();
                let own = Generator::thruster(t.position_m, push, *centre, t.thrust_n(), t.effective_speed_m_per_s());
                Generator { torque: own.force, force: own.torque, ..own }
            })
            .collect();
        let along: Vector3<f64> = generators.iter().map(|g| g.torque * g.most).sum();
        let authority = Authority::new(&generators, NetForce::Zero);
        let levels = authority.serving(&along, &generators);
        generators.iter().zip(levels).map(|(generator, level)| level / generator.most).collect()
    }
}
