//! Integrating the torque of every feature along one span, in the inertial frame.

use std::f64::consts::TAU;

use nalgebra::{Rotation3, Vector3};
use rayon::prelude::*;

use super::Span;
use crate::disturbance::{Factor, Feature, Observer, Source, Surroundings, sources};
use crate::mission::{Phase, Scenario};

/// Turn of the body with which the effect of a pointing bias is taken, rad: large against rounding,
/// small against the angles over which light and air change.
const BIAS_STEP_RAD: f64 = 1e-3;

/// A feature and the source it belongs to.
#[derive(Debug, Clone, PartialEq)]
pub struct SourceFeature {
    /// Index of the source.
    pub source: usize,
    /// What multiplies the momentum of this entry.
    pub feature: Feature,
}

/// Momentum of every feature over one span. Vectors in N·m·s per unit of the feature.
#[derive(Debug, Clone, Default)]
pub struct SpanBasis {
    /// Window by window, the momentum gathered in it, in the body frame at its end.
    pub windows: Vec<Vec<Vector3<f64>>>,
    /// Momentum gathered in a window, inertial frame, mean over the windows.
    pub secular_inertial: Vec<Vector3<f64>>,
    /// At each checkpoint of the first orbit, the momentum less the orbit's steady gain, body frame.
    pub excursions: Vec<Vec<Vector3<f64>>>,
    /// Torque at each checkpoint, body frame, N·m.
    pub torques: Vec<Vec<Vector3<f64>>>,
}

/// The momentum basis of a whole mission.
#[derive(Debug, Clone, Default)]
pub struct RawBasis {
    /// Names of the sources.
    pub sources: Vec<&'static str>,
    /// Phase by phase, the features that the vectors of its spans belong to.
    pub features: Vec<Vec<SourceFeature>>,
    /// One for each stratum.
    pub spans: Vec<SpanBasis>,
}

impl RawBasis {
    /// Adds a phase.
    pub(super) fn push(&mut self, simulator: &Simulator<'_>, spans: Vec<SpanBasis>) {
        self.sources = simulator.sources.iter().map(|source| source.name()).collect();
        self.features.push(simulator.features.clone());
        self.spans.extend(spans);
    }
}

/// Integrates the torques of one phase.
pub(super) struct Simulator<'a> {
    scenario: &'a Scenario,
    index: usize,
    phase: &'a Phase,
    sources: Vec<Box<dyn Source>>,
    features: Vec<SourceFeature>,
    with_field: bool,
}

/// Phases of a spin over which the torque is averaged where it turns too fast to be followed: a facet that turns meets the
/// Sun like |cos|, whose mean over 12 phases is within 2 % of that over all, over 24 within 0.3 %.
const SPIN_PHASES: u32 = 24;
/// Largest turn in a step that is followed, rad.
const FOLLOWED_RAD: f64 = 0.3;

impl<'a> Simulator<'a> {
    pub(super) fn new(scenario: &'a Scenario, index: usize) -> Self {
        let phase = &scenario.mission.phases[index];
        let sources = sources(scenario, phase);
        let features = features_of(&sources, phase);
        let dipole = &scenario.vehicle.residual_dipole_a_m2;
        let with_field = dipole.iter().any(|m| m.parameter().is_some() || m.nominal().abs() > 0.0);
        Self { scenario, index, phase, sources, features, with_field }
    }

    pub(super) fn index(&self) -> usize {
        self.index
    }

