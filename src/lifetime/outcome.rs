//! What one lifetime did.

use nalgebra::Vector3;

use crate::propellant::{ROWS, Row};
use crate::pulses::Wear;

/// A burn that asks for more propellant than is left.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct TooLarge {
    /// Index of its stratum and of its event in the phase.
    pub place: (usize, usize),
    /// What it asks for, kg.
    pub asks_kg: f64,
    /// What is left, kg.
    pub left_kg: f64,
}

/// One entry of the books of a flight: how some propellant of a row came about.
#[derive(Debug, Clone, PartialEq)]
pub struct Entry {
    /// The row.
    pub row: Row,
    /// Index of the stratum.
    pub stratum: usize,
    /// What was done.
    pub what: What,
    /// How often.
    pub times: f64,
    /// Propellant of all, kg.
    pub kg: f64,
    /// Propellant of one angular impulse at the steady exhaust speed, kg.
    pub price_kg: Option<f64>,
}

/// What was done for an entry.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum What {
    /// An angular impulse given, N·m·s, body frame.
    Impulse(Vector3<f64>),
    /// Pulses that hold an axis (0 to 2) within a band: angular impulse of one, N·m·s.
    Pulses(usize, f64),
    /// A change of speed, m/s, from a mass, kg, at an exhaust speed, m/s.
    Burn {
        /// Change of speed of all, m/s.
        delta_v_m_per_s: f64,
        /// Mass before, kg.
        mass_kg: f64,
        /// Effective exhaust speed, m/s.
        speed_m_per_s: f64,
    },
    /// Time that passed.
    Time,
}

/// What one lifetime did.
#[derive(Debug, Clone, PartialEq)]
pub struct Outcome {
    /// Propellant of each row, in the order of [`ROWS`], kg; what the mission needs, whether or not it is there.
    pub rows_kg: [f64; ROWS.len()],
    /// Unloads over the mission; a last interval that the mission cuts short counts by its share.
    pub unloads: f64,
    /// Valve cycles of each thruster, and propellant through it.
    pub wear: Wear,
    /// Propellant used at the end of each stratum, kg, without residual and margin.
    pub used_kg: Vec<f64>,
    /// Time at which the usable propellant is gone, s; past the mission carried on at the mean rate of
    /// the last phase; `None` if that uses nothing.
    pub life_s: Option<f64>,
    /// Shortest time between unloads, s.
    pub shortest_interval_s: Option<f64>,
    /// Propellant left at the end, kg; below zero it is what the mission lacks.
    pub left_kg: f64,
    /// The first burn that asks for more propellant than is left.
    pub too_large: Option<TooLarge>,
    /// Impossible unloads: angular impulses that the layout cannot make, counted like unloads.
    pub unserved: f64,
}

impl Outcome {
    /// Propellant of one row, kg.
    #[must_use]
    pub fn row(&self, row: Row) -> f64 {
        self.rows_kg[row.index()]
    }

    /// Propellant that attitude control burns, kg.
    #[must_use]
    pub fn attitude_total_kg(&self) -> f64 {
        ROWS.into_iter().filter(|row| row.is_attitude_control()).map(|row| self.row(row)).sum()
    }

    /// Propellant that must be on board: attitude control, orbit burns, leakage, residual and what was loaded too little, kg. Margin
    /// is not burnt.
    #[must_use]
    pub fn needed_kg(&self) -> f64 {
        let others = [Row::OrbitBurns, Row::Leakage, Row::Residual, Row::LoadingError];
        self.attitude_total_kg() + others.into_iter().map(|row| self.row(row)).sum::<f64>()
    }
}
