//! One unload as whole pulses.

use nalgebra::Vector3;

use super::Pricer;
use crate::authority::{Authority, Price};

/// Pulses of one thruster in an unload.
#[derive(Debug, Clone, PartialEq)]
pub struct ThrusterPulses {
    /// Index of the thruster.
    pub thruster: usize,
    /// Impulse given, N·s.
    pub impulse_n_s: f64,
    /// Whole pulses.
    pub pulses: u32,
    /// On-time of each, s.
    pub on_time_s: f64,
    /// Propellant, kg.
    pub propellant_kg: f64,
}

/// One unload as valve commands. Vectors in the body frame.
#[derive(Debug, Clone, PartialEq)]
pub struct UnloadCommand {
    /// Momentum that the wheels hold and the thrusters must remove, N·m·s.
    pub momentum_n_m_s: Vector3<f64>,
    /// The thrusters that fire.
    pub thrusters: Vec<ThrusterPulses>,
    /// Propellant, kg.
    pub propellant_kg: f64,
    /// Least propellant at the steady exhaust speed, before rounding to whole pulses, kg.
    pub ideal_propellant_kg: f64,
    /// Length, s.
    pub duration_s: f64,
    /// Momentum left in the wheels, N·m·s.
    pub residual_n_m_s: Vector3<f64>,
    /// Impulse on the spacecraft, N·s.
    pub net_impulse_n_s: Vector3<f64>,
    /// Angular impulse of the pulses that fire together, N·m·s, mean over the unload.
    pub per_pulse_n_m_s: Vector3<f64>,
    /// Time in which the wheels take that back at full torque, s; `None` without wheels.
    pub follow_s: Option<f64>,
}

/// No firing removes the momentum.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
#[error("no firing of these thrusters turns the spacecraft along {0:?}")]
pub struct UnloadError(
    /// Direction in which no thruster turns it, unit, body frame.
    pub [f64; 3],
);

/// Turns the removal of `momentum_n_m_s` from the wheels into whole pulses of equal on-time per thruster.
///
/// All thrusters pulse in step. The period is long enough for the duty cycle and for the wheels to
/// give back the angular impulse of one pulse each with their torque (`wheel_torque`, if there are
/// wheels).
///
/// # Errors
/// The layout cannot make the torque, under its choice of net force.
pub fn unload(momentum_n_m_s: Vector3<f64>, pricer: &Pricer, wheel_torque: Option<&Authority>) -> Result<UnloadCommand, UnloadError> {
    let wanted = -momentum_n_m_s;
    if let Price::NotServed { along } = pricer.price_map().price(&wanted) {
        return Err(UnloadError(along.into()));
    }
    let impulses = pricer.price_map().allocate(&wanted).ok_or_else(|| UnloadError(wanted.normalize().into()))?;
    let real = impulses.iter().take(pricer.layout().len());
    let ideal_propellant_kg = real.zip(pricer.layout()).map(|(impulse, own)| impulse * own.cost).sum();
    let thrusters = whole_pulses(pricer, &momentum_n_m_s, &impulses);
    let given: Vector3<f64> = thrusters.iter().map(|t| pricer.layout()[t.thruster].torque * t.impulse_n_s).sum();
    let cycles = thrusters.iter().map(|t| t.pulses).max().unwrap_or(0);
    let on_time_s = thrusters.iter().map(|t| t.on_time_s).fold(0.0, f64::max);
    let per_pulse_n_m_s = given / f64::from(cycles.max(1));
    let follow_s = wheel_torque.map(|torque| torque.fill(&per_pulse_n_m_s));
    let period_s = (on_time_s / pricer.limits().duty_cycle).max(follow_s.unwrap_or(0.0));
    Ok(UnloadCommand {
        momentum_n_m_s,
        propellant_kg: thrusters.iter().map(|t| t.propellant_kg).sum(),
        ideal_propellant_kg,
        duration_s: f64::from(cycles) * period_s,
        residual_n_m_s: momentum_n_m_s + given,
        net_impulse_n_s: thrusters.iter().map(|t| pricer.layout()[t.thruster].force * t.impulse_n_s).sum(),
        thrusters,
        per_pulse_n_m_s,
        follow_s,
    })
}

/// Most thrusters under one shortest pulse among which all choices are tried: a basic solution has no more.
const MOST_SMALL: usize = 6;

/// Whole pulses of every thruster. One that is asked for at least a shortest pulse gives its impulse exactly, by its
/// on-time. Those asked for less make one shortest pulse or none: that choice of all which leaves least in the wheels.
fn whole_pulses(pricer: &Pricer, momentum: &Vector3<f64>, impulses: &[f64]) -> Vec<ThrusterPulses> {
    let asked = impulses.iter().enumerate().take(pricer.layout().len()).filter(|(_, impulse)| **impulse > 0.0);
    let each: Vec<(ThrusterPulses, bool)> = asked.map(|(k, impulse)| one(pricer, k, *impulse)).collect();
    let torque = |pulses: &ThrusterPulses| pricer.layout()[pulses.thruster].torque * pulses.impulse_n_s;
    let sure: Vector3<f64> = each.iter().filter(|(_, small)| !small).map(|(pulses, _)| torque(pulses)).sum();
    let small: Vec<usize> = (0..each.len()).filter(|k| each[*k].1).take(MOST_SMALL).collect();
    let left = |choice: u32| {
        let chosen = small.iter().enumerate().filter(|(bit, _)| choice >> bit & 1 == 1);
        (momentum + sure + chosen.map(|(_, k)| torque(&each[*k].0)).sum::<Vector3<f64>>()).norm()
    };
    let choices = 1_u32 << small.len();
    let best = (0..choices).reduce(|a, b| if left(b) < left(a) { b } else { a }).unwrap_or(0);
    let fires = |k: usize| !each[k].1 || small.iter().position(|own| *own == k).is_some_and(|bit| best >> bit & 1 == 1);
    (0..each.len()).filter(|k| fires(*k)).map(|k| each[k].0.clone()).collect()
}

/// Pulses of one thruster, and whether it was asked for less than one shortest pulse.
fn one(pricer: &Pricer, thruster: usize, impulse_n_s: f64) -> (ThrusterPulses, bool) {
    let firing = pricer.firing(thruster, impulse_n_s);
    let small = firing.pulses < 1.0 - 1e-9;
    let rounded = firing.pulses.round().max(1.0);
    #[expect(clippy::cast_possible_truncation, clippy::cast_sign_loss, reason = "saturates; rounded and at least 1")]
    let pulses = rounded as u32;
    let share = rounded / firing.pulses;
    let made = ThrusterPulses {
        thruster,
        impulse_n_s: impulse_n_s * share,
        pulses,
        on_time_s: firing.on_time_s,
        propellant_kg: firing.propellant_kg * share,
    };
    (made, small)
}