    pub(super) fn phase(&self) -> &'a Phase {
        self.phase
    }

    pub(super) fn features(&self) -> &[SourceFeature] {
        &self.features
    }

    /// Simulates spans. Threads share them; the result does not depend on them.
    pub(super) fn run(&self, spans: &[Span]) -> Vec<SpanBasis> {
        spans.par_iter().map(|span| self.simulate(span)).collect()
    }

    fn simulate(&self, span: &Span) -> SpanBasis {
        let (mission, phase) = (&self.scenario.mission, self.phase);
        let evaluator = Evaluator::new(&self.sources, uncertain_bias(phase));
        let at = |time_s: f64| mission.start.plus_seconds(time_s);
        let observer = Observer::new(mission, phase, at(span.start_s + span.length_s() / 2.0), self.with_field);
        let mut torque = vec![Vector3::zeros(); self.features.len()];
        let mut momentum = vec![Vector3::zeros(); self.features.len()];
        let mut marks = Marks::new(span);
        let attitude_at = |step: usize| {
            let moment = phase.moment(mission.start, span.start_s + span.step_s * step as f64);
            phase.attitude.inertial_from_body(&moment, &moment.sky()).inverse()
        };
        marks.note(0, &momentum, None, attitude_at);
        for step in 0..span.steps() {
            let (from_s, to_s) = (span.start_s + span.step_s * step as f64, span.start_s + span.step_s * (step + 1) as f64);
            for (from_s, to_s) in self.pieces(from_s, to_s) {
                self.add(&evaluator, &observer, from_s, to_s, &mut torque, &mut momentum);
            }
            marks.note(step + 1, &momentum, span.keeps_torque.then_some(torque.as_slice()), attitude_at);
        }
        marks.finish(span)
    }

    /// A step cut where the attitude jumps; times after the start of the mission, s.
    fn pieces(&self, from_s: f64, to_s: f64) -> Vec<(f64, f64)> {
        // A jump this near to an end of the step is that end.
        let rounding = 1e-6 * (to_s - from_s);
        let mut pieces = Vec::with_capacity(1);
        let mut from = from_s;
        while let Some(jump) = self.phase.attitude.law.next_jump_s(from - self.phase.start_s + rounding) {
            let at = self.phase.start_s + jump;
            if at >= to_s - rounding || at <= from {
                break;
            }
            pieces.push((from, at));
            from = at;
        }
        pieces.push((from, to_s));
        pieces
    }

    /// Adds the angular impulse of every feature over a piece of a step to `momentum`; leaves its torque in `torque`.
    fn add(
        &self,
        evaluator: &Evaluator<'_>,
        observer: &Observer<'_>,
        from_s: f64,
        to_s: f64,
        torque: &mut [Vector3<f64>],
        momentum: &mut [Vector3<f64>],
    ) {
        let (time_s, step_s) = (f64::midpoint(from_s, to_s), to_s - from_s);
        let (start, attitude) = (self.scenario.mission.start, &self.phase.attitude);
        let moment = self.phase.moment(start, time_s);
        let sky = moment.sky();
        let surroundings = observer.step(start.plus_seconds(time_s), step_s, &sky);
        let inertial_from_body = attitude.inertial_from_body(&moment, &sky);
        let spin = attitude.law.spin_at(moment.time_s).filter(|(_, rate)| (rate * step_s).abs() > FOLLOWED_RAD);
        let turns = spin.map_or(1, |_| SPIN_PHASES);
        for turn in 0..turns {
            let angle = TAU * f64::from(turn) / f64::from(turns);
            let turned = spin.map_or(inertial_from_body, |(axis, _)| inertial_from_body * Rotation3::from_axis_angle(&axis, angle));
            evaluator.fill(&surroundings, &turned.inverse(), torque);
            for (sum, part) in momentum.iter_mut().zip(torque.iter()) {
                *sum += turned * part * (step_s / f64::from(turns));
            }
        }
    }
}

/// The features of all sources, then those to which a pointing bias matters once more for every uncertain component of it.
fn features_of(sources: &[Box<dyn Source>], phase: &Phase) -> Vec<SourceFeature> {
    let of = |first_order: bool| -> Vec<SourceFeature> {
        let each = sources.iter().enumerate().flat_map(|(source, s)| {
            let count = if first_order { s.first_order() } else { usize::MAX };
            s.features().into_iter().take(count).map(move |feature| SourceFeature { source, feature })
        });
        each.collect()
    };
    let mut all = of(false);
    let leading = of(true);
    for axis in uncertain_bias(phase) {
        all.extend(leading.iter().map(|f| SourceFeature { source: f.source, feature: f.feature.times(Factor::Bias(axis)) }));
    }
    all
}

fn uncertain_bias(phase: &Phase) -> Vec<usize> {
    let components = phase.attitude.bias_rad.iter().enumerate();
    components.filter(|(_, bias)| bias.parameter().is_some()).map(|(axis, _)| axis).collect()
}

/// Evaluates all features at one instant.
struct Evaluator<'a> {
    sources: &'a [Box<dyn Source>],
    /// Features of each source, and how many of them a pointing bias matters to.
    lengths: Vec<(usize, usize)>,
    bias_axes: Vec<usize>,
}

impl<'a> Evaluator<'a> {
    fn new(sources: &'a [Box<dyn Source>], bias_axes: Vec<usize>) -> Self {
        Self { sources, lengths: sources.iter().map(|source| (source.features().len(), source.first_order())).collect(), bias_axes }
    }

