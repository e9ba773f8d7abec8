//! Integrating the torque of every feature along one span, in the inertial frame.

use nalgebra::{Rotation3, Vector3};
use rayon::prelude::*;

use super::{Span, Stratum};
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
#[derive(Debug, Clone)]
pub struct RawBasis {
    /// Names of the sources.
    pub sources: Vec<&'static str>,
    /// Phase by phase, the features that the vectors of its spans belong to.
    pub features: Vec<Vec<SourceFeature>>,
    /// One for each stratum.
    pub spans: Vec<SpanBasis>,
}

/// Simulates the span of every stratum. Threads share the spans; the result does not depend on them.
#[must_use]
pub fn simulate_all(scenario: &Scenario, strata: &[Stratum]) -> RawBasis {
    let sources = sources(scenario);
    let phases = &scenario.mission.phases;
    let features: Vec<_> = phases.iter().map(|phase| features_of(&sources, phase)).collect();
    let spans = strata.par_iter().map(|stratum| simulate(scenario, &sources, stratum)).collect();
    RawBasis { sources: sources.iter().map(|source| source.name()).collect(), features, spans }
}

/// The features of all sources, then each once more for every uncertain component of the bias.
fn features_of(sources: &[Box<dyn Source>], phase: &Phase) -> Vec<SourceFeature> {
    let own: Vec<SourceFeature> = sources
        .iter()
        .enumerate()
        .flat_map(|(source, s)| s.features().into_iter().map(move |feature| SourceFeature { source, feature }))
        .collect();
    let mut all = own.clone();
    for axis in uncertain_bias(phase) {
        all.extend(own.iter().map(|f| SourceFeature { source: f.source, feature: f.feature.times(Factor::Bias(axis)) }));
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
    lengths: Vec<usize>,
    bias_axes: Vec<usize>,
}

impl Evaluator<'_> {
    /// Torques in the nominal body frame, with those per unit of bias behind them.
    fn fill(&self, surroundings: &Surroundings, body_from_inertial: &Rotation3<f64>, out: &mut [Vector3<f64>]) {
        let own: usize = self.lengths.iter().sum();
        let (nominal, mut derivatives) = out.split_at_mut(own);
        let body = surroundings.turned(body_from_inertial);
        self.fill_at(&body, nominal);
        let mut scratch = vec![Vector3::zeros(); own];
        for axis in &self.bias_axes {
            let (places, rest) = derivatives.split_at_mut(own);
            derivatives = rest;
            places.fill(Vector3::zeros());
            for sign in [1.0, -1.0] {
                let mut angles = Vector3::zeros();
                angles[*axis] = sign * BIAS_STEP_RAD;
                let turn = Rotation3::new(angles);
                self.fill_at(&body.turned(&turn.inverse()), &mut scratch);
                for (place, torque) in places.iter_mut().zip(&scratch) {
                    *place += turn * torque * (0.5 * sign / BIAS_STEP_RAD);
                }
            }
        }
    }

    fn fill_at(&self, body: &Surroundings, mut out: &mut [Vector3<f64>]) {
        for (source, length) in self.sources.iter().zip(&self.lengths) {
            let (places, rest) = out.split_at_mut(*length);
            source.torques(body, places);
            out = rest;
        }
    }
}

/// Momentum and attitude at some step.
struct Mark {
    momentum: Vec<Vector3<f64>>,
    body_from_inertial: Rotation3<f64>,
}

fn simulate(scenario: &Scenario, sources: &[Box<dyn Source>], stratum: &Stratum) -> SpanBasis {
    let span = &stratum.span;
    let phase = &scenario.mission.phases[stratum.phase];
    let evaluator =
        Evaluator { sources, lengths: sources.iter().map(|source| source.features().len()).collect(), bias_axes: uncertain_bias(phase) };
    let count = evaluator.lengths.iter().sum::<usize>() * (1 + evaluator.bias_axes.len());
    let start = scenario.mission.start.plus_seconds(span.start_s);
    let observer = Observer::new(&phase.orbit, scenario.mission.activity.levels(), start.plus_seconds(span.length_s() / 2.0));
    let mut torque = vec![Vector3::zeros(); count];
    let mut momentum = vec![Vector3::zeros(); count];
    let mut marks = Marks::new(span);
    let attitude_at = |step: usize| {
        let state = phase.orbit.state(start.plus_seconds(span.step_s * step as f64));
        phase.attitude.inertial_from_body(&state).inverse()
    };
    marks.note(0, &momentum, None, attitude_at);
    for step in 0..span.steps() {
        let middle = start.plus_seconds(span.step_s * (step as f64 + 0.5));
        let (state, surroundings) = observer.step(middle, span.step_s);
        let inertial_from_body = phase.attitude.inertial_from_body(&state);
        evaluator.fill(&surroundings, &inertial_from_body.inverse(), &mut torque);
        for (sum, part) in momentum.iter_mut().zip(&torque) {
            *sum += inertial_from_body * part * span.step_s;
        }
        marks.note(step + 1, &momentum, Some(&torque), attitude_at);
    }
    marks.finish(span)
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
        if let Some((_, orbit)) = checkpoints.iter().find(|(step, _)| *step == span.orbit_steps) {
            for (step, mark) in &checkpoints {
                let share = *step as f64 / span.orbit_steps as f64;
                let parts = mark.momentum.iter().zip(&orbit.momentum);
                basis.excursions.push(parts.map(|(h, whole)| mark.body_from_inertial * (h - whole * share)).collect());
            }
        }
        basis
    }
}
