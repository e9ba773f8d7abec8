//! Choosing steps and strata so that the momentum is within the tolerance, and checking it by refinement.

use nalgebra::Vector3;

use super::RawBasis;
use super::nominal::nominal_value;
use super::simulate::{Simulator, SpanBasis};
use super::strata::{Grid, Resolution, Stratum, probe, strata, window_s};
use crate::mission::Scenario;
use crate::vehicle::MassState;

/// Fewest steps of a cycle; a multiple of the windows, so that they are evenly spaced.
const FEWEST_STEPS: usize = 36;
/// The number of steps is doubled up to this: a step of five seconds in a low orbit.
const MOST_STEPS: usize = 36 * 32;
/// Strata are doubled up to this multiple of the least number.
const MOST_STRATA: usize = 8;
/// Share of the tolerance for the steps; the rest is for the strata.
const FOR_STEPS: f64 = 1.0 / 3.0;

/// What a phase was simulated with, and the error that refinement showed: shares of what the wheels hold before an unload,
/// the secular momentum of a window and the cyclic on top of it.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Convergence {
    /// Steps of a cycle.
    pub steps: usize,
    /// Length of a step, s.
    pub step_s: f64,
    /// Estimated error of secular and cyclic momentum from the steps.
    pub step_error: f64,
    /// Strata of the phase.
    pub strata: usize,
    /// Estimated error of the mean momentum of a window and of the cyclic from the number of strata; `None` where every unload is simulated
    /// or there are too few to tell.
    pub strata_error: Option<f64>,
    /// Tolerance of the phase: that of the mission, eased for short phases, whose errors average out.
    pub tolerance: f64,
}

impl Convergence {
    /// Whether the errors seen keep the tolerance.
    #[must_use]
    pub fn is_met(&self) -> bool {
        self.step_error + self.strata_error.unwrap_or(0.0) <= self.tolerance
    }
}

/// Simulates a mission, phase by phase, as finely as its tolerance asks.
#[must_use]
pub fn simulate(scenario: &Scenario, resolution: Resolution) -> (Vec<Stratum>, RawBasis, Vec<Convergence>) {
    let full = scenario.vehicle.mass_state(scenario.vehicle.tank.loaded_kg);
    let mut all = (Vec::new(), RawBasis::default(), Vec::new());
    for index in 0..scenario.mission.phases.len() {
        let simulator = Simulator::new(scenario, index);
        let measure = Measure::new(scenario, &simulator, &full);
        let (steps, step_error) = steps(&simulator, &measure);
        let (strata, spans, strata_error, grid) = divide(&simulator, &measure, resolution, steps);
        all.2.push(Convergence {
            steps: grid.steps,
            step_s: strata.first().map_or(0.0, |stratum| stratum.span.step_s),
            step_error,
            strata: strata.len(),
            strata_error,
            tolerance: measure.eased,
        });
        all.1.push(&simulator, spans);
        all.0.extend(strata);
    }
    all
}

/// Fewest steps of a cycle with which a refinement changes nothing that matters, and the error that is left.
fn steps(simulator: &Simulator<'_>, measure: &Measure) -> (usize, f64) {
    let tolerance = measure.tolerance * FOR_STEPS;
    let phase = simulator.phase();
    let third = phase.duration_s / 3.0;
    let at = |steps: usize| -> Vec<Probe> {
        let spans: Vec<_> = (0..3).map(|k| probe(phase, phase.start_s + third * f64::from(k), third, steps)).collect();
        simulator.run(&spans).iter().map(|span| measure.probe(span)).collect()
    };
    // How many windows of the probe make one of the phase.
    let windows = window_s(phase, Resolution::Default) / probe(phase, phase.start_s, third, FEWEST_STEPS).window_s();
    // Three quarters of the steps found, if these do as well: measured against the finest that was run, 9/55 of whose change
    // is the error left in it.
    let fewer = |steps: usize, finest: &[Probe]| {
        let fewer = steps / 4 * 3;
        let tried = (steps > FEWEST_STEPS).then(|| at(fewer))?;
        let error = tried.iter().zip(finest).map(|(a, b)| b.change_from(a, windows)).fold(0.0, f64::max) * 64.0 / 55.0;
        (error <= tolerance).then_some((fewer, error))
    };
    let mut steps = FEWEST_STEPS;
    let mut coarse = at(steps);
    loop {
        let fine = at(2 * steps);
        let change = coarse.iter().zip(&fine).map(|(a, b)| b.change_from(a, windows)).fold(0.0, f64::max);
        // Midpoint rule: the error of the coarse one is 4/3 of the change, that of the fine one a third.
        if change * 4.0 / 3.0 <= tolerance {
            return fewer(steps, &fine).unwrap_or((steps, change * 4.0 / 3.0));
        }
        if 2 * steps >= MOST_STEPS {
            return (2 * steps, change / 3.0);
        }
        steps *= 2;
        coarse = fine;
    }
}

