//! Enumeration of the independent subsets of columns, down to what two more columns decide in a plane.
//!
//! Facets of a zonotope of rank r and edges of a polyhedron in r dimensions both belong to r − 1 independent
//! columns. All of those subsets that share their first r − 2 columns are settled in the plane across them, where a
//! column is two numbers: the cost of a subset is a handful of operations a column instead of a solve.

use super::linear::{DEPENDENT, Vec6, add_scaled, dot, norm, residual, scaled, unit_axis};

/// Unit columns closer than this are one line: a few roundings of their components.
const SAME_LINE: f64 = 1e-14;

/// The plane across r − 2 independent columns.
pub(super) struct Plane<'a> {
    /// The columns chosen, ascending.
    pub(super) chosen: &'a [usize],
    /// Orthonormal basis of their span, in that order.
    pub(super) basis: &'a [Vec6],
    /// The least that was left of a chosen column beside those before it: their independence.
    pub(super) independence: f64,
    /// Orthonormal basis of the plane.
    pub(super) across: [Vec6; 2],
    /// Coordinates of every column in the plane; zero for the chosen ones.
    pub(super) coordinates: &'a [[f64; 2]],
}

impl Plane<'_> {
    /// The columns that may follow those chosen, in order.
    pub(super) fn followers(&self) -> std::ops::Range<usize> {
        self.chosen.last().map_or(0, |last| last + 1)..self.coordinates.len()
    }

    /// The unit vector in the plane along column `index`, with its length there, or `None` if it depends on those chosen.
    pub(super) fn along(&self, index: usize) -> Option<([f64; 2], f64)> {
        let [a, b] = self.coordinates[index];
        let length = a.hypot(b);
        (length > DEPENDENT).then(|| ([a / length, b / length], length))
    }

    /// The unit vector orthogonal to the columns chosen and to the direction `along` of the plane.
    pub(super) fn normal(&self, along: [f64; 2]) -> Vec6 {
        let [p, q] = &self.across;
        std::array::from_fn(|i| along[0] * q[i] - along[1] * p[i])
    }
}

/// Visits the plane across each set of `rank` − 2 independent `columns` (unit vectors); `rank` is at least 2.
pub(super) fn each_plane(columns: &[Vec6], rank: usize, visit: &mut impl FnMut(&Plane)) {
    let mut walk = Walk {
        columns,
        rank,
        chosen: Vec::with_capacity(rank),
        basis: Vec::with_capacity(rank),
        independence: Vec::with_capacity(rank),
        coordinates: vec![[0.0; 2]; columns.len()],
    };
    walk.descend(0, visit);
}

struct Walk<'a> {
    columns: &'a [Vec6],
    rank: usize,
    chosen: Vec<usize>,
    basis: Vec<Vec6>,
    independence: Vec<f64>,
    coordinates: Vec<[f64; 2]>,
}

impl Walk<'_> {
    fn descend(&mut self, start: usize, visit: &mut impl FnMut(&Plane)) {
        if self.chosen.len() + 2 == self.rank {
            self.show(visit);
            return;
        }
        for next in start..self.columns.len() {
            let left = residual(&self.columns[next], &self.basis);
            let size = norm(&left);
            if size <= DEPENDENT {
                continue;
            }
            // Little left means few digits left: make it orthogonal again.
            let unit = residual(&scaled(&left, size.recip()), &self.basis);
            self.basis.push(scaled(&unit, norm(&unit).recip()));
            self.chosen.push(next);
            self.independence.push(size);
            self.descend(next + 1, visit);
            self.chosen.pop();
            self.independence.pop();
            self.basis.pop();
        }
    }

    fn show(&mut self, visit: &mut impl FnMut(&Plane)) {
        let p = across(&self.basis, None, self.rank);
        let q = across(&self.basis, Some(p), self.rank);
        for (c, u) in self.coordinates.iter_mut().zip(self.columns) {
            *c = [dot(&p, u), dot(&q, u)];
        }
        for &index in &self.chosen {
            self.coordinates[index] = [0.0; 2];
        }
        visit(&Plane {
            chosen: &self.chosen,
            basis: &self.basis,
            independence: self.independence.iter().copied().fold(1.0, f64::min),
            across: [p, q],
            coordinates: &self.coordinates,
        });
    }
}

/// A unit vector orthogonal to the orthonormal `basis` and `other`, from the axis with most left beside them.
fn across(basis: &[Vec6], other: Option<Vec6>, rank: usize) -> Vec6 {
    let taken = |i: usize| basis.iter().chain(&other).map(|e| e[i] * e[i]).sum::<f64>();
    let axis = (0..rank).map(|i| (i, taken(i))).reduce(|a, b| if b.1 < a.1 { b } else { a });
    let mut left = unit_axis(axis.map_or(0, |(i, _)| i));
    for _ in 0..2 {
        for e in basis.iter().chain(&other) {
            left = add_scaled(&left, -dot(&left, e), e);
        }
    }
    scaled(&left, norm(&left).recip())
}

/// Whether two unit columns are the same line, to rounding; the sign tells whether they point the same way.
pub(super) fn parallel(a: &Vec6, b: &Vec6) -> Option<f64> {
    let sign = dot(a, b).signum();
    let apart: f64 = a.iter().zip(b).map(|(x, y)| (x - sign * y).powi(2)).sum();
    (apart.sqrt() <= SAME_LINE).then_some(sign)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn every_pair_of_a_general_set_is_visited_once() {
        let s = 0.5_f64.sqrt();
        let columns = [unit_axis(0), unit_axis(1), unit_axis(2), [s, s, 0.0, 0.0, 0.0, 0.0]];
        let mut pairs = Vec::new();
        each_plane(&columns, 3, &mut |plane| {
            for k in plane.followers() {
                let (along, _) = plane.along(k).expect("no two are parallel");
                let normal = plane.normal(along);
                assert!(dot(&normal, &columns[k]).abs() < 1e-15, "rounding of one product");
                assert!(dot(&normal, &columns[plane.chosen[0]]).abs() < 1e-15, "rounding of one product");
                pairs.push((plane.chosen[0], k));
            }
        });
        assert_eq!(pairs, [(0, 1), (0, 2), (0, 3), (1, 2), (1, 3), (2, 3)]);
    }

    #[test]
    fn opposite_columns_are_one_line() {
        let a: Vec6 = unit_axis(1);
        assert!(parallel(&a, &scaled(&a, -1.0)).is_some_and(|sign| sign < 0.0));
        assert!(parallel(&a, &unit_axis(2)).is_none());
    }
}
