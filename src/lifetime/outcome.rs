//! What one lifetime did.

use crate::propellant::{ROWS, Row};

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

/// What one lifetime did.
#[derive(Debug, Clone, PartialEq)]
pub struct Outcome {
    /// Propellant of each row, in the order of [`ROWS`], kg; what the mission needs, whether or not it is there.
    pub rows_kg: [f64; ROWS.len()],
    /// Unloads over the mission; a last interval that the mission cuts short counts by its share.
    pub unloads: f64,
    /// Valve cycles of each thruster.
    pub cycles: Vec<f64>,
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
