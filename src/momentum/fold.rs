//! Folding what is certain into the basis, so that only uncertain quantities remain as features.

use std::collections::BTreeMap;

use nalgebra::{DMatrix, Vector3};

use super::nominal::nominal_value;
use super::{RawBasis, SpanBasis, Stratum};
use crate::disturbance::{Factor, Feature};
use crate::mission::{Phase, Scenario, UnloadPolicy};
use crate::uncertain::{Draw, ParameterId};
use crate::vehicle::{INERTIA_ELEMENTS, MassState};

/// One uncertain factor of a feature of the folded basis.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum PlanFactor {
    /// A parameter as it is.
    Value(ParameterId),
    /// A parameter less its nominal value.
    Deviation(ParameterId),
    /// Weight of a level of solar activity.
    Activity(usize),
}

/// Propellant on board over the nominal mission: points in order of time, straight lines between.
#[derive(Debug, Clone, PartialEq)]
pub struct MassHistory(Vec<(f64, f64)>);

impl MassHistory {
    /// The same amount all the time, kg.
    #[must_use]
    pub fn constant(propellant_kg: f64) -> Self {
        Self(vec![(0.0, propellant_kg)])
    }

    /// Time after the start of the mission, s, and propellant on board, kg; rising times, at least one.
    #[must_use]
    pub fn new(points: Vec<(f64, f64)>) -> Self {
        Self(points)
    }

    /// Propellant on board at a time, kg.
    #[must_use]
    pub fn at(&self, time_s: f64) -> f64 {
        let after = self.0.partition_point(|(time, _)| *time < time_s);
        match (after.checked_sub(1).and_then(|k| self.0.get(k)), self.0.get(after)) {
            (Some((t0, m0)), Some((t1, m1))) if t1 > t0 => m0 + (m1 - m0) * (time_s - t0) / (t1 - t0),
            (_, Some((_, m))) | (Some((_, m)), None) => *m,
            (None, None) => 0.0,
        }
    }
}

/// The basis in uncertain features alone.
#[derive(Debug, Clone)]
pub struct FoldedBasis {
    /// The features, sorted; the first is the empty product, 1.
    pub features: Vec<Vec<PlanFactor>>,
    /// Columns × features: momentum, N·m·s, per unit of the feature. Three rows a vector, in the order
    /// of `offsets`.
    pub matrix: DMatrix<f64>,
    /// For each stratum, the row of its first window and of its first excursion; excursions are kept
    /// only where the fill of the wheels decides when to unload.
    pub offsets: Vec<(usize, usize)>,
    /// Nominal mass properties in each stratum.
    pub masses: Vec<MassState>,
}

/// Values of the features of a [`FoldedBasis`] in draws.
#[derive(Debug, Clone, Copy)]
pub struct FeatureValues<'a> {
    scenario: &'a Scenario,
    nominal: &'a Draw,
}

impl<'a> FeatureValues<'a> {
    /// For the parameters of a scenario, whose nominal draw is `nominal`.
    #[must_use]
    pub fn new(scenario: &'a Scenario, nominal: &'a Draw) -> Self {
        Self { scenario, nominal }
    }

    /// Value of one feature in a draw.
    #[must_use]
    pub fn of(&self, feature: &[PlanFactor], draw: &Draw) -> f64 {
        let activity = &self.scenario.mission.activity;
        let factor = |factor: &PlanFactor| match factor {
            PlanFactor::Value(id) => draw.value(*id),
            PlanFactor::Deviation(id) => draw.value(*id) - self.nominal.value(*id),
            PlanFactor::Activity(level) => activity.weight(*level, activity.chance().in_draw(draw)),
        };
        feature.iter().map(factor).product()
    }
}

/// A number times uncertain factors.
type Term = (f64, Vec<PlanFactor>);

/// Writes a feature as a sum of products of uncertain factors, with the mass properties of a stratum.
fn expand(feature: &Feature, scenario: &Scenario, phase: &Phase, mass: &MassState) -> Vec<Term> {
    let dry = &scenario.vehicle.dry;
    let mut terms: Vec<Term> = vec![(1.0, Vec::new())];
    for factor in feature.factors() {
        let options: Vec<(f64, Option<PlanFactor>)> = match *factor {
            Factor::Parameter(id) => vec![(1.0, Some(PlanFactor::Value(id)))],
            Factor::Deviation(id) => vec![(1.0, Some(PlanFactor::Deviation(id)))],
            Factor::Activity(level) => vec![(1.0, Some(PlanFactor::Activity(level)))],
            Factor::CentreOfMass(axis) => {
                // Propellant holds the whole centre back: a shift of the dry one counts by its share of the mass.
                let share = dry.mass_kg.nominal() / mass.mass_kg;
                let deviation = dry.centre_of_mass_m[axis].parameter().map(|id| (share, Some(PlanFactor::Deviation(id))));
                [Some((mass.centre_of_mass_m[axis], None)), deviation].into_iter().flatten().collect()
            }
            Factor::Inertia(element) => {
                let deviation = dry.inertia_kg_m2[element].parameter().map(|id| (1.0, Some(PlanFactor::Deviation(id))));
                [Some((mass.inertia_kg_m2[INERTIA_ELEMENTS[element]], None)), deviation].into_iter().flatten().collect()
            }
            Factor::Bias(axis) => {
                phase.attitude.bias_rad[axis].parameter().map(|id| (1.0, Some(PlanFactor::Deviation(id)))).into_iter().collect()
            }
        };
        terms = terms
            .iter()
            .flat_map(|(scale, factors)| {
                options.iter().map(move |(by, more)| (scale * by, factors.iter().copied().chain(*more).collect::<Vec<_>>()))
            })
            .collect();
    }
    for (_, factors) in &mut terms {
        factors.sort_unstable();
    }
    terms
}

