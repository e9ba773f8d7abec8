//! The set of torques that a layout can make, as half-spaces.

use nalgebra::Vector3;

use super::facets::{ReducedFace, facets};
use super::linear::{dot, norm, scaled};
use super::reduced::{Direction, Reduced, ranks};
use super::simplex::most_levels;
use super::{Generator, NetForce};

/// A direction runs along a face, and never meets it, if its cosine with the normal is below this.
const ALONG_A_FACE: f64 = 1e-11;

/// One face of the attainable set: every attainable torque has `normal · torque ≤ offset`.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct HalfSpace {
    /// Unit vector, within the span of the attainable torques.
    pub normal: Vector3<f64>,
    /// Distance of the face from the origin, in the unit of torque. Never negative: no torque is always attainable.
    pub offset: f64,
}

/// The torques that a layout can make: {τ : normal · τ ≤ offset for all half-spaces, missing · τ = 0}.
///
/// With levels between their bounds the attainable wrenches (torque, force) form a zonotope; its slice without force,
/// or its shadow with the force left out, is a convex polytope whose faces lie on faces of the zonotope. Each of those
/// has a normal (n, m) orthogonal to r − 1 independent columns (a, d), and
///
/// ```text
/// offset = Σ max(most · (n·a + m·d), least · (n·a + m·d)) / |n|
/// ```
///
/// so enumerating subsets of columns gives the set exactly, without search or sampling (P. `McMullen` 1971, "On zonotopes",
/// Trans. Amer. Math. Soc. 159).
///
/// Exact to the rounding of the geometry, about 1e-15 of the largest torque: torque that comes from a millionth of a
/// radian of cant is known to 1e-9 of itself, torque from the square of that not at all. What is within 30 roundings of
/// nothing counts as nothing.
#[derive(Debug, Clone)]
pub struct Authority {
    /// Dimension of the set of attainable torques (under the force condition asked for), 0 to 3.
    pub rank: usize,
    /// Rank of the torques of all generators, whatever force they leave, 0 to 3.
    pub torque_rank: usize,
    /// Rank of the wrenches (torque and force) of all generators, 0 to 6.
    pub wrench_rank: usize,
    /// The faces of the set.
    pub half_spaces: Vec<HalfSpace>,
    /// Orthonormal directions in which no torque is attainable either way: 3 − `rank` of them.
    pub missing: Vec<Vector3<f64>>,
    /// The same faces in reduced coordinates, and what takes a torque there.
    faces: Vec<ReducedFace>,
    direction: Direction,
    net: NetForce,
}

impl Authority {
    /// The attainable torques of `generators`. Cannot fail; no generators give the set {0}.
    ///
    /// Generators whose levels are bounded to zero count as lost. Time grows as the sixth power of their number
    /// without net force (20 ms for 24) and as its cube with net force.
    #[must_use]
    pub fn new(generators: &[Generator], net: NetForce) -> Self {
        let reduced = Reduced::new(generators, net);
        let (torque_rank, wrench_rank) = ranks(generators);
        let faces = facets(&reduced, generators);
        let half_space = |face: &ReducedFace| {
            let normal = reduced.covector(&face.normal);
            let factor = normal.norm().recip();
            HalfSpace { normal: normal * factor, offset: face.offset * factor }
        };
        Self {
            rank: reduced.torque_rank,
            torque_rank,
            wrench_rank,
            half_spaces: faces.iter().map(half_space).collect(),
            direction: reduced.direction(),
            missing: reduced.missing,
            faces,
            net,
        }
    }

    /// The most torque along `direction` (of any length), in the unit of level × arm; 0 if there is none.
    ///
    /// ```text
    /// most(e) = min over faces with n·e > 0 of offset / (n·e)
    /// ```
    #[must_use]
    pub fn most(&self, direction: &Vector3<f64>) -> f64 {
        let Some((unit, per_unit)) = self.reduced(direction) else {
            return 0.0;
        };
        let along = self.faces.iter().map(|face| (dot(&face.normal, &unit), face.offset));
        let reached = along.filter(|(cosine, _)| *cosine > ALONG_A_FACE).map(|(cosine, offset)| offset / cosine);
        let most = reached.fold(f64::INFINITY, f64::min);
        if most.is_finite() { most / per_unit } else { 0.0 }
    }

    /// The torque available in whatever direction: radius of the largest ball about zero inside the set.
    #[must_use]
    pub fn guaranteed(&self) -> f64 {
        self.weakest().map_or(0.0, |face| face.offset)
    }

    /// The unit direction in which only [`Self::guaranteed`] is available; the first of several, x if nothing is attainable.
    #[must_use]
    pub fn weakest_direction(&self) -> Vector3<f64> {
        match (self.missing.first(), self.weakest()) {
            (Some(missing), _) => *missing,
            (None, Some(face)) => face.normal,
            (None, None) => Vector3::x(),
        }
    }

    /// Whether some torque is available in every direction.
    #[must_use]
    pub fn every_direction(&self) -> bool {
        self.guaranteed() > 0.0
    }

    /// How far `h` fills the set: 0 for none, 1 on the boundary, infinite where nothing is attainable.
    ///
    /// ```text
    /// fill(h) = max over faces of n·h / offset
    /// ```
    #[must_use]
    pub fn fill(&self, h: &Vector3<f64>) -> f64 {
        if h.norm_squared() <= 0.0 {
            return 0.0;
        }
        let Some((unit, per_unit)) = self.reduced(h) else {
            return f64::INFINITY;
        };
        let part = |face: &ReducedFace| {
            let cosine = dot(&face.normal, &unit);
            if cosine > ALONG_A_FACE { cosine / face.offset } else { 0.0 }
        };
        self.faces.iter().map(part).fold(0.0, f64::max) * per_unit * h.norm()
    }

    /// Level of each generator at the point of most torque along `direction`: a basic solution, few of them part way.
    ///
    /// `generators` must be those that the authority was made from. Found by the simplex method, not from the
    /// half-spaces, so that the two prove one another; all zero if there is no torque in that direction.
    #[must_use]
    pub fn serving(&self, direction: &Vector3<f64>, generators: &[Generator]) -> Vec<f64> {
        match direction.try_normalize(0.0) {
            Some(e) if self.most(&e) > 0.0 => most_levels(generators, &Reduced::new(generators, self.net), &e),
            _ => vec![0.0; generators.len()],
        }
    }

    /// The reduced unit vector along `direction` and the reduced length of a unit vector that way, or `None` if it
    /// leaves the attainable span or has no direction.
    fn reduced(&self, direction: &Vector3<f64>) -> Option<([f64; 3], f64)> {
        let unit = direction.try_normalize(0.0)?;
        let [x, y, z, ..] = self.direction.of(&unit)?;
        let size = norm(&[x, y, z]);
        (size > 0.0).then(|| (scaled(&[x, y, z], size.recip()), size))
    }

    fn weakest(&self) -> Option<&HalfSpace> {
        if self.rank < 3 {
            return None;
        }
        self.half_spaces.iter().min_by(|a, b| a.offset.total_cmp(&b.offset))
    }
}
