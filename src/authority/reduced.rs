//! A layout in coordinates of its own range, with the attainable torques first.

use nalgebra::Vector3;

use super::balance::balanced;
use super::factors::Factors;
use super::linear::{DEPENDENT, Vec6, complement, norm, orthonormal_rows, scaled};
use super::{Generator, NetForce};

/// One generator that can contribute.
#[derive(Debug, Clone, Copy)]
pub(super) struct Column {
    /// Index in the layout.
    pub(super) index: usize,
    /// Unit vector in the reduced coordinates.
    pub(super) unit: Vec6,
    /// Length per unit level.
    pub(super) length: f64,
    /// Rounding of the unit vector: what the geometry rounds to, enlarged where the layout is nearly flat.
    pub(super) noise: f64,
}

/// A direction leaves the span of the attainable torques if this much of it lies outside: directions come out of
/// rotations that round to 1e-15 and integrals that round to 1e-13.
const OUTSIDE: f64 = 1e-10;

/// Rounding of a torque or force per unit of the longest arm: positions and pushes typed in decimals, turned from
/// degrees and subtracted from a centre of mass carry a few times 2.2e-16.
const ROUNDING: f64 = 1e-15;

/// How many roundings of a column make a component or an offset that counts as zero.
pub(super) const ROUNDINGS: f64 = 30.0;

/// The layout as seen by the enumerations.
///
/// The matrix of the wrenches, torques over the longest arm, is written as
///
/// ```text
/// [ torque rows ]   [ T  C ] [ s ]
/// [ force rows  ] = [ 0  D ] [ f ]
/// ```
///
/// with orthonormal rows in s and f (Gram–Schmidt, force rows first). A column of (s, f) are the reduced coordinates
/// of a generator. The set of pure torques is the slice f = 0, there torque = T s. Since the rows are orthonormal, a
/// layout that is nearly flat in some direction is no worse to enumerate than a round one.
#[derive(Debug)]
pub(super) struct Reduced {
    /// Dimension of the range, r.
    pub(super) rank: usize,
    /// Dimension of the attainable torques, at most 3: the s come first.
    pub(super) torque_rank: usize,
    /// Orthonormal directions of torque that are not attainable.
    pub(super) missing: Vec<Vector3<f64>>,
    /// The longest arm, m.
    pub(super) arm: f64,
    /// The generators that can contribute.
    pub(super) columns: Vec<Column>,
    /// Whether each generator of the layout takes part; the others must be still if no net force may be left.
    pub(super) taking_part: Vec<bool>,
    /// m with m · d = 0 for those and m · d < 0 for the others.
    pub(super) across: Vector3<f64>,
    /// T.
    torque_factors: Factors,
    /// D.
    force_factors: Factors,
    /// Columns of C.
    common: Vec<Vector3<f64>>,
}

/// A linear function of torque and force: torque · a + force · d for a generator (a, d).
#[derive(Debug, Clone, Copy)]
pub(super) struct Normal {
    /// Unit vector within the attainable torques, or beside them.
    pub(super) torque: Vector3<f64>,
    /// Force part, m.
    pub(super) force: Vector3<f64>,
}

/// Takes torques into the reduced coordinates.
#[derive(Debug, Clone)]
pub(super) struct Direction {
    factors: Factors,
    arm: f64,
    missing: Vec<Vector3<f64>>,
}

impl Direction {
    /// The longest arm, m.
    pub(super) fn arm(&self) -> f64 {
        self.arm
    }

    /// The reduced coordinates of a torque, or `None` if it leaves the attainable span.
    pub(super) fn of(&self, torque: &Vector3<f64>) -> Option<Vec6> {
        let outside = OUTSIDE * torque.norm();
        if self.missing.iter().any(|m| m.dot(torque).abs() > outside) {
            return None;
        }
        Some(self.factors.solve(&(torque / self.arm)))
    }
}

impl Normal {
    /// Value per unit level of a generator.
    pub(super) fn value(&self, generator: &Generator) -> f64 {
        self.torque.dot(&generator.torque) + self.force.dot(&generator.force)
    }
}

