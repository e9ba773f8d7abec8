//! The figures that every lifetime gives, by columns.

use crate::lifetime::{Outcome, Plan};
use crate::propellant::ROWS;

/// Points of the mission at which the propellant used is kept.
pub const FAN: usize = 24;

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
    /// Angular impulses that the layout could not make.
    Unserved,
    /// Propellant used by a point of the mission, of [`FAN`], kg: 0 is the end of the first part, the last the end.
    Used(usize),
    /// Valve cycles of the thruster of this index.
    Cycles(usize),
    /// Propellant through the thruster of this index, of so many, kg.
    Throughput(usize, usize),
}

/// Columns of single figures after the rows.
const SINGLE: usize = 5;

impl Figure {
    /// Column of the figure in a store.
    #[must_use]
    pub const fn column(self) -> usize {
        let single = ROWS.len();
        let fan = single + SINGLE;
        let cycles = fan + FAN;
        match self {
            Self::Row(row) => row,
            Self::AttitudeTotal => single,
            Self::Needed => single + 1,
            Self::Unloads => single + 2,
            Self::Life => single + 3,
            Self::Unserved => single + 4,
            Self::Used(point) => fan + point,
            Self::Cycles(thruster) => cycles + thruster,
            Self::Throughput(thruster, of) => cycles + of + thruster,
        }
    }

    /// How many columns the lifetimes of a layout with so many thrusters have.
    #[must_use]
    pub const fn columns(thrusters: usize) -> usize {
        Self::Throughput(thrusters, thrusters).column()
    }
}

/// Names of all columns in order, with their units.
#[must_use]
pub fn figure_names(plan: &Plan) -> Vec<String> {
    let thrusters = || plan.vehicle().propulsion.thrusters.iter().map(|thruster| plain(&thruster.name));
    let rows = ROWS.iter().map(|row| format!("{}_kg", row.key()));
    let single = ["attitude_total_kg", "needed_kg", "unloads", "life_s", "unserved"].map(str::to_owned);
    let fan = (1..=FAN).map(|point| format!("used_by_{point}_of_{FAN}_kg"));
    let cycles = thrusters().map(|name| format!("valve_cycles_{name}"));
    let through = thrusters().map(|name| format!("throughput_{name}_kg"));
    rows.chain(single).chain(fan).chain(cycles).chain(through).collect()
}

/// A name that every program takes as a column: letters, digits and underscores.
#[must_use]
pub(super) fn plain(name: &str) -> String {
    let words = name.split(|c: char| !c.is_alphanumeric()).filter(|word| !word.is_empty());
    words.collect::<Vec<_>>().join("_")
}

/// Time of a point of the mission, s.
#[must_use]
pub fn fan_time_s(plan: &Plan, point: usize) -> f64 {
    plan.scenario().mission.duration_s() * (point + 1) as f64 / FAN as f64
}

/// The figures of one lifetime, in the order of the columns.
pub(super) fn figures(plan: &Plan, outcome: &Outcome) -> Vec<f64> {
    let life = outcome.life_s.unwrap_or(f64::INFINITY);
    let single = [outcome.attitude_total_kg(), outcome.needed_kg(), outcome.unloads, life, outcome.unserved];
    let wear = outcome.wear.cycles.iter().chain(&outcome.wear.throughput_kg).copied();
    let fan = (0..FAN).map(|point| used_at(plan, outcome, fan_time_s(plan, point)));
    outcome.rows_kg.iter().copied().chain(single).chain(fan).chain(wear).collect()
}

/// Propellant used by a time, kg: straight lines between the ends of the strata.
fn used_at(plan: &Plan, outcome: &Outcome, time_s: f64) -> f64 {
    let strata = plan.strata();
    let place = strata.partition_point(|stratum| stratum.start_s + stratum.duration_s < time_s).min(strata.len().saturating_sub(1));
    let before = place.checked_sub(1).and_then(|k| outcome.used_kg.get(k)).copied().unwrap_or(0.0);
    let (Some(stratum), Some(after)) = (strata.get(place), outcome.used_kg.get(place)) else { return before };
    before + (after - before) * ((time_s - stratum.start_s) / stratum.duration_s).clamp(0.0, 1.0)
}
