//! Books that must balance in every flight.

use nalgebra::Vector3;

use super::{Outcome, Plan};
use crate::propellant::{ROWS, Row};

/// What is left of a sum that must vanish, as a share of its largest part: some thousand additions of doubles.
const ROUNDING: f64 = 1e-9;

/// Books that do not balance: a fault of the program.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
pub enum Imbalance {
    /// Propellant loaded is not the sum of the rows and what is left.
    #[error("the propellant does not balance: {loaded_kg} kg loaded, {rows_kg} kg in the rows, {left_kg} kg left")]
    Propellant {
        /// Loaded, with its error, kg.
        loaded_kg: f64,
        /// Sum of the rows that leave the tank, kg.
        rows_kg: f64,
        /// Left, kg.
        left_kg: f64,
    },
    /// The propellant used falls with time.
    #[error("the propellant used falls from {before_kg} kg to {after_kg} kg with time")]
    Backwards {
        /// Used at the end of one stratum, kg.
        before_kg: f64,
        /// Used at the end of the next, kg.
        after_kg: f64,
    },
    /// Angular impulse of the thrusters is not the opposite of what the disturbances stored.
    #[error("the angular momentum does not balance: {stored} N m s stored by disturbances, {given} N m s by thrusters")]
    Momentum {
        /// Gathered by the wheels, N·m·s.
        stored: f64,
        /// What is left of it after the thrusters, N·m·s.
        given: f64,
    },
}

/// Checks the propellant of one lifetime.
///
/// # Errors
/// The books do not balance.
pub fn audit_propellant(outcome: &Outcome, loaded_kg: f64) -> Result<(), Imbalance> {
    let rows_kg: f64 = ROWS.into_iter().filter(|row| row.leaves_the_tank()).map(|row| outcome.row(row)).sum();
    let loaded_kg = loaded_kg - outcome.row(Row::LoadingError);
    let left_kg = outcome.left_kg;
    // A sum that is not a number is no balance either.
    let off = (loaded_kg - rows_kg - left_kg).abs();
    if off.is_nan() || off > ROUNDING * loaded_kg.abs().max(rows_kg) {
        return Err(Imbalance::Propellant { loaded_kg, rows_kg, left_kg });
    }
    for pair in outcome.used_kg.windows(2) {
        if let [before_kg, after_kg] = *pair
            && after_kg < before_kg - ROUNDING * loaded_kg
        {
            return Err(Imbalance::Backwards { before_kg, after_kg });
        }
    }
    Ok(())
}

/// Checks that firings (angular impulses, N·m·s) take away what the disturbances stored.
///
/// # Errors
/// They do not.
pub fn audit_momentum(stored: &Vector3<f64>, firings: impl Iterator<Item = Vector3<f64>>) -> Result<(), Imbalance> {
    let mut size = stored.norm();
    let mut sum = *stored;
    for firing in firings {
        size = size.max(firing.norm());
        sum += firing;
    }
    let left = sum.norm();
    if left.is_nan() || left > ROUNDING.sqrt() * 1e-2 * size {
        return Err(Imbalance::Momentum { stored: stored.norm(), given: left });
    }
    Ok(())
}

impl Plan {
    /// Checks the books of a flight: propellant, its history, and for the nominal unloads the angular momentum.
    ///
    /// # Errors
    /// They do not balance: a fault of the program.
    pub fn audit(&self, outcome: &Outcome) -> Result<(), Imbalance> {
        audit_propellant(outcome, self.vehicle().tank.loaded_kg)
    }

    /// Checks that the firings of every nominal unload take away what the disturbances stored in the wheels.
    ///
    /// # Errors
    /// They do not: a fault of the program.
    pub fn audit_unloads(&self) -> Result<(), Imbalance> {
        for stratum in 0..self.strata.len() {
            let (windows, Some(_)) = self.nominal_unloads(stratum) else { continue };
            let pricer = self.pricer(stratum);
            for stored in windows.iter().filter(|h| h.norm() > 0.0) {
                // What cannot be served is counted as such elsewhere.
                let Some(firings) = pricer.price_map().firings(&-stored) else { continue };
                audit_momentum(stored, firings.map(|(index, impulse)| pricer.layout()[index].torque * impulse))?;
            }
        }
        Ok(())
    }
}
