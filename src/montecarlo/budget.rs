//! The whole budget: nominal flight, many lifetimes, drivers, requirements.

use std::io;

use rayon::prelude::*;

use super::distribution::share_within;
use super::figures::figures;
use super::requirement::of_layout;
use super::{
    Checked, Design, Distribution, Driver, Ended, FAN, Figure, Proportion, QUANTILES, Sample, Store, Swing, Watch, drivers, fan_time_s,
    swings,
};
use crate::layout::{LayoutCase, all_cases, intact};
use crate::lifetime::{Outcome, Plan, TimingGain, UnloadDeltaV};
use crate::propellant::{ROWS, Row};

/// Probabilities of the lines of the fan.
pub const FAN_LINES: [f64; 5] = [0.05, 0.25, 0.50, 0.75, 0.95];

/// Propellant used by a time of the mission.
#[derive(Debug, Clone, PartialEq)]
pub struct FanPoint {
    /// Time after the start, s.
    pub time_s: f64,
    /// Nominal, kg.
    pub nominal_kg: f64,
    /// At [`FAN_LINES`], kg.
    pub kg: [f64; FAN_LINES.len()],
}

/// The whole budget.
#[derive(Debug, Clone)]
pub struct Budget {
    /// The nominal flight.
    pub nominal: Outcome,
    /// One distribution for each row of the ledger.
    pub rows: Vec<Distribution>,
    /// Attitude control.
    pub attitude: Distribution,
    /// What must be on board: attitude control, leakage, residual.
    pub needed: Distribution,
    /// Unloads over the mission.
    pub unloads: Distribution,
    /// Valve cycles of each thruster.
    pub cycles: Vec<Distribution>,
    /// Propellant through each thruster, kg.
    pub throughput: Vec<Distribution>,
    /// Propellant used over the mission.
    pub fan: Vec<FanPoint>,
    /// Share of lifetimes whose attitude control stays within the nominal value and its margin.
    pub within_margin: Proportion,
    /// Push of the nominal unloads.
    pub unload_delta_v: Option<UnloadDeltaV>,
    /// Time until the usable propellant is gone, s, that this share of lifetimes reaches; `None` if it never ends.
    pub life_s: Vec<(f64, Option<f64>)>,
    /// Propellant loaded, kg.
    pub loaded_kg: f64,
    /// Share of lifetimes whose need the load covers.
    pub enough: Proportion,
    /// Share of lifetimes in which the layout can make every torque asked for.
    pub served: Proportion,
    /// What drives the attitude total.
    pub drivers: Vec<Driver>,
    /// What single quantities do.
    pub swings: Vec<Swing>,
    /// Largest share of the wheel envelope filled, nominal.
    pub wheel_fill: Option<f64>,
    /// What waiting for the cheapest point of the orbit saves, where a phase does.
    pub timing: Option<TimingGain>,
    /// Intact layout at both ends of the travel.
    pub layout: Vec<LayoutCase>,
    /// Requirements.
    pub requirements: Vec<Checked>,
    /// What the engineer should know.
    pub warnings: Vec<String>,
    /// Lifetimes flown.
    pub lifetimes: u64,
    /// What was asked for, and why it ended.
    pub design: Design,
    /// Why there are no more lifetimes.
    pub ended: Ended,
    /// Confidence of limits.
    pub confidence: f64,
}

impl Budget {
    /// The budget that a sample of lifetimes gives, with the nominal flight and the drivers.
    ///
    /// # Errors
    /// The temporary file of the lifetimes cannot be read, or books do not balance: a fault of the program.
    pub fn of(plan: &Plan, sample: &mut Sample, watch: &Watch<'_>) -> io::Result<Self> {
        let mut budget = Self::without_drivers(plan, sample)?;
        (watch.progress)("drivers", 0, 1);
        if sample.ended != Ended::Stopped {
            budget.drivers = drivers(plan, sample.design.seed, watch);
        }
        budget.swings = swings(plan);
        (watch.progress)("drivers", 1, 1);
        Ok(budget)
    }

