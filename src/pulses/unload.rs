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
    let ideal_propellant_kg = match pricer.price_map().price(&wanted) {
        Price::Served { kg } => kg,
        Price::NotServed { along } => return Err(UnloadError(along.into())),
    };
    let impulses = pricer.price_map().allocate(&wanted).ok_or_else(|| UnloadError(wanted.normalize().into()))?;
    let thrusters: Vec<ThrusterPulses> = impulses.iter().enumerate().filter_map(|(k, impulse)| whole_pulses(pricer, k, *impulse)).collect();
    let given: Vector3<f64> = thrusters.iter().map(|t| pricer.layout()[t.thruster].torque * t.impulse_n_s).sum();
    let cycles = thrusters.iter().map(|t| t.pulses).max().unwrap_or(0);
    let on_time_s = thrusters.iter().map(|t| t.on_time_s).fold(0.0, f64::max);
    let follow_s = wheel_torque.map_or(0.0, |torque| torque.fill(&(given / f64::from(cycles.max(1)))));
    let period_s = (on_time_s / pricer.limits().duty_cycle).max(follow_s);
    Ok(UnloadCommand {
        momentum_n_m_s,
        propellant_kg: thrusters.iter().map(|t| t.propellant_kg).sum(),
        ideal_propellant_kg,
        duration_s: f64::from(cycles) * period_s,
        residual_n_m_s: momentum_n_m_s + given,
        net_impulse_n_s: thrusters.iter().map(|t| pricer.layout()[t.thruster].force * t.impulse_n_s).sum(),
        thrusters,
    })
}

/// Rounds to whole pulses; none if less than half a shortest pulse is asked for.
fn whole_pulses(pricer: &Pricer, thruster: usize, impulse_n_s: f64) -> Option<ThrusterPulses> {
    let firing = pricer.firing(thruster, impulse_n_s);
    let rounded = firing.pulses.round();
    if rounded < 1.0 {
        return None;
    }
    #[expect(clippy::cast_possible_truncation, clippy::cast_sign_loss, reason = "saturates; rounded and at least 1")]
    let pulses = rounded as u32;
    let share = rounded / firing.pulses;
    Some(ThrusterPulses {
        thruster,
        impulse_n_s: impulse_n_s * share,
        pulses,
        on_time_s: firing.on_time_s,
        propellant_kg: firing.propellant_kg * share,
    })
}
