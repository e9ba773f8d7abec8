//! The least propellant for an angular impulse.

use std::collections::BTreeMap;

use nalgebra::{DMatrix, Vector3};

use super::edges::dual;
use super::linear::{DEPENDENT, Vec6, dot, inverse, norm, scaled};
use super::opening::opens;
use super::planes::parallel;
use super::reduced::Reduced;
use super::{Generator, NetForce};

/// An angular impulse outside what can be served by less than this part of itself counts as served: it comes out of
/// rotations and integrals that round to 1e-13, and a layout aligned on axes has its limits exactly there.
const OUTSIDE: f64 = 1e-10;

/// Prices that agree to this part of themselves are one vertex; rounding of a solve in six unknowns is below it.
const SAME_PRICE: f64 = 1e-11;

/// An impulse below zero by less than this part of all impulses is rounding on the border between two bases.
const IMPULSE_IS_ROUNDING: f64 = 1e-9;

/// One way to fire at a vertex: `J = allocation · h`, best wherever that is not negative.
#[derive(Debug, Clone, PartialEq)]
pub struct Basis {
    /// Indices of the thrusters that fire, ascending.
    pub active: Vec<usize>,
    /// Impulse of each active thruster (rows, N·s) per angular impulse (columns x, y, z in N·m·s): 1/m.
    pub allocation: DMatrix<f64>,
}

/// One vertex of the dual: the price is `lambda · h` for the h that its bases serve.
#[derive(Debug, Clone, PartialEq)]
pub struct Vertex {
    /// Propellant per angular impulse, kg/(N·m·s), within the span of what can be served.
    pub lambda: Vector3<f64>,
    /// The bases that share this price; more than one where several ways to fire cost the same.
    pub bases: Vec<Basis>,
}

/// What one angular impulse costs.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Price {
    /// Least propellant for the angular impulse asked for.
    Served {
        /// Propellant, kg.
        kg: f64,
    },
    /// No firing, however long, gives this angular impulse: `along · h > 0`, yet no torque that the layout can make has a
    /// positive part along `along`.
    NotServed {
        /// Unit vector.
        along: Vector3<f64>,
    },
}

/// The least propellant for every angular impulse, precomputed.
///
/// ```text
/// price(h) = min Σ J_i / u_i  over  Σ J_i a_i = h, [Σ J_i d_i = 0,] J ≥ 0
///          = max λ·h  over the vertices (λ, μ) of  {λ·a_i + μ·d_i ≤ 1/u_i}
/// ```
///
/// by linear-programming duality (Gale, Kuhn and Tucker 1951). Only the vertices that are best for a cone of h with an
/// inside are kept; their cones cover all that can be served.
#[derive(Debug, Clone)]
pub struct PriceMap {
    /// The vertices that some angular impulse makes best.
    pub vertices: Vec<Vertex>,
    /// Unit vectors: h can be served ⇔ `ray · h ≤ 0` for all of them. Empty if every direction can be served.
    pub rays: Vec<Vector3<f64>>,
    /// For each ray the m (in m) that proves it: `ray · torque + m · force ≤ 0` for every generator, to rounding.
    /// Zero where a net force is allowed.
    pub ray_forces: Vec<Vector3<f64>>,
    /// `lambda` of the vertices once more, side by side for speed.
    lambdas: Vec<[f64; 3]>,
    generators: usize,
}

impl PriceMap {
    /// Prices of the layout `generators`, each taken as one-sided: levels from zero up without bound, those bounded to
    /// zero lost. Cannot fail. Time grows as the fifth power of their number without net force (0.02 s for 24).
    #[must_use]
    pub fn new(generators: &[Generator], net: NetForce) -> Self {
        let reduced = Reduced::new(generators, net);
        let tariff = Tariff::new(&reduced, generators);
        let (mut vertices, reduced_rays) = if reduced.torque_rank == 0 {
            (Vec::new(), Vec::new())
        } else {
            let found = dual(&tariff.units, &tariff.costs, reduced.rank);
            (tariff.vertices(&found.bases), found.rays)
        };
        let by_value = |a: &[f64; 3], b: &[f64; 3]| {
            a.iter()
                .zip(b)
                .map(|(a, b)| b.total_cmp(a))
                .find(|o| o.is_ne())
        };
        vertices.sort_by(|a: &Vertex, b: &Vertex| {
            by_value(&a.lambda.into(), &b.lambda.into()).unwrap_or(std::cmp::Ordering::Equal)
        });
        let (rays, ray_forces) = certificates(&reduced, &reduced_rays, generators);
        let lambdas = vertices.iter().map(|v| v.lambda.into()).collect();
        Self {
            vertices,
            rays,
            ray_forces,
            lambdas,
            generators: generators.len(),
        }
    }

