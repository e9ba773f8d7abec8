//! A layout in coordinates of its own range, with the attainable torques first.

use nalgebra::Vector3;

use super::balance::balanced;
use super::linear::{
    DEPENDENT, Vec6, add_scaled, complement, dot, extend, norm, residual, scaled, unit_axis,
};
use super::{Generator, NetForce};

/// Forces of a wrench known to be outside the range by less than this are rounding that a poorly conditioned but
/// regular layout has amplified from 1e-16.
const OUTSIDE: f64 = 1e-10;

/// One generator that can contribute.
#[derive(Debug, Clone, Copy)]
pub(super) struct Column {
    /// Index in the layout.
    pub(super) index: usize,
    /// Unit vector in the reduced coordinates.
    pub(super) unit: Vec6,
    /// Length per unit level.
    pub(super) length: f64,
}

/// The layout as seen by the enumerations.
///
/// Torques are divided by the longest arm, so that torque and force rows have like size. The first `torque_rank`
/// coordinates are the attainable torques (τ, 0), the others complete the range of the wrenches: there the set of
/// pure torques is the slice on which they vanish, through the relative interior of the whole.
#[derive(Debug)]
pub(super) struct Reduced {
    /// Dimension of the range, r.
    pub(super) rank: usize,
    /// Dimension of the attainable torques, at most 3.
    pub(super) torque_rank: usize,
    /// Orthonormal directions of the attainable torques.
    pub(super) axes: Vec<Vector3<f64>>,
    /// Orthonormal directions that complete them.
    pub(super) missing: Vec<Vector3<f64>>,
    /// The longest arm, m.
    pub(super) arm: f64,
    /// The generators that can contribute.
    pub(super) columns: Vec<Column>,
    /// Whether each generator of the layout takes part; the others must be still if no net force may be left.
    pub(super) taking_part: Vec<bool>,
    /// m with m · d = 0 for those and m · d < 0 for the others.
    pub(super) across: Vector3<f64>,
    basis: Vec<Vec6>,
}

impl Reduced {
    /// Reduces `generators`; those without range of level are left out.
    pub(super) fn new(generators: &[Generator], net: NetForce) -> Self {
        let (taking_part, across) = match net {
            NetForce::Any => (generators.iter().map(works).collect(), Vector3::zeros()),
            NetForce::Zero => balanced_among(generators),
        };
        let dimensions = if net == NetForce::Zero { 6 } else { 3 };
        let used = || {
            generators
                .iter()
                .enumerate()
                .zip(&taking_part)
                .filter_map(|(g, &part)| part.then_some(g))
        };
        let arm = longest_arm(used().map(|(_, g)| g));
        let wrenches: Vec<(usize, Vec6)> = used().map(|(i, g)| (i, wrench(g, arm, net))).collect();
        let plain: Vec<Vec6> = wrenches.iter().map(|(_, w)| *w).collect();
        let (basis, axes, missing) = coordinates(&plain, dimensions);
        let to_column = |&(index, w): &(usize, Vec6)| {
            let mut x = [0.0; 6];
            for (x, e) in x.iter_mut().zip(&basis) {
                *x = dot(e, &w);
            }
            let length = norm(&x);
            (length > DEPENDENT).then(|| Column {
                index,
                unit: scaled(&x, length.recip()),
                length,
            })
        };
        let columns = wrenches.iter().filter_map(to_column).collect();
        Self {
            rank: basis.len(),
            torque_rank: axes.len(),
            axes,
            missing,
            arm,
            columns,
            taking_part,
            across,
            basis,
        }
    }

    /// The normal that `reduced` coordinates stand for, or `None` if its torque part is rounding.
    pub(super) fn normal(&self, reduced: &Vec6) -> Option<Normal> {
        let size = reduced[..self.torque_rank]
            .iter()
            .map(|x| x * x)
            .sum::<f64>()
            .sqrt();
        if size <= DEPENDENT {
            return None;
        }
        let factor = size.recip();
        let rest = self.basis.iter().zip(reduced).skip(self.torque_rank);
        let rest = rest.fold([0.0; 6], |sum, (e, x)| add_scaled(&sum, *x, e));
        let along = self.torque(reduced) * factor;
        Some(Normal {
            along,
            torque: along + Vector3::new(rest[0], rest[1], rest[2]) * factor,
            force: Vector3::new(rest[3], rest[4], rest[5]) * (self.arm * factor),
        })
    }

    /// The vector with the given coordinates along the attainable torques.
    pub(super) fn torque(&self, reduced: &[f64]) -> Vector3<f64> {
        self.axes
            .iter()
            .zip(reduced)
            .fold(Vector3::zeros(), |sum, (t, x)| sum + t * *x)
    }