impl FoldedBasis {
    /// Folds the raw basis of a scenario along a mass history.
    #[must_use]
    pub fn new(scenario: &Scenario, strata: &[Stratum], raw: &RawBasis, history: &MassHistory) -> Self {
        let masses: Vec<MassState> =
            strata.iter().map(|stratum| scenario.vehicle.mass_state(history.at(stratum.start_s + stratum.duration_s / 2.0))).collect();
        let (offsets, rows) = layout(scenario, strata, raw);
        // The factors are those of the phase; only the numbers before them differ from stratum to stratum.
        let terms_of = |stratum: &Stratum, mass: &MassState| -> Vec<Vec<Term>> {
            let phase = &scenario.mission.phases[stratum.phase];
            raw.features[stratum.phase].iter().map(|f| expand(&f.feature, scenario, phase, mass)).collect()
        };
        let firsts: Vec<Option<usize>> =
            (0..scenario.mission.phases.len()).map(|phase| strata.iter().position(|stratum| stratum.phase == phase)).collect();
        let models: Vec<Vec<Vec<Term>>> =
            firsts.iter().map(|first| first.map_or_else(Vec::new, |k| terms_of(&strata[k], &masses[k]))).collect();
        let mut index: BTreeMap<&[PlanFactor], usize> = BTreeMap::new();
        index.insert(&[], 0);
        for (_, factors) in models.iter().flatten().flatten() {
            index.insert(factors, 0);
        }
        for (place, column) in index.values_mut().enumerate() {
            *column = place;
        }
        let columns: Vec<Vec<Vec<usize>>> = models
            .iter()
            .map(|model| model.iter().map(|terms| terms.iter().map(|(_, factors)| index[factors.as_slice()]).collect()).collect())
            .collect();
        let nominal = NominalValues { scenario, raw, draw: scenario.parameters.nominal() };
        let mut matrix = DMatrix::zeros(rows, index.len());
        for (k, (span, stratum)) in raw.spans.iter().zip(strata).enumerate() {
            let (terms, columns) = (terms_of(stratum, &masses[k]), &columns[stratum.phase]);
            let listed = |vectors: &[Vec<Vector3<f64>>], first: usize, matrix: &mut DMatrix<f64>| {
                for (k, vectors) in vectors.iter().enumerate() {
                    add(vectors, &terms, columns, first + 3 * k, matrix);
                }
            };
            listed(&span.windows, offsets[k].0, &mut matrix);
            if keeps_excursions(scenario, stratum) {
                listed(&largest(span, &nominal.values(stratum, &masses[k])), offsets[k].1, &mut matrix);
            }
        }
        let features = index.keys().map(|key| key.to_vec()).collect();
        Self { features, matrix, offsets, masses }
    }
}

/// Excursions of a stratum that a draw is asked for: those that are largest in the nominal case. What fills the wheels in a
/// draw lies among them or beside one of them, and all 24 would make most of the matrix.
const EXCURSIONS: usize = 8;

/// Nominal values of features.
struct NominalValues<'a> {
    scenario: &'a Scenario,
    raw: &'a RawBasis,
    draw: Draw,
}

impl NominalValues<'_> {
    fn values(&self, stratum: &Stratum, mass: &MassState) -> Vec<f64> {
        let features = self.raw.features[stratum.phase].iter();
        features.map(|f| nominal_value(&f.feature, self.scenario, &self.draw, mass)).collect()
    }
}

/// The excursions that are largest in the nominal case, in order of time.
fn largest(span: &SpanBasis, values: &[f64]) -> Vec<Vec<Vector3<f64>>> {
    let size = |parts: &[Vector3<f64>]| parts.iter().zip(values).map(|(part, value)| part * *value).sum::<Vector3<f64>>().norm();
    let sizes: Vec<f64> = span.excursions.iter().map(|parts| size(parts)).collect();
    let mut order: Vec<usize> = (0..sizes.len()).collect();
    order.sort_by(|a, b| sizes[*b].total_cmp(&sizes[*a]).then(a.cmp(b)));
    order.truncate(EXCURSIONS);
    order.sort_unstable();
    order.into_iter().map(|k| span.excursions[k].clone()).collect()
}

/// Whether the momentum within an orbit decides when to unload.
fn keeps_excursions(scenario: &Scenario, stratum: &Stratum) -> bool {
    matches!(scenario.mission.phases[stratum.phase].unload, UnloadPolicy::AtFill(_))
}

/// Rows at which windows and excursions of each stratum begin, and how many rows there are.
fn layout(scenario: &Scenario, strata: &[Stratum], raw: &RawBasis) -> (Vec<(usize, usize)>, usize) {
    let mut rows = 0;
    let mut offsets = Vec::with_capacity(strata.len());
    for (span, stratum) in raw.spans.iter().zip(strata) {
        let windows = rows;
        rows += 3 * span.windows.len();
        offsets.push((windows, rows));
        rows += if keeps_excursions(scenario, stratum) { 3 * span.excursions.len().min(EXCURSIONS) } else { 0 };
    }
    (offsets, rows)
}

fn add(vectors: &[Vector3<f64>], terms: &[Vec<Term>], columns: &[Vec<usize>], row: usize, matrix: &mut DMatrix<f64>) {
    for ((vector, terms), columns) in vectors.iter().zip(terms).zip(columns) {
        for ((scale, _), column) in terms.iter().zip(columns) {
            let mut place = matrix.fixed_view_mut::<3, 1>(row, *column);
            place += vector * *scale;
        }
    }
}