impl Reduced {
    /// Reduces `generators`; those without range of level are left out.
    pub(super) fn new(generators: &[Generator], net: NetForce) -> Self {
        let (taking_part, across) = match net {
            NetForce::Any => (generators.iter().map(works).collect(), Vector3::zeros()),
            NetForce::Zero => balanced_among(generators),
        };
        let used: Vec<(usize, &Generator)> =
            generators.iter().enumerate().zip(&taking_part).filter_map(|(g, &part)| part.then_some(g)).collect();
        let arm = longest_arm(used.iter().map(|(_, g)| *g));
        let row = |of: &dyn Fn(&Generator) -> f64| used.iter().map(|(_, g)| of(g)).collect::<Vec<f64>>();
        let torques: [Vec<f64>; 3] = std::array::from_fn(|axis| row(&|g| g.torque[axis] / arm));
        let forces: [Vec<f64>; 3] = std::array::from_fn(|axis| row(&|g| g.force[axis]));
        let f = if net == NetForce::Zero { orthonormal_rows(&[], &forces) } else { Vec::new() };
        let s = orthonormal_rows(&f, &torques);
        let torque_factors = Factors::new(&products(&torques, &s));
        let force_factors = Factors::new(&products(&forces, &f));
        let enlarged = (torque_factors.inverse_size_squared() + force_factors.inverse_size_squared()).sqrt();
        let columns = used.iter().enumerate().filter_map(|(place, (index, g))| {
            let force = if net == NetForce::Zero { g.force.norm() } else { 0.0 };
            let rounding = ROUNDING * enlarged * (g.torque.norm() / arm).hypot(force);
            let mut x = [0.0; 6];
            for (x, row) in x.iter_mut().zip(s.iter().chain(&f)) {
                *x = row[place];
            }
            let length = norm(&x);
            (length > DEPENDENT.max(rounding)).then(|| Column {
                index: *index,
                unit: scaled(&x, length.recip()),
                length,
                noise: (rounding / length).max(ROUNDING),
            })
        });
        Self {
            rank: s.len() + f.len(),
            torque_rank: s.len(),
            missing: complement(torque_factors.span(), 3).into_iter().map(Vector3::from).collect(),
            arm,
            columns: columns.collect(),
            common: products(&torques, &f),
            taking_part,
            across,
            torque_factors,
            force_factors,
        }
    }

    /// What takes directions of torque here.
    pub(super) fn direction(&self) -> Direction {
        Direction { factors: self.torque_factors.clone(), arm: self.arm, missing: self.missing.clone() }
    }

    /// The reduced coordinates of a torque without force, as far as it is attainable.
    pub(super) fn coordinates(&self, torque: &Vector3<f64>) -> Vec6 {
        self.torque_factors.solve(&(torque / self.arm))
    }

    /// The v with v · torque = reduced · s for every attainable torque, whose coordinates are s.
    pub(super) fn covector(&self, reduced: &[f64]) -> Vector3<f64> {
        self.torque_factors.covector(reduced) / self.arm
    }

    /// The normal that unit `reduced` coordinates stand for, or `None` if its torque part is rounding.
    pub(super) fn normal(&self, reduced: &Vec6) -> Option<Normal> {
        let (torque, force) = reduced.split_at_checked(self.torque_rank)?;
        if torque.iter().map(|x| x * x).sum::<f64>().sqrt() <= DEPENDENT {
            return None;
        }
        Some(self.lifted(self.covector(torque), force))
    }

    /// For each missing direction, both signs of a normal that vanishes on every column.
    pub(super) fn missing_normals(&self) -> Vec<Normal> {
        self.missing.iter().flat_map(|t| [self.lifted(*t, &[0.0; 3]), self.lifted(-t, &[0.0; 3])]).collect()
    }

    /// The (n, m) with the given torque part whose value on the generators has the force coordinates `force`.
    fn lifted(&self, torque: Vector3<f64>, force: &[f64]) -> Normal {
        let factor = torque.norm().recip();
        let mut left = [0.0; 3];
        for ((left, x), common) in left.iter_mut().zip(force).zip(&self.common) {
            *left = x - common.dot(&torque) * self.arm;
        }
        let force = self.force_factors.covector(&left);
        Normal { torque: torque * factor, force: force * factor }
    }
}

