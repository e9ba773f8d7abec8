//! Vertices and rays of the dual: {y : y · w ≤ cost for every column w}, from its edges.
//!
//! An edge is tight on r − 1 independent columns. In the plane across r − 2 of them it is a line, and the other
//! columns cut an interval out of that line, whose ends are vertices and whose open ends are rays.
//!
//! Symmetric layouts have vertices where many more columns are tight than r. There the costs are thought to be
//! raised by ε·tie with ε → 0 and `tie` in general position: each vertex then splits into simple ones with exactly
//! one basis of r columns each, whose cones tile what can be served (Charnes 1952, "Optimality and degeneracy in
//! linear programming", Econometrica 20). Ties are decided by comparing the ε parts.

use super::linear::{Vec6, add_scaled, dot, norm};
use super::planes::{Plane, each_plane};

/// Slacks closer to zero than this fraction of the terms they are the rest of are ties: a slack rounds to a few
/// 2.2e-16 of |y|, symmetric layouts made of rounded sines to tens of that.
const TIE: f64 = 1e-12;

/// A column whose component along an edge is below this is parallel to it (unit columns).
const PARALLEL: f64 = 1e-11;

/// What the enumeration finds.
#[derive(Debug, Default)]
pub(super) struct Dual {
    /// The columns that are tight at each vertex of the perturbed polyhedron, `rank` of them, ascending.
    pub(super) bases: Vec<Vec<usize>>,
    /// Directions in which the polyhedron has no end, some more than once.
    pub(super) rays: Vec<Vec6>,
}

/// Enumerates the dual of unit `columns` that span `rank` dimensions with `costs` per unit length.
pub(super) fn dual(columns: &[Vec6], costs: &[f64], rank: usize) -> Dual {
    let mut dual = Dual::default();
    if rank == 1 {
        // One line: a column each way at most, since parallel ones have been removed.
        dual.bases
            .extend((0..columns.len()).map(|index| vec![index]));
        if let [only] = columns {
            dual.rays.push(only.map(|x| -x));
        }
        return dual;
    }
    if rank == 0 {
        return dual;
    }
    let mut search = Search {
        columns,
        costs,
        ties: (0..columns.len()).map(tie).collect(),
        largest_cost: costs.iter().fold(0.0, |a, b| a.max(*b)),
        constraints: vec![Constraint::default(); columns.len()],
        size: 0.0,
        dual,
    };
    each_plane(columns, rank, &mut |plane| search.plane(plane));
    search.dual
}

/// A perturbation in general position, the same for every layout: between 1 and 2, from the mixing function of Steele,
/// Lea and Flood (2014, "Fast splittable pseudorandom number generators"). A formula in the index would not do:
/// layouts are listed in patterns, and a perturbation that is linear in the columns decides nothing.
fn tie(index: usize) -> f64 {
    let mut z = (index as u64 + 1).wrapping_mul(0x9e37_79b9_7f4a_7c15);
    z = (z ^ (z >> 30)).wrapping_mul(0xbf58_476d_1ce4_e5b9);
    z = (z ^ (z >> 27)).wrapping_mul(0x94d0_49bb_1331_11eb);
    z ^= z >> 31;
    1.0 + (z >> 11) as f64 / (1_u64 << 53) as f64
}

/// A column in the plane: along · (s, t) ≤ slack + ε · tie.
#[derive(Debug, Clone, Copy, Default)]
struct Constraint {
    along: [f64; 2],
    slack: f64,
    tie: f64,
    chosen: bool,
}

/// One end of an interval: position, its ε part, the rate of the column that makes it.
#[derive(Clone, Copy)]
struct End {
    at: f64,
    tie: f64,
    rate: f64,
    column: Option<usize>,
}

struct Search<'a> {
    columns: &'a [Vec6],
    costs: &'a [f64],
    ties: Vec<f64>,
    largest_cost: f64,
    constraints: Vec<Constraint>,
    /// Size of the terms that slacks in the present plane are made of.
    size: f64,
    dual: Dual,
}

