//! Quantities that chance does not move alone: correlation, and draws made anew for each phase or event.

use nalgebra::{Cholesky, DMatrix, DVector};
use statrs::distribution::{ContinuousCDF, Normal};

/// How often a quantity is drawn.
#[derive(Debug, Clone, Copy, Default, PartialEq, Eq)]
pub enum Anew {
    /// Once a lifetime.
    #[default]
    Lifetime,
    /// For each phase.
    Phase,
    /// Each time that its event happens.
    Event,
}

/// Quantities whose ranks are correlated: a Gaussian copula (A. Sklar 1959; R. B. Nelsen, An Introduction to Copulas, 2006).
///
/// Each keeps its own distribution. The matrix is the correlation of the normal scores; for normal quantities it is their
/// own correlation.
#[derive(Debug, Clone, PartialEq)]
pub struct Correlated {
    members: Vec<usize>,
    /// Lower Cholesky factor of the matrix.
    factor: DMatrix<f64>,
}

impl Correlated {
    /// The quantities at these places with a correlation matrix, symmetric with ones on its diagonal.
    ///
    /// `None` if the matrix is not positive definite, or not of the size of `members`.
    #[must_use]
    pub fn new(members: Vec<usize>, matrix: DMatrix<f64>) -> Option<Self> {
        if matrix.nrows() != members.len() || matrix.ncols() != members.len() {
            return None;
        }
        let factor = Cholesky::new(matrix)?.l();
        // A pivot of rounding size is a matrix that is only semi-definite.
        factor.diagonal().iter().all(|pivot| *pivot > 1e-7).then_some(Self { members, factor })
    }

    /// Places of the quantities.
    #[must_use]
    pub fn members(&self) -> &[usize] {
        &self.members
    }

    /// Turns independent uniforms into correlated ones, in place.
    pub(super) fn apply(&self, uniforms: &mut [f64]) {
        let normal = Normal::standard();
        let known: Option<Vec<f64>> = self.members.iter().map(|k| uniforms.get(*k).copied()).collect();
        let Some(known) = known else { return };
        let scores = DVector::from_iterator(known.len(), known.into_iter().map(|u| normal.inverse_cdf(u)));
        for (member, score) in self.members.iter().zip((&self.factor * scores).iter()) {
            if let Some(uniform) = uniforms.get_mut(*member) {
                // Open limits: the quantile of 0 or 1 may be infinite.
                *uniform = normal.cdf(*score).clamp(f64::EPSILON / 4.0, 1.0 - f64::EPSILON / 2.0);
            }
        }
    }
}

/// A uniform in (0, 1) for one occurrence, from the uniform of the lifetime: so it depends on the seed, the lifetime's number,
/// the quantity's name and the occurrence alone, and goes with the quantity wherever its uniform goes.
///
/// The mixing is the finaliser of `SplitMix64` (G. L. Steele, D. Lea, C. H. Flood, OOPSLA 2014).
pub(super) fn another(uniform: f64, occurrence: u64) -> f64 {
    const GOLDEN: u64 = 0x9E37_79B9_7F4A_7C15;
    let mix = |mut x: u64| {
        x = (x ^ (x >> 30)).wrapping_mul(0xBF58_476D_1CE4_E5B9);
        x = (x ^ (x >> 27)).wrapping_mul(0x94D0_49BB_1331_11EB);
        x ^ (x >> 31)
    };
    let bits = mix(mix(uniform.to_bits().wrapping_add(GOLDEN)).wrapping_add(occurrence.wrapping_add(1).wrapping_mul(GOLDEN)));
    // The upper 52 bits, in the middle of their cell: never 0 or 1.
    ((bits >> 12) as f64 + 0.5) / (1_u64 << 52) as f64
}