/// Whether a generator has any range of level.
pub(super) fn works(generator: &Generator) -> bool {
    generator.most > 0.0 || generator.least < 0.0
}

/// Ranks of the torques and of the wrenches of all working generators, whatever force they leave.
pub(super) fn ranks(generators: &[Generator]) -> (usize, usize) {
    let used: Vec<&Generator> = generators.iter().filter(|g| works(g)).collect();
    let arm = longest_arm(used.iter().copied());
    let torques: [Vec<f64>; 3] = std::array::from_fn(|axis| used.iter().map(|g| g.torque[axis] / arm).collect());
    let forces: [Vec<f64>; 3] = std::array::from_fn(|axis| used.iter().map(|g| g.force[axis]).collect());
    let f = orthonormal_rows(&[], &forces);
    (orthonormal_rows(&[], &torques).len(), f.len() + orthonormal_rows(&f, &torques).len())
}

/// Longest arm in m, 1 if there is none.
fn longest_arm<'a>(generators: impl Iterator<Item = &'a Generator>) -> f64 {
    let arm = generators.map(|g| g.torque.norm()).fold(0.0, f64::max);
    if arm > 0.0 { arm } else { 1.0 }
}

fn balanced_among(generators: &[Generator]) -> (Vec<bool>, Vector3<f64>) {
    let force = |g: &Generator| if works(g) { g.force } else { Vector3::zeros() };
    let forces: Vec<_> = generators.iter().map(force).collect();
    let two_sided: Vec<_> = generators.iter().map(|g| g.least < 0.0 && g.most > 0.0).collect();
    let (mut part, across) = balanced(&forces, &two_sided);
    for (part, generator) in part.iter_mut().zip(generators) {
        *part &= works(generator);
    }
    (part, across)
}

/// Columns of the matrix `rows` · `basis`ᵀ.
fn products(rows: &[Vec<f64>; 3], basis: &[Vec<f64>]) -> Vec<Vector3<f64>> {
    let inner = |a: &[f64], b: &[f64]| a.iter().zip(b).map(|(x, y)| x * y).sum();
    basis.iter().map(|b| Vector3::from_fn(|axis, _| inner(&rows[axis], b))).collect()
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::authority::linear::dot;

    /// Four tetrahedral thrusters on a cube's corners: the reduced coordinates reproduce torque and force.
    #[test]
    fn normals_take_the_same_values_in_both_coordinates() {
        let corners = [[1.0, 1.0, 1.0], [1.0, -1.0, -1.0], [-1.0, 1.0, -1.0], [-1.0, -1.0, 1.0], [1.0, 1.0, -1.0]];
        let pushes = [[0.0, 0.0, 1.0], [1.0, 0.0, 0.0], [0.0, 1.0, 0.0], [-0.6, 0.0, -0.8], [0.0, -0.6, -0.8]];
        let generators: Vec<Generator> = corners
            .iter()
            .zip(pushes)
            .map(|(r, d)| Generator::thruster((*r).into(), d.into(), Vector3::new(0.1, 0.2, 0.0), 1.0, 1.0))
            .collect();
        for net in [NetForce::Zero, NetForce::Any] {
            let reduced = Reduced::new(&generators, net);
            let factor = reduced.covector(&[0.6, 0.48, 0.0]).norm().recip();
            let normal = reduced.normal(&[0.6, 0.48, 0.0, 0.64, 0.0, 0.0]);
            let normal = normal.expect("has torque");
            for column in &reduced.columns {
                let expected: f64 = dot(&column.unit, &[0.6, 0.48, 0.0, 0.64, 0.0, 0.0]) * column.length;
                let mut generator = generators[column.index];
                if net == NetForce::Any {
                    generator.force = Vector3::zeros();
                }
                let expected =
                    if net == NetForce::Any { dot(&column.unit, &[0.6, 0.48, 0.0, 0.0, 0.0, 0.0]) * column.length } else { expected };
                // Rounding of entries near one, times a condition number near ten.
                assert!((normal.value(&generator) - expected * factor).abs() < 1e-13);
            }
        }
    }
}
