//! Features times basis for many lifetimes side by side, fused with whatever takes the momentum.
//!
//! The plain way is one matrix product into a matrix of the momentum of all windows of all lifetimes, which then goes to
//! memory and back. Here the momentum of one window stays in registers, or at most in the nearest cache, until it is used.

#![expect(clippy::inline_always, reason = "without it the code would not be compiled for the instruction set chosen")]

use pulp::{Arch, Simd, WithSimd};

use super::{FoldedBasis, Stratum};
use crate::uncertain::{LANES, Lane};

/// The basis by windows: for each vector three numbers a feature, without the features that a phase does not know.
#[derive(Debug, Clone, Default)]
pub struct Panels {
    phases: Vec<Panel>,
    /// Phase of each stratum, and its first vector there.
    places: Vec<(usize, usize)>,
}

#[derive(Debug, Clone, Default)]
struct Panel {
    /// Columns of the basis.
    features: Vec<usize>,
    rows: Vec<[f64; 3]>,
}

impl Panels {
    /// The basis of a plan by windows.
    #[must_use]
    pub fn new(basis: &FoldedBasis, strata: &[Stratum], phases: usize) -> Self {
        let vectors = |stratum: usize| {
            let first = basis.offsets[stratum].0;
            let end = basis.offsets.get(stratum + 1).map_or(basis.matrix.nrows(), |next| next.0);
            (first..end).step_by(3)
        };
        let mut panels = Self { phases: vec![Panel::default(); phases], places: Vec::with_capacity(strata.len()) };
        for (phase, panel) in panels.phases.iter_mut().enumerate() {
            let own: Vec<usize> = (0..strata.len()).filter(|k| strata[*k].phase == phase).flat_map(vectors).collect();
            let known = |column: &usize| own.iter().any(|row| basis.matrix.fixed_view::<3, 1>(*row, *column).iter().any(|x| x.abs() > 0.0));
            panel.features = (0..basis.features.len()).filter(known).collect();
            let vector = |(row, column): (usize, &usize)| [0, 1, 2].map(|axis| basis.matrix[(row + axis, *column)]);
            panel.rows = own.iter().flat_map(|row| panel.features.iter().map(move |column| vector((*row, column)))).collect();
        }
        let mut next = vec![0; phases];
        for (k, stratum) in strata.iter().enumerate() {
            panels.places.push((stratum.phase, next[stratum.phase]));
            next[stratum.phase] += vectors(k).len();
        }
        panels
    }

    /// Columns of the basis that a phase knows.
    #[must_use]
    pub fn features(&self, phase: usize) -> &[usize] {
        &self.phases[phase].features
    }

    /// Momentum of the first `out.len()` vectors of a stratum, N·m·s, with the features of its phase in the order of
    /// [`Panels::features`].
    pub fn momentum(&self, stratum: usize, features: &[Lane], out: &mut [[Lane; 3]]) {
        let (phase, first) = self.places[stratum];
        let panel = &self.phases[phase];
        let width = panel.features.len();
        let rows = &panel.rows[first * width..(first + out.len()) * width];
        Arch::new().dispatch(Product { rows, width, features, out });
    }
}

struct Product<'a> {
    rows: &'a [[f64; 3]],
    width: usize,
    features: &'a [Lane],
    out: &'a mut [[Lane; 3]],
}

impl WithSimd for Product<'_> {
    type Output = ();

    #[inline(always)]
    fn with_simd<S: Simd>(self, simd: S) {
        if self.width == 0 {
            self.out.iter_mut().for_each(|vector| *vector = [[0.0; LANES]; 3]);
            return;
        }
        for (rows, out) in self.rows.chunks_exact(self.width).zip(self.out) {
            // Four vectors of three components are twelve sums under way: enough to hide the latency of a product, and
            // few enough for the registers of every machine.
            for group in (0..LANES / S::F64_LANES).step_by(GROUP) {
                let sums = product(simd, rows, self.features, group);
                for (lane, sums) in out.iter_mut().zip(sums) {
                    S::as_mut_simd_f64s(lane.as_mut_slice()).0[group..group + GROUP].copy_from_slice(&sums);
                }
            }
        }
    }
}

/// Vectors of lanes taken together.
const GROUP: usize = 4;

/// Sum over the features of one vector, for [`GROUP`] vectors of lanes.
#[inline(always)]
fn product<S: Simd>(simd: S, rows: &[[f64; 3]], features: &[Lane], group: usize) -> [[S::f64s; GROUP]; 3] {
    let mut sums = [[simd.splat_f64s(0.0); GROUP]; 3];
    for (row, feature) in rows.iter().zip(features) {
        let lanes = &S::as_simd_f64s(feature.as_slice()).0[group..group + GROUP];
        for (row, sums) in row.iter().zip(&mut sums) {
            let row = simd.splat_f64s(*row);
            for (sum, lane) in sums.iter_mut().zip(lanes) {
                *sum = simd.mul_add_f64s(row, *lane, *sum);
            }
        }
    }
    sums
}

/// Least propellant of all unloads of a mission, kg, in each lane: for every window the sum over the features, its largest
/// product with `lambdas` (kg/(N·m·s)) and the sum of those, without a number going to memory in between.
///
/// `rows` has one vector a feature (`features.len()` of them) for each window.
#[must_use]
pub fn least_propellant(arch: Arch, rows: &[[f64; 3]], features: &[Lane], lambdas: &[[f64; 3]]) -> Lane {
    let mut total = [0.0; LANES];
    arch.dispatch(Fused { rows, features, lambdas, total: &mut total });
    total
}

struct Fused<'a> {
    rows: &'a [[f64; 3]],
    features: &'a [Lane],
    lambdas: &'a [[f64; 3]],
    total: &'a mut Lane,
}

impl WithSimd for Fused<'_> {
    type Output = ();

    #[inline(always)]
    fn with_simd<S: Simd>(self, simd: S) {
        if self.features.is_empty() {
            return;
        }
        for group in (0..LANES / S::F64_LANES).step_by(GROUP) {
            let mut total = [simd.splat_f64s(0.0); GROUP];
            for rows in self.rows.chunks_exact(self.features.len()) {
                let [x, y, z] = product(simd, rows, self.features, group);
                let mut best = [simd.splat_f64s(0.0); GROUP];
                for [a, b, c] in self.lambdas {
                    let (a, b, c) = (simd.splat_f64s(*a), simd.splat_f64s(*b), simd.splat_f64s(*c));
                    for k in 0..GROUP {
                        let price = simd.mul_add_f64s(c, z[k], simd.mul_add_f64s(b, y[k], simd.mul_f64s(a, x[k])));
                        best[k] = simd.max_f64s(price, best[k]);
                    }
                }
                for (total, best) in total.iter_mut().zip(best) {
                    *total = simd.add_f64s(*total, best);
                }
            }
            S::as_mut_simd_f64s(self.total.as_mut_slice()).0[group..group + GROUP].copy_from_slice(&total);
        }
    }
}
