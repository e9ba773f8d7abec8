//! From the dual of a layout to what its torques cost: vertices with their ways to fire, rays with their proofs.

use std::collections::BTreeMap;

use nalgebra::{DMatrix, Vector3};

use super::Generator;
use super::edges::dual;
use super::linear::{DEPENDENT, Vec6, add_scaled, dot, inverse, norm, scaled};
use super::opening::opens;
use super::planes::parallel;
use super::price::{Basis, Vertex};
use super::reduced::{Column, ROUNDINGS, Reduced};

/// Prices that agree to this part of themselves are one vertex; rounding of a solve in six unknowns is below it.
const SAME_PRICE: f64 = 1e-11;

/// Unit vectors that agree to this are one ray found from several edges.
const SAME_RAY: f64 = 1e-10;

/// A column worth buying, and its cost per unit length.
#[derive(Clone, Copy)]
struct Offer {
    column: Column,
    cost: f64,
}

/// A direction in which nothing can be served, and why.
#[derive(Debug, Clone, Copy)]
pub(super) struct Certificate {
    /// The same in reduced coordinates, unit; `None` for a direction in which no torque is attainable either way.
    pub(super) reduced: Option<[f64; 3]>,
    /// Unit vector n.
    pub(super) torque: Vector3<f64>,
    /// m with n · torque + m · force ≤ 0 for every generator.
    pub(super) force: Vector3<f64>,
}

/// The vertices of the dual that serve a cone of torques with an inside, and its rays in reduced coordinates.
pub(super) fn vertices(reduced: &Reduced, generators: &[Generator]) -> (Vec<Vertex>, Vec<Vec6>) {
    if reduced.torque_rank == 0 {
        return (Vec::new(), Vec::new());
    }
    let offers = offers(reduced, generators);
    let units: Vec<Vec6> = offers.iter().map(|o| o.column.unit).collect();
    let costs: Vec<f64> = offers.iter().map(|o| o.cost).collect();
    let zeros: Vec<f64> = offers.iter().map(|o| ROUNDINGS * o.column.noise).collect();
    let found = dual(&units, &costs, &zeros, reduced.rank);
    let mut ways: BTreeMap<Vec<usize>, ([f64; 3], Basis)> = BTreeMap::new();
    for basis in &found.bases {
        let columns: Vec<Column> = basis.iter().map(|&b| offers[b].column).collect();
        let Some((inverse, mut ready)) = way(reduced, &columns) else {
            continue;
        };
        let units: Vec<Vec6> = columns.iter().map(|c| c.unit).collect();
        let tight_at = |costs: &[f64]| {
            let costs: Vec<f64> = basis.iter().map(|&b| costs[b]).collect();
            tight(&units, &inverse, &costs)
        };
        let (raised, exact) = (tight_at(&found.raised), tight_at(&costs));
        ready.select = attainable(&raised, reduced.torque_rank);
        let lambda = if feasible(&exact, &offers) { exact } else { raised };
        ways.entry(ready.active.clone()).or_insert((attainable(&lambda, reduced.torque_rank), ready));
    }
    let mut vertices: Vec<Vertex> = Vec::new();
    for (lambda, basis) in ways.into_values() {
        let apart = |v: &Vertex| norm(&add_scaled(&v.reduced, -1.0, &lambda));
        match vertices.iter_mut().find(|v| apart(v) <= SAME_PRICE * norm(&lambda)) {
            Some(vertex) => vertex.bases.push(basis),
            None => vertices.push(Vertex { lambda: reduced.covector(&lambda), bases: vec![basis], reduced: lambda }),
        }
    }
    (vertices, found.rays)
}

/// The coordinates of the attainable torques.
fn attainable(reduced: &Vec6, torque_rank: usize) -> [f64; 3] {
    std::array::from_fn(|i| if i < torque_rank { reduced[i] } else { 0.0 })
}

/// Whether no offer is cheaper than `y` says. A basis that is best only for the raised costs, of columns so close that
/// raising them moves its price, keeps the raised one: that bounds all others to a part of 1e-10.
fn feasible(y: &Vec6, offers: &[Offer]) -> bool {
    let size = norm(y);
    offers.iter().all(|o| dot(y, &o.column.unit) <= o.cost * (1.0 + 2e-12) + 4e-15 * size)
}

/// The columns worth buying: of those on one half-line only the cheapest, of equals the first.
fn offers(reduced: &Reduced, generators: &[Generator]) -> Vec<Offer> {
    let mut offers: Vec<Offer> = Vec::new();
    for column in &reduced.columns {
        let offer = Offer { column: *column, cost: generators[column.index].cost / column.length };
        let same = |o: &&mut Offer| parallel(&o.column.unit, &column.unit).is_some_and(|sign| sign > 0.0);
        match offers.iter_mut().find(same) {
            None => offers.push(offer),
            Some(known) if offer.cost < known.cost * (1.0 - SAME_PRICE) => *known = offer,
            Some(_) => {}
        }
    }
    offers
}

