//! Vertices and rays of the dual: {y : y · w ≤ cost for every column w}, from its edges.
//!
//! An edge is tight on r − 1 independent columns. In the plane across r − 2 of them it is a line, and the other
//! columns cut an interval out of that line, whose ends are vertices. A direction of such a line along which no column
//! has a component is a ray.
//!
//! Symmetric layouts have vertices where many more columns are tight than r. The search therefore runs on costs raised
//! by parts of 1e-10 in general position (Charnes 1952, "Optimality and degeneracy in linear programming", Econometrica
//! 20): each vertex then splits into simple ones with exactly one basis of r columns, whose cones tile what can be
//! served, and every comparison is decided by far more than rounding. A basis that is best for the raised costs is
//! within twice that part of the best for the true ones, and it is priced with the true ones.

use super::linear::{Vec6, add_scaled, dot};
use super::planes::{Plane, each_plane};

/// Part by which costs are raised at most: a tenth of the accuracy promised, 1e5 times what a slack rounds to.
const RAISE: f64 = 1e-10;

/// A component along an edge below this, over the independence of the columns that make the edge, is rounding.
const ROUNDING: f64 = 2e-15;

/// What the enumeration finds.
#[derive(Debug, Default)]
pub(super) struct Dual {
    /// The columns that are tight at each vertex for the raised costs, `rank` of them, ascending.
    pub(super) bases: Vec<Vec<usize>>,
    /// Directions in which the polyhedron has no end, some more than once.
    pub(super) rays: Vec<Vec6>,
    /// The raised costs.
    pub(super) raised: Vec<f64>,
}

/// Enumerates the dual of unit `columns` that span `rank` dimensions with `costs` per unit length.
///
/// A direction in which no column has a component above its entry in `zeros` counts as a ray.
pub(super) fn dual(columns: &[Vec6], costs: &[f64], zeros: &[f64], rank: usize) -> Dual {
    let mut dual = Dual { raised: raised(costs), ..Dual::default() };
    if rank == 1 {
        // One line: a column each way at most, since parallel ones have been removed.
        dual.bases.extend((0..columns.len()).map(|index| vec![index]));
        if let [only] = columns {
            dual.rays.push(only.map(|x| -x));
        }
        return dual;
    }
    if rank == 0 {
        return dual;
    }
    let constraints = vec![Constraint::default(); columns.len()];
    let mut search = Search { columns, costs: dual.raised.clone(), zeros, constraints, dual };
    each_plane(columns, rank, &mut |plane| search.plane(plane));
    search.dual
}

/// The costs raised by parts in general position, the same for every layout: from the mixing function of Steele, Lea and
/// Flood (2014, "Fast splittable pseudorandom number generators"). A formula in the index would not do: layouts are
/// listed in patterns, and parts that are linear in the columns decide nothing.
fn raised(costs: &[f64]) -> Vec<f64> {
    let part = |index: usize| {
        let mut z = (index as u64 + 1).wrapping_mul(0x9e37_79b9_7f4a_7c15);
        z = (z ^ (z >> 30)).wrapping_mul(0xbf58_476d_1ce4_e5b9);
        z = (z ^ (z >> 27)).wrapping_mul(0x94d0_49bb_1331_11eb);
        z ^= z >> 31;
        RAISE * (z >> 11) as f64 / (1_u64 << 53) as f64
    };
    costs.iter().enumerate().map(|(index, cost)| cost * (1.0 + part(index))).collect()
}

/// A column in the plane: along · (s, t) ≤ slack.
#[derive(Debug, Clone, Copy, Default)]
struct Constraint {
    along: [f64; 2],
    slack: f64,
    chosen: bool,
}

/// One end of an interval: position, and the column that makes it if there is one.
#[derive(Clone, Copy)]
struct End {
    at: f64,
    column: Option<usize>,
}

struct Search<'a> {
    columns: &'a [Vec6],
    costs: Vec<f64>,
    zeros: &'a [f64],
    constraints: Vec<Constraint>,
    dual: Dual,
}

