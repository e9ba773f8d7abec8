//! The whole budget: nominal flight, many lifetimes, drivers, requirements.

use std::io;

use super::{
    Driver, Figure, Moments, Proportion, QuantileEstimate, Store, Wanted, drivers, lower_limit_rank, proportion, run, upper_limit_rank,
    wilks_sample_size,
};
use crate::config;
use crate::layout::{LayoutCase, all_cases, figure, intact};
use crate::lifetime::{Outcome, Plan, TimingGain, UnloadDeltaV};
use crate::mission::{Bound, Requirement};
use crate::propellant::{ROWS, Row};

/// Probabilities at which quantiles are given.
pub const QUANTILES: [f64; 4] = [0.50, 0.90, 0.95, 0.99];

/// A figure that reaches its bound but for this part of it keeps it: unloading at 60 % must not fail a
/// bound of 60 % by the rounding of some thousand operations.
const BOUND_IS_ROUNDING: f64 = 1e-9;

/// Mean, spread and quantiles of one figure over the lifetimes.
#[derive(Debug, Clone)]
pub struct Distribution {
    /// Value with every parameter nominal.
    pub nominal: f64,
    /// Mean.
    pub mean: f64,
    /// Standard deviation.
    pub sd: f64,
    /// At [`QUANTILES`].
    pub quantiles: Vec<QuantileEstimate>,
}

impl Distribution {
    /// Estimate at one of [`QUANTILES`].
    #[must_use]
    pub fn at(&self, p: f64) -> Option<&QuantileEstimate> {
        self.quantiles.iter().find(|estimate| (estimate.p - p).abs() < 1e-9)
    }
}

/// A requirement and how it came out.
#[derive(Debug, Clone)]
pub struct Checked {
    /// The requirement.
    pub requirement: Requirement,
    /// The figure, SI; `None` if it does not exist.
    pub value: Option<f64>,
    /// Whether the figure exists and keeps the bound.
    pub met: bool,
}

impl Checked {
    /// Compares a figure with its bound.
    #[must_use]
    pub fn new(requirement: &Requirement, value: Option<f64>) -> Self {
        let met = value.is_some_and(|value| match requirement.bound {
            Bound::AtMost(limit) => value <= limit + BOUND_IS_ROUNDING * limit.abs(),
            Bound::AtLeast(limit) => value >= limit - BOUND_IS_ROUNDING * limit.abs(),
        });
        Self { requirement: requirement.clone(), value, met }
    }
}

/// Whether a requirement is about the layout alone.
fn of_layout(requirement: &Requirement) -> bool {
    matches!(requirement.figure, config::Figure::Torque | config::Figure::Price)
}

/// The requirements that are about the layout alone, checked.
#[must_use]
pub fn check_layout(requirements: &[Requirement], cases: &[LayoutCase]) -> Vec<Checked> {
    let value = |requirement: &Requirement| match requirement.figure {
        config::Figure::Torque => figure(cases, &requirement.scope).0,
        _ => figure(cases, &requirement.scope).1,
    };
    requirements
        .iter()
        .filter(|requirement| of_layout(requirement))
        .map(|requirement| Checked::new(requirement, value(requirement)))
        .collect()
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
    /// What drives the attitude total.
    pub drivers: Vec<Driver>,
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
    /// Confidence of limits.
    pub confidence: f64,
}

/// Progress: the name of the step and how many of how many.
pub type Progress<'a> = dyn Fn(&'static str, u64, u64) + Sync + 'a;

impl Budget {
    /// Flies the nominal mission and `lifetimes` draws, and finds the drivers.
    ///
    /// # Errors
    /// The temporary file for the lifetimes cannot be written, or books do not balance: a fault of the program.
    pub fn new(plan: &Plan, seed: u64, lifetimes: u64, progress: &Progress<'_>) -> io::Result<Self> {
        let confidence = plan.scenario().settings.confidence;
        let nominal = plan.fly(plan.nominal());
        plan.audit(&nominal).and_then(|()| plan.audit_unloads()).map_err(io::Error::other)?;
        let mut store = run(plan, seed, lifetimes, &|done| progress("lifetimes", done, lifetimes))?;
        let all = distributions(&mut store, plan, &nominal, confidence)?;
        let loaded_kg = plan.vehicle().tank.loaded_kg;
        let enough = share_within(&mut store, Figure::Needed, loaded_kg, confidence)?;
        let margin_kg = nominal.attitude_total_kg() * (1.0 + plan.scenario().settings.margin.attitude);
        let within_margin = share_within(&mut store, Figure::AttitudeTotal, margin_kg, confidence)?;
        let life_s = lives(&mut store)?;
        drop(store);
        progress("drivers", 0, 1);
        let found = drivers(plan, seed);
        progress("drivers", 1, 1);
        let one = |figure: Figure| all[figure.column()].clone();
        let thrusters = plan.vehicle().propulsion.thrusters.len();
        let mut budget = Self {
            rows: (0..ROWS.len()).map(|row| one(Figure::Row(row))).collect(),
            attitude: one(Figure::AttitudeTotal),
            needed: one(Figure::Needed),
            unloads: one(Figure::Unloads),
            cycles: (0..thrusters).map(|k| one(Figure::Cycles(k))).collect(),
            throughput: (0..thrusters).map(|k| one(Figure::Throughput(k, thrusters))).collect(),
            within_margin,
            unload_delta_v: plan.unload_delta_v(),
            nominal,
            life_s,
            loaded_kg,
            enough,
            drivers: found,
            wheel_fill: super::wheels::nominal_fill(plan),
            timing: plan.timing_gain(),
            layout: intact(plan.vehicle()),
            requirements: Vec::new(),
            warnings: Vec::new(),
            lifetimes,
            confidence,
        };
        let cases = if plan.scenario().requirements.iter().any(of_layout) { all_cases(plan.vehicle()) } else { Vec::new() };
        budget.requirements = plan.scenario().requirements.iter().map(|requirement| budget.check(requirement, &cases)).collect();
        budget.warnings = super::warnings::warnings(plan, &budget);
        Ok(budget)
    }