/// One basis, ready to be solved for any angular impulse.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct Way {
    /// Generator of each basic column.
    pub(super) indices: Vec<usize>,
    /// The basic columns per unit impulse, and the inverse of their matrix by rows.
    columns: Vec<Vec6>,
    rows: [Vec6; 6],
    /// Which of them fire for some angular impulse: the others are there to complete the basis.
    fires: [bool; 6],
}

impl Way {
    /// Impulses for the reduced coordinates `s`. Corrected once, which makes a poorly conditioned inverse as good as a
    /// fresh solve.
    pub(super) fn fire(&self, s: &Vec6) -> Vec6 {
        let solve = |right: &Vec6| -> Vec6 { std::array::from_fn(|row| dot(&self.rows[row], right)) };
        let first = solve(s);
        let left = self.columns.iter().zip(first).fold(*s, |left, (column, j)| add_scaled(&left, -j, column));
        let correction = solve(&left);
        std::array::from_fn(|i| if self.fires[i] { first[i] + correction[i] } else { 0.0 })
    }
}

/// Inverse of the unit columns and allocation of one basis, or `None` if it serves no cone with an inside.
fn way(reduced: &Reduced, basis: &[Column]) -> Option<([Vec6; 6], Basis)> {
    let rank = reduced.torque_rank;
    let units: Vec<Vec6> = basis.iter().map(|c| c.unit).collect();
    let rows = inverse(&units, reduced.rank)?;
    // A column that only completes the basis has a row with no part in the attainable torques.
    let fires: [bool; 6] = std::array::from_fn(|i| norm(&attainable(&rows[i], rank)) > DEPENDENT * norm(&rows[i]));
    let firing: Vec<(&Column, [f64; 3])> =
        (0..basis.len()).filter(|&i| fires[i]).map(|i| (&basis[i], attainable(&rows[i], rank))).collect();
    let directions: Vec<[f64; 3]> = firing.iter().map(|(_, part)| scaled(part, norm(part).recip())).collect();
    if !opens(&directions, rank) {
        return None;
    }
    let per_torque = |(c, part): &(&Column, [f64; 3])| (c.index, reduced.covector(&part[..rank]) / c.length);
    let mut impulses: Vec<(usize, Vector3<f64>)> = firing.iter().map(per_torque).collect();
    impulses.sort_by_key(|(index, _)| *index);
    let mut per_impulse = rows;
    for (row, column) in per_impulse.iter_mut().zip(basis) {
        *row = scaled(row, column.length.recip());
    }
    let way = Way {
        indices: basis.iter().map(|c| c.index).collect(),
        columns: basis.iter().map(|c| scaled(&c.unit, c.length)).collect(),
        rows: per_impulse,
        fires,
    };
    let basis = Basis {
        active: impulses.iter().map(|i| i.0).collect(),
        allocation: DMatrix::from_fn(impulses.len(), 3, |row, axis| impulses[row].1[axis]),
        select: [0.0; 3],
        way,
    };
    Some((rows, basis))
}

/// The y with y · column = cost for each column, given the inverse of their matrix; corrected twice.
fn tight(columns: &[Vec6], rows: &[Vec6; 6], costs: &[f64]) -> Vec6 {
    let mut y = [0.0; 6];
    for _ in 0..3 {
        let left = columns.iter().zip(costs).map(|(column, cost)| cost - dot(&y, column));
        let correction = left.zip(rows).fold([0.0; 6], |sum, (left, row)| add_scaled(&sum, left, row));
        y = add_scaled(&y, 1.0, &correction);
    }
    y
}

/// The `rays` with their proofs, each once, then both signs of each missing direction.
pub(super) fn certificates(reduced: &Reduced, rays: &[Vec6], generators: &[Generator]) -> Vec<Certificate> {
    let proof = |reduced_ray, normal: super::reduced::Normal| {
        // Generators that must be still have m · d < 0 along `across`: enough of it makes the proof hold for them too.
        let still = generators.iter().zip(&reduced.taking_part);
        let pushes = still.map(|(g, part)| (g, if *part { 0.0 } else { reduced.across.dot(&g.force) }));
        let needed = pushes.filter(|(_, push)| *push < 0.0).map(|(g, push)| normal.value(g) / -push);
        let force = normal.force + reduced.across * needed.fold(0.0, f64::max);
        Certificate { reduced: reduced_ray, torque: normal.torque, force }
    };
    let mut found: Vec<Certificate> = Vec::new();
    for ray in rays {
        let part: [f64; 3] = std::array::from_fn(|i| if i < reduced.torque_rank { ray[i] } else { 0.0 });
        let Some(normal) = reduced.normal(ray) else {
            continue;
        };
        let unit = scaled(&part, norm(&part).recip());
        let apart = |known: &[f64; 3]| norm(&add_scaled(known, -1.0, &unit));
        if !found.iter().filter_map(|c| c.reduced.as_ref()).any(|known| apart(known) <= SAME_RAY) {
            found.push(proof(Some(unit), normal));
        }
    }
    found.extend(reduced.missing_normals().into_iter().map(|normal| proof(None, normal)));
    found
}
