//! Layouts to try, and a general-purpose linear-programming solver to ask the same questions.

#![allow(dead_code, reason = "each test binary uses a part")]

use couplet::authority::{Generator, NetForce};
use microlp::{ComparisonOp, Error, LinearExpr, OptimizationDirection, Problem, Variable};
use nalgebra::{DMatrix, DVector, Rotation3, Vector3};
use rand::RngExt;
use rand::rngs::ChaCha8Rng;

/// Agreement asked for between two exact methods, relative: rounding of 1e-16 times condition numbers of up to 1e6.
pub(crate) const EXACT: f64 = 1e-9;

/// What is said of the net force, both ways.
pub(crate) const BOTH: [NetForce; 2] = [NetForce::Zero, NetForce::Any];

/// A torque without force, one-sided: the published examples are of this kind.
pub(crate) fn torque_only(torque: [f64; 3]) -> Generator {
    Generator { torque: torque.into(), force: Vector3::zeros(), least: 0.0, most: 1.0, cost: 1.0 }
}

/// A 1 N thruster with unit cost at `position`, pushing along `push`, about the origin.
pub(crate) fn unit_thruster(position: [f64; 3], push: [f64; 3]) -> Generator {
    Generator::thruster(position.into(), push.into(), Vector3::zeros(), 1.0, 1.0)
}

/// A thruster before its centre of mass is known.
#[derive(Debug, Clone, Copy)]
pub(crate) struct Placed {
    pub(crate) position: Vector3<f64>,
    pub(crate) push: Vector3<f64>,
    pub(crate) thrust: f64,
    pub(crate) speed: f64,
}

/// The generators of `placed` about `centre`.
pub(crate) fn about(placed: &[Placed], centre: Vector3<f64>) -> Vec<Generator> {
    placed.iter().map(|p| Generator::thruster(p.position, p.push, centre, p.thrust, p.speed)).collect()
}

/// Uniform direction.
pub(crate) fn direction(rng: &mut ChaCha8Rng) -> Vector3<f64> {
    loop {
        let v = Vector3::from_fn(|_, _| rng.random_range(-1.0..1.0));
        if let Some(unit) = v.try_normalize(0.1).filter(|_| v.norm() < 1.0) {
            return unit;
        }
    }
}

/// A thruster anywhere on a body of about 2 m.
pub(crate) fn placed(rng: &mut ChaCha8Rng) -> Placed {
    Placed {
        position: Vector3::from_fn(|_, _| rng.random_range(-1.0..1.0)),
        push: direction(rng),
        thrust: rng.random_range(0.5..5.0),
        speed: rng.random_range(600.0..2800.0),
    }
}

/// Kinds of layout that break careless code.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(crate) enum Kind {
    /// Anywhere, any way.
    General,
    /// All positions and pushes in one plane, which is not a coordinate plane.
    Planar,
    /// Each thruster has its images in two planes, equal engines.
    Mirrored,
    /// Each thruster stands there twice.
    Duplicated,
    /// Each thruster stands there twice, canted by a millionth of a radian.
    Nearly,
    /// All pushes in one half-space.
    OneSided,
    /// All pushes along coordinate axes at the corners of a box, equal engines: ties everywhere.
    Box,
}

pub(crate) const KINDS: [Kind; 7] =
    [Kind::General, Kind::Planar, Kind::Mirrored, Kind::Duplicated, Kind::Nearly, Kind::OneSided, Kind::Box];