    /// The same without drivers and swings.
    ///
    /// # Errors
    /// As [`Budget::of`].
    pub fn without_drivers(plan: &Plan, sample: &mut Sample) -> io::Result<Self> {
        let confidence = plan.scenario().settings.confidence;
        let design = sample.design;
        let nominal = plan.fly(plan.nominal());
        plan.audit(&nominal).and_then(|()| plan.audit_unloads()).map_err(io::Error::other)?;
        let store = &mut sample.store;
        let values = figures(plan, &nominal);
        let mut one = |figure: Figure| {
            let nominal = values.get(figure.column()).copied().unwrap_or(f64::NAN);
            Distribution::new(store, figure.column(), nominal, confidence, &design)
        };
        let thrusters = plan.vehicle().propulsion.thrusters.len();
        let rows = (0..ROWS.len()).map(|row| one(Figure::Row(row))).collect::<io::Result<_>>()?;
        let (attitude, needed, unloads) = (one(Figure::AttitudeTotal)?, one(Figure::Needed)?, one(Figure::Unloads)?);
        let cycles = (0..thrusters).map(|k| one(Figure::Cycles(k))).collect::<io::Result<_>>()?;
        let throughput = (0..thrusters).map(|k| one(Figure::Throughput(k, thrusters))).collect::<io::Result<_>>()?;
        let loaded_kg = plan.vehicle().tank.loaded_kg;
        let margin_kg = nominal.attitude_total_kg() * (1.0 + plan.scenario().settings.margin.attitude);
        let mut within = |figure: Figure, most: f64| share_within(store, figure.column(), most, confidence, &design);
        let enough = within(Figure::Needed, loaded_kg)?;
        let within_margin = within(Figure::AttitudeTotal, margin_kg)?;
        let served = within(Figure::Unserved, 0.0)?;
        let (life_s, fan) = (lives(store)?, fan(plan, store, &values)?);
        let lifetimes = store.rows() as u64;
        let mut budget = Self {
            rows,
            attitude,
            needed,
            unloads,
            cycles,
            throughput,
            fan,
            within_margin,
            unload_delta_v: plan.unload_delta_v(),
            nominal,
            life_s,
            loaded_kg,
            enough,
            served,
            drivers: Vec::new(),
            swings: Vec::new(),
            wheel_fill: super::wheels::nominal_fill(plan),
            timing: plan.timing_gain(),
            layout: intact(plan.vehicle()),
            requirements: Vec::new(),
            warnings: Vec::new(),
            lifetimes,
            design,
            ended: sample.ended,
            confidence,
        };
        let asked = &plan.scenario().requirements;
        let cases = if asked.iter().any(of_layout) { all_cases(plan.vehicle()) } else { Vec::new() };
        budget.requirements = asked.par_iter().map(|requirement| budget.check(requirement, &cases)).collect();
        budget.warnings = super::warnings::warnings(plan, &budget);
        Ok(budget)
    }

    /// Distribution of one row.
    #[must_use]
    pub fn row(&self, row: Row) -> &Distribution {
        &self.rows[row.index()]
    }
}

/// Life that a share p of the lifetimes reaches: the quantile at 1 − p.
fn lives(store: &mut Store) -> io::Result<Vec<(f64, Option<f64>)>> {
    let n = store.rows();
    let ranks = QUANTILES.map(|p| n + 1 - super::quantiles::point_rank(n, p));
    let found = store.select(Figure::Life.column(), &ranks)?;
    Ok(QUANTILES.into_iter().zip(found.into_iter().map(|life| life.is_finite().then_some(life))).collect())
}

fn fan(plan: &Plan, store: &mut Store, nominal: &[f64]) -> io::Result<Vec<FanPoint>> {
    let ranks = FAN_LINES.map(|p| super::quantiles::point_rank(store.rows(), p));
    let point = |point: usize| {
        let column = Figure::Used(point).column();
        let found = store.select(column, &ranks)?;
        let kg = std::array::from_fn(|line| found.get(line).copied().unwrap_or(f64::NAN));
        Ok(FanPoint { time_s: fan_time_s(plan, point), nominal_kg: nominal.get(column).copied().unwrap_or(f64::NAN), kg })
    };
    (0..FAN).map(point).collect()
}