type Divided = (Vec<Stratum>, Vec<SpanBasis>, Option<f64>, Grid);

/// Strata of a phase, doubled until the odd and the even ones tell the same.
fn divide(simulator: &Simulator<'_>, measure: &Measure, resolution: Resolution, steps: usize) -> Divided {
    let mut grid = Grid { steps, strata: 1 };
    loop {
        let strata = strata(simulator.index(), simulator.phase(), resolution, &grid);
        let spans: Vec<_> = strata.iter().map(|stratum| stratum.span.clone()).collect();
        let bases = simulator.run(&spans);
        if resolution == Resolution::Full {
            return (strata, bases, None, grid);
        }
        let error = measure.strata_error(&bases);
        let enough = error.is_none_or(|error| error <= measure.eased - measure.tolerance * FOR_STEPS);
        let finer = Grid { strata: 2 * grid.strata, ..grid };
        let count = |grid: &Grid| super::strata::strata(simulator.index(), simulator.phase(), resolution, grid).len();
        if count(&finer) == strata.len() {
            // Every unload has its span: nothing is sampled.
            return (strata, bases, None, grid);
        }
        if enough || finer.strata > MOST_STRATA {
            return (strata, bases, error, grid);
        }
        grid = finer;
    }
}

/// A short phase may be off by more than the mission: errors of phases are independent and average out, as the square root
/// of how many such phases there would be, up to this factor.
const MOST_EASED: f64 = 4.0;

/// Tolerance for the strata of a phase, as a share of what the wheels hold in it.
fn eased(scenario: &Scenario, phase_s: f64) -> f64 {
    scenario.settings.tolerance * (scenario.mission.duration_s() / phase_s).sqrt().clamp(1.0, MOST_EASED)
}

/// Values of the features in the nominal case.
struct Measure {
    values: Vec<f64>,
    /// Of the mission.
    tolerance: f64,
    /// Of the phase.
    eased: f64,
}

/// Nominal momentum of a probe, N·m·s.
struct Probe {
    secular: Vector3<f64>,
    cyclic: f64,
}

impl Probe {
    /// Change from a coarser one, as a share of what the wheels hold after `windows` windows.
    fn change_from(&self, coarse: &Self, windows: f64) -> f64 {
        let held = self.secular.norm() * windows + self.cyclic;
        let change = (self.secular - coarse.secular).norm() * windows + (self.cyclic - coarse.cyclic).abs();
        if held > 0.0 { change / held } else { 0.0 }
    }
}

impl Measure {
    fn new(scenario: &Scenario, simulator: &Simulator<'_>, mass: &MassState) -> Self {
        let nominal = scenario.parameters.nominal();
        let values = simulator.features().iter().map(|f| nominal_value(&f.feature, scenario, &nominal, mass)).collect();
        Self { values, tolerance: scenario.settings.tolerance, eased: eased(scenario, simulator.phase().duration_s) }
    }

    fn total(&self, parts: &[Vector3<f64>]) -> Vector3<f64> {
        parts.iter().zip(&self.values).map(|(part, value)| part * *value).sum()
    }

    fn probe(&self, span: &SpanBasis) -> Probe {
        let cyclic = span.excursions.iter().map(|parts| self.total(parts).norm()).fold(0.0, f64::max);
        Probe { secular: self.total(&span.secular_inertial), cyclic }
    }

    /// What half as many strata would be off by, as a share: half the difference between the mean momentum of a window over
    /// the odd and over the even strata, and the difference between the largest excursions. `None` with fewer than four.
    fn strata_error(&self, spans: &[SpanBasis]) -> Option<f64> {
        if spans.len() < 4 {
            return None;
        }
        let mean =
            |span: &SpanBasis| span.windows.iter().map(|parts| self.total(parts).norm()).sum::<f64>() / span.windows.len().max(1) as f64;
        let each: Vec<f64> = spans.iter().map(mean).collect();
        // Trapezia of neighbours cancel a trend between odd and even ones.
        let differences = each.windows(3).map(|three| f64::midpoint(three[0], three[2]) - three[1]).enumerate();
        let alternating: f64 = differences.map(|(k, difference)| if k % 2 == 0 { difference } else { -difference }).sum();
        let secular = each.iter().sum::<f64>() / each.len() as f64;
        let largest = |first: usize| spans.iter().skip(first).step_by(2).map(|span| self.probe(span).cyclic).fold(0.0, f64::max);
        let (odd, even) = (largest(0), largest(1));
        let held = secular + odd.max(even);
        let error = (alternating / 2.0).abs() / (each.len() - 2) as f64 + (odd - even).abs();
        (held > 0.0).then(|| error / held)
    }
}
