//! Many lifetimes of one plan: figures of each into a store, in order.

use std::io;

use rayon::prelude::*;

use super::{Store, uniforms};
use crate::lifetime::{BLOCK, Outcome, Plan};
use crate::propellant::ROWS;
use crate::uncertain::Draw;

/// Blocks flown between two writes: enough to keep threads busy, few enough to bound memory.
const BLOCKS_PER_WAVE: u64 = 16;

/// A figure that every lifetime gives.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Figure {
    /// A row of the ledger, kg.
    Row(usize),
    /// Propellant that attitude control burns, kg.
    AttitudeTotal,
    /// Propellant that must be on board, kg.
    Needed,
    /// Unloads.
    Unloads,
    /// Time until the usable propellant is gone, s; infinite if never.
    Life,
    /// Valve cycles of the thruster of this index.
    Cycles(usize),
    /// Propellant through the thruster of this index, of so many, kg.
    Throughput(usize, usize),
}

impl Figure {
    /// Column of the figure in a store.
    #[must_use]
    pub const fn column(self) -> usize {
        match self {
            Self::Row(row) => row,
            Self::AttitudeTotal => ROWS.len(),
            Self::Needed => ROWS.len() + 1,
            Self::Unloads => ROWS.len() + 2,
            Self::Life => ROWS.len() + 3,
            Self::Cycles(thruster) => ROWS.len() + 4 + thruster,
            Self::Throughput(thruster, of) => ROWS.len() + 4 + of + thruster,
        }
    }
}

pub(super) fn figures(outcome: &Outcome) -> Vec<f64> {
    let single = [outcome.attitude_total_kg(), outcome.needed_kg(), outcome.unloads, outcome.life_s.unwrap_or(f64::INFINITY)];
    let wear = outcome.wear.cycles.iter().chain(&outcome.wear.throughput_kg).copied();
    outcome.rows_kg.iter().copied().chain(single).chain(wear).collect()
}

/// The draws of lifetimes `first..first + count`.
///
/// A value depends on the seed, the parameter's name and the lifetime's number alone.
#[must_use]
pub fn draws(plan: &Plan, seed: u64, first: u64, count: usize) -> Vec<Draw> {
    let parameters = &plan.scenario().parameters;
    let columns: Vec<Vec<f64>> = parameters
        .as_slice()
        .iter()
        .map(|parameter| {
            let mut column = vec![0.0; count];
            uniforms(seed, &parameter.name, first, &mut column);
            column
        })
        .collect();
    (0..count).map(|k| parameters.at_quantiles(&columns.iter().map(|column| column[k]).collect::<Vec<_>>())).collect()
}

/// Flies lifetimes 0 to `lifetimes` − 1; `progress` hears how many are done.
///
/// Blocks have the same bounds whatever the number of threads, and rows are kept in the order of
/// lifetimes: the same seed gives the same bytes.
///
/// # Errors
/// The temporary file cannot be written.
pub fn run(plan: &Plan, seed: u64, lifetimes: u64, progress: &(dyn Fn(u64) + Sync)) -> io::Result<Store> {
    let thrusters = plan.vehicle().propulsion.thrusters.len();
    let columns = Figure::Throughput(thrusters, thrusters).column();
    let mut store = Store::new(columns)?;
    let block = BLOCK as u64;
    let wave = BLOCKS_PER_WAVE * block;
    for first in (0..lifetimes).step_by(usize::try_from(wave).unwrap_or(usize::MAX)) {
        let last = lifetimes.min(first + wave);
        let starts: Vec<u64> = (first..last).step_by(BLOCK).collect();
        let flown: Vec<Vec<Vec<f64>>> = starts
            .into_par_iter()
            .map(|start| {
                let count = usize::try_from(block.min(last - start)).unwrap_or(BLOCK);
                let outcomes = plan.fly_block(&draws(plan, seed, start, count));
                outcomes.iter().map(|outcome| plan.audit(outcome).map(|()| figures(outcome))).collect()
            })
            .collect::<Result<_, _>>()
            .map_err(io::Error::other)?;
        for row in flown.iter().flatten() {
            store.push(row)?;
        }
        progress(last);
    }
    Ok(store)
}