/// A layout of `kind` with about `count` thrusters.
pub(crate) fn layout(kind: Kind, count: usize, rng: &mut ChaCha8Rng) -> Vec<Placed> {
    let axis = nalgebra::Unit::new_normalize(direction(rng));
    let turn = Rotation3::from_axis_angle(&axis, rng.random_range(0.0..3.0));
    match kind {
        Kind::General => (0..count).map(|_| placed(rng)).collect(),
        Kind::Planar => {
            let flat = |v: Vector3<f64>| turn * Vector3::new(v.x, v.y, 0.0);
            let one = |p: Placed| Placed { position: flat(p.position), push: flat(p.push).normalize(), ..p };
            (0..count).map(|_| one(placed(rng))).collect()
        }
        Kind::Mirrored => mirrored(count, rng),
        Kind::Duplicated => repeated(count, 0.0, rng),
        Kind::Nearly => repeated(count, 1e-6, rng),
        Kind::OneSided => {
            let up = |d: Vector3<f64>| turn * Vector3::new(d.x, d.y, d.z.abs() + 0.05).normalize();
            let one = |p: Placed| Placed { push: up(p.push), ..p };
            (0..count).map(|_| one(placed(rng))).collect()
        }
        Kind::Box => (0..count).map(|_| at_a_corner(rng)).collect(),
    }
}

/// 1 or −1 by one bit of a number.
fn sign(bit: usize, of: usize) -> f64 {
    if of >> bit & 1 == 0 { 1.0 } else { -1.0 }
}

fn mirrored(count: usize, rng: &mut ChaCha8Rng) -> Vec<Placed> {
    let image = |k: usize, v: Vector3<f64>| Vector3::new(sign(0, k) * v.x, sign(1, k) * v.y, v.z);
    let seeds: Vec<Placed> = (0..count.div_ceil(4)).map(|_| placed(rng)).collect();
    let four = |p: Placed| (0..4).map(move |k| Placed { position: image(k, p.position), push: image(k, p.push), thrust: 1.0, speed: 2e3 });
    seeds.into_iter().flat_map(four).collect()
}

/// Each of half as many thrusters twice, canted by `cant`.
fn repeated(count: usize, cant: f64, rng: &mut ChaCha8Rng) -> Vec<Placed> {
    let seeds: Vec<Placed> = (0..count.div_ceil(2)).map(|_| placed(rng)).collect();
    let mut canted = |p: Placed| {
        if cant > 0.0 { Placed { push: (p.push + cant * direction(rng)).normalize(), ..p } } else { p }
    };
    (0..count).map(|i| canted(seeds[i % seeds.len()])).collect()
}

fn at_a_corner(rng: &mut ChaCha8Rng) -> Placed {
    let corner = rng.random_range(0..8_usize);
    let axis = rng.random_range(0..3_usize);
    let position = Vector3::new(sign(0, corner), 0.8 * sign(1, corner), 0.5 * sign(2, corner));
    Placed { position, push: -Vector3::ith(axis, position[axis].signum()), thrust: 1.0, speed: 2e3 }
}

fn expression(variables: &[Variable], coefficients: impl Iterator<Item = f64>) -> LinearExpr {
    let mut expression = LinearExpr::empty();
    for (variable, coefficient) in variables.iter().zip(coefficients) {
        expression.add(*variable, coefficient);
    }
    expression
}

/// Rows of the wrench, torques over the longest arm.
fn rows(generators: &[Generator], net: NetForce) -> (f64, Vec<Vec<f64>>) {
    let arm = generators.iter().map(|g| g.torque.norm()).fold(1e-300, f64::max);
    let mut rows: Vec<Vec<f64>> = (0..3).map(|axis| generators.iter().map(|g| g.torque[axis] / arm).collect()).collect();
    if net == NetForce::Zero {
        rows.extend((0..3).map(|axis| generators.iter().map(|g| g.force[axis]).collect()));
    }
    (arm, rows)
}

/// What the solver says. `exact` if its point satisfies rows and bounds to 1e-12 after mending; otherwise its basis was
/// optimal only within its own tolerance.
#[derive(Debug, Clone, Copy)]
pub(crate) struct Answer {
    pub(crate) value: f64,
    pub(crate) exact: bool,
}