    /// Least propellant for the angular impulse `h` (N·m·s), kg; homogeneous of degree 1.
    #[must_use]
    pub fn price(&self, h: &Vector3<f64>) -> Price {
        if let Some(ray) = self.against(h) {
            return Price::NotServed {
                along: self.rays[ray],
            };
        }
        let h = (*h).into();
        let kg = self
            .lambdas
            .iter()
            .map(|lambda| dot(lambda, &h))
            .fold(0.0, f64::max);
        Price::Served { kg }
    }

    /// The ray that most says `h` cannot be served: index into `rays` and `ray_forces`, or `None` if it can.
    #[must_use]
    pub fn against(&self, h: &Vector3<f64>) -> Option<usize> {
        let along = self.rays.iter().map(|ray| ray.dot(h)).enumerate();
        let (ray, most) = along.reduce(|a, b| if b.1 > a.1 { b } else { a })?;
        (most > OUTSIDE * h.norm()).then_some(ray)
    }

    /// Index of the vertex with the largest `lambda · h`, the first of equals; 0 if there are none. Does not check that
    /// `h` can be served.
    #[must_use]
    pub fn best_vertex(&self, h: &Vector3<f64>) -> usize {
        let h = (*h).into();
        let (mut best, mut most) = (0, f64::NEG_INFINITY);
        for (index, lambda) in self.lambdas.iter().enumerate() {
            let along = dot(lambda, &h);
            if along > most {
                (best, most) = (index, along);
            }
        }
        best
    }

    /// Impulse of every generator (N·s, none negative) that gives `h` for the least propellant, or `None` if nothing can.
    ///
    /// A basic solution: at most six thrusters fire without net force, three with it.
    #[must_use]
    pub fn allocate(&self, h: &Vector3<f64>) -> Option<Vec<f64>> {
        if self.against(h).is_some() {
            return None;
        }
        let mut impulses = vec![0.0; self.generators];
        if h.norm_squared() > 0.0 {
            let basis = self.basis(h)?;
            let active = &basis.allocation * h;
            for (&index, impulse) in basis.active.iter().zip(active.iter()) {
                if let Some(place) = impulses.get_mut(index) {
                    *place = impulse.max(0.0);
                }
            }
        }
        Some(impulses)
    }

    /// The basis to fire for `h`: of the best vertex the first without a negative impulse. On a border between vertices
    /// rounding may have picked the neighbour, so the others are asked next.
    #[must_use]
    pub fn basis(&self, h: &Vector3<f64>) -> Option<&Basis> {
        let best = self.vertices.get(self.best_vertex(h))?;
        let mut least_bad: Option<(&Basis, f64)> = None;
        for basis in best
            .bases
            .iter()
            .chain(self.vertices.iter().flat_map(|v| &v.bases))
        {
            let lowest = lowest_share(basis, h);
            if lowest >= -IMPULSE_IS_ROUNDING * 1e-3 {
                return Some(basis);
            }
            if least_bad.is_none_or(|(_, other)| lowest > other) {
                least_bad = Some((basis, lowest));
            }
        }
        least_bad
            .filter(|(_, lowest)| *lowest >= -IMPULSE_IS_ROUNDING)
            .map(|(basis, _)| basis)
    }

    /// The dearest unit direction and its price, kg/(N·m·s), or `None` if some direction cannot be served.
    ///
    /// The maximum of λ·h over unit h and vertices is the longest λ, along itself.
    #[must_use]
    pub fn dearest(&self) -> Option<(Vector3<f64>, f64)> {
        if !self.rays.is_empty() {
            return None;
        }
        let longest = self
            .vertices
            .iter()
            .map(|v| v.lambda)
            .reduce(|a, b| if b.norm() > a.norm() { b } else { a })?;
        Some((longest.try_normalize(0.0)?, longest.norm()))
    }
}

/// Lowest impulse over the sum of their sizes.
fn lowest_share(basis: &Basis, h: &Vector3<f64>) -> f64 {
    let (mut lowest, mut sum) = (f64::INFINITY, 0.0);
    for row in basis.allocation.row_iter() {
        let impulse = row[0] * h.x + row[1] * h.y + row[2] * h.z;
        lowest = lowest.min(impulse);
        sum += impulse.abs();
    }
    lowest / sum
}

/// Rays of the dual as vectors of torque with their proofs, each once.
fn certificates(
    reduced: &Reduced,
    rays: &[Vec6],
    generators: &[Generator],
) -> (Vec<Vector3<f64>>, Vec<Vector3<f64>>) {
    let mut torques: Vec<Vector3<f64>> = Vec::new();
    let mut forces = Vec::new();
    let normals = rays.iter().filter_map(|ray| reduced.normal(ray));
    for normal in normals.chain(reduced.missing_normals()) {
        let size = normal.torque.norm().recip();
        let torque = normal.torque * size;
        if torques
            .iter()
            .any(|known| (known - torque).norm() <= OUTSIDE)
        {
            continue;
        }
        torques.push(torque);
        // Generators that must be still have m · d < 0 along `across`: enough of it makes the proof hold for them too.
        let still = generators
            .iter()
            .zip(&reduced.taking_part)
            .filter(|(g, part)| !**part && reduced.across.dot(&g.force) < 0.0);
        let needed = still.map(|(g, _)| normal.value(g) * size / -reduced.across.dot(&g.force));
        forces.push(normal.force * size + reduced.across * needed.fold(0.0, f64::max));
    }
    (torques, forces)
}