    /// Torques in the nominal body frame, with those per unit of bias behind them.
    fn fill(&self, surroundings: &Surroundings, body_from_inertial: &Rotation3<f64>, out: &mut [Vector3<f64>]) {
        let own: usize = self.lengths.iter().map(|(all, _)| all).sum();
        let (nominal, mut derivatives) = out.split_at_mut(own);
        let mut body = surroundings.turned(body_from_inertial);
        let mut rest = &mut *nominal;
        for (source, (all, _)) in self.sources.iter().zip(&self.lengths) {
            let (places, others) = rest.split_at_mut(*all);
            source.torques(&body, places);
            rest = others;
        }
        // No source that a bias matters to looks at the patches.
        body.patches.clear();
        let mut scratch = vec![Vector3::zeros(); own];
        for axis in &self.bias_axes {
            let leading: usize = self.lengths.iter().map(|(_, leading)| leading).sum();
            let (places, rest) = derivatives.split_at_mut(leading);
            derivatives = rest;
            places.fill(Vector3::zeros());
            for sign in [1.0, -1.0] {
                let mut angles = Vector3::zeros();
                angles[*axis] = sign * BIAS_STEP_RAD;
                let turn = Rotation3::new(angles);
                self.add_leading(&body.turned(&turn.inverse()), &turn, 0.5 * sign / BIAS_STEP_RAD, &mut scratch, places);
            }
        }
    }

    fn add_leading(
        &self,
        body: &Surroundings,
        turn: &Rotation3<f64>,
        scale: f64,
        scratch: &mut [Vector3<f64>],
        mut places: &mut [Vector3<f64>],
    ) {
        for (source, (all, leading)) in self.sources.iter().zip(&self.lengths) {
            if *leading == 0 {
                continue;
            }
            let own = &mut scratch[..*all];
            source.torques(body, own);
            let (first, rest) = places.split_at_mut(*leading);
            for (place, torque) in first.iter_mut().zip(own.iter()) {
                *place += turn * torque * scale;
            }
            places = rest;
        }
    }
}

/// Momentum and attitude at some step.
struct Mark {
    momentum: Vec<Vector3<f64>>,
    body_from_inertial: Rotation3<f64>,
}

/// What is kept of a span while it is integrated.
struct Marks {
    starts: Vec<(usize, Option<Mark>)>,
    ends: Vec<(usize, Option<Mark>)>,
    checkpoints: Vec<(usize, Option<Mark>)>,
    torques: Vec<Vec<Vector3<f64>>>,
}

impl Marks {
    fn new(span: &Span) -> Self {
        let at = |steps: &mut dyn Iterator<Item = usize>| steps.map(|step| (step, None)).collect();
        Self {
            starts: at(&mut span.windows.iter().copied()),
            ends: at(&mut span.windows.iter().map(|first| first + span.window_steps)),
            checkpoints: at(&mut span.checkpoints.iter().copied()),
            torques: Vec::new(),
        }
    }

    fn note(
        &mut self,
        step: usize,
        momentum: &[Vector3<f64>],
        torque: Option<&[Vector3<f64>]>,
        attitude: impl Fn(usize) -> Rotation3<f64>,
    ) {
        let wanted = |list: &[(usize, Option<Mark>)]| list.iter().any(|(at, _)| *at == step);
        if let (true, Some(torque)) = (wanted(&self.checkpoints), torque) {
            self.torques.push(torque.to_vec());
        }
        for list in [&mut self.starts, &mut self.ends, &mut self.checkpoints] {
            for (_, mark) in list.iter_mut().filter(|(at, _)| *at == step) {
                *mark = Some(Mark { momentum: momentum.to_vec(), body_from_inertial: attitude(step) });
            }
        }
    }

    fn finish(self, span: &Span) -> SpanBasis {
        let pairs: Vec<(Mark, Mark)> = self.starts.into_iter().zip(self.ends).filter_map(|((_, a), (_, b))| Some((a?, b?))).collect();
        let gain =
            |a: &Mark, b: &Mark| -> Vec<Vector3<f64>> { b.momentum.iter().zip(&a.momentum).map(|(end, start)| end - start).collect() };
        let mut basis = SpanBasis { torques: self.torques, ..SpanBasis::default() };
        for (start, end) in &pairs {
            let gained = gain(start, end);
            if basis.secular_inertial.is_empty() {
                basis.secular_inertial = vec![Vector3::zeros(); gained.len()];
            }
            for (sum, part) in basis.secular_inertial.iter_mut().zip(&gained) {
                *sum += part / pairs.len() as f64;
            }
            basis.windows.push(gained.iter().map(|part| end.body_from_inertial * part).collect());
        }
        let checkpoints: Vec<(usize, Mark)> = self.checkpoints.into_iter().filter_map(|(step, mark)| Some((step, mark?))).collect();
        if let (Some((begins, start)), Some((_, end))) = (checkpoints.first(), checkpoints.last()) {
            let whole = gain(start, end);
            for (step, mark) in checkpoints.iter().skip(1) {
                let share = (step - begins) as f64 / span.cycle_steps as f64;
                let parts = gain(start, mark);
                basis.excursions.push(parts.iter().zip(&whole).map(|(h, whole)| mark.body_from_inertial * (h - whole * share)).collect());
            }
        }
        basis
    }
}