/// Solves max or min cost · x with rows · x = right and x between bounds by a general-purpose solver (microlp), and
/// mends what its feasibility tolerance of 1e-7 leaves: variables on a bound are put there, the others corrected until
/// the rows hold. `None` if infeasible.
fn solve(goal: OptimizationDirection, cost: &[f64], bounds: &[(f64, f64)], rows: &[Vec<f64>], right: &[f64]) -> Option<Answer> {
    let mut problem = Problem::new(goal);
    let variables: Vec<Variable> = cost.iter().zip(bounds).map(|(c, b)| problem.add_var(*c, *b)).collect();
    for (row, right) in rows.iter().zip(right) {
        problem.add_constraint(expression(&variables, row.iter().copied()), ComparisonOp::Eq, *right);
    }
    let solution = match problem.solve() {
        Ok(outcome) => outcome.into_solution().expect("no limit was set"),
        Err(Error::Infeasible) => return None,
        Err(other) => panic!("oracle: {other}"),
    };
    let mut x = DVector::from_iterator(cost.len(), variables.iter().map(|v| solution.var_value(*v)));
    let mut matrix = DMatrix::from_fn(rows.len(), cost.len(), |i, j| rows[i][j]);
    let whole = matrix.clone();
    let right = DVector::from_column_slice(right);
    let reach = x.amax().max(1.0);
    for (j, (low, high)) in bounds.iter().enumerate() {
        for bound in [low, high] {
            if (x[j] - bound).abs() <= 1e-9 * reach {
                x[j] = *bound;
                matrix.fill_column(j, 0.0);
            }
        }
    }
    let free = matrix.svd(true, true);
    for _ in 0..3 {
        x += free.solve(&(&right - &whole * &x), 1e-12).expect("both factors were asked for");
    }
    let residual = (&whole * &x - &right).amax();
    let within = bounds.iter().zip(x.iter()).all(|((low, high), x)| (low - 1e-12..=high + 1e-12).contains(x));
    let exact = residual <= 1e-12 * reach && within;
    Some(Answer { value: x.iter().zip(cost).map(|(x, c)| x * c).sum(), exact })
}

/// Least propellant for the unit vector `h`; `None` if infeasible. Scaled to size one.
pub(crate) fn lp_price(generators: &[Generator], net: NetForce, h: &Vector3<f64>) -> Option<Answer> {
    let dearest = generators.iter().map(|g| g.cost).fold(1e-300, f64::max);
    let (arm, rows) = rows(generators, net);
    let cost: Vec<f64> = generators.iter().map(|g| g.cost / dearest).collect();
    let bounds = vec![(0.0, f64::INFINITY); cost.len()];
    let right: Vec<f64> = h.iter().copied().chain([0.0; 3]).take(rows.len()).collect();
    let found = solve(OptimizationDirection::Minimize, &cost, &bounds, &rows, &right)?;
    Some(Answer { value: found.value * dearest / arm, ..found })
}

/// Most torque along the unit vector `e`. Scaled to size one.
pub(crate) fn lp_most(generators: &[Generator], net: NetForce, e: &Vector3<f64>) -> Answer {
    let strongest = generators.iter().map(|g| g.most).fold(1e-300, f64::max);
    let (arm, mut rows) = rows(generators, net);
    for (row, along) in rows.iter_mut().zip(e.iter().copied().chain([0.0; 3])) {
        row.push(-along);
    }
    let mut cost = vec![0.0; generators.len()];
    cost.push(1.0);
    let mut bounds: Vec<(f64, f64)> = generators.iter().map(|g| (g.least / strongest, g.most / strongest)).collect();
    bounds.push((0.0, f64::INFINITY));
    let right = vec![0.0; rows.len()];
    let found = solve(OptimizationDirection::Maximize, &cost, &bounds, &rows, &right).expect("rest is feasible");
    Answer { value: found.value * strongest * arm, ..found }
}

/// Torque and force of `levels`.
pub(crate) fn wrench(generators: &[Generator], levels: &[f64]) -> (Vector3<f64>, Vector3<f64>) {
    generators
        .iter()
        .zip(levels)
        .fold((Vector3::zeros(), Vector3::zeros()), |(torque, force), (g, f)| (torque + g.torque * *f, force + g.force * *f))
}