    /// For each missing direction, both signs of a normal that vanishes on every column.
    pub(super) fn missing_normals(&self) -> Vec<Normal> {
        let lift = |t: &Vector3<f64>| {
            let left = residual(&[t.x, t.y, t.z, 0.0, 0.0, 0.0], &self.basis);
            let torque = Vector3::new(left[0], left[1], left[2]);
            let factor = torque.norm().recip();
            let force = Vector3::new(left[3], left[4], left[5]) * (self.arm * factor);
            Normal {
                along: torque * factor,
                torque: torque * factor,
                force,
            }
        };
        let both = |n: Normal| {
            [
                n,
                Normal {
                    along: -n.along,
                    torque: -n.torque,
                    force: -n.force,
                },
            ]
        };
        self.missing.iter().map(lift).flat_map(both).collect()
    }
}

/// A linear function of torque and force: torque · a + force · d for a column (a, d).
#[derive(Debug, Clone, Copy)]
pub(super) struct Normal {
    /// Unit vector within the attainable torques.
    pub(super) along: Vector3<f64>,
    /// `along`, with what it needs beside the attainable torques.
    pub(super) torque: Vector3<f64>,
    /// Force part, m.
    pub(super) force: Vector3<f64>,
}

impl Normal {
    /// Value per unit level of a generator.
    pub(super) fn value(&self, generator: &Generator) -> f64 {
        self.torque.dot(&generator.torque) + self.force.dot(&generator.force)
    }
}

/// Whether a generator has any range of level.
pub(super) fn works(generator: &Generator) -> bool {
    generator.most > 0.0 || generator.least < 0.0
}

/// Ranks of the torques and of the wrenches of all working generators, whatever force they leave.
pub(super) fn ranks(generators: &[Generator]) -> (usize, usize) {
    let used = || generators.iter().filter(|g| works(g));
    let arm = longest_arm(used());
    let rank = |net| {
        let mut basis = Vec::new();
        let wrenches: Vec<Vec6> = used().map(|g| wrench(g, arm, net)).collect();
        extend(&mut basis, &wrenches, DEPENDENT);
        basis.len()
    };
    (rank(NetForce::Any), rank(NetForce::Zero))
}

/// Torque over `arm` and force of a generator; no force where it does not matter.
pub(super) fn wrench(generator: &Generator, arm: f64, net: NetForce) -> Vec6 {
    let torque = generator.torque / arm;
    let force = if net == NetForce::Zero {
        generator.force
    } else {
        Vector3::zeros()
    };
    [torque.x, torque.y, torque.z, force.x, force.y, force.z]
}

/// Longest arm in m, 1 if there is none.
pub(super) fn longest_arm<'a>(generators: impl Iterator<Item = &'a Generator>) -> f64 {
    let arm = generators.map(|g| g.torque.norm()).fold(0.0, f64::max);
    if arm > 0.0 { arm } else { 1.0 }
}

fn balanced_among(generators: &[Generator]) -> (Vec<bool>, Vector3<f64>) {
    let force = |g: &Generator| if works(g) { g.force } else { Vector3::zeros() };
    let forces: Vec<_> = generators.iter().map(force).collect();
    let two_sided: Vec<_> = generators
        .iter()
        .map(|g| g.least < 0.0 && g.most > 0.0)
        .collect();
    let (mut part, across) = balanced(&forces, &two_sided);
    for (part, generator) in part.iter_mut().zip(generators) {
        *part &= works(generator);
    }
    (part, across)
}

type Coordinates = (Vec<Vec6>, Vec<Vector3<f64>>, Vec<Vector3<f64>>);

/// Orthonormal basis of the range, attainable torques first; those torques; the torques beside them.
fn coordinates(wrenches: &[Vec6], dimensions: usize) -> Coordinates {
    let mut range = Vec::new();
    extend(&mut range, wrenches, DEPENDENT);
    if range.len() == dimensions {
        // Nothing is missing: the coordinates as they are, without the rounding of a rotation.
        let axes = vec![Vector3::x(), Vector3::y(), Vector3::z()];
        return ((0..dimensions).map(unit_axis).collect(), axes, Vec::new());
    }
    // (τ, 0) is in the range ⇔ it is orthogonal to all (α, β) outside the range ⇔ τ is orthogonal to all α.
    let outside = complement(&range, dimensions);
    let alphas: Vec<[f64; 3]> = outside.iter().map(|v| [v[0], v[1], v[2]]).collect();
    let mut missing = Vec::new();
    extend(&mut missing, &alphas, OUTSIDE);
    let axes = complement(&missing, 3);
    let mut basis: Vec<Vec6> = axes
        .iter()
        .map(|t| [t[0], t[1], t[2], 0.0, 0.0, 0.0])
        .collect();
    extend(&mut basis, wrenches, OUTSIDE);
    let vectors = |list: Vec<[f64; 3]>| list.into_iter().map(Vector3::from).collect();
    (basis, vectors(axes), vectors(missing))
}
