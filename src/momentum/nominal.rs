//! Torque and momentum by source with every uncertain quantity at its nominal value.

use nalgebra::Vector3;

use super::{RawBasis, Stratum};
use crate::disturbance::{Factor, Feature};
use crate::mission::Scenario;
use crate::uncertain::Draw;
use crate::vehicle::{INERTIA_ELEMENTS, MassState};

/// Nominal torque and momentum of one phase.
#[derive(Debug, Clone, PartialEq)]
pub struct PhaseMomentum {
    /// Largest torque of each source, sampled along an orbit of every stratum, N·m.
    pub peak_torque_n_m: Vec<f64>,
    /// Secular momentum of each source per day, inertial frame, mean over the phase, N·m·s.
    pub secular_n_m_s_per_day: Vec<Vector3<f64>>,
    /// Largest excursion from the steady gain within an orbit, any stratum, N·m·s.
    pub cyclic_n_m_s: f64,
    /// The excursions themselves, body frame, each with the index of its stratum.
    pub excursions: Vec<(usize, Vector3<f64>)>,
}

/// Nominal value of a feature with the mass properties of a stratum; a deviation from nominal is zero.
pub(super) fn nominal_value(feature: &Feature, scenario: &Scenario, nominal: &Draw, mass: &MassState) -> f64 {
    let activity = &scenario.mission.activity;
    let value = |factor: &Factor| match *factor {
        Factor::Parameter(id) => nominal.value(id),
        Factor::CentreOfMass(axis) => mass.centre_of_mass_m[axis],
        Factor::Inertia(element) => mass.inertia_kg_m2[INERTIA_ELEMENTS[element]],
        Factor::Bias(_) | Factor::Deviation(_) => 0.0,
        Factor::Activity(level) => activity.weight(level, activity.chance().nominal()),
    };
    feature.factors().iter().map(value).product()
}

/// Torque and momentum by source, phase by phase.
#[must_use]
pub fn phase_momentum(scenario: &Scenario, strata: &[Stratum], raw: &RawBasis, masses: &[MassState]) -> Vec<PhaseMomentum> {
    let nominal = scenario.parameters.nominal();
    let none = PhaseMomentum {
        peak_torque_n_m: vec![0.0; raw.sources.len()],
        secular_n_m_s_per_day: vec![Vector3::zeros(); raw.sources.len()],
        cyclic_n_m_s: 0.0,
        excursions: Vec::new(),
    };
    let mut phases = vec![none; scenario.mission.phases.len()];
    for (index, ((stratum, span), mass)) in strata.iter().zip(&raw.spans).zip(masses).enumerate() {
        let phase = &mut phases[stratum.phase];
        let features = &raw.features[stratum.phase];
        let values: Vec<f64> = features.iter().map(|f| nominal_value(&f.feature, scenario, &nominal, mass)).collect();
        let share = stratum.duration_s / scenario.mission.phases[stratum.phase].duration_s;
        let per_day = 86_400.0 / stratum.span.window_s();
        for ((feature, value), secular) in features.iter().zip(&values).zip(&span.secular_inertial) {
            phase.secular_n_m_s_per_day[feature.source] += secular * (value * per_day * share);
        }
        for torques in &span.torques {
            let mut by_source = vec![Vector3::zeros(); raw.sources.len()];
            for ((feature, value), torque) in features.iter().zip(&values).zip(torques) {
                by_source[feature.source] += torque * *value;
            }
            for (peak, torque) in phase.peak_torque_n_m.iter_mut().zip(by_source) {
                *peak = peak.max(torque.norm());
            }
        }
        for excursion in &span.excursions {
            let total: Vector3<f64> = excursion.iter().zip(&values).map(|(part, value)| part * *value).sum();
            phase.cyclic_n_m_s = phase.cyclic_n_m_s.max(total.norm());
            phase.excursions.push((index, total));
        }
    }
    phases
}