/// The columns worth buying: of those on one half-line only the cheapest.
struct Tariff<'a> {
    reduced: &'a Reduced,
    indices: Vec<usize>,
    lengths: Vec<f64>,
    units: Vec<Vec6>,
    /// Cost per unit length.
    costs: Vec<f64>,
}

impl<'a> Tariff<'a> {
    fn new(reduced: &'a Reduced, generators: &[Generator]) -> Self {
        let mut tariff = Self {
            reduced,
            indices: Vec::new(),
            lengths: Vec::new(),
            units: Vec::new(),
            costs: Vec::new(),
        };
        for column in &reduced.columns {
            let cost = generators[column.index].cost / column.length;
            let same = tariff
                .units
                .iter()
                .position(|u| parallel(u, &column.unit).is_some_and(|sign| sign > 0.0));
            match same {
                None => {
                    tariff.indices.push(column.index);
                    tariff.lengths.push(column.length);
                    tariff.units.push(column.unit);
                    tariff.costs.push(cost);
                }
                Some(place) if cost < tariff.costs[place] * (1.0 - SAME_PRICE) => {
                    tariff.indices[place] = column.index;
                    tariff.lengths[place] = column.length;
                    tariff.units[place] = column.unit;
                    tariff.costs[place] = cost;
                }
                Some(_) => {}
            }
        }
        tariff
    }

    /// The vertices of the bases that serve a cone of torques with an inside; each way to fire once.
    fn vertices(&self, bases: &[Vec<usize>]) -> Vec<Vertex> {
        let mut ways: BTreeMap<Vec<usize>, (Vector3<f64>, DMatrix<f64>)> = BTreeMap::new();
        for basis in bases {
            if let Some((active, lambda, allocation)) = self.way(basis) {
                ways.entry(active).or_insert((lambda, allocation));
            }
        }
        let mut vertices: Vec<Vertex> = Vec::new();
        for (active, (lambda, allocation)) in ways {
            let basis = Basis { active, allocation };
            let same = |v: &&mut Vertex| (v.lambda - lambda).norm() <= SAME_PRICE * lambda.norm();
            match vertices.iter_mut().find(same) {
                Some(vertex) => vertex.bases.push(basis),
                None => vertices.push(Vertex {
                    lambda,
                    bases: vec![basis],
                }),
            }
        }
        vertices
    }

    /// Thrusters that fire, price and allocation of one basis, or `None` if it serves no cone with an inside.
    fn way(&self, basis: &[usize]) -> Option<(Vec<usize>, Vector3<f64>, DMatrix<f64>)> {
        let rank = self.reduced.torque_rank;
        let columns: Vec<Vec6> = basis.iter().map(|&b| self.units[b]).collect();
        let rows = inverse(&columns, self.reduced.rank)?;
        let rows = &rows[..basis.len()];
        let parts: Vec<[f64; 3]> = rows
            .iter()
            .map(|row| std::array::from_fn(|i| if i < rank { row[i] } else { 0.0 }))
            .collect();
        let largest = parts.iter().map(norm).fold(0.0, f64::max);
        let firing: Vec<usize> = (0..parts.len())
            .filter(|&i| norm(&parts[i]) > DEPENDENT * largest)
            .collect();
        let directions: Vec<[f64; 3]> = firing
            .iter()
            .map(|&i| scaled(&parts[i], norm(&parts[i]).recip()))
            .collect();
        if !opens(&directions, rank) {
            return None;
        }
        let arm = self.reduced.arm;
        let lambda = rows.iter().zip(basis).fold([0.0; 6], |sum, (row, &b)| {
            super::linear::add_scaled(&sum, self.costs[b], row)
        });
        let mut ways: Vec<(usize, Vector3<f64>)> = firing
            .iter()
            .map(|&i| {
                (
                    self.indices[basis[i]],
                    self.reduced.torque(&parts[i][..rank]) / (arm * self.lengths[basis[i]]),
                )
            })
            .collect();
        ways.sort_by_key(|(index, _)| *index);
        let allocation = DMatrix::from_fn(ways.len(), 3, |row, axis| ways[row].1[axis]);
        Some((
            ways.iter().map(|w| w.0).collect(),
            self.reduced.torque(&lambda[..rank]) / arm,
            allocation,
        ))
    }
}