impl Search<'_> {
    fn plane(&mut self, plane: &Plane) {
        let y = self.tight_point(plane, self.costs);
        let z = self.tight_point(plane, &self.ties);
        self.size = self.largest_cost + norm(&y);
        let given = self
            .columns
            .iter()
            .zip(self.costs)
            .zip(&self.ties)
            .zip(plane.coordinates);
        for (constraint, (((column, cost), tie), along)) in self.constraints.iter_mut().zip(given) {
            *constraint = Constraint {
                along: *along,
                slack: cost - dot(&y, column),
                tie: tie - dot(&z, column),
                chosen: false,
            };
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
    fn tight_point(&self, plane: &Plane, costs: &[f64]) -> Vec6 {
        plane
            .chosen
            .iter()
            .zip(plane.basis)
            .fold([0.0; 6], |y, (&index, e)| {
                let column = &self.columns[index];
                add_scaled(&y, (costs[index] - dot(&y, column)) / dot(e, column), e)
            })
    }

    fn line(&mut self, plane: &Plane, follower: usize, along: [f64; 2], length: f64) {
        let Some((low, high)) = self.interval(follower, along, length) else {
            return;
        };
        for (end, sign) in [(low, -1.0), (high, 1.0)] {
            match end.column {
                None => self.dual.rays.push(plane.normal(along).map(|x| sign * x)),
                // Each basis is found from the subset that lacks its last column.
                Some(column) if column > follower => {
                    let chosen = plane.chosen.iter().copied();
                    self.dual
                        .bases
                        .push(chosen.chain([follower, column]).collect());
                }
                Some(_) => {}
            }
        }
    }

    /// The part of the line on which `follower` is tight where all other constraints hold.
    fn interval(&self, follower: usize, along: [f64; 2], length: f64) -> Option<(End, End)> {
        let own = &self.constraints[follower];
        let (offset, tie_offset) = (own.slack / length, own.tie / length);
        let size = self.size + offset.abs();
        let mut low = End {
            at: f64::NEG_INFINITY,
            tie: 0.0,
            rate: 0.0,
            column: None,
        };
        let mut high = End {
            at: f64::INFINITY,
            ..low
        };
        for (column, c) in self.constraints.iter().enumerate() {
            if c.chosen || column == follower {
                continue;
            }
            let rate = along[0] * c.along[1] - along[1] * c.along[0];
            let common = along[0] * c.along[0] + along[1] * c.along[1];
            let slack = c.slack - offset * common;
            let tie = c.tie - tie_offset * common;
            if rate.abs() <= PARALLEL {
                if slack < -TIE * size || (slack <= TIE * size && tie <= 0.0) {
                    return None;
                }
                continue;
            }
            let end = End {
                at: slack / rate,
                tie: tie / rate,
                rate: rate.abs(),
                column: Some(column),
            };
            if rate > 0.0 && before(&end, &high, size) {
                high = end;
            } else if rate < 0.0 && before(&low, &end, size) {
                low = end;
            } else {
                continue;
            }
            if !before(&low, &high, size) {
                return None;
            }
        }
        Some((low, high))
    }
}

/// Whether `a` lies before `b` on the line, by their ε parts if the slack between them is a tie.
fn before(a: &End, b: &End, size: f64) -> bool {
    let gap = b.at - a.at;
    if gap.is_infinite() {
        return gap > 0.0;
    }
    let slack = gap * a.rate.max(b.rate);
    if slack.abs() <= TIE * (size + a.at.abs()) {
        a.tie < b.tie
    } else {
        slack > 0.0
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
            let found = dual(&columns, &vec![1.0; columns.len()], rank);
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
        let columns: Vec<Vec6> = (0..8)
            .map(|k| [sign(0, k), sign(1, k), sign(2, k), 0.0, 0.0, 0.0])
            .collect();
        let mut bases = dual(&columns, &[s; 8], 3).bases;
        assert_eq!(bases.len(), 12);
        bases.sort();
        bases.dedup();
        assert_eq!(bases.len(), 12);
    }

    /// One quadrant served: two rays, one vertex.
    #[test]
    fn quadrant_has_two_rays() {
        let found = dual(&[unit_axis(0), unit_axis(1)], &[1.0, 1.0], 2);
        assert_eq!(found.bases, [vec![0, 1]]);
        let mut rays: Vec<[f64; 2]> = found
            .rays
            .iter()
            .map(|r| [r[0] + 0.0, r[1] + 0.0])
            .collect();
        rays.sort_by(|a, b| a[0].total_cmp(&b[0]));
        assert_eq!(rays, [[-1.0, 0.0], [0.0, -1.0]]);
    }
}