impl Search<'_> {
    fn plane(&mut self, plane: &Plane) {
        let y = self.tight_point(plane);
        let given = self.columns.iter().zip(&self.costs).zip(plane.coordinates);
        for (constraint, ((column, cost), along)) in self.constraints.iter_mut().zip(given) {
            *constraint = Constraint { along: *along, slack: cost - dot(&y, column), chosen: false };
        }
        for &index in plane.chosen {
            self.constraints[index].chosen = true;
        }
        for follower in plane.followers() {
            if let Some((along, length)) = plane.along(follower) {
                self.line(plane, follower, along, length);
            }
        }
    }

    /// The point in the span of the chosen columns at which they are tight.
    fn tight_point(&self, plane: &Plane) -> Vec6 {
        plane.chosen.iter().zip(plane.basis).fold([0.0; 6], |y, (&index, e)| {
            let column = &self.columns[index];
            add_scaled(&y, (self.costs[index] - dot(&y, column)) / dot(e, column), e)
        })
    }

    fn line(&mut self, plane: &Plane, follower: usize, along: [f64; 2], length: f64) {
        for sign in self.endless(along) {
            self.dual.rays.push(plane.normal(along).map(|x| sign * x));
        }
        let rounding = ROUNDING / plane.independence.min(length);
        let Some(ends) = self.interval(follower, along, length, rounding) else {
            return;
        };
        // Each basis is found from the subset that lacks its last column.
        for column in ends.into_iter().filter_map(|end| end.column).filter(|&column| column > follower) {
            let chosen = plane.chosen.iter().copied();
            self.dual.bases.push(chosen.chain([follower, column]).collect());
        }
    }

    /// The signs of the normal to `along` that no column has a component along.
    fn endless(&self, along: [f64; 2]) -> impl Iterator<Item = f64> + use<> {
        let (mut against, mut with) = (false, false);
        for (c, zero) in self.constraints.iter().zip(self.zeros) {
            let rate = along[0] * c.along[1] - along[1] * c.along[0];
            with |= rate > *zero;
            against |= rate < -zero;
            if with && against {
                break;
            }
        }
        [(!with).then_some(1.0), (!against).then_some(-1.0)].into_iter().flatten()
    }

    /// The part of the line on which `follower` is tight where all other constraints hold.
    fn interval(&self, follower: usize, along: [f64; 2], length: f64, rounding: f64) -> Option<[End; 2]> {
        let offset = self.constraints[follower].slack / length;
        let mut low = End { at: f64::NEG_INFINITY, column: None };
        let mut high = End { at: f64::INFINITY, column: None };
        for (column, c) in self.constraints.iter().enumerate() {
            if c.chosen || column == follower {
                continue;
            }
            let rate = along[0] * c.along[1] - along[1] * c.along[0];
            let slack = c.slack - offset * (along[0] * c.along[0] + along[1] * c.along[1]);
            let at = slack / rate;
            if rate.abs() <= rounding {
                if slack < 0.0 {
                    return None;
                }
            } else if rate > 0.0 {
                if at < high.at {
                    high = End { at, column: Some(column) };
                }
            } else if at > low.at {
                low = End { at, column: Some(column) };
            }
            if low.at > high.at {
                return None;
            }
        }
        Some([low, high])
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::authority::linear::unit_axis;

    /// The dual of ± the axes of r dimensions with unit costs is the cube |y| ≤ 1: 2^r vertices, no ray.
    #[test]
    fn cube_has_its_vertices() {
        for (rank, vertices) in [(1, 2), (2, 4), (3, 8), (6, 64)] {
            let axes = (0..rank).map(unit_axis::<6>);
            let columns: Vec<Vec6> = axes.flat_map(|u| [u, u.map(|x| -x)]).collect();
            let found = dual(&columns, &vec![1.0; columns.len()], &vec![1e-11; columns.len()], rank);
            assert_eq!(found.rays.len(), 0, "rank {rank}");
            // In one dimension each end is its own basis.
            assert_eq!(found.bases.len(), vertices, "rank {rank}");
        }
    }

    /// The regular octahedron |x| + |y| + |z| ≤ 1 as a dual: every vertex is tight on four columns; the
    /// perturbation splits each into two, and every split vertex is found once.
    #[test]
    fn octahedron_vertices_split_in_two() {
        let s = 3.0_f64.sqrt().recip();
        let sign = |bit: usize, of: usize| if of >> bit & 1 == 0 { s } else { -s };
        let columns: Vec<Vec6> = (0..8).map(|k| [sign(0, k), sign(1, k), sign(2, k), 0.0, 0.0, 0.0]).collect();
        let mut bases = dual(&columns, &[s; 8], &[1e-11; 8], 3).bases;
        assert_eq!(bases.len(), 12);
        bases.sort();
        bases.dedup();
        assert_eq!(bases.len(), 12);
    }

    /// One quadrant served: two rays, one vertex.
    #[test]
    fn quadrant_has_two_rays() {
        let found = dual(&[unit_axis(0), unit_axis(1)], &[1.0, 1.0], &[1e-11; 2], 2);
        assert_eq!(found.bases, [vec![0, 1]]);
        let mut rays: Vec<[f64; 2]> = found.rays.iter().map(|r| [r[0] + 0.0, r[1] + 0.0]).collect();
        rays.sort_by(|a, b| a[0].total_cmp(&b[0]));
        assert_eq!(rays, [[-1.0, 0.0], [0.0, -1.0]]);
    }
}