    /// Distribution of one row.
    #[must_use]
    pub fn row(&self, row: Row) -> &Distribution {
        &self.rows[row.index()]
    }

    fn check(&self, requirement: &Requirement, cases: &[LayoutCase]) -> Checked {
        use config::Figure as F;
        let upper = |p: f64| self.attitude.at(p).and_then(|estimate| estimate.upper);
        let value = match requirement.figure {
            F::PropellantNominal => Some(self.attitude.nominal),
            F::PropellantP95 => upper(0.95),
            F::PropellantP99 => upper(0.99),
            F::ProbabilityEnough => Some(self.enough.lower),
            F::UnloadInterval => self.nominal.shortest_interval_s,
            F::WheelFill => self.wheel_fill,
            F::ValveCycles => largest_p95(&self.cycles),
            F::Throughput => largest_p95(&self.throughput),
            F::UnloadDeltaVPerDay => Some(self.unload_delta_v.map_or(0.0, |push| push.per_day_m_per_s)),
            F::Torque => figure(cases, &requirement.scope).0,
            F::Price => figure(cases, &requirement.scope).1,
            F::GuaranteedPureTorque => self.layout.iter().map(|case| case.pure_torque.guaranteed_n_m).reduce(f64::min),
        };
        Checked::new(requirement, value)
    }
}

/// The largest P95 of several figures.
fn largest_p95(list: &[Distribution]) -> Option<f64> {
    list.iter().filter_map(|distribution| Some(distribution.at(0.95)?.value)).reduce(f64::max)
}

/// Distributions of all figures, by column.
fn distributions(store: &mut Store, plan: &Plan, nominal: &Outcome, confidence: f64) -> io::Result<Vec<Distribution>> {
    let thrusters = plan.vehicle().propulsion.thrusters.len();
    let columns = Figure::Throughput(thrusters, thrusters).column();
    let n = store.rows();
    let mut moments = vec![Moments::new(); columns];
    store.for_each(|row| moments.iter_mut().zip(row).for_each(|(moment, value)| moment.push(*value)))?;
    // Point estimate, lower and upper limit of every quantile; a rank that does not exist asks for rank 0.
    let ranks: Vec<[usize; 3]> = QUANTILES
        .iter()
        .map(|p| [rank_of(n, *p), lower_limit_rank(n, *p, confidence).unwrap_or(0), upper_limit_rank(n, *p, confidence).unwrap_or(0)])
        .collect();
    let wanted: Vec<Wanted> =
        (0..columns).flat_map(|column| ranks.iter().flatten().map(move |rank| Wanted { column, rank: *rank })).collect();
    let values = store.select(&wanted)?;
    let nominals = super::run::figures(nominal);
    let found = moments.iter().zip(values.chunks(ranks.len() * 3)).zip(nominals).map(|((moment, values), nominal)| {
        let quantiles = QUANTILES.iter().zip(values.chunks(3)).map(|(p, v)| {
            let exists = |value: f64| (!value.is_nan()).then_some(value);
            let upper = exists(v[2]);
            let needed = upper.is_none().then(|| wilks_sample_size(*p, confidence, 1));
            QuantileEstimate { p: *p, value: v[0], lower: exists(v[1]), upper, confidence, needed }
        });
        Distribution { nominal, mean: moment.mean(), sd: moment.sd(), quantiles: quantiles.collect() }
    });
    Ok(found.collect())
}

/// Rank of the point estimate of a quantile: the smallest that at least a share p of the sample does not exceed.
fn rank_of(n: usize, p: f64) -> usize {
    #[expect(clippy::cast_possible_truncation, clippy::cast_sign_loss, reason = "between 1 and n")]
    let rank = (n as f64 * p - 1e-9).ceil().max(1.0) as usize;
    rank.min(n)
}

/// Share of lifetimes in which a figure does not exceed a bound.
fn share_within(store: &mut Store, figure: Figure, most: f64, confidence: f64) -> io::Result<Proportion> {
    let mut covered = 0;
    store.for_each(|row| covered += usize::from(row[figure.column()] <= most))?;
    Ok(proportion(covered, store.rows(), confidence))
}

/// Life that a share p of the lifetimes reaches: the quantile at 1 − p.
fn lives(store: &mut Store) -> io::Result<Vec<(f64, Option<f64>)>> {
    let n = store.rows();
    let column = Figure::Life.column();
    let wanted: Vec<Wanted> = QUANTILES.iter().map(|p| Wanted { column, rank: n + 1 - rank_of(n, *p) }).collect();
    let found = store.select(&wanted)?;
    Ok(QUANTILES.into_iter().zip(found.into_iter().map(|life| life.is_finite().then_some(life))).collect())
}
